//! Entries a mapping gives for what a workbook does not say.

use super::{Column, Item, Kind};
use crate::intake::grid::{Cell, Sheet, Value};
use crate::intake::header::Field;
use std::collections::BTreeMap;

/// Entries of a mapping that hold where a workbook has no such item or column. They stand in a sheet of their own, named after
/// the mapping's file, each in the row of its line, so that every value has a place.
#[derive(Clone, Debug)]
pub(crate) struct Fixed {
    pub sheet: Sheet,
    items: BTreeMap<Item, u32>,
    columns: BTreeMap<(Kind, Column), u32>,
}

impl Fixed {
    pub fn none() -> Self {
        let sheet = Sheet {
            name: "".into(),
            hidden: false,
            hidden_rows: Vec::new(),
            hidden_columns: Vec::new(),
            merged: Vec::new(),
            cells: Vec::new(),
        };
        Self { sheet, items: BTreeMap::new(), columns: BTreeMap::new() }
    }

    pub fn set_item(&mut self, item: Item, text: &str, line: usize) {
        let row = self.put(text, line);
        self.items.insert(item, row);
    }

    pub fn set_column(&mut self, kind: Kind, column: Column, text: &str, line: usize) {
        let row = self.put(text, line);
        self.columns.insert((kind, column), row);
    }

    fn put(&mut self, text: &str, line: usize) -> u32 {
        let row = u32::try_from(line.saturating_sub(1)).unwrap_or(u32::MAX);
        self.sheet.cells.push(Cell { row, col: 0, value: Value::Text(text.to_owned()) });
        row
    }

    /// The items with a fixed entry.
    pub fn items(&self) -> impl Iterator<Item = (Item, Field<'_>)> {
        self.items.iter().filter_map(|(item, row)| Some((*item, self.at(*row)?)))
    }

    /// The fixed entry of a column.
    pub fn column(&self, kind: Kind, column: Column) -> Option<Field<'_>> {
        self.columns.get(&(kind, column)).and_then(|row| self.at(*row))
    }

    fn at(&self, row: u32) -> Option<Field<'_>> {
        self.sheet.get(row, 0).map(|value| Field::new(&self.sheet, row, 0, value))
    }
}
