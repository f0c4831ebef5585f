//! From the tables of a workbook to a visit, one file a sheet.

mod circuits;
mod draft;
mod instruments;
mod known;
mod legs;
mod observations;
mod photos;
mod readings;
mod revisions;
mod system;
mod tests_sheet;
mod unread;
mod visit_sheet;
mod work;

pub(super) use draft::draft;

use super::cell::Reader;
use super::grid::Workbook;
use super::header::{self, Row, Table, What};
use super::words::{Column, Kind, Words};
use super::{Options, Refusal};
use crate::diag::{Output, Problem, Severity};
use crate::visit::{Tree, Visit};
use crate::wording::Sentence;
use std::collections::HashMap;
use std::sync::Arc;

/// The tables of a workbook, by what they are.
struct Tables<'a>(Vec<Table<'a>>);

impl<'a> Tables<'a> {
    fn of(&'a self, kind: Kind) -> impl Iterator<Item = &'a Table<'a>> {
        self.0.iter().filter(move |t| t.kind == kind)
    }
}

/// Reads a workbook's grid.
///
/// # Errors
/// It has no table of readings, or nothing is entered.
pub(super) fn assemble(grid: Output<Workbook>, options: &Options) -> Result<Output<Visit>, Refusal> {
    let workbook = &grid.value;
    let words = match options.mapping {
        Some(mapping) => &mapping.words,
        None => Words::built_in(),
    };
    let tables = Tables(workbook.sheets.iter().flat_map(|sheet| header::tables(sheet, words)).collect());
    if tables.of(Kind::Readings).next().is_none() {
        return Err(Refusal::NoReadings(unread::nearest_to_readings(workbook, words)));
    }
    let mut reader = Reader::new(words);
    reader.problems = grid.problems;
    let visit = read(workbook, &tables, options, &mut reader);
    unread::say(workbook, &tables, &mut reader);
    if !tables.0.iter().any(entered) && reader.problems.iter().all(|p| p.severity == Severity::Warning) {
        return Err(Refusal::NotFilledIn);
    }
    Ok(Output { value: visit, problems: ordered(reader.problems, reader.more, workbook) })
}

fn read<'a>(workbook: &'a Workbook, tables: &'a Tables<'a>, options: &Options, reader: &mut Reader<'a>) -> Visit {
    let visit_sheet::VisitSheet { site, system } = visit_sheet::read(workbook, tables, reader);
    let instruments = instruments::read(tables, reader);
    let mentioned = known::mentioned(tables);
    let circuits::Circuits { mut runs, pending } = circuits::read(tables, &system, site.supplied_by.as_ref(), &mentioned, reader);
    let rows = {
        let known = known::Known::new(&runs, &instruments, &system, site.service_amperes.as_ref().map(|a| a.value));
        readings::read(tables, &known, site.date.as_ref(), reader)
    };
    let tree = Tree::new(&runs);
    circuits::say_faults(&runs, &tree, reader);
    legs::settle(&mut runs, pending, &rows, &tree, reader);
    let mut photos = photos::Photos::new(options.beside);
    photos.read(tables, reader);
    let observations = observations::read(tables, &mut photos, reader);
    Visit {
        site,
        system,
        instruments,
        runs,
        tree,
        rows,
        tests: tests_sheet::read(tables, reader),
        observations,
        photos: photos.into_list(),
        work: work::read(tables, reader),
        revisions: revisions::read(tables, reader),
    }
}

/// Something stands in a table that can be judged; cells that reckon stand in an empty workbook, too.
fn entered(table: &Table<'_>) -> bool {
    let by_hand = |row: Row<'_>| row.placed().any(|(placed, _)| placed.what != What::Named(Column::Reckoned));
    matches!(table.kind, Kind::Circuits | Kind::Readings | Kind::Tests | Kind::Observations) && table.body().any(by_hand)
}

/// The problems in the order of the workbook: those of the whole first, then by sheet, row and column.
fn ordered(mut problems: Vec<Problem>, more: usize, workbook: &Workbook) -> Vec<Problem> {
    let order: HashMap<&Arc<str>, usize> = workbook.sheets.iter().enumerate().map(|(i, s)| (&s.name, i)).collect();
    let place = |p: &Problem| {
        let sheet = p.sheet.as_ref().and_then(|s| order.get(s).copied());
        (sheet, p.cell.as_ref().map(|c| (c.row, c.col)))
    };
    problems.sort_by_key(place);
    if more > 0 {
        problems.push(Problem::in_workbook(Severity::Error, "", Sentence::new("intake.more-problems").with("n", more)));
    }
    problems
}
