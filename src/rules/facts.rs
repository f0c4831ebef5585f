//! What the rules look at, and the questions several of them ask of it.

use crate::diag::CellRef;
use crate::results::{Balance, Diagnosis, Exposure};
use crate::visit::{Accuracy, Leg, Quantity, Reading, ReadingRow, Run, Stage, Visit};
use crate::wording::{Arg, Sentence};
use std::collections::BTreeMap;

/// Everything the rules may look at.
#[derive(Clone, Copy, Debug)]
pub struct Facts<'a> {
    /// The visit as read.
    pub visit: &'a Visit,
    /// Load of the legs.
    pub balance: Option<&'a Balance>,
    /// Ranking of causes.
    pub diagnosis: Option<&'a Diagnosis>,
    /// Volts under an open neutral.
    pub exposure: &'a [Exposure],
}

impl<'a> Facts<'a> {
    /// A visit alone.
    #[must_use]
    pub fn of(visit: &'a Visit) -> Self {
        Self { visit, balance: None, diagnosis: None, exposure: &[] }
    }

    /// The row was read at the far end of a run fed by the utility.
    #[must_use]
    pub fn at_service(&self, row: &ReadingRow) -> bool {
        row.run.is_some_and(|run| self.is_service(run))
    }

    /// The run is fed by the utility.
    #[must_use]
    pub fn is_service(&self, run: usize) -> bool {
        self.visit.runs.get(run).is_some_and(|r| r.fed_from.is_none())
    }

    /// A run's name, as written; empty where there is no such run.
    #[must_use]
    pub fn name(&self, run: usize) -> &'a str {
        self.visit.runs.get(run).map_or("", |r| r.name.value.as_str())
    }

    /// A reading that has a number, with that number and its accuracy.
    #[must_use]
    pub fn known(&self, row: &'a ReadingRow, quantity: Quantity) -> Option<Known<'a>> {
        let reading = row.reading(quantity)?;
        let value = reading.value.value()?;
        Some(Known { reading, value, accuracy: self.visit.accuracy_of(row, quantity) })
    }

    /// The line-to-neutral readings of a row, by leg.
    #[must_use]
    pub fn to_neutral(&self, row: &'a ReadingRow) -> Vec<(Leg, Known<'a>)> {
        self.visit.system.legs().iter().filter_map(|leg| Some((*leg, self.known(row, Quantity::line_neutral(*leg))?))).collect()
    }

    /// For every row, the nearest row up the tree, in the same state and stage, that has this quantity; by position. Takes one
    /// walk over the tree a state, so that a long chain stays cheap.
    #[must_use]
    pub fn sources(&self, quantity: Quantity) -> Vec<Option<usize>> {
        let visit = self.visit;
        let mut states: BTreeMap<(&str, Stage), Vec<(usize, usize)>> = BTreeMap::new();
        for (i, row) in visit.rows.iter().enumerate() {
            if let Some(run) = row.run {
                states.entry((row.state.as_str(), row.stage)).or_default().push((i, run));
            }
        }
        let mut sources = vec![None; visit.rows.len()];
        for rows in states.values().filter(|rows| rows.len() > 1) {
            let mut here: Vec<Option<usize>> = vec![None; visit.runs.len()];
            for &(i, run) in rows.iter().rev() {
                if visit.rows[i].value(quantity).is_some() {
                    here[run] = Some(i);
                }
            }
            let mut above: Vec<Option<usize>> = vec![None; visit.runs.len()];
            for &run in &visit.tree.order {
                if let Some(parent) = visit.tree.parent[run] {
                    above[run] = here[parent].or(above[parent]);
                }
            }
            for &(i, run) in rows {
                sources[i] = above[run];
            }
        }
        sources
    }
}

/// A reading that has a number.
#[derive(Clone, Copy, Debug)]
pub struct Known<'a> {
    /// The reading.
    pub reading: &'a Reading,
    /// Its number, in volts or amperes.
    pub value: f64,
    /// Accuracy of its instrument.
    pub accuracy: Accuracy,
}

impl Known<'_> {
    /// Its cell.
    #[must_use]
    pub fn cell(&self) -> &CellRef {
        &self.reading.cell
    }

    /// Its standard uncertainty.
    #[must_use]
    pub fn standard(&self) -> f64 {
        self.accuracy.standard(self.value)
    }
}

/// Standard uncertainty of a sum or difference of readings of one instrument, whose value is `total`: the gain error is common, so
/// it acts on the total alone; the counts of the readings are independent. `weights` are the readings' factors.
#[must_use]
pub fn common_gain(accuracy: Accuracy, total: f64, weights: &[f64]) -> f64 {
    let counts = accuracy.counts() * weights.iter().map(|w| w * w).sum::<f64>().sqrt();
    crate::quantity::math::hypot(accuracy.gain(total), counts)
}

/// Runs named in one sentence, at most; cells listed with it, at most. A list may be of ten thousand runs.
const MOST_NAMES: usize = 8;
const MOST_CELLS: usize = 100;

/// The names of some runs for a sentence, with how many more there are.
#[must_use]
pub fn names(runs: &[&Run]) -> Vec<Arg> {
    let mut names: Vec<Arg> = runs.iter().take(MOST_NAMES).map(|r| Arg::from(r.name.value.as_str())).collect();
    if runs.len() > MOST_NAMES {
        names.push(Arg::from(Sentence::new("advice.more").with("n", runs.len() - MOST_NAMES)));
    }
    names
}

/// The cells of the names of some runs.
pub fn name_cells(runs: &[&Run]) -> impl Iterator<Item = CellRef> {
    runs.iter().take(MOST_CELLS).map(|r| r.name.cell.clone())
}
