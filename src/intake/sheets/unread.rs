//! What no table took in: unplaced columns, sheets without a table, hidden parts, and how near an input came to readings.

use super::Tables;
use crate::diag::{Problem, Severity, column_letters};
use crate::intake::cell::{Reader, bounded, plain_text};
use crate::intake::grid::{Sheet, Workbook};
use crate::intake::header::Table;
use crate::intake::mapping::{key, quoted};
use crate::intake::words::{Kind, Words};
use crate::wording::{Arg, Sentence};
use std::collections::{BTreeSet, HashSet};
use std::sync::Arc;

/// Numbers of rows and columns listed in one sentence.
const LISTED: usize = 8;

pub(super) fn say<'a>(workbook: &'a Workbook, tables: &'a Tables<'a>, reader: &mut Reader<'a>) {
    let mut said = HashSet::new();
    for table in &tables.0 {
        unplaced(table, reader);
        outside(table, tables, &mut said, reader);
    }
    for sheet in &workbook.sheets {
        hidden(sheet, reader);
        let read = tables.0.iter().any(|t| std::ptr::eq(t.sheet, sheet));
        let form = reader.problems.iter().any(|p| p.sheet.as_ref() == Some(&sheet.name));
        let left_out = reader.words.forced(&sheet.name) == Some(None) || reader.words.is_prose(&sheet.name);
        if !read && !form && !left_out && !sheet.cells.is_empty() && !is_form(sheet, reader.words) {
            reader.push(Problem::in_sheet(Severity::Warning, &sheet.name, "", Sentence::new("intake.no-table")));
        }
    }
}

/// A sheet whose items make it a form of the Visit sheet was read though it has no header.
pub(super) fn is_form(sheet: &Sheet, words: &Words) -> bool {
    let items: BTreeSet<_> = sheet.cells.iter().take(400).filter_map(|c| words.items.get(&plain_text(&c.value))).collect();
    items.len() >= 3
}

fn unplaced(table: &Table<'_>, reader: &mut Reader<'_>) {
    for (col, text) in &table.unplaced {
        let hint = line_to_add(table, text, reader);
        reader.at(Severity::Warning, &table.header_cell(*col), text.as_str(), Sentence::new("intake.unplaced-column")).hint = Some(hint);
    }
    for (col, text) in &table.second {
        reader.at(Severity::Warning, &table.header_cell(*col), text.as_str(), Sentence::new("intake.second-column"));
    }
    let beside = table.unplaced.iter().chain(&table.second).map(|u| u.0).chain(table.elsewhere.iter().copied());
    let headed: HashSet<u32> = table.placed.iter().map(|p| p.col).chain(beside).collect();
    let mut said = HashSet::new();
    for row in table.body() {
        for cell in row.cells_beside(&headed) {
            if said.insert(cell.col) {
                let at = table.sheet.at(cell.row, cell.col);
                reader.at(Severity::Warning, &at, plain_text(&cell.value), Sentence::new("intake.no-header"));
            }
        }
    }
}

/// The line of a mapping that would place a column, with the name it likely has.
fn line_to_add(table: &Table<'_>, heading: &str, reader: &mut Reader<'_>) -> Sentence {
    let likely = reader.nearest(|words| words.columns(table.kind).nearest(heading));
    let sentence = likely.map_or_else(
        || Sentence::new("intake.unplaced-hint"),
        |likely| Sentence::new("intake.unplaced-hint-likely").with("likely", likely).with("key", key(likely)),
    );
    sentence.with("heading", quoted(&bounded(heading))).with("table", table.kind.name())
}

/// Cells beside a table, in its rows but in no table's columns: said once a column.
fn outside<'a>(table: &'a Table<'a>, tables: &Tables<'a>, said: &mut HashSet<(Arc<str>, u32)>, reader: &mut Reader<'a>) {
    if is_form(table.sheet, reader.words) {
        return;
    }
    let own: Vec<&Table<'_>> = tables.0.iter().filter(|t| std::ptr::eq(t.sheet, table.sheet)).collect();
    let taken =
        |row: u32, col: u32| own.iter().any(|t| (t.header.0..t.rows.1).contains(&row) && (t.columns.0..=t.columns.1).contains(&col));
    for cell in table.beside() {
        if !taken(cell.row, cell.col) && said.insert((Arc::clone(&table.sheet.name), cell.col)) {
            let at = table.sheet.at(cell.row, cell.col);
            reader.at(Severity::Warning, &at, plain_text(&cell.value), Sentence::new("intake.no-header"));
        }
    }
}

/// Hidden rows, columns and sheets were read: said once a sheet.
fn hidden(sheet: &Sheet, reader: &mut Reader<'_>) {
    let list = |numbers: Vec<String>| {
        let more = numbers.len().saturating_sub(LISTED);
        let mut items: Vec<Arg> = numbers.into_iter().take(LISTED).map(Arg::from).collect();
        if more > 0 {
            items.push(Arg::from(Sentence::new("intake.and-more").with("n", more)));
        }
        items
    };
    let rows: Vec<String> = sheet.hidden_rows.iter().map(|r| (r + 1).to_string()).collect();
    let columns: Vec<String> = sheet.hidden_columns.iter().map(|c| column_letters(*c)).collect();
    let sentence = match (sheet.hidden, rows.len(), columns.len()) {
        (true, _, _) => Sentence::new("intake.hidden-sheet"),
        (false, 0, 0) => return,
        (false, n, 0) => Sentence::new("intake.hidden-rows").with("n", n).with("rows", list(rows)),
        (false, 0, n) => Sentence::new("intake.hidden-columns").with("n", n).with("columns", list(columns)),
        (false, _, _) => Sentence::new("intake.hidden-both").with("rows", list(rows)).with("columns", list(columns)),
    };
    reader.push(Problem::in_sheet(Severity::Warning, &sheet.name, "", sentence));
}

/// The end of the sentence that refuses an input without readings: what comes nearest to a header of readings.
pub(super) fn nearest_to_readings(workbook: &Workbook, words: &Words) -> String {
    let columns = words.columns(Kind::Readings);
    let mut best: Option<(usize, String)> = None;
    for sheet in &workbook.sheets {
        for (row, cells) in sheet.rows().take_while(|(row, _)| *row < 30) {
            let texts: Vec<String> = cells.iter().map(|c| plain_text(&c.value)).collect();
            let known = texts.iter().filter(|t| columns.get(t).is_some() || columns.nearest(t).is_some()).count();
            if known > best.as_ref().map_or(0, |b| b.0) {
                let head = texts.iter().take(12).map(String::as_str).collect::<Vec<_>>().join(" | ");
                best = Some((known, format!("; nearest is {}, row {}: {}", sheet.name, row + 1, bounded(&head))));
            }
        }
    }
    best.map(|b| b.1).unwrap_or_default()
}
