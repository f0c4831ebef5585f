//! What the legs of a sound service read to each other: plane geometry of equal-frequency phasors.

use crate::quantity::Volts;

/// Line to line of a split phase: the two legs lie in opposition, so they add.
#[must_use]
pub fn split_phase_line(first: Volts, second: Volts) -> Volts {
    first + second
}

/// Line to line of two legs 120° apart: √(V₁² + V₂² + V₁·V₂). Two legs of a wye do not add.
#[must_use]
pub fn wye_line(first: Volts, second: Volts) -> Volts {
    let (a, b) = (first.0, second.0);
    Volts((a * a + b * b + a * b).max(0.0).sqrt())
}

/// High leg of a four-wire delta against the neutral: √(V_line² − V_half²), V_half from the tapped winding's end to its tap;
/// 208 V on 240/120 (NEC 110.15 wants it marked). `None` where the half is the larger.
#[must_use]
pub fn high_leg(line: Volts, half: Volts) -> Option<Volts> {
    let square = line.0 * line.0 - half.0 * half.0;
    (square >= 0.0).then(|| Volts(square.sqrt()))
}

/// Where the neutral sits between two opposed legs: V₁/(V₁ + V₂), 0.5 in the middle. `None` without voltage.
#[must_use]
pub fn neutral_share(first: Volts, second: Volts) -> Option<f64> {
    let sum = first + second;
    (sum.0 > 0.0).then(|| first / sum)
}
