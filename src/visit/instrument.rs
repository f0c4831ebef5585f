//! Instruments and their accuracy.

use super::Date;
use crate::diag::{CellRef, Located};

/// What an instrument measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Measures {
    /// Voltage.
    Volts,
    /// Current.
    Amperes,
    /// Resistance.
    Ohms,
    /// Temperature.
    Temperature,
}

impl Measures {
    /// As the Instruments sheet writes it.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Volts => "volts",
            Self::Amperes => "amps",
            Self::Ohms => "ohms",
            Self::Temperature => "temperature",
        }
    }
}

/// A row of the Instruments sheet.
#[derive(Clone, Debug)]
pub struct Instrument {
    /// Its name.
    pub name: Located<String>,
    /// What this row's accuracy is for.
    pub measures: Located<Measures>,
    /// Serial number.
    pub serial: Option<Located<String>>,
    /// Calibrated until this day, inclusive.
    pub calibrated_until: Option<Located<Date>>,
    /// Accuracy in per cent of reading.
    pub accuracy_percent: Option<Located<f64>>,
    /// Accuracy in counts of resolution.
    pub accuracy_counts: Option<Located<f64>>,
    /// Resolution in the unit it measures.
    pub resolution: Option<Located<f64>>,
    /// The row's first cell.
    pub cell: CellRef,
}

impl Instrument {
    /// Its stated accuracy; `None` where neither per cent nor counts are stated. A missing part counts as nothing, a missing
    /// resolution as 0.1.
    #[must_use]
    pub fn accuracy(&self) -> Option<Accuracy> {
        if self.accuracy_percent.is_none() && self.accuracy_counts.is_none() {
            return None;
        }
        Some(Accuracy {
            percent: self.accuracy_percent.as_ref().map_or(0.0, |l| l.value),
            counts: self.accuracy_counts.as_ref().map_or(0.0, |l| l.value),
            resolution: self.resolution.as_ref().map_or(Accuracy::ASSUMED.resolution, |l| l.value),
            assumed: false,
        })
    }
}

/// Accuracy ±(percent of reading + counts of resolution).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Accuracy {
    /// Per cent of reading: the gain part, common to one instrument in one visit.
    pub percent: f64,
    /// Counts: independent from reading to reading.
    pub counts: f64,
    /// Volts or amperes a count.
    pub resolution: f64,
    /// Nobody stated it.
    pub assumed: bool,
}

impl Accuracy {
    /// What is assumed where no instrument is stated: ±(1 % + 3 counts) of 0.1.
    pub const ASSUMED: Self = Self { percent: 1.0, counts: 3.0, resolution: 0.1, assumed: true };

    /// Standard uncertainty of the gain part: a rectangle of half-width a·|y| (JCGM 100, 4.3.7).
    #[must_use]
    pub fn gain(&self, value: f64) -> f64 {
        self.percent / 100.0 * value.abs() / 3f64.sqrt()
    }

    /// Standard uncertainty of the counts part: a rectangle of half-width d·r.
    #[must_use]
    pub fn counts(&self) -> f64 {
        self.counts * self.resolution / 3f64.sqrt()
    }

    /// Standard uncertainty of one reading: the rectangle of half-width a·|y| + d·r, as the accuracy is stated.
    #[must_use]
    pub fn standard(&self, value: f64) -> f64 {
        self.gain(value) + self.counts()
    }

    /// Expanded uncertainty, coverage factor 2 (about 95 %).
    #[must_use]
    pub fn expanded(&self, value: f64) -> f64 {
        2.0 * self.standard(value)
    }
}
