//! A table found in a sheet, and its rows.

use super::place::{Layout, Placed, What};
use crate::diag::CellRef;
use crate::intake::grid::{Area, Cell, Sheet, Value};
use crate::intake::words::{Column, Kind, Words};
use crate::quantity::parse::Scale;
use std::collections::HashSet;

/// A table: a header's columns over the rows below it.
#[derive(Clone, Debug)]
pub(crate) struct Table<'a> {
    pub sheet: &'a Sheet,
    words: &'a Words,
    pub kind: Kind,
    pub placed: Vec<Placed>,
    pub unplaced: Vec<(u32, String)>,
    pub second: Vec<(u32, String)>,
    pub elsewhere: Vec<u32>,
    /// First and last row of the header.
    pub header: (u32, u32),
    /// First and last column of the header.
    pub columns: (u32, u32),
    /// First row below the header, and the row before which the table ends.
    pub rows: (u32, u32),
    /// Merged areas of several rows in columns whose entries carry down, by top row.
    merged: Vec<Area>,
}

/// Columns whose merged entries hold for every row they span.
const CARRIED: [Column; 10] = [
    Column::Location,
    Column::State,
    Column::Stage,
    Column::Time,
    Column::Date,
    Column::Instrument,
    Column::FedFrom,
    Column::Test,
    Column::Unit,
    Column::WorkDone,
];

/// One row of a table.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Row<'a> {
    pub table: &'a Table<'a>,
    pub row: u32,
    cells: &'a [Cell],
}

/// One cell of a table that holds something.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Field<'a> {
    sheet: &'a Sheet,
    row: u32,
    col: u32,
    /// What stands there.
    pub value: &'a Value,
    /// The unit its column's header states.
    pub unit: Option<Scale>,
    /// The header says that sizes are in square millimetres.
    pub square_millimetres: bool,
}

impl<'a> Table<'a> {
    pub fn new(sheet: &'a Sheet, words: &'a Words, layout: Layout, header: (u32, u32), columns: (u32, u32), rows: (u32, u32)) -> Self {
        let carried = |col: u32| layout.placed.iter().any(|p| p.col == col && matches!(p.what, What::Named(c) if CARRIED.contains(&c)));
        let mut merged: Vec<Area> = sheet.merged.iter().filter(|a| a.bottom > a.top && carried(a.left)).copied().collect();
        merged.sort_by_key(|a| (a.left, a.top));
        let Layout { kind, placed, unplaced, second, elsewhere } = layout;
        Self { sheet, words, kind, placed, unplaced, second, elsewhere, header, columns, rows, merged }
    }

    /// The rows that hold something in the table's columns, downwards; a repeated header is none of them.
    pub fn body(&'a self) -> impl Iterator<Item = Row<'a>> {
        let cells = &self.sheet.cells;
        let start = cells.partition_point(|c| c.row < self.rows.0);
        let end = cells.partition_point(|c| c.row < self.rows.1);
        cells[start..end].chunk_by(|a, b| a.row == b.row).filter_map(|cells| {
            let from = cells.partition_point(|c| c.col < self.columns.0);
            let to = cells.partition_point(|c| c.col <= self.columns.1);
            let cells = cells.get(from..to)?;
            let row = Row { table: self, row: cells.first()?.row, cells };
            (!row.blank() && !row.repeats_header()).then_some(row)
        })
    }

    /// Filled cells in the table's rows, but beside its columns.
    pub fn beside(&self) -> impl Iterator<Item = &'a Cell> {
        let cells = &self.sheet.cells;
        let start = cells.partition_point(|c| c.row < self.rows.0);
        let end = cells.partition_point(|c| c.row < self.rows.1);
        let columns = self.columns.0..=self.columns.1;
        cells[start..end].iter().filter(move |c| !columns.contains(&c.col) && !is_blank(&c.value))
    }

    /// The column of a name.
    pub fn column(&self, column: Column) -> Option<&Placed> {
        self.placed.iter().find(|p| p.what == What::Named(column))
    }

    /// Reference to a header's cell.
    pub fn header_cell(&self, col: u32) -> CellRef {
        let lower = self.sheet.get(self.header.1, col).is_some();
        self.sheet.at(if lower { self.header.1 } else { self.header.0 }, col)
    }

    /// The top left cell of the merged area that carries an entry down to a position.
    fn carried(&self, row: u32, col: u32) -> Option<(u32, u32)> {
        let after = self.merged.partition_point(|a| (a.left, a.top) <= (col, row));
        let area = self.merged.get(after.checked_sub(1)?)?;
        (area.left == col && area.bottom >= row && area.top >= self.rows.0).then_some((area.top, area.left))
    }
}

impl<'a> Row<'a> {
    /// The cell in a column, or the merged cell above that holds for it too; where the table has no such column, a mapping's entry.
    pub fn field(&self, column: Column) -> Option<Field<'a>> {
        match self.table.column(column) {
            Some(placed) => self.at(placed),
            None => self.table.words.fixed.column(self.table.kind, column),
        }
    }

    /// All cells of a named column that may stand twice.
    pub fn fields(&self, column: Column) -> impl Iterator<Item = Field<'a>> {
        let row = *self;
        row.table.placed.iter().filter(move |p| p.what == What::Named(column)).filter_map(move |p| row.at(p))
    }

    /// The cell in a placed column.
    pub fn at(&self, placed: &Placed) -> Option<Field<'a>> {
        let here = self.cells.binary_search_by_key(&placed.col, |c| c.col).ok().map(|i| (self.row, placed.col, &self.cells[i].value));
        let found = here.or_else(|| {
            let (row, col) = self.table.carried(self.row, placed.col)?;
            Some((row, col, self.table.sheet.get(row, col)?))
        });
        let (row, col, value) = found?;
        (!is_blank(value)).then_some(Field {
            sheet: self.table.sheet,
            row,
            col,
            value,
            unit: placed.unit,
            square_millimetres: placed.square_millimetres,
        })
    }

    /// Reference to the row's cell in a column, filled or not.
    pub fn cell(&self, column: Column) -> CellRef {
        self.table.sheet.at(self.row, self.table.column(column).map_or(self.table.columns.0, |p| p.col))
    }

    /// Reference to the row's first cell that holds something.
    pub fn first(&self) -> CellRef {
        self.table.sheet.at(self.row, self.cells.first().map_or(self.table.columns.0, |c| c.col))
    }

    /// How many of the row's own cells hold something.
    pub fn filled(&self) -> usize {
        self.cells.iter().filter(|c| !is_blank(&c.value)).count()
    }

    /// One text alone: a note, a title or a line of a form, no row of the table.
    pub fn is_note(&self) -> bool {
        self.filled() == 1 && self.cells.iter().all(|c| matches!(c.value, Value::Text(_)))
    }

    /// The row's cells in placed columns, with the column, by position.
    pub fn placed(&self) -> impl Iterator<Item = (&'a Placed, Field<'a>)> {
        let row = *self;
        row.table.placed.iter().filter_map(move |p| row.at(p).map(|field| (p, field)))
    }

    /// The row's filled cells in columns other than some.
    pub fn cells_beside(&self, columns: &HashSet<u32>) -> impl Iterator<Item = &'a Cell> {
        self.cells.iter().filter(|c| !columns.contains(&c.col) && !is_blank(&c.value))
    }

    fn blank(&self) -> bool {
        self.filled() == 0
    }

    fn repeats_header(&self) -> bool {
        self.cells.iter().all(|c| {
            let head = self.table.placed.iter().find(|p| p.col == c.col).map(|p| p.text.as_str());
            matches!((&c.value, head), (Value::Text(text), Some(head)) if text.trim() == head)
        })
    }
}

fn is_blank(value: &Value) -> bool {
    matches!(value, Value::Text(text) if text.trim().is_empty())
}

impl Field<'_> {
    /// Reference to the cell.
    pub fn cell(&self) -> CellRef {
        self.sheet.at(self.row, self.col)
    }
}

impl<'a> Field<'a> {
    /// The same cell, read as another value.
    pub fn with_value<'b>(self, value: &'b Value) -> Field<'b>
    where
        'a: 'b,
    {
        Field { value, ..self }
    }

    /// A cell outside any table's columns.
    pub fn new(sheet: &'a Sheet, row: u32, col: u32, value: &'a Value) -> Self {
        Self { sheet, row, col, value, unit: None, square_millimetres: false }
    }
}
