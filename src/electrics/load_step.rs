//! Impedance of the neutral and the leg from a load step.
//!
//! Thévenin's method with the neutral kept apart: read, switch a known load on leg 1, read again. The loaded leg falls; the other
//! *rises* by what the neutral moved. Split phase, currents in phase:
//!
//! ```text
//! V12 − V12′ = R_leg·(ΔI1 + ΔI2)            legs taken as alike
//! V2′ − V2   = R_n·Δ(I1 − I2) − R_leg·ΔI2
//! ```

use crate::quantity::{Amperes, Ohms, Volts, math};

/// Volts and amperes of one load state, leg 1 being the one whose load is switched.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// Leg 1 to neutral.
    pub leg_1: Volts,
    /// Leg 2 to neutral.
    pub leg_2: Volts,
    /// Leg to leg.
    pub line: Volts,
    /// Current of leg 1.
    pub current_1: Amperes,
    /// Current of leg 2.
    pub current_2: Amperes,
}

/// Standard uncertainties of one reading without its gain error, which cancels in a difference: counts and scatter.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Uncertainty {
    /// Of a voltage.
    pub volts: Volts,
    /// Of a current.
    pub amperes: Amperes,
}

/// A resistance with its expanded uncertainty (coverage factor 2).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// Best value. Below zero where noise outweighs it.
    pub ohms: Ohms,
    /// Expanded uncertainty: the least resistance the step could have resolved.
    pub expanded: Ohms,
}

impl Estimate {
    /// It stands clear of zero.
    #[must_use]
    pub fn is_resolved(&self) -> bool {
        self.ohms.0 > self.expanded.0
    }
}

/// What a step yields.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Step {
    /// Change of the neutral current.
    pub neutral_current: Amperes,
    /// Leg and neutral together: (V1 − V1′)/ΔI1.
    pub around: Estimate,
    /// The neutral.
    pub neutral: Estimate,
    /// One leg.
    pub leg: Estimate,
}

/// Resistances from two states; `None` where the current of leg 1, of both legs or of the neutral did not change.
///
/// First-order uncertainty: each difference of two readings has √2 times the uncertainty of one.
#[must_use]
pub fn resistances(before: State, after: State, each: Uncertainty) -> Option<Step> {
    let step_1 = after.current_1 - before.current_1;
    let step_2 = after.current_2 - before.current_2;
    let through_neutral = step_1 - step_2;
    let through_legs = step_1 + step_2;
    if [step_1, through_neutral, through_legs].iter().any(|i| !i.0.is_finite() || i.0 == 0.0) {
        return None;
    }
    let volts = each.volts * std::f64::consts::SQRT_2;
    let amperes = each.amperes * std::f64::consts::SQRT_2;
    let leg = quotient(before.line - after.line, volts, through_legs, amperes * std::f64::consts::SQRT_2);
    let along_leg_2 = leg.ohms * step_2;
    let of_leg = leg.expanded * 0.5 * step_2;
    let rise_uncertainty = Volts(math::hypot(math::hypot(volts.0, of_leg.0), leg.ohms.0 * amperes.0));
    let neutral = quotient(after.leg_2 - before.leg_2 + along_leg_2, rise_uncertainty, through_neutral, amperes * std::f64::consts::SQRT_2);
    let around = quotient(before.leg_1 - after.leg_1, volts, step_1, amperes);
    Some(Step { neutral_current: through_neutral, around, neutral, leg })
}

fn quotient(volts: Volts, of_volts: Volts, amperes: Amperes, of_amperes: Amperes) -> Estimate {
    let ohms = volts / amperes;
    let standard = (of_volts.0 * of_volts.0 + (ohms.0 * of_amperes.0) * (ohms.0 * of_amperes.0)).sqrt() / amperes.0.abs();
    Estimate { ohms, expanded: Ohms(2.0 * standard) }
}
