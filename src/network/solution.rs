//! What a solved network says.

use super::model::{Observed, Phasor, SLOTS, Terminal};

/// Voltages and currents of a network.
#[derive(Clone, Debug, PartialEq)]
pub struct Solution {
    /// Volts of each conductor at the far end of each run, against the centre tap; `None` where the run has no such conductor.
    pub volts: Vec<[Option<Phasor>; SLOTS]>,
    /// Amperes in each conductor of each run, away from the source.
    pub amperes: Vec<[Option<Phasor>; SLOTS]>,
    /// Amperes of each load, from its first conductor to its second.
    pub loads: Vec<Phasor>,
    /// Volts across each load, first conductor against second.
    pub load_volts: Vec<Phasor>,
    /// Amperes from the bonded neutrals through the electrodes into the earth.
    pub earth: Phasor,
    /// Newton steps it took.
    pub iterations: usize,
}

impl Solution {
    /// Volts between two terminals; `None` where there is no such conductor.
    #[must_use]
    pub fn voltage(&self, plus: Terminal, minus: Terminal) -> Option<Phasor> {
        let _ = (plus, minus);
        todo!()
    }

    /// Value of a quantity, signed in phase, a magnitude elsewhere.
    #[must_use]
    pub fn value(&self, observed: Observed) -> Option<f64> {
        let _ = observed;
        todo!()
    }
}
