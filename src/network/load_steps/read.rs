//! A row of readings with what a load step needs.

use crate::diag::CellRef;
use crate::electrics::load_step::{Estimate, State, Uncertainty};
use crate::quantity::{Amperes, Ohms, Volts, math};
use crate::visit::{Accuracy, Leg, Quantity, Reading, ReadingRow, Visit};

/// What the supply moves by itself between two rows, as a share of its volts and one standard deviation: common practice, no
/// source.
const DRIFT: f64 = 0.002;

/// Share of an instrument's per cent of reading that is scatter of the single reading, not its gain: common practice, no source.
const SCATTER: f64 = 1.0 / 3.0;

/// Standard uncertainties by which a quantity must have changed to count as changed.
const CLEAR: f64 = 3.0;

/// A row with volts and amperes of both legs.
pub(super) struct Read<'a> {
    pub row: &'a ReadingRow,
    pub run: usize,
    pub cells: Vec<CellRef>,
    volts: [f64; 2],
    line: f64,
    amperes: [f64; 2],
    volts_accuracy: Accuracy,
    amperes_accuracy: Accuracy,
}

impl<'a> Read<'a> {
    /// `None` where a reading is missing, or the legs do not add up to the line: then one of them is misread.
    pub fn of(visit: &Visit, row: &'a ReadingRow) -> Option<Self> {
        let legs = [Leg::L1, Leg::L2];
        let mut cells = Vec::new();
        let mut take = |quantity: Quantity| {
            let reading: &Reading = row.reading(quantity)?;
            cells.push(reading.cell.clone());
            reading.value.value()
        };
        let volts = [take(Quantity::line_neutral(legs[0]))?, take(Quantity::line_neutral(legs[1]))?];
        let amperes = [take(Quantity::LineCurrent(legs[0]))?, take(Quantity::LineCurrent(legs[1]))?];
        let sum = volts[0] + volts[1];
        let line = take(Quantity::L1_L2).unwrap_or(sum);
        let read = Self {
            row,
            run: row.run?,
            cells,
            volts,
            line,
            amperes,
            volts_accuracy: visit.accuracy_of(row, Quantity::L1_L2),
            amperes_accuracy: visit.accuracy_of(row, Quantity::LineCurrent(Leg::L1)),
        };
        ((sum - line).abs() <= CLEAR * 3f64.sqrt() * read.each().volts.0).then_some(read)
    }

    /// The leg whose current changed most: 0 or 1.
    pub fn switched(&self, after: &Read) -> usize {
        usize::from((after.amperes[1] - self.amperes[1]).abs() > (after.amperes[0] - self.amperes[0]).abs())
    }

    /// By how many amperes that was.
    pub fn change(&self, after: &Read) -> f64 {
        let leg = self.switched(after);
        (after.amperes[leg] - self.amperes[leg]).abs()
    }

    /// The currents of a leg and of the neutral have changed.
    pub fn differs(&self, after: &Read) -> bool {
        let each = self.each().amperes.0.max(after.each().amperes.0);
        let neutral = (after.difference_of_amperes() - self.difference_of_amperes()).0.abs();
        self.change(after) > CLEAR * each * 2f64.sqrt() && neutral > CLEAR * each * 2.0
    }

    pub fn difference_of_volts(&self) -> Volts {
        Volts(self.volts[0] - self.volts[1])
    }

    pub fn difference_of_amperes(&self) -> Amperes {
        Amperes(self.amperes[0] - self.amperes[1])
    }

    /// The row with the leg that was switched in front.
    pub fn state(&self, switched: usize) -> State {
        let other = 1 - switched;
        State {
            leg_1: Volts(self.volts[switched]),
            leg_2: Volts(self.volts[other]),
            line: Volts(self.line),
            current_1: Amperes(self.amperes[switched]),
            current_2: Amperes(self.amperes[other]),
        }
    }

    /// Standard uncertainty of one reading without the gain common to all: counts and scatter.
    pub fn each(&self) -> Uncertainty {
        let one = |accuracy: Accuracy, value: f64| math::hypot(accuracy.counts(), SCATTER * accuracy.gain(value));
        Uncertainty {
            volts: Volts(one(self.volts_accuracy, self.volts[0].max(self.volts[1]))),
            amperes: Amperes(one(self.amperes_accuracy, self.amperes[0].max(self.amperes[1]))),
        }
    }

    /// The same of what does not cancel the supply: the line.
    pub fn with_drift(&self) -> Uncertainty {
        let each = self.each();
        Uncertainty { volts: Volts(math::hypot(each.volts.0, DRIFT * self.line)), ..each }
    }

    /// Gain cancels in no quotient of volts and amperes, which are read with two instruments.
    pub fn with_gain(&self, estimate: Estimate) -> Estimate {
        let gain = math::hypot(self.volts_accuracy.gain(estimate.ohms.0), self.amperes_accuracy.gain(estimate.ohms.0));
        Estimate { expanded: Ohms(math::hypot(estimate.expanded.0, 2.0 * gain)), ..estimate }
    }
}
