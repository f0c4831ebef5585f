//! A network from a visit's circuit list.

use super::model::{Law, Network, Phasor};
use crate::quantity::{Celsius, Metres, Watts};
use crate::visit::{LoadKind, Visit, Wire};

/// What is taken where the circuit list is silent, and how loads behave.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NetworkSettings {
    /// Temperature of the conductors.
    pub conductor_temperature: Celsius,
    /// Length of a service run and of any other without one.
    pub service_length: Metres,
    /// Length of a run that states none.
    pub run_length: Metres,
    /// Wire of a service run that states none.
    pub service_wire: Wire,
    /// Wire of another run that states none.
    pub run_wire: Wire,
    /// Load between a line and the neutral where a run that ends a branch states no load at all.
    pub line_neutral: Watts,
    /// Load between two lines likewise.
    pub line_line: Watts,
    /// Kind of loads that state none.
    pub kind: LoadKind,
    /// Exponent of filaments.
    pub filament: f64,
    /// Knee of electronic loads in volts.
    pub knee: f64,
    /// Power factor of motors.
    pub motor_power_factor: f64,
    /// Ohms through the electrode and the earth to the centre tap.
    pub electrode: f64,
    /// Transformer impedance each leg has to itself.
    pub source_own: Phasor,
    /// Transformer impedance the legs share.
    pub source_shared: Phasor,
}

impl NetworkSettings {
    /// The law of a kind of load.
    #[must_use]
    pub fn law(&self, kind: LoadKind) -> Law {
        let _ = kind;
        todo!()
    }
}

/// A value the circuit list left open. Runs are positions in the circuit list.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Assumption {
    /// Legs of a run.
    Legs(usize),
    /// Wire of a run.
    Wire(usize),
    /// Length of a run.
    Length(usize),
    /// Watts of a load: position in [`Network::loads`].
    Watts(usize),
    /// Kind of a load: position in [`Network::loads`].
    Kind(usize),
    /// The run hangs on no source and was left out.
    LeftOut(usize),
}

/// A network and what was assumed for it. Its spans are the visit's runs one to one; one that is left out has no conductors.
#[derive(Clone, Debug, PartialEq)]
pub struct Built {
    /// The network.
    pub network: Network,
    /// What the circuit list left open.
    pub assumptions: Vec<Assumption>,
}

/// Builds the network of a visit's circuit list. Loads stated at 0 W are kept out; the loads of a run stand in its own order.
#[must_use]
pub fn build(visit: &Visit, settings: &NetworkSettings) -> Built {
    let _ = (visit, settings);
    todo!()
}
