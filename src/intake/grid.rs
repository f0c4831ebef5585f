//! A workbook as plain cells: what every file format is turned into before any of it is understood.
//!
//! No type of a library that reads files goes beyond the module that fills this in. Cells are kept sparse, in reading order, so
//! that a sheet that claims a million rows costs what it holds.

use crate::diag::CellRef;
use std::sync::Arc;

/// All sheets of an input, in its order.
#[derive(Clone, Debug, Default)]
pub struct Workbook {
    /// The sheets.
    pub sheets: Vec<Sheet>,
}

/// One sheet.
#[derive(Clone, Debug)]
pub struct Sheet {
    /// Its name; of a csv file, the file's stem.
    pub name: Arc<str>,
    /// The whole sheet is hidden.
    pub hidden: bool,
    /// Hidden rows that hold something, 0-based, ascending.
    pub hidden_rows: Vec<u32>,
    /// Hidden columns that hold something, 0-based, ascending.
    pub hidden_columns: Vec<u32>,
    /// Merged areas.
    pub merged: Vec<Area>,
    /// Cells that hold something, by row, then column; each position at most once.
    pub cells: Vec<Cell>,
}

/// A rectangle of cells, all ends inclusive and 0-based.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Area {
    /// First row.
    pub top: u32,
    /// First column.
    pub left: u32,
    /// Last row.
    pub bottom: u32,
    /// Last column.
    pub right: u32,
}

/// One cell that holds something.
#[derive(Clone, Debug, PartialEq)]
pub struct Cell {
    /// 0-based row.
    pub row: u32,
    /// 0-based column.
    pub col: u32,
    /// What stands there.
    pub value: Value,
}

/// What stands in a cell.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// Text as it stands, never empty.
    Text(String),
    /// A number.
    Number(f64),
    /// A date or time: days since the workbook's epoch, already brought to the 1900 date system.
    DateTime(f64),
    /// True or false.
    Logical(bool),
    /// An error value as the spreadsheet shows it: `#DIV/0!`.
    Error(String),
    /// A formula whose result was never stored, with the formula.
    NoResult(String),
}

impl Sheet {
    /// The cell at a position.
    #[must_use]
    pub fn get(&self, row: u32, col: u32) -> Option<&Value> {
        self.cells.binary_search_by_key(&(row, col), |c| (c.row, c.col)).ok().map(|i| &self.cells[i].value)
    }

    /// The cells of one row, by column.
    #[must_use]
    pub fn row(&self, row: u32) -> &[Cell] {
        let start = self.cells.partition_point(|c| c.row < row);
        let end = self.cells.partition_point(|c| c.row <= row);
        &self.cells[start..end]
    }

    /// The rows that hold something, each with its cells, downwards.
    pub fn rows(&self) -> impl Iterator<Item = (u32, &[Cell])> {
        self.cells.chunk_by(|a, b| a.row == b.row).map(|cells| (cells[0].row, cells))
    }

    /// Reference to a cell of this sheet.
    #[must_use]
    pub fn at(&self, row: u32, col: u32) -> CellRef {
        CellRef::new(&self.name, row, col)
    }
}
