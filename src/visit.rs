//! A visit: one attendance at one site, validated, every value with the cell it came from.
//!
//! This is what intake yields and every later phase reads. No type of a library that reads files appears here. What the
//! workbook did not say is `None` or absent, never a default in disguise; defaults are applied, and said, where they are used.

mod instrument;
mod run;
mod system;
mod tree;

pub use instrument::{Accuracy, Instrument, Measures};
pub use run::{Legs, Load, LoadKind, Metal, Run, Wire, WireSize};
pub use system::{Arrangement, Between, Conductor, Leg, Quantity, System};
pub use tree::{Tree, TreeFault};

use crate::diag::{CellRef, Located};
use crate::quantity::{Measured, Unit};

/// One visit as read.
#[derive(Clone, Debug)]
pub struct Visit {
    /// The Visit sheet.
    pub site: Site,
    /// The system of the service; from the Visit sheet, else assumed `120/240` (and a problem says so).
    pub system: System,
    /// The Instruments sheet, in its order.
    pub instruments: Vec<Instrument>,
    /// The circuit list, in its order.
    pub runs: Vec<Run>,
    /// The runs as a tree.
    pub tree: Tree,
    /// The Readings sheet: one entry per set of readings taken together (a row; for long layouts the rows of one location,
    /// state, stage and time).
    pub rows: Vec<ReadingRow>,
    /// The Tests sheet.
    pub tests: Vec<Test>,
    /// The Observations sheet.
    pub observations: Vec<Observation>,
    /// The Photos sheet; only those that can be used carry bytes.
    pub photos: Vec<Photo>,
    /// The Work sheet.
    pub work: Vec<Work>,
    /// The Revisions sheet.
    pub revisions: Vec<Revision>,
}

impl Visit {
    /// Position in [`Visit::runs`] of the run with this name, compared as circuit names are (trimmed, inner blanks single, any
    /// letter case); the first where a name stands twice.
    #[must_use]
    pub fn run_named(&self, name: &str) -> Option<usize> {
        let key = name_key(name);
        self.runs.iter().position(|r| name_key(&r.name.value) == key)
    }

    /// The instrument a reading was taken with: the row's own, else the only (or first) one listed that measures the quantity.
    #[must_use]
    pub fn instrument_of(&self, row: &ReadingRow, quantity: Quantity) -> Option<&Instrument> {
        let measures = if quantity.is_voltage() { Measures::Volts } else { Measures::Amperes };
        let named = row.instrument.as_ref().map(|i| name_key(&i.value));
        let fits = |i: &&Instrument| i.measures.value == measures;
        match named {
            Some(key) => {
                self.instruments.iter().filter(fits).find(|i| name_key(&i.name.value) == key).or_else(|| {
                    self.instruments.iter().find(fits).filter(|_| self.instruments.iter().any(|i| name_key(&i.name.value) == key))
                })
            }
            None => self.instruments.iter().find(fits),
        }
    }

    /// The accuracy a reading is judged with: its instrument's, else the one assumed where none is stated (methods: ±(1 % + 3
    /// counts) of 0.1).
    #[must_use]
    pub fn accuracy_of(&self, row: &ReadingRow, quantity: Quantity) -> Accuracy {
        self.instrument_of(row, quantity).and_then(Instrument::accuracy).unwrap_or(Accuracy::ASSUMED)
    }
}

/// The form in which names of circuits, locations and instruments are compared: trimmed, inner blanks single, lower case.
#[must_use]
pub fn name_key(name: &str) -> String {
    let mut key = String::with_capacity(name.len());
    for word in name.split_whitespace() {
        if !key.is_empty() {
            key.push(' ');
        }
        key.extend(word.chars().flat_map(char::to_lowercase));
    }
    key
}

/// The Visit sheet but for the system.
#[derive(Clone, Debug, Default)]
pub struct Site {
    /// Job number.
    pub job: Option<Located<String>>,
    /// Client.
    pub client: Option<Located<String>>,
    /// Site address.
    pub address: Option<Located<String>>,
    /// Visit date.
    pub date: Option<Located<Date>>,
    /// Inspection or service call.
    pub purpose: Option<Located<String>>,
    /// Who took the readings and answers for them.
    pub prepared_by: Option<Located<String>>,
    /// Licence or certificate number of that person.
    pub licence: Option<Located<String>>,
    /// Company.
    pub company: Option<Located<String>>,
    /// Service rating as written (`200 A`) and, where it could be read, in amperes.
    pub service_rating: Option<Located<String>>,
    /// The service's rated current, where it could be read.
    pub service_amperes: Option<Located<f64>>,
    /// Supplied by.
    pub supplied_by: Option<Located<String>>,
    /// Code in force, as the preparer states it.
    pub code: Option<Located<String>>,
    /// Weather.
    pub weather: Option<Located<String>>,
    /// Remarks.
    pub remarks: Option<Located<String>>,
}

/// A calendar date.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Date {
    /// Year.
    pub year: i16,
    /// Month, 1 to 12.
    pub month: i8,
    /// Day, 1 to 31.
    pub day: i8,
}

impl std::fmt::Display for Date {
    /// ISO 8601: `2026-03-14`.
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{:04}-{:02}-{:02}", self.year, self.month, self.day)
    }
}

/// Before any repair, or after it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Stage {
    /// Before any repair.
    AsFound,
    /// After the repair.
    AsLeft,
}

impl Stage {
    /// `as found` or `as left`.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::AsFound => "as found",
            Self::AsLeft => "as left",
        }
    }
}

/// Readings taken together at one location in one state.
#[derive(Clone, Debug)]
pub struct ReadingRow {
    /// Location as written.
    pub location: Located<String>,
    /// Position in [`Visit::runs`] of the run whose far end this is.
    pub run: Option<usize>,
    /// What was switched on; `as found` where the workbook is silent.
    pub state: String,
    /// Before or after the repair.
    pub stage: Stage,
    /// Time as written.
    pub time: Option<Located<String>>,
    /// Instrument as written.
    pub instrument: Option<Located<String>>,
    /// The readings, in the order of the sheet; not-measured cells are left out.
    pub readings: Vec<Reading>,
    /// Remarks.
    pub remarks: Option<Located<String>>,
    /// The row's first cell.
    pub cell: CellRef,
}

impl ReadingRow {
    /// The reading of a quantity that has a number; the first where the row has two.
    #[must_use]
    pub fn reading(&self, quantity: Quantity) -> Option<&Reading> {
        self.readings.iter().find(|r| r.quantity == quantity && r.value.value().is_some())
    }

    /// Its number.
    #[must_use]
    pub fn value(&self, quantity: Quantity) -> Option<f64> {
        self.reading(quantity).and_then(|r| r.value.value())
    }
}

/// One reading: volts or amperes, RMS.
#[derive(Clone, Debug, PartialEq)]
pub struct Reading {
    /// What was measured.
    pub quantity: Quantity,
    /// What the cell says, in volts or amperes.
    pub value: Measured,
    /// Its cell.
    pub cell: CellRef,
}

/// A row of the Tests sheet.
#[derive(Clone, Debug)]
pub struct Test {
    /// Where; a location or any other place.
    pub location: Option<Located<String>>,
    /// What was tested.
    pub kind: TestKind,
    /// The test's name as written.
    pub name: Located<String>,
    /// Result in `unit`.
    pub value: Located<Measured>,
    /// Unit of the result.
    pub unit: Unit,
    /// Before or after the repair.
    pub stage: Stage,
    /// Remarks.
    pub remarks: Option<Located<String>>,
}

/// The tests the Tests sheet can hold, with what the test's name or remarks state beside the result.
#[derive(Clone, Debug, PartialEq)]
pub enum TestKind {
    /// Insulation resistance in MΩ, with its DC test voltage where stated.
    InsulationResistance {
        /// DC test voltage in volts.
        test_volts: Option<f64>,
    },
    /// Resistance of a ground electrode in Ω.
    GroundElectrode,
    /// Loop impedance in Ω.
    LoopImpedance,
    /// GFCI trip time in ms at a residual current.
    GfciTripTime {
        /// Residual current of the test in mA, where stated.
        test_milliamperes: Option<f64>,
    },
    /// GFCI trip current in mA.
    GfciTripCurrent,
    /// Torque in N·m against the specified one.
    Torque {
        /// Specified torque in N·m.
        specified: Option<f64>,
    },
    /// Temperature rise of a conductor or connection in °C, over a similar one under the same load or over ambient.
    TemperatureRise {
        /// Over ambient rather than over a similar part.
        over_ambient: bool,
    },
    /// Resistance of a heating element or filament in Ω, with its rating where stated.
    ElementResistance {
        /// Rated watts.
        rated_watts: Option<f64>,
        /// Rated volts.
        rated_volts: Option<f64>,
        /// A lamp's filament, whose cold ohms are not its working ohms.
        filament: bool,
    },
    /// Something else: shown, not judged.
    Other,
}

/// A row of the Observations sheet.
#[derive(Clone, Debug)]
pub struct Observation {
    /// Where.
    pub location: Option<Located<String>>,
    /// What was seen.
    pub text: Located<String>,
    /// Signal word the observer gave it.
    pub signal: Option<Located<crate::results::Signal>>,
    /// Advice.
    pub advice: Option<Located<String>>,
    /// File name of a photo.
    pub photo: Option<Located<String>>,
}

/// A row of the Photos sheet.
#[derive(Clone, Debug)]
pub struct Photo {
    /// File name, beside the workbook.
    pub file: Located<String>,
    /// Where it was taken.
    pub location: Option<Located<String>>,
    /// Caption.
    pub caption: Option<Located<String>>,
    /// The file's bytes, where it could be read and is a PNG or JPEG.
    pub bytes: Option<std::sync::Arc<[u8]>>,
}

/// A row of the Work sheet.
#[derive(Clone, Debug)]
pub struct Work {
    /// When.
    pub date: Option<Located<Date>>,
    /// Where.
    pub location: Option<Located<String>>,
    /// What was done.
    pub done: Located<String>,
    /// Parts used.
    pub parts: Option<Located<String>>,
}

/// A row of the Revisions sheet.
#[derive(Clone, Debug)]
pub struct Revision {
    /// Issue number or letter.
    pub issue: Located<String>,
    /// Date of the issue.
    pub date: Option<Located<Date>>,
    /// Why it was reissued.
    pub reason: Option<Located<String>>,
}
