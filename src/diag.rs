//! Where a value came from, and what was wrong with it.
//!
//! Every value read from a workbook is a [`Located`] one; every problem with a cell is a [`Problem`]. Problems are collected,
//! never thrown: a wrong cell costs that value alone, and all of them are reported at once.

mod settings;
mod text;

pub use settings::SettingsProblem;
pub use text::steers;

use crate::wording::Sentence;
use std::fmt;
use std::sync::Arc;

/// One cell: the sheet as its tab is named, row and column counted from 0. Shown as `Readings!C14`.
///
/// For csv the sheet is the file's stem.
#[derive(Clone, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct CellRef {
    /// Sheet name as written on its tab.
    pub sheet: Arc<str>,
    /// Row, from 0.
    pub row: u32,
    /// Column, from 0.
    pub col: u32,
}

impl CellRef {
    /// A cell by sheet and zero-based row and column.
    #[must_use]
    pub fn new(sheet: &Arc<str>, row: u32, col: u32) -> Self {
        Self { sheet: Arc::clone(sheet), row, col }
    }

    /// The address within its sheet: `C14`.
    #[must_use]
    pub fn address(&self) -> String {
        format!("{}{}", column_letters(self.col), self.row + 1)
    }
}

impl fmt::Display for CellRef {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}!{}", self.sheet, self.address())
    }
}

/// Column letters of a zero-based column: 0 is `A`, 26 is `AA`.
#[must_use]
pub fn column_letters(col: u32) -> String {
    let mut n = u64::from(col) + 1;
    let mut letters = Vec::new();
    while n > 0 {
        let digit = u8::try_from((n - 1) % 26).unwrap_or(0);
        letters.push(b'A' + digit);
        n = (n - 1) / 26;
    }
    letters.reverse();
    String::from_utf8(letters).unwrap_or_default()
}

/// A value and the cell it was read from.
#[derive(Clone, Debug, PartialEq)]
pub struct Located<T> {
    /// The value.
    pub value: T,
    /// Its cell.
    pub cell: CellRef,
}

impl<T> Located<T> {
    /// A value at a cell.
    pub fn new(value: T, cell: CellRef) -> Self {
        Self { value, cell }
    }

    /// The same cell with another value.
    pub fn map<U>(self, f: impl FnOnce(T) -> U) -> Located<U> {
        Located { value: f(self.value), cell: self.cell }
    }
}

/// How much a problem costs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The value could not be used and was left out.
    Error,
    /// The value was used as it stands, or the program had to assume something.
    Warning,
}

impl Severity {
    /// `error` or `warning`.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Error => "error",
            Self::Warning => "warning",
        }
    }
}

/// One thing wrong with a workbook: where, what stood there, what was expected, and what to do about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Problem {
    /// Left out, or used with a remark.
    pub severity: Severity,
    /// The sheet, where it is known; the whole workbook otherwise.
    pub sheet: Option<Arc<str>>,
    /// The cell, where there is one.
    pub cell: Option<CellRef>,
    /// What stood there, as text, trimmed to a bounded length.
    pub found: String,
    /// What was expected.
    pub message: Sentence,
    /// What would mend it, where that helps.
    pub hint: Option<Sentence>,
}

impl Problem {
    /// A problem at a cell.
    pub fn at(severity: Severity, cell: &CellRef, found: impl Into<String>, message: Sentence) -> Self {
        Self { severity, sheet: Some(Arc::clone(&cell.sheet)), cell: Some(cell.clone()), found: found.into(), message, hint: None }
    }

    /// A problem with a sheet as a whole.
    pub fn in_sheet(severity: Severity, sheet: &Arc<str>, found: impl Into<String>, message: Sentence) -> Self {
        Self { severity, sheet: Some(Arc::clone(sheet)), cell: None, found: found.into(), message, hint: None }
    }

    /// A problem with the workbook as a whole.
    pub fn in_workbook(severity: Severity, found: impl Into<String>, message: Sentence) -> Self {
        Self { severity, sheet: None, cell: None, found: found.into(), message, hint: None }
    }

    /// The same problem with a hint.
    #[must_use]
    pub fn hint(mut self, hint: Sentence) -> Self {
        self.hint = Some(hint);
        self
    }
}

/// What a phase yields: its output and the problems met on the way.
#[derive(Clone, Debug)]
pub struct Output<T> {
    /// The output, as complete as the input allowed.
    pub value: T,
    /// Problems, in the order of the workbook.
    pub problems: Vec<Problem>,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_are_lettered_as_spreadsheets_do() {
        for (col, letters) in [(0, "A"), (25, "Z"), (26, "AA"), (51, "AZ"), (52, "BA"), (701, "ZZ"), (702, "AAA"), (16_383, "XFD")] {
            assert_eq!(column_letters(col), letters);
        }
    }
}
