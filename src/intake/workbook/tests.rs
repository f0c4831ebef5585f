//! Workbooks of other writers, read cell by cell; and files made to break a reader.

mod another;
mod binary;
mod formats;
mod hostile;
mod package;

use super::*;
use crate::diag::column_letters;
use crate::intake::grid::{Sheet, Value};

/// A file of tests/data/formats, which `tests/tools/make_formats.py` writes.
macro_rules! made {
    ($name:literal) => {
        include_bytes!(concat!(env!("CARGO_MANIFEST_DIR"), "/tests/data/formats/", $name)).as_slice()
    };
}
use made;

fn book(bytes: &[u8]) -> Workbook {
    read(&Content::File(bytes)).unwrap().value
}

fn refusal(bytes: &[u8]) -> String {
    read(&Content::File(bytes)).map(|output| output.value).unwrap_err().to_string()
}

/// The cells of a sheet, each in a few words.
fn shown(sheet: &Sheet) -> Vec<String> {
    let value = |value: &Value| match value {
        Value::Text(text) => format!("{text:?}"),
        Value::Number(number) => number.to_string(),
        Value::DateTime(days) => format!("day {days:.4}"),
        Value::Logical(logical) => logical.to_string(),
        Value::Error(error) => format!("error {error}"),
        Value::NoResult(formula) => format!("no result of {formula}"),
    };
    sheet.cells.iter().map(|c| format!("{}{} {}", column_letters(c.col), c.row + 1, value(&c.value))).collect()
}
