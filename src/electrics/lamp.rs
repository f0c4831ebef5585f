//! Incandescent lamps away from their rated voltage.
//!
//! Power laws in v = V/V_rated: current v^0.55, luminous flux v^3.4, life v^−13, colour temperature v^0.42 (Fink and Beaty,
//! *Standard Handbook for Electrical Engineers*, 11th edition, p. 22-8). The handbook's power v^1.6 is v^1.55 rounded; 1.55 is
//! used, so that power is voltage times current. They are averages: life holds for about 0.9 to 1.1, the electrical ones for
//! about 0.5 to 1.5.

use crate::quantity::{Amperes, Volts, math};

/// Exponent of the current.
pub const CURRENT: f64 = 0.55;

/// Current over rated current.
#[must_use]
pub fn current(v: f64) -> f64 {
    math::pow(v, CURRENT)
}

/// Resistance over resistance at rated voltage.
#[must_use]
pub fn resistance(v: f64) -> f64 {
    math::pow(v, 1.0 - CURRENT)
}

/// Power over rated power.
#[must_use]
pub fn power(v: f64) -> f64 {
    math::pow(v, 1.0 + CURRENT)
}

/// Luminous flux over rated flux.
#[must_use]
pub fn light(v: f64) -> f64 {
    math::pow(v, 3.4)
}

/// Life over rated life, with the handbook's exponents −12 to −16 as `exponent`; 13 is usual.
#[must_use]
pub fn life(v: f64, exponent: f64) -> f64 {
    math::pow(v, -exponent)
}

/// Colour temperature over rated.
#[must_use]
pub fn colour_temperature(v: f64) -> f64 {
    math::pow(v, 0.42)
}

/// Two loads I = I₀·(V/V₀)^a in series across a voltage: V₁/V₂ = (I₀₂/I₀₁)^(1/a). The voltage on each.
///
/// a = 1 for resistors, [`CURRENT`] for lamps. Constant resistance understates the overvoltage on lamps. `None` where a or a
/// current is not positive: constant-current and constant-power loads have no stable divider.
#[must_use]
pub fn in_series(across: Volts, rated: (Amperes, Amperes), exponent: f64) -> Option<(Volts, Volts)> {
    let (first, second) = rated;
    if !(exponent > 0.0 && first.0 > 0.0 && second.0 > 0.0) {
        return None;
    }
    let ratio = math::pow(second / first, 1.0 / exponent);
    let of_first = if ratio.is_finite() { across * (ratio / (1.0 + ratio)) } else { across };
    Some((of_first, across - of_first))
}
