//! Headers and merged areas without number.

use super::book::{Book, VISIT, value};
use crate::intake::grid::{Area, Cell};

fn filled(mut book: Book, rows: impl Iterator<Item = Vec<String>>) -> Book {
    let sheet = book.last();
    for (row, texts) in (1..).zip(rows) {
        let cells = (0..).zip(&texts).filter_map(|(col, text)| value(text).map(|value| Cell { row, col, value }));
        sheet.cells.extend(cells);
    }
    book
}

#[test]
fn ten_thousand_merged_areas_carry_down() {
    let rows =
        (0..50_000).map(|i| vec![if i % 5 == 0 { format!("'R{i}") } else { String::new() }, "'L1-N".into(), "'120.1".into(), "'V".into()]);
    let mut book = filled(Book::new().sheet("Visit", VISIT).sheet("R", "Location|Quantity|Value|Unit"), rows);
    book.last().merged = (0..10_000).map(|i| Area { top: 5 * i + 1, left: 0, bottom: 5 * i + 5, right: 0 }).collect();
    let out = book.visit();
    assert_eq!((out.value.rows.len(), out.problems.len()), (50_000, 0));
}

#[test]
fn headers_in_every_row_are_not_all_tables() {
    let rows = (0..20_000).map(|i| vec!["'Location".to_owned(), format!("'L{}-N", 1 + i % 2), "'x".to_owned()]);
    let out = filled(Book::new().sheet("Visit", VISIT).sheet("R", "Location|L1-N|L2-N"), rows).visit();
    assert!(out.value.rows.is_empty());
}
