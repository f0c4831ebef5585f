//! A sheet while it is read: what every format puts its cells, hidden stretches and merged areas into.

use super::bounds::{Budget, COLUMNS, MOST_ENTRIES, ROWS, at_most};
use crate::diag::column_letters;
use crate::intake::Refusal;
use crate::intake::grid::{Area, Cell, Sheet, Value};
use std::sync::Arc;

/// A sheet in the making.
pub struct Draft {
    sheet: Sheet,
    rows: Stretches,
    columns: Stretches,
}

impl Draft {
    /// An empty sheet.
    pub fn new(name: &str, hidden: bool) -> Self {
        let sheet = Sheet { name: Arc::from(name), hidden, hidden_rows: vec![], hidden_columns: vec![], merged: vec![], cells: vec![] };
        Self { sheet, rows: Stretches::default(), columns: Stretches::default() }
    }

    /// Puts a value into a cell; empty text leaves the cell empty.
    ///
    /// # Errors
    /// The position is on no sheet, or a bound is exceeded.
    pub fn put(&mut self, row: u32, col: u32, value: Value, budget: &mut Budget) -> Result<(), Refusal> {
        let text = match &value {
            Value::Text(t) if t.is_empty() => return Ok(()),
            Value::Text(t) | Value::Error(t) | Value::NoResult(t) => t.len(),
            Value::Number(_) | Value::DateTime(_) | Value::Logical(_) => 0,
        };
        self.holds(row, col)?;
        budget.cell(text)?;
        self.sheet.cells.push(Cell { row, col, value });
        Ok(())
    }

    /// Refuses a position that is on no sheet.
    ///
    /// # Errors
    /// It is on none.
    pub fn holds(&self, row: u32, col: u32) -> Result<(), Refusal> {
        if row >= ROWS || col >= COLUMNS {
            return Err(Refusal::Damaged(format!("sheet {} has a cell outside every sheet ({})", self.sheet.name, address(row, col))));
        }
        Ok(())
    }

    /// The cells put so far from an index on, to repeat them.
    pub fn since(&self, index: usize) -> &[Cell] {
        self.sheet.cells.get(index..).unwrap_or_default()
    }

    /// Number of cells put so far.
    pub fn len(&self) -> usize {
        self.sheet.cells.len()
    }

    /// Hides rows, ends inclusive.
    pub fn hide_rows(&mut self, first: u32, last: u32) -> Result<(), Refusal> {
        self.rows.add(first, last)
    }

    /// Hides columns, ends inclusive.
    pub fn hide_columns(&mut self, first: u32, last: u32) -> Result<(), Refusal> {
        self.columns.add(first, last)
    }

    /// Merges an area; one of a single cell is none.
    pub fn merge(&mut self, area: Area, budget: &mut Budget) -> Result<(), Refusal> {
        if (area.top, area.left) != (area.bottom, area.right) {
            budget.merged()?;
            self.sheet.merged.push(area);
        }
        Ok(())
    }

    /// The sheet, cells in order.
    ///
    /// # Errors
    /// A cell stands there twice.
    pub fn finish(self) -> Result<Sheet, Refusal> {
        let Self { mut sheet, rows, columns } = self;
        if !sheet.cells.is_sorted_by_key(|c| (c.row, c.col)) {
            sheet.cells.sort_by_key(|c| (c.row, c.col));
        }
        if let Some(pair) = sheet.cells.windows(2).find(|pair| (pair[0].row, pair[0].col) == (pair[1].row, pair[1].col)) {
            return Err(Refusal::Damaged(format!("cell {} of sheet {} stands there twice", address(pair[0].row, pair[0].col), sheet.name)));
        }
        sheet.hidden_rows = rows.of(sheet.cells.iter().map(|c| c.row));
        sheet.hidden_columns = columns.of(sheet.cells.iter().map(|c| c.col));
        Ok(sheet)
    }
}

/// Stretches of row or column numbers, ends inclusive.
#[derive(Default)]
struct Stretches(Vec<(u32, u32)>);

impl Stretches {
    fn add(&mut self, first: u32, last: u32) -> Result<(), Refusal> {
        match self.0.last_mut() {
            Some(previous) if first >= previous.0 && first <= previous.1.saturating_add(1) => previous.1 = previous.1.max(last),
            _ => self.0.push((first, last)),
        }
        at_most(self.0.len(), MOST_ENTRIES, "hidden stretches of rows or columns")
    }

    /// Which of the numbers lie in a stretch, ascending, each once.
    fn of(mut self, numbers: impl Iterator<Item = u32>) -> Vec<u32> {
        if self.0.is_empty() {
            return Vec::new();
        }
        self.0.sort_unstable();
        let mut numbers: Vec<u32> = numbers.collect();
        numbers.sort_unstable();
        numbers.dedup();
        let mut stretches = self.0.into_iter().peekable();
        let mut reach = None;
        numbers.retain(|n| {
            while let Some((_, last)) = stretches.next_if(|(first, _)| first <= n) {
                reach = reach.max(Some(last));
            }
            reach >= Some(*n)
        });
        numbers
    }
}

fn address(row: u32, col: u32) -> String {
    format!("{}{}", column_letters(col), u64::from(row) + 1)
}
