//! The same files read by calamine, which shares nothing with the readers of xlsx and xls. Not those of OpenDocument, where calamine has
//! errors and truth values as texts and numbers, and not xlsb, whose cells it reads in the intake itself.

use super::{book, column_letters, made};
use crate::intake::grid::Value;
use calamine::{Data, DataType, Reader, open_workbook_auto_from_rs};
use std::io::Cursor;

/// What both readers call a value the same; nothing where calamine has no word for it.
fn theirs(data: &Data) -> Option<String> {
    Some(match data {
        Data::Empty => return None,
        // The result of a formula, which leaves a cell empty.
        Data::String(text) if text.is_empty() => return None,
        Data::String(text) => format!("{text:?}"),
        Data::Bool(logical) => logical.to_string(),
        Data::Error(error) => error.to_string(),
        Data::DateTime(days) => format!("{:.6}", days.as_f64()),
        _ => format!("{:.6}", data.as_f64()?),
    })
}

fn ours(value: &Value) -> Option<String> {
    Some(match value {
        Value::Text(text) => format!("{text:?}"),
        Value::Number(number) | Value::DateTime(number) => format!("{number:.6}"),
        Value::Logical(logical) => logical.to_string(),
        Value::Error(error) => error.clone(),
        Value::NoResult(_) => return None,
    })
}

fn compare(name: &str, bytes: &[u8]) {
    let mut other = open_workbook_auto_from_rs(Cursor::new(bytes)).unwrap();
    let book = book(bytes);
    assert_eq!(book.sheets.iter().map(|s| s.name.to_string()).collect::<Vec<_>>(), other.sheet_names(), "{name}");
    for sheet in &book.sheets {
        let range = other.worksheet_range(&sheet.name).unwrap();
        let (top, left) = range.start().unwrap_or_default();
        let at = |row: usize, col: usize| (top + u32::try_from(row).unwrap(), left + u32::try_from(col).unwrap());
        let said = |(row, col): (u32, u32), value: String| format!("{}{} {value}", column_letters(col), row + 1);
        let theirs: Vec<_> = range.used_cells().filter_map(|(row, col, data)| Some(said(at(row, col), theirs(data)?))).collect();
        let ours: Vec<_> = sheet.cells.iter().filter_map(|c| Some(said((c.row, c.col), ours(&c.value)?))).collect();
        assert_eq!(ours, theirs, "{name}, {}", sheet.name);
    }
}

#[test]
fn another_reader_reads_the_same() {
    for (name, bytes) in [
        ("kinds.xlsx", made!("kinds.xlsx")),
        ("kinds.xlsm", made!("kinds.xlsm")),
        ("kinds.xls", made!("kinds.xls")),
        ("plain.xls", made!("plain.xls")),
    ] {
        compare(name, bytes);
    }
}
