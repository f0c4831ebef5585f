//! What a solved network says.

use super::model::{Observed, Phasor, SLOTS, Terminal, slot};
use crate::visit::Conductor;

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
    /// Amperes from each run's neutral through its electrode into the earth.
    pub earth: Vec<Phasor>,
    /// The service run each run descends from.
    pub service: Vec<usize>,
    /// Everything is in phase: values have signs.
    pub is_in_phase: bool,
    /// Newton steps it took.
    pub iterations: usize,
}

impl Solution {
    /// Volts of a terminal against the centre tap; `None` where there is no such conductor.
    #[must_use]
    pub fn potential(&self, terminal: Terminal) -> Option<Phasor> {
        match terminal {
            Terminal::Tap => Some(Phasor::default()),
            Terminal::At(run, conductor) => match slot(conductor) {
                Some(slot) => self.volts.get(run)?[slot],
                None => self.potential(Terminal::At(*self.service.get(run)?, Conductor::Neutral)),
            },
        }
    }

    /// Volts between two terminals; `None` where there is no such conductor.
    #[must_use]
    pub fn voltage(&self, plus: Terminal, minus: Terminal) -> Option<Phasor> {
        Some(self.potential(plus)? - self.potential(minus)?)
    }

    /// Value of a quantity, signed in phase, a magnitude elsewhere.
    #[must_use]
    pub fn value(&self, observed: Observed) -> Option<f64> {
        let (phasor, sign) = match observed {
            Observed::Voltage { plus, minus } => (self.voltage(plus, minus)?, 1.0),
            Observed::Current { run, conductor, towards_source } => {
                (self.amperes.get(run)?[slot(conductor)?]?, if towards_source { -1.0 } else { 1.0 })
            }
        };
        Some(if self.is_in_phase { sign * phasor.re } else { phasor.magnitude() })
    }
}
