//! The ranking of causes, and what follows from the fitted network.

use crate::diag::CellRef;
use crate::quantity::{Ohms, Volts, Watts};
use crate::visit::{Leg, Quantity};

/// Which cause explains the readings, and what they leave open. Runs are positions in the circuit list.
#[derive(Clone, Debug, PartialEq)]
pub struct Diagnosis {
    /// Causes with their probabilities, most probable first; they add to 1. The first is the answer: nothing wrong, where no cause
    /// is clearly more probable than that.
    pub ranking: Vec<Cause>,
    /// Added neutral resistance the readings allow in every run with a neutral, 95 %.
    pub neutral: Vec<NeutralInterval>,
    /// The readings that would say most, best first.
    pub next: Vec<NextReading>,
    /// Impedances from two load states at one location.
    pub load_steps: Vec<LoadStep>,
    /// As left against as found, where there are both.
    pub repair: Option<RepairEvidence>,
    /// Readings the fit did not use: those with which nothing would explain the others, and what was too much of a very long sheet.
    pub left_out: Vec<CellRef>,
}

/// One cause and how probable it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Cause {
    /// What kind.
    pub kind: CauseKind,
    /// The runs the readings can't tell apart; empty where the kind has none.
    pub runs: Vec<usize>,
    /// Its share of the evidence.
    pub probability: f64,
    /// Added resistance, for neutral and hot.
    pub ohms: Option<AddedOhms>,
}

/// Kinds of cause.
#[derive(Clone, Debug, PartialEq)]
pub enum CauseKind {
    /// Nothing wrong that the readings show.
    None,
    /// Raised resistance of a neutral.
    Neutral,
    /// Raised resistance of a hot leg.
    Hot(Leg),
    /// Supply voltage off.
    Supply(SupplyDirection),
    /// One misread value.
    Reading(CellRef),
}

/// Which way the supply is off.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum SupplyDirection {
    /// Under nominal.
    Low,
    /// Over nominal.
    High,
}

/// Added resistance: most probable value and 95 % interval; no high end where the readings can't bound it (an open).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AddedOhms {
    /// Most probable; `None` where it is open for all the readings can tell.
    pub best: Option<Ohms>,
    /// Low end.
    pub low: Ohms,
    /// High end.
    pub high: Option<Ohms>,
}

/// What the readings allow for one run's neutral.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NeutralInterval {
    /// The run.
    pub run: usize,
    /// Low end of the added resistance.
    pub low: Ohms,
    /// High end; `None`: unbounded, an open neutral would not have shown.
    pub high: Option<Ohms>,
    /// Neutral current of the run as fitted, in amperes: what little made it hard to see.
    pub amperes: f64,
}

/// A reading worth taking.
#[derive(Clone, Debug, PartialEq)]
pub struct NextReading {
    /// The run at whose far end to read.
    pub run: usize,
    /// What to read.
    pub quantity: Quantity,
    /// Load state to read it in: a load of so many watts switched on at the location on a leg, or the state as found.
    pub load: Option<(Leg, Watts)>,
    /// The runs it would tell apart.
    pub tells_apart: Vec<usize>,
    /// How much doubt it is expected to remove, in bits, or by how much it narrows the largest unknown.
    pub worth: f64,
}

/// Neutral and leg impedance from two load states at one location.
#[derive(Clone, Debug, PartialEq)]
pub struct LoadStep {
    /// The run at whose far end both were read.
    pub run: usize,
    /// The two states, as written.
    pub states: (String, String),
    /// The leg whose current changed most.
    pub leg: Leg,
    /// Step of the neutral current in amperes.
    pub amperes: f64,
    /// Neutral impedance with expanded uncertainty; `None`: the step was too small to resolve it.
    pub neutral: Option<(Ohms, Ohms)>,
    /// Leg impedance with expanded uncertainty.
    pub line: Option<(Ohms, Ohms)>,
    /// The least resistance this step could have resolved.
    pub resolves: Ohms,
    /// The cells used.
    pub cells: Vec<CellRef>,
}

/// The volts the loads on a shared neutral would see if it opened.
#[derive(Clone, Debug, PartialEq)]
pub struct Exposure {
    /// The run whose neutral opens.
    pub run: usize,
    /// Per leg, the worst place.
    pub legs: Vec<ExposedLeg>,
}

/// One leg's worst place under an open neutral.
#[derive(Clone, Debug, PartialEq)]
pub struct ExposedLeg {
    /// The leg.
    pub leg: Leg,
    /// Volts there; the upper end where only a range can be given.
    pub volts: Volts,
    /// Lower end, where no single solution exists (electronic loads in series have no stable divider).
    pub low: Option<Volts>,
    /// The run at whose far end.
    pub at: usize,
    /// Load of this leg below the open neutral.
    pub loads: Watts,
}

/// What the as left readings show of the repair.
#[derive(Clone, Debug, PartialEq)]
pub struct RepairEvidence {
    /// The cause as found.
    pub found: Cause,
    /// The cause as left.
    pub left: Cause,
    /// Outcome for the faulty set.
    pub outcome: RepairOutcome,
    /// Cells compared.
    pub cells: Vec<CellRef>,
}

/// Is the repair proven?
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RepairOutcome {
    /// The as left readings exclude the fault.
    Proven,
    /// They show it still there.
    NotRepaired,
    /// They could not have shown it.
    NotShown,
}
