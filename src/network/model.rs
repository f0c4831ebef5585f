//! The network as plain numbers.

use crate::quantity::math;
use crate::visit::{Between, Conductor, Quantity};

/// Conductors a node can have: L1, L2, L3, N, in this order.
pub const SLOTS: usize = 4;

/// Position of a conductor in arrays of [`SLOTS`]; a grounding conductor carries no load current and has none.
#[must_use]
pub fn slot(conductor: Conductor) -> Option<usize> {
    match conductor {
        Conductor::Line(leg) => Some(leg.index()),
        Conductor::Neutral => Some(3),
        Conductor::Ground => None,
    }
}

/// A complex amplitude (RMS).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Phasor {
    /// Real part.
    pub re: f64,
    /// Imaginary part.
    pub im: f64,
}

impl Phasor {
    /// Its length.
    #[must_use]
    pub fn magnitude(self) -> f64 {
        math::hypot(self.re, self.im)
    }

    /// Its angle in radians.
    #[must_use]
    pub fn angle(self) -> f64 {
        math::atan2(self.im, self.re)
    }
}

impl std::ops::Sub for Phasor {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        Self { re: self.re - o.re, im: self.im - o.im }
    }
}

impl std::ops::Add for Phasor {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        Self { re: self.re + o.re, im: self.im + o.im }
    }
}

/// A service and what hangs on it. Numbers may be changed freely between two solutions; the shape (who feeds whom, which
/// conductors there are, what the loads lie between) is fixed once a [`super::Workspace`] is made of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Network {
    /// The supply.
    pub source: Source,
    /// Runs, in the order of the circuit list.
    pub spans: Vec<Span>,
    /// Loads, in any order.
    pub loads: Vec<Load>,
}

/// The supply: an electromotive force per leg against the centre tap, behind the transformer's impedance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Source {
    /// Open-circuit volts per leg; 0 for a leg that the system does not have.
    pub volts: [f64; 3],
    /// Unit phasor of each leg (split phase: 1, −1).
    pub direction: [Phasor; 3],
    /// Impedance each leg has to itself, in ohms; 0 + j0 for an ideal source.
    pub own: Phasor,
    /// Impedance the two halves of a centre-tapped winding share (the primary's, seen from one half), in ohms.
    pub shared: Phasor,
}

/// A run: its conductors from where it is fed to its far end.
#[derive(Clone, Debug, PartialEq)]
pub struct Span {
    /// The run it is fed from; `None`: the transformer.
    pub fed_from: Option<usize>,
    /// Ohms per conductor; `None` where the run has no such conductor. Infinity is an open one.
    pub ohms: [Option<f64>; SLOTS],
    /// Reactance per conductor in ohms.
    pub reactance: [f64; SLOTS],
    /// Ohms from the neutral at its far end through the ground electrode and the earth to the centre tap.
    pub electrode: Option<f64>,
}

/// A load at the far end of a run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Load {
    /// The run.
    pub at: usize,
    /// Its two conductors, as slots; current counts from the first to the second.
    pub between: (usize, usize),
    /// Rated volts.
    pub rated_volts: f64,
    /// Watts at rated volts.
    pub watts: f64,
    /// How its current follows its voltage.
    pub law: Law,
    /// Power factor, lagging; 1 for all but motors.
    pub power_factor: f64,
}

/// How the current of a load follows its voltage.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Law {
    /// I = I₀·(V/V₀)^a: 1 for resistance, 0.55 for filaments, 0 for constant current. Straight below a few thousandths of the
    /// rated voltage, where a filament is cold.
    Power {
        /// The exponent a.
        exponent: f64,
    },
    /// I = P·V/(V² + k²): constant power well above the knee k, dying away below it.
    Electronic {
        /// The knee in volts.
        knee: f64,
    },
}

/// A place a voltage can be measured at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Terminal {
    /// The transformer's centre tap.
    Tap,
    /// A conductor at the far end of a run. Ground stands for the bonded neutral of the service run it descends from.
    At(usize, Conductor),
}

/// A quantity that can be read off a solution. In phase (one leg, split phase without reactance) its value has a sign; elsewhere
/// it is a magnitude.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Observed {
    /// Volts from the second terminal to the first.
    Voltage {
        /// Counted positive.
        plus: Terminal,
        /// Counted negative.
        minus: Terminal,
    },
    /// Amperes in a conductor of a run.
    Current {
        /// The run.
        run: usize,
        /// The conductor.
        conductor: Conductor,
        /// Counted positive towards the source; away from it otherwise.
        towards_source: bool,
    },
}

/// Why numbers make no network.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Fault {
    /// The run is fed from one that is not there, or from itself through others.
    Feed {
        /// The run.
        run: usize,
    },
    /// The run has a conductor that what feeds it lacks.
    Conductor {
        /// The run.
        run: usize,
        /// The slot.
        slot: usize,
    },
    /// A number of the run is negative or none.
    Run {
        /// The run.
        run: usize,
    },
    /// The load is at no run, between conductors its run does not have, or a number of it is out of range.
    Load {
        /// Position in [`Network::loads`].
        load: usize,
    },
    /// A number of the source is none.
    Source,
}

impl Network {
    /// Everything is in phase: real numbers do. So it is where no leg, load or impedance is reactive.
    #[must_use]
    pub fn is_in_phase(&self) -> bool {
        let source = &self.source;
        let legs = source.volts[2] == 0.0 && source.direction.iter().all(|d| d.im == 0.0);
        let spans = self.spans.iter().all(|s| s.ohms[2].is_none() && s.reactance == [0.0; SLOTS]);
        legs && spans && source.own.im == 0.0 && source.shared.im == 0.0 && self.loads.iter().all(|l| l.power_factor == 1.0)
    }

    /// A run has a conductor; a grounding conductor every run has.
    #[must_use]
    pub fn has(&self, run: usize, conductor: Conductor) -> bool {
        self.spans.get(run).is_some_and(|s| slot(conductor).is_none_or(|slot| s.ohms[slot].is_some()))
    }

    /// The quantity of the Readings sheet at the far end of a run, with the sign that makes it positive in a sound split phase:
    /// L1-N, L2-N, L1-L2; leg currents away from the source; the neutral current towards it, so positive where leg 1 carries
    /// more. N-G is the neutral against the bonded neutral of its service. `None` for conductors the run lacks, and for the
    /// grounding conductor's current.
    #[must_use]
    pub fn observed(&self, run: usize, quantity: Quantity) -> Option<Observed> {
        let line = Conductor::Line;
        let voltage = |a: Conductor, b: Conductor| {
            let at = |c| Terminal::At(run, c);
            let is_reversed = matches!(a, Conductor::Line(leg) if self.source.direction[leg.index()].re < 0.0);
            let (plus, minus) = if is_reversed { (b, a) } else { (a, b) };
            (self.has(run, a) && self.has(run, b)).then_some(Observed::Voltage { plus: at(plus), minus: at(minus) })
        };
        let current = |conductor, towards_source| self.has(run, conductor).then_some(Observed::Current { run, conductor, towards_source });
        match quantity {
            Quantity::Voltage(Between::LineNeutral(leg)) => voltage(line(leg), Conductor::Neutral),
            Quantity::Voltage(Between::LineLine(a, b)) => voltage(line(a), line(b)),
            Quantity::NeutralGround => voltage(Conductor::Neutral, Conductor::Ground),
            Quantity::LineGround(leg) => voltage(line(leg), Conductor::Ground),
            Quantity::LineCurrent(leg) => current(line(leg), self.source.direction[leg.index()].re < 0.0),
            Quantity::NeutralCurrent => current(Conductor::Neutral, true),
            Quantity::GroundCurrent => None,
        }
    }
}
