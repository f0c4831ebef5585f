//! Neutral and leg impedance from two load states read at one location.

use crate::diag::CellRef;
use crate::electrics::load_step::{Estimate, State, Uncertainty, resistances};
use crate::quantity::{Amperes, Ohms, Volts, math};
use crate::results::LoadStep;
use crate::visit::{Accuracy, Arrangement, Leg, Quantity, Reading, ReadingRow, Visit};
use std::collections::BTreeMap;

/// What the supply moves by itself between two rows, as a share of its volts and one standard deviation. Common practice, no
/// source.
const DRIFT: f64 = 0.001;

/// Impedances from the transformer to every location that was read in two states of one stage with the volts and amperes of both
/// legs: the first state against each later one. Split phase only; elsewhere the legs' currents do not oppose each other.
#[must_use]
pub fn load_steps(visit: &Visit) -> Vec<LoadStep> {
    if visit.system.arrangement != Arrangement::SplitPhase {
        return Vec::new();
    }
    let mut first = BTreeMap::new();
    let mut steps = Vec::new();
    for row in &visit.rows {
        let (Some(run), Some(read)) = (row.run, Read::of(visit, row)) else { continue };
        let before: &Read = match first.get(&(run, row.stage)) {
            Some(before) => before,
            None => {
                first.insert((run, row.stage), read);
                continue;
            }
        };
        if before.row.state != row.state {
            steps.extend(before.step_to(&read, run));
        }
    }
    steps
}

/// A row with what the method needs.
struct Read<'a> {
    row: &'a ReadingRow,
    volts: [f64; 2],
    line: f64,
    amperes: [f64; 2],
    volts_accuracy: Accuracy,
    amperes_accuracy: Accuracy,
    cells: Vec<CellRef>,
}

impl<'a> Read<'a> {
    fn of(visit: &Visit, row: &'a ReadingRow) -> Option<Self> {
        let legs = [Leg::L1, Leg::L2];
        let mut cells = Vec::new();
        let mut take = |quantity: Quantity| {
            let reading: &Reading = row.reading(quantity)?;
            cells.push(reading.cell.clone());
            reading.value.value()
        };
        let volts = [take(Quantity::line_neutral(legs[0]))?, take(Quantity::line_neutral(legs[1]))?];
        let amperes = [take(Quantity::LineCurrent(legs[0]))?, take(Quantity::LineCurrent(legs[1]))?];
        let line = take(Quantity::L1_L2).unwrap_or(volts[0] + volts[1]);
        Some(Self {
            row,
            volts,
            line,
            amperes,
            volts_accuracy: visit.accuracy_of(row, Quantity::L1_L2),
            amperes_accuracy: visit.accuracy_of(row, Quantity::LineCurrent(Leg::L1)),
            cells,
        })
    }

    /// The row with the leg that was switched in front.
    fn state(&self, switched: usize) -> State {
        let other = 1 - switched;
        State {
            leg_1: Volts(self.volts[switched]),
            leg_2: Volts(self.volts[other]),
            line: Volts(self.line),
            current_1: Amperes(self.amperes[switched]),
            current_2: Amperes(self.amperes[other]),
        }
    }

    /// What the step from this row to another shows; nothing where no current changed.
    fn step_to(&self, after: &Read, run: usize) -> Option<LoadStep> {
        let change = |leg: usize| (after.amperes[leg] - self.amperes[leg]).abs();
        let switched = usize::from(change(1) > change(0));
        let step = resistances(self.state(switched), after.state(switched), self.uncertainty())?;
        let (neutral, line) = (self.with_gain(step.neutral), self.with_gain(step.leg));
        let resolved = |e: Estimate| e.is_resolved().then_some((e.ohms, e.expanded));
        Some(LoadStep {
            run,
            states: (self.row.state.clone(), after.row.state.clone()),
            leg: if switched == 0 { Leg::L1 } else { Leg::L2 },
            amperes: step.neutral_current.0.abs(),
            neutral: resolved(neutral),
            line: resolved(line),
            resolves: neutral.expanded,
            cells: self.cells.iter().chain(&after.cells).cloned().collect(),
        })
    }

    /// Of one reading without its gain: counts, and for volts what the supply drifts.
    fn uncertainty(&self) -> Uncertainty {
        Uncertainty {
            volts: Volts(math::hypot(self.volts_accuracy.counts(), DRIFT * self.volts[0])),
            amperes: Amperes(self.amperes_accuracy.counts()),
        }
    }

    /// Gain cancels in no quotient of volts and amperes read with two instruments.
    fn with_gain(&self, estimate: Estimate) -> Estimate {
        let gain = math::hypot(self.volts_accuracy.gain(estimate.ohms.0), self.amperes_accuracy.gain(estimate.ohms.0));
        Estimate { expanded: Ohms(math::hypot(estimate.expanded.0, 2.0 * gain)), ..estimate }
    }
}
