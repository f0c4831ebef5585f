//! Headers and merged areas without number, and anything at all.

use super::book::{Book, VISIT, value};
use crate::intake::grid::{Area, Cell};
use proptest::prelude::*;

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

/// What cells of field sheets are made of, and what they are not.
fn any_cell() -> impl Strategy<Value = String> {
    let words = [
        "",
        "",
        "Location",
        "Circuit",
        "Fed from",
        "Legs",
        "Wire",
        "Length ft",
        "Breaker",
        "Load W L1",
        "L1-N",
        "L2-N",
        "VAB",
        "N-G",
        "I N",
        "Quantity",
        "Value",
        "Unit",
        "Item",
        "Entry",
        "System",
        "Visit date",
        "Test",
        "Observation",
        "Photo",
        "File",
        "Instrument",
        "Measures",
        "SVC",
        "9",
        "120.1",
        "119,6 V",
        "12o.1",
        "OL",
        "<0.5",
        "2P",
        "1,3",
        "12/2 NM",
        "4/0 Al",
        "120/240",
        "@2026-01-03",
        "@09:04",
        "#REF!",
        "=A1",
        "TRUE",
        "total",
        "panel.png",
        "L1 \u{b2}\u{2713}",
        "1e999",
    ];
    prop_oneof![6 => proptest::sample::select(words.to_vec()).prop_map(str::to_owned), 1 => "'[^|\\n]{1,12}"]
}

/// Headers of tables, so that most grids hold one.
const HEADERS: [&str; 9] = [
    "Circuit|Fed from|Legs|Breaker A|Tie|Wire|Length ft|Load W L1|Load W",
    "Location|State|Time|Instrument|L1-N|N-G|H-N|L-L|Remarks",
    "Location|Quantity|Value|Unit|Stage",
    "Item|Entry",
    "Instrument|Measures|Calibrated until|Accuracy|Resolution",
    "Location|Test|Value|Unit|Remarks",
    "Location|Observation|Signal word|Photo",
    "File|Location|Caption",
    "Date|Location|Work done|Issue|Reason",
];

proptest! {
    #![proptest_config(ProptestConfig { cases: 200, failure_persistence: None, ..ProptestConfig::default() })]
    #[test]
    fn no_grid_stops_the_reader(
        header in proptest::sample::select(HEADERS.to_vec()),
        rows in proptest::collection::vec(proptest::collection::vec(any_cell(), 1..10), 1..12),
        at in 0usize..4,
    ) {
        let mut lines: Vec<String> = rows.iter().map(|row| row.join("|")).collect();
        lines.insert(at.min(lines.len()), header.to_owned());
        let mut book = Book::new().sheet("A", &lines.join("\n")).sheet("R", "Location|L1-N\nSVC|120");
        book.last().merged.push(Area { top: 0, left: 0, bottom: 3, right: 1 });
        let out = book.visit();
        // Each problem can be put into words.
        prop_assert_eq!(super::book::problems(&out.problems).lines().count(), out.problems.len());
    }
}
