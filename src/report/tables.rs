//! The typed tables: each computed from what the phases found, the same for PDF, HTML and XLSX.
//!
//! One file a group of tables; each table has its headings in the section `table-NAME` of the language file. A table that would
//! have no rows is left out.

mod causes;
mod circuits;
mod findings;
mod load;
mod readings;
mod sheets;

pub(super) use findings::{limit, measured, shown};

use super::Source;
use super::document::{Cell, Column, ColumnKind, Number, Row, Table};
use super::facts::visible;
use crate::quantity::{Measured, Unit};
use crate::visit::Stage;
use crate::wording::Language;
use std::sync::Arc;

/// Makes a table, or none where the visit has nothing for it.
type Make = fn(&Source, &Language) -> Option<Table>;

/// Every table by its name.
const TABLES: [(&str, Make); 20] = [
    ("summary", findings::summary),
    ("findings", findings::findings),
    ("basis", findings::basis),
    ("left-out", findings::left_out),
    ("causes", causes::causes),
    ("not-shown", causes::not_shown),
    ("next", causes::next),
    ("exposure", causes::exposure),
    ("load-steps", causes::load_steps),
    ("readings", readings::readings),
    ("before-after", readings::before_after),
    ("circuits", circuits::circuits),
    ("legs", load::legs),
    ("leg-circuits", load::circuits),
    ("moves", load::moves),
    ("instruments", sheets::instruments),
    ("tests", sheets::tests),
    ("observations", sheets::observations),
    ("work", sheets::work),
    ("revisions", sheets::revisions),
];

/// Names of all tables, whether this visit fills them or not.
pub(super) fn known() -> impl Iterator<Item = &'static str> {
    TABLES.iter().map(|t| t.0)
}

/// All tables that have something to say.
pub(super) fn build(source: &Source, language: &Language) -> Vec<Arc<Table>> {
    TABLES.iter().filter_map(|(_, make)| make(source, language)).filter(|t| !t.rows.is_empty()).map(Arc::new).collect()
}

/// A table being put together.
struct Draft<'a> {
    language: &'a Language,
    table: Table,
}

impl<'a> Draft<'a> {
    fn new(name: &str, language: &'a Language) -> Self {
        let caption = language.text(&format!("table-{name}.caption"));
        let table = Table { name: name.to_owned(), caption, columns: Vec::new(), rows: Vec::new(), when_empty: String::new() };
        Self { language, table }
    }

    /// A column with its heading from the language file.
    fn column(mut self, key: &str, kind: ColumnKind, unit: Option<Unit>) -> Self {
        let heading = self.language.text(&format!("table-{}.{key}", self.table.name));
        self.table.columns.push(Column { key: key.to_owned(), heading, unit, kind });
        self
    }

    /// A column that is headed by a term, the same in every language: a quantity, a leg.
    fn term(mut self, key: &str, heading: String, kind: ColumnKind, unit: Option<Unit>) -> Self {
        self.table.columns.push(Column { key: key.to_owned(), heading, unit, kind });
        self
    }

    fn row(&mut self, cells: Vec<Cell>) {
        self.table.rows.push(Row { cells, group: false });
    }

    /// The table without the columns in which no row has anything; formulas of what stays lose nothing, since an empty column
    /// yields no number.
    fn finish(mut self) -> Option<Table> {
        let full: Vec<bool> = (0..self.table.columns.len())
            .map(|c| self.table.rows.iter().any(|r| r.cells.get(c).is_some_and(|cell| *cell != Cell::Empty)))
            .collect();
        let mut keep = full.iter();
        self.table.columns.retain(|_| *keep.next().unwrap_or(&true));
        for row in &mut self.table.rows {
            let mut keep = full.iter();
            row.cells.retain(|_| *keep.next().unwrap_or(&true));
        }
        Some(self.table)
    }
}

/// Text as it stands, with what controls or reorders made visible.
fn text(value: &str) -> Cell {
    if value.is_empty() { Cell::Empty } else { Cell::Text(visible(value)) }
}

fn number(value: f64, decimals: u8) -> Cell {
    Cell::Number(Number::new(value, decimals))
}

fn opt<T>(value: Option<T>, cell: impl FnOnce(T) -> Cell) -> Cell {
    value.map_or(Cell::Empty, cell)
}

/// A value that is no number, as one would write it.
fn unread(value: Measured) -> Cell {
    match value {
        Measured::NotMeasured => Cell::Empty,
        Measured::Value(v) => number(v, 1),
        Measured::OverRange(None) => text("OL"),
        Measured::OverRange(Some(range)) => Cell::Text(format!(">{range}")),
        Measured::AtMost(bound) => Cell::Text(format!("<{bound}")),
    }
}

/// Name of a run.
fn name(source: &Source, run: usize) -> String {
    source.visit.runs.get(run).map_or_else(String::new, |r| r.name.value.clone())
}

/// Names of several runs.
fn names(source: &Source, runs: &[usize]) -> String {
    runs.iter().map(|&r| name(source, r)).collect::<Vec<_>>().join(", ")
}

/// `as found`, `as left` in the report's language.
fn stage(language: &Language, stage: Stage) -> String {
    language.text(match stage {
        Stage::AsFound => "report.as-found",
        Stage::AsLeft => "report.as-left",
    })
}

/// A state; what the workbook left open is `as found`.
fn state(language: &Language, state: &str) -> String {
    if state == "as found" { language.text("report.as-found") } else { state.to_owned() }
}
