//! What the rest of the workbook says, ready for look-ups: circuits, instruments, the system's bounds.

use super::Tables;
use crate::intake::cell::plain_text;
use crate::intake::header::Field;
use crate::intake::words::{Column, Kind, nearest_name};
use crate::visit::{Instrument, Leg, Quantity, Run, System, name_key};
use std::cell::Cell;
use std::collections::{HashMap, HashSet};

/// Comparisons spent on suggestions for names that are not known; beyond them a name is reported without one.
const COMPARISONS: usize = 300_000;

/// Names and bounds that readings are held against.
pub(super) struct Known<'a> {
    runs: HashMap<String, usize>,
    list: &'a [Run],
    instruments: HashSet<String>,
    instrument_names: Vec<&'a str>,
    pub system: &'a System,
    service_amperes: Option<f64>,
    comparisons: Cell<usize>,
}

impl<'a> Known<'a> {
    pub fn new(runs: &'a [Run], instruments: &'a [Instrument], system: &'a System, service_amperes: Option<f64>) -> Self {
        let mut named = HashMap::with_capacity(runs.len());
        for (i, run) in runs.iter().enumerate() {
            named.entry(name_key(&run.name.value)).or_insert(i);
        }
        Self {
            runs: named,
            list: runs,
            instruments: instruments.iter().map(|i| name_key(&i.name.value)).collect(),
            instrument_names: instruments.iter().map(|i| i.name.value.as_str()).collect(),
            system,
            service_amperes,
            comparisons: Cell::new(COMPARISONS),
        }
    }

    /// Position of the run with a name.
    pub fn run(&self, name: &str) -> Option<usize> {
        self.runs.get(&name_key(name)).copied()
    }

    pub fn has_circuits(&self) -> bool {
        !self.list.is_empty()
    }

    pub fn has_instruments(&self) -> bool {
        !self.instruments.is_empty()
    }

    pub fn has_instrument(&self, name: &str) -> bool {
        self.instruments.contains(&name_key(name))
    }

    pub fn nearest_instrument(&self, name: &str) -> Option<&'a str> {
        self.comparisons.set(self.comparisons.get().checked_sub(self.instrument_names.len())?);
        nearest_name(name, self.instrument_names.iter().copied())
    }

    /// The circuit whose name is nearest to one that is not in the list.
    pub fn nearest_run(&self, name: &str) -> Option<&'a str> {
        nearest_run(self.list, name, &self.comparisons)
    }

    /// The legs of a run, or of the system where it has one leg alone.
    pub fn legs(&self, run: Option<usize>) -> Vec<Leg> {
        let own = run.and_then(|r| self.list.get(r)).and_then(|r| r.legs.as_ref()).map(|l| l.value.iter().collect::<Vec<_>>());
        own.or_else(|| (self.system.legs().len() == 1).then(|| self.system.legs().to_vec())).unwrap_or_default()
    }

    /// Above this a value of the quantity can hardly be true: half as much again as the highest voltage of the system; three
    /// times the service's rating.
    pub fn most(&self, quantity: Quantity) -> f64 {
        if quantity.is_voltage() {
            1.5 * self.system.line_to_line.0.max(self.system.line_to_neutral.0)
        } else {
            self.service_amperes.map_or(4000.0, |rating| 3.0 * rating)
        }
    }
}

/// The circuit whose name is nearest, while the budget of comparisons lasts.
pub(super) fn nearest_run<'a>(runs: &'a [Run], name: &str, budget: &Cell<usize>) -> Option<&'a str> {
    let left = budget.get().checked_sub(runs.len())?;
    budget.set(left);
    nearest_name(name, runs.iter().map(|r| r.name.value.as_str()).filter(|n| *n != name))
}

/// Names that stand as a source in the circuit list or as a location of readings, as they are compared.
pub(super) fn mentioned(tables: &Tables<'_>) -> HashSet<String> {
    let columns = [(Kind::Circuits, Column::FedFrom), (Kind::Readings, Column::Location)];
    let fields = columns.into_iter().flat_map(|(kind, column)| {
        let names = move |table| names_in(table, column);
        tables.of(kind).flat_map(names)
    });
    fields.collect()
}

fn names_in<'a>(table: &'a crate::intake::header::Table<'a>, column: Column) -> impl Iterator<Item = String> {
    // Rows that hold nothing but a name mention nothing.
    let telling = |row: &crate::intake::header::Row<'a>| row.filled() > 1;
    table.body().filter(telling).filter_map(move |row| row.field(column)).map(|field: Field<'_>| name_key(&plain_text(field.value)))
}
