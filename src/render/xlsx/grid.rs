//! Where a table's columns stand on its worksheet.

use crate::report::document::{Cell, Column, Table};

/// Columns of a worksheet (ECMA-376, as every spreadsheet program holds it).
const MOST_COLUMNS: u16 = 16_384;

/// A table's columns from left to right.
pub(super) struct Grid<'a> {
    /// Its columns, as many as fit.
    pub places: Vec<Place<'a>>,
    /// Worksheet columns taken.
    pub width: u16,
}

/// One column of a table.
pub(super) struct Place<'a> {
    /// Its index in the table.
    pub index: usize,
    /// The column.
    pub column: &'a Column,
    /// Worksheet column.
    pub at: u16,
    /// Worksheet column of its uncertainties, where it has any: the next one.
    pub uncertainty: Option<u16>,
}

/// The places of a table's columns. A column with uncertainties takes a second one for them, so that both stay plain numbers.
pub(super) fn of(table: &Table) -> Grid<'_> {
    let mut uncertain = vec![false; table.columns.len()];
    for row in &table.rows {
        for (flag, cell) in uncertain.iter_mut().zip(&row.cells) {
            *flag |= matches!(cell, Cell::Number(n) if n.uncertainty.is_some());
        }
    }
    let mut grid = Grid { places: Vec::new(), width: 0 };
    for (index, (column, uncertain)) in table.columns.iter().zip(uncertain).enumerate() {
        let takes = 1 + u16::from(uncertain);
        if grid.width + takes > MOST_COLUMNS {
            break;
        }
        grid.places.push(Place { index, column, at: grid.width, uncertainty: uncertain.then_some(grid.width + 1) });
        grid.width += takes;
    }
    grid
}

impl Grid<'_> {
    /// The column of a key.
    pub(super) fn find(&self, key: &str) -> Option<&Place<'_>> {
        self.places.iter().find(|p| p.column.key == key)
    }
}
