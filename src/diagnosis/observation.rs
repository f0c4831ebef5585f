//! The readings as observations of the reduced network.

use super::reduce::Reduced;
use super::settings::{DRIFT, MOST_READINGS, SCATTER};
use crate::diag::CellRef;
use crate::network::Observed;
use crate::quantity::math;
use crate::visit::{Accuracy, Leg, Quantity, ReadingRow, Stage, Visit};

/// Volts or amperes from which a difference of two readings shows a sign.
const SHOWS: f64 = 1.0;

/// No instrument is better than that, whatever its sheet says.
const LEAST_GAIN: f64 = 1e-4;

/// One reading as the fit sees it.
#[derive(Clone, Debug)]
pub(super) struct Observation {
    /// Its cell.
    pub cell: CellRef,
    /// What was read.
    pub quantity: Quantity,
    /// Read at the far end of a service run.
    pub is_service: bool,
    /// What it is in the network.
    pub observed: Observed,
    /// Volts or amperes read.
    pub value: f64,
    /// Its sign in phase where the other readings of its row show it; a magnitude alone otherwise.
    pub sign: Option<f64>,
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

/// The rows of a stage that can be used: at a run that hangs on the source, with a number. At most [`MOST_READINGS`] readings.
pub(super) fn usable_rows(visit: &Visit, stage: Stage) -> Vec<&ReadingRow> {
    let mut is_fed = vec![false; visit.runs.len()];
    for &run in &visit.tree.order {
        is_fed[run] = true;
    }
    let has_number = |row: &&ReadingRow| row.readings.iter().any(|r| r.value.value().is_some());
    let is_fed = |row: &&ReadingRow| row.run.is_some_and(|r| is_fed.get(r) == Some(&true));
    let rows: Vec<&ReadingRow> = visit.rows.iter().filter(|r| r.stage == stage).filter(is_fed).filter(has_number).collect();
    let readings: usize = rows.iter().map(|r| r.readings.len()).sum();
    if readings <= MOST_READINGS {
        return rows;
    }
    let n = rows.len();
    let kept = (n * MOST_READINGS / readings).max(1);
    (0..kept).map(|k| rows[k * n / kept]).collect()
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
                is_service: visit.tree.parent[run].is_none(),
                observed,
                value: value.abs(),
                sign: None,
                sigma: own_error(accuracy, reading.quantity, value),
                row: k,
                state,
                gain,
            });
        }
    }
    all.rows = rows.len();
    if reduced.network.is_in_phase() {
        all.find_signs();
    }
    all
}

impl Observations {
    /// A neutral's current is that of leg 1 less that of leg 2; its voltage to ground is half of what leg 2 reads over leg 1,
    /// over what it does at the service. Where these are read, and well apart, they give the sign that the meter does not.
    fn find_signs(&mut self) {
        let at_service = (0..self.list.len()).find_map(|k| self.difference(k).filter(|_| self.list[k].is_service));
        for k in 0..self.list.len() {
            let o = &self.list[k];
            let shown = match o.quantity {
                Quantity::NeutralCurrent => self.pair(k, Quantity::LineCurrent).map(|(a, b)| a - b),
                Quantity::NeutralGround => self.difference(k).zip(at_service).map(|(here, there)| (here - there) / 2.0),
                _ => None,
            };
            let least = if o.quantity.is_voltage() { SHOWS } else { 5.0 * o.sigma };
            let agrees = |d: &f64| d.abs() > least && (d.abs() - o.value).abs() < 0.4 * o.value && o.value > 5.0 * o.sigma;
            self.list[k].sign = shown.filter(agrees).map(f64::signum);
        }
    }

    /// Readings of both legs in the row of an observation.
    fn pair(&self, k: usize, quantity: fn(Leg) -> Quantity) -> Option<(f64, f64)> {
        let row = self.list[k].row;
        let read = |leg| self.list.iter().find(|o| o.row == row && o.quantity == quantity(leg)).map(|o| o.value);
        read(Leg::L1).zip(read(Leg::L2))
    }

    /// Volts that leg 2 reads over leg 1.
    fn difference(&self, k: usize) -> Option<f64> {
        self.pair(k, Quantity::line_neutral).map(|(a, b)| b - a)
    }

    /// The gain a reading shares with the others of its instrument; the last one for readings of an instrument not listed.
    fn gain(&mut self, visit: &Visit, row: &ReadingRow, quantity: Quantity, accuracy: Accuracy, known: &mut Vec<Option<usize>>) -> usize {
        let instrument = visit.instrument_of(row, quantity);
        let at = instrument.and_then(|i| visit.instruments.iter().position(|x| std::ptr::eq(x, i)));
        // Volts and amperes of instruments that nobody listed are two.
        let at = at.or(Some(visit.instruments.len() + usize::from(!quantity.is_voltage())));
        known.iter().position(|k| *k == at).unwrap_or_else(|| {
            known.push(at);
            self.gains.push(accuracy.gain(1.0).abs().max(LEAST_GAIN));
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
