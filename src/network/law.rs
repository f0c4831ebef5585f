//! Laws of the loads: admittance as a function of voltage.

use super::model::{Law, Load};
use crate::quantity::math;

/// Below this share of the rated voltage a power law goes over into a straight line. A cold tungsten filament has about a
/// fifteenth of its hot resistance (resistivity 5.65 µΩ·cm at 300 K, about 85 at 2800 K; from memory), and R ∝ V^0.45 reaches
/// that at (1/15)^(1/0.45) = 0.0024.
const COLD: f64 = 0.0025;

/// A load at a voltage: I = y·V, dI = y·dV + h·V·(V·dV), before the turn by the power factor.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Admittance {
    /// y in siemens.
    pub chord: f64,
    /// h = (dy/d|V|)/|V| in S/V².
    pub bend: f64,
    /// ∂I/∂a ÷ I for the exponent a of a power law.
    pub by_exponent: f64,
}

/// A load at a voltage whose square is given.
pub(super) fn admittance(load: &Load, square: f64) -> Admittance {
    match load.law {
        Law::Power { exponent } => {
            let rated = load.watts / (load.rated_volts * load.rated_volts);
            if exponent == 1.0 {
                let by_exponent = logarithm(load, square);
                return Admittance { chord: rated, bend: 0.0, by_exponent };
            }
            let by_exponent = logarithm(load, square);
            let chord = rated * math::exp((exponent - 1.0) * by_exponent);
            let bend = chord * (exponent - 1.0) / (square + cold_square(load));
            Admittance { chord, bend, by_exponent }
        }
        Law::Electronic { knee } => {
            let sum = square + knee * knee;
            let chord = load.watts / sum;
            Admittance { chord, bend: -2.0 * chord / sum, by_exponent: 0.0 }
        }
    }
}

/// ln of the voltage over the rated one, kept above the cold end.
fn logarithm(load: &Load, square: f64) -> f64 {
    0.5 * math::ln((square + cold_square(load)) / (load.rated_volts * load.rated_volts))
}

fn cold_square(load: &Load) -> f64 {
    let cold = COLD * load.rated_volts;
    cold * cold
}

/// Tangent of the angle of a lagging power factor.
pub(super) fn tangent(power_factor: f64) -> f64 {
    (1.0 - power_factor * power_factor).max(0.0).sqrt() / power_factor
}
