//! Neutral current from line currents.
//!
//! All assume equal power factors and no triplen harmonics. With non-linear loads the neutral may carry as much as a leg or more
//! (NEC 310.15(E)(3), 220.61(C)).

use crate::quantity::{Amperes, math};

/// Split phase: |I₁ − I₂|.
#[must_use]
pub fn split_phase(first: Amperes, second: Amperes) -> Amperes {
    (first - second).abs()
}

/// Both hots on one leg: the currents add in the neutral, which no breaker protects.
#[must_use]
pub fn same_leg(first: Amperes, second: Amperes) -> Amperes {
    first + second
}

/// Wye: √(A² + B² + C² − AB − BC − CA). Written as half the sum of squared differences, which cannot fall below zero by rounding.
/// Two legs of a wye are the case C = 0: nearly the line current (NEC 310.15(E)(2)).
#[must_use]
pub fn wye(a: Amperes, b: Amperes, c: Amperes) -> Amperes {
    let square = |x: Amperes, y: Amperes| (x.0 - y.0) * (x.0 - y.0);
    Amperes((0.5 * (square(a, b) + square(b, c) + square(c, a))).sqrt())
}

/// Any angles: the magnitude of the phasor sum. Each current with its angle in degrees.
#[must_use]
pub fn at_angles(currents: &[(Amperes, f64)]) -> Amperes {
    let (mut re, mut im) = (0.0, 0.0);
    for (current, degrees) in currents {
        let angle = degrees.to_radians();
        re += current.0 * math::cos(angle);
        im += current.0 * math::sin(angle);
    }
    Amperes(math::hypot(re, im))
}

/// Neutral load of a feeder after the reduction for what exceeds 200 A: 70 % of that part (NEC 220.61(B)(2); 120.61 in the
/// 2026 edition). Not for the non-linear part, nor for three wires of a wye (220.61(C)).
#[must_use]
pub fn feeder_load(greatest_unbalance: Amperes) -> Amperes {
    let over = (greatest_unbalance.0 - 200.0).max(0.0);
    Amperes(greatest_unbalance.0 - 0.3 * over)
}
