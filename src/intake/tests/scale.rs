//! Large inputs in time and bounded output.

use super::book::{Book, VISIT, value};
use crate::intake::grid::Cell;
use std::time::{Duration, Instant};

fn filled(mut book: Book, rows: impl Iterator<Item = Vec<String>>) -> Book {
    let sheet = book.last();
    for (row, texts) in (1..).zip(rows) {
        let cells = (0..).zip(&texts).filter_map(|(col, text)| value(text).map(|value| Cell { row, col, value }));
        sheet.cells.extend(cells);
    }
    book
}

/// Generous for an unoptimised build on a busy machine; a quadratic look-up takes minutes.
const LONG: Duration = Duration::from_secs(20);

#[test]
fn a_chain_of_ten_thousand_runs_and_a_hundred_thousand_rows() {
    let start = Instant::now();
    let name = |i: usize| format!("'R{i}");
    let circuits = (0..10_000).map(|i| {
        let source = if i == 0 { String::new() } else { name(i - 1) };
        vec![name(i), source, "'2P".to_owned(), "'12 Cu".to_owned(), "10".to_owned()]
    });
    let book = filled(Book::new().sheet("Visit", VISIT).sheet("C", "Circuit|Fed from|Legs|Wire|Length ft"), circuits);
    let readings = (0..100_000).map(|i| vec![name(i % 10_000), "120.1".to_owned(), "'119,9".to_owned(), "240".to_owned()]);
    let out = filled(book.sheet("R", "Location|L1-N|L2-N|L1-L2"), readings).visit();
    assert_eq!((out.value.runs.len(), out.value.rows.len(), out.problems.len()), (10_000, 100_000, 0));
    assert_eq!(out.value.tree.order.len(), 10_000);
    assert!(out.value.runs.iter().all(crate::visit::Run::shares_neutral));
    assert!(start.elapsed() < LONG, "{:?}", start.elapsed());
}

#[test]
fn names_nobody_knows_and_wrong_cells_stay_bounded() {
    let start = Instant::now();
    let circuits = (0..10_000).map(|i| vec![format!("'R{i}"), format!("'missing source {i}")]);
    let book = filled(Book::new().sheet("Visit", VISIT).sheet("C", "Circuit|Fed from"), circuits);
    let readings = (0..50_000).map(|i| vec![format!("'place {i}"), "'12o.1".to_owned(), "120".to_owned()]);
    let out = filled(book.sheet("R", "Location|L1-N|L2-N"), readings).visit();
    assert_eq!(out.problems.len(), 20_001);
    assert_eq!(out.problems.last().map(|p| p.message.key), Some("intake.more-problems"));
    assert!(start.elapsed() < LONG, "{:?}", start.elapsed());
}

#[test]
fn all_text_all_headers_and_many_merged_areas_stay_bounded() {
    let start = Instant::now();
    let long = (0..50_000).map(|i| vec![format!("'R{i}"), "'L1-N".to_owned(), "'120.1".to_owned(), "'V".to_owned()]);
    let mut book = filled(Book::new().sheet("Visit", VISIT).sheet("R", "Location|Quantity|Value|Unit"), long);
    book.last().merged = (0..10_000).map(|i| crate::intake::grid::Area { top: 5 * i + 1, left: 0, bottom: 5 * i + 4, right: 0 }).collect();
    assert_eq!(book.visit().value.rows.len(), 50_000);
    let headers = (0..20_000).map(|i| vec![format!("'Location"), format!("'L{}-N", 1 + i % 2), "'x".to_owned()]);
    let out = filled(Book::new().sheet("Visit", VISIT).sheet("R", "Location|L1-N|L2-N"), headers).visit();
    assert!(out.value.rows.is_empty());
    assert!(start.elapsed() < LONG, "{:?}", start.elapsed());
}
