//! AC impedance of conductors in conduit: NEC chapter 9 table 9, 60 Hz, 75 °C, three single conductors.

use super::conductor::OhmsPerMetre;
use crate::visit::{Metal, Wire, WireSize};

/// What the conduit is made of.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Conduit {
    /// Plastic; cable without metal armour behaves alike.
    Pvc,
    /// Aluminium.
    Aluminium,
    /// Steel.
    Steel,
}

/// Reactance and AC resistance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Impedance {
    /// AC resistance.
    pub resistance: OhmsPerMetre,
    /// Reactance.
    pub reactance: OhmsPerMetre,
}

impl Impedance {
    /// Effective impedance at a power factor: R·cos + X·sin (table 9, note 2).
    #[must_use]
    pub fn effective(&self, power_factor: f64) -> OhmsPerMetre {
        let cos = power_factor.clamp(0.0, 1.0);
        OhmsPerMetre(self.resistance.0 * cos + self.reactance.0 * (1.0 - cos * cos).sqrt())
    }
}

/// Size; reactance in PVC or aluminium, in steel; resistance of copper in PVC, aluminium, steel; of aluminium likewise. In ohms per
/// 1000 ft; 0 where the table has none. The 1/0 copper in aluminium conduit follows the NEC (0.13, from memory), not a stored copy (0.12).
type Row = (WireSize, [f64; 2], [f64; 3], [f64; 3]);

const TABLE_9: [Row; 11] = [
    (WireSize::Awg(14), [0.058, 0.073], [3.1, 3.1, 3.1], [0.0, 0.0, 0.0]),
    (WireSize::Awg(12), [0.054, 0.068], [2.0, 2.0, 2.0], [3.2, 3.2, 3.2]),
    (WireSize::Awg(10), [0.050, 0.063], [1.2, 1.2, 1.2], [2.0, 2.0, 2.0]),
    (WireSize::Awg(8), [0.052, 0.065], [0.78, 0.78, 0.78], [1.3, 1.3, 1.3]),
    (WireSize::Awg(6), [0.051, 0.064], [0.49, 0.49, 0.49], [0.81, 0.81, 0.81]),
    (WireSize::Awg(4), [0.048, 0.060], [0.31, 0.31, 0.31], [0.51, 0.51, 0.51]),
    (WireSize::Awg(2), [0.045, 0.057], [0.19, 0.20, 0.20], [0.32, 0.32, 0.32]),
    (WireSize::Awg(0), [0.044, 0.055], [0.12, 0.13, 0.12], [0.20, 0.21, 0.20]),
    (WireSize::Awg(-1), [0.043, 0.054], [0.10, 0.10, 0.10], [0.16, 0.16, 0.16]),
    (WireSize::Awg(-2), [0.042, 0.052], [0.077, 0.082, 0.079], [0.13, 0.13, 0.13]),
    (WireSize::Awg(-3), [0.041, 0.051], [0.062, 0.067, 0.063], [0.10, 0.11, 0.10]),
];

/// Impedance of a conductor in a conduit; `None` for sizes not entered.
#[must_use]
pub fn impedance(wire: Wire, conduit: Conduit) -> Option<Impedance> {
    let (_, reactance, copper, aluminium) = TABLE_9.iter().find(|row| row.0 == wire.size)?;
    let resistance = match wire.metal {
        Metal::Copper => copper[conduit as usize],
        Metal::Aluminium => aluminium[conduit as usize],
    };
    let reactance = reactance[usize::from(conduit == Conduit::Steel)];
    (resistance > 0.0).then(|| Impedance {
        resistance: OhmsPerMetre::from_per_thousand_feet(resistance),
        reactance: OhmsPerMetre::from_per_thousand_feet(reactance),
    })
}
