//! The readings as observations of the reduced network.

use super::reduce::Reduced;
use super::settings::{DRIFT, MOST_ROWS, SCATTER};
use crate::diag::CellRef;
use crate::network::Observed;
use crate::quantity::math;
use crate::visit::{Accuracy, Quantity, ReadingRow, Stage, Visit};

/// One reading as the fit sees it.
#[derive(Clone, Debug)]
pub(super) struct Observation {
    /// Its cell.
    pub cell: CellRef,
    /// What was read.
    pub quantity: Quantity,
    /// Where: the run of the visit.
    pub run: usize,
    /// What it is in the network.
    pub observed: Observed,
    /// Volts or amperes read.
    pub value: f64,
    /// Standard deviation of its own error: counts and scatter.
    pub sigma: f64,
    /// Its row among the rows used.
    pub row: usize,
    /// Its state.
    pub state: usize,
    /// Its instrument among the gains.
    pub gain: usize,
}

/// All observations of one stage.
#[derive(Clone, Debug, Default)]
pub(super) struct Observations {
    /// The readings.
    pub list: Vec<Observation>,
    /// States as written, in order of their first row. The first is the one the circuit list's loads belong to alone.
    pub states: Vec<String>,
    /// How many rows.
    pub rows: usize,
    /// Standard deviation of each instrument's common gain error, as a share.
    pub gains: Vec<f64>,
}

/// The rows of a stage that can be used: at a run that hangs on the source, with a number. At most [`MOST_ROWS`].
pub(super) fn usable_rows(visit: &Visit, stage: Stage) -> Vec<&ReadingRow> {
    let mut is_fed = vec![false; visit.runs.len()];
    for &run in &visit.tree.order {
        is_fed[run] = true;
    }
    let has_number = |row: &&ReadingRow| row.readings.iter().any(|r| r.value.value().is_some());
    let is_fed = |row: &&ReadingRow| row.run.is_some_and(|r| is_fed.get(r) == Some(&true));
    let rows: Vec<&ReadingRow> = visit.rows.iter().filter(|r| r.stage == stage).filter(is_fed).filter(has_number).collect();
    let n = rows.len();
    if n <= MOST_ROWS { rows } else { (0..MOST_ROWS).map(|k| rows[k * n / MOST_ROWS]).collect() }
}

/// Observations of the rows on the reduced network.
pub(super) fn observe(visit: &Visit, rows: &[&ReadingRow], reduced: &Reduced) -> Observations {
    let mut all = Observations::default();
    let mut instruments: Vec<Option<usize>> = Vec::new();
    for (k, row) in rows.iter().enumerate() {
        let Some(run) = row.run else { continue };
        let Some(span) = reduced.end.get(run).copied().flatten() else { continue };
        let state = all.states.iter().position(|s| *s == row.state).unwrap_or_else(|| {
            all.states.push(row.state.clone());
            all.states.len() - 1
        });
        for reading in &row.readings {
            let (Some(value), Some(observed)) = (reading.value.value(), reduced.network.observed(span, reading.quantity)) else { continue };
            let accuracy = visit.accuracy_of(row, reading.quantity);
            let gain = all.gain(visit, row, reading.quantity, accuracy, &mut instruments);
            all.list.push(Observation {
                cell: reading.cell.clone(),
                quantity: reading.quantity,
                run,
                observed,
                value: value.abs(),
                sigma: own_error(accuracy, reading.quantity, value),
                row: k,
                state,
                gain,
            });
        }
    }
    all.rows = rows.len();
    all
}

impl Observations {
    /// The gain a reading shares with the others of its instrument; the last one for readings of an instrument not listed.
    fn gain(&mut self, visit: &Visit, row: &ReadingRow, quantity: Quantity, accuracy: Accuracy, known: &mut Vec<Option<usize>>) -> usize {
        let instrument = visit.instrument_of(row, quantity);
        let at = instrument.and_then(|i| visit.instruments.iter().position(|x| std::ptr::eq(x, i)));
        // Volts and amperes of instruments that nobody listed are two.
        let at = at.or(Some(visit.instruments.len() + usize::from(!quantity.is_voltage())));
        known.iter().position(|k| *k == at).unwrap_or_else(|| {
            known.push(at);
            self.gains.push(accuracy.gain(1.0));
            known.len() - 1
        })
    }
}

/// Counts and scatter, never below what a display's last digit and the supply's flicker leave.
fn own_error(accuracy: Accuracy, quantity: Quantity, value: f64) -> f64 {
    let scatter = SCATTER * accuracy.gain(value);
    let floor = if quantity.is_voltage() { DRIFT * 12.0 } else { 0.005 };
    math::hypot(math::hypot(accuracy.counts(), scatter), floor)
}
