//! Finding the items of a visit: lines under a header, and labels of forms without one.

use super::super::Tables;
use crate::intake::cell::plain_text;
use crate::intake::grid::{Cell, Sheet, Value};
use crate::intake::header::{Field, Row, Table};
use crate::intake::words::{Column, Item, Words};
use std::collections::BTreeSet;

/// Rows in which a form without a header is looked for.
const FORM_ROWS: u32 = 60;
/// Items that make a form.
pub(super) const FORM_ITEMS: usize = 3;

/// An item with its entry.
pub(super) struct Line<'a> {
    pub item: Option<Item>,
    pub label: Field<'a>,
    pub entry: Option<Field<'a>>,
}

/// The lines under a header.
pub(super) fn headed<'a>(table: &'a Table<'a>, words: &Words) -> Vec<Line<'a>> {
    let line = |row: Row<'a>| {
        let label = row.field(Column::Item)?;
        Some(Line { item: words.items.get(&plain_text(label.value)), label, entry: row.field(Column::Entry) })
    };
    table.body().filter_map(line).collect()
}

/// Labels with their entries to the right, anywhere outside a sheet's tables; enough of them make a form.
pub(super) fn labels<'a>(sheet: &'a Sheet, tables: &Tables<'a>, words: &Words) -> Vec<Line<'a>> {
    if words.forced(&sheet.name) == Some(None) {
        return Vec::new();
    }
    let own: Vec<_> = tables.0.iter().filter(|t| std::ptr::eq(t.sheet, sheet)).collect();
    let in_table =
        |row: u32, col: u32| own.iter().any(|t| (t.header.0..t.rows.1).contains(&row) && (t.columns.0..=t.columns.1).contains(&col));
    let item = |value: &Value| match value {
        Value::Text(text) => words.items.get(text.trim().trim_end_matches(':')),
        _ => None,
    };
    let mut lines = Vec::new();
    for (row, cells) in sheet.rows().take_while(|(row, _)| *row < FORM_ROWS) {
        // Items side by side have their entries below them.
        if cells.len() >= FORM_ITEMS && cells.iter().all(|c| item(&c.value).is_some() && !in_table(row, c.col)) {
            lines.extend(cells.iter().map(|c| Line {
                item: item(&c.value),
                label: Field::new(sheet, row, c.col, &c.value),
                entry: sheet.get(row + 1, c.col).map(|value| Field::new(sheet, row + 1, c.col, value)),
            }));
            continue;
        }
        let mut cells = cells.iter().filter(|c| !in_table(row, c.col)).peekable();
        while let Some(label) = cells.next() {
            let Some(found) = item(&label.value) else { continue };
            // The text to the right is the entry, though it may read like an item ("Service").
            let entry = cells.next_if(|c| c.col <= label.col + 4 && (item(&c.value).is_none() || c.col == label.col + 1));
            let field = |c: &'a Cell| Field::new(sheet, row, c.col, &c.value);
            lines.push(Line { item: Some(found), label: field(label), entry: entry.map(field) });
        }
    }
    lines
}

/// How many items there are among lines.
pub(super) fn distinct(lines: &[Line<'_>]) -> usize {
    lines.iter().filter_map(|l| l.item).collect::<BTreeSet<_>>().len()
}

/// The label of a form alone: `Date:`.
pub(super) fn ends_as_label(label: Field<'_>) -> bool {
    matches!(label.value, Value::Text(text) if text.trim_end().ends_with(':'))
}
