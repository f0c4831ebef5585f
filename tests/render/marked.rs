//! The marked copy of a workbook, read back.

use crate::specimen;
use calamine::{Data, Reader, Xlsx};
use midwire::render::xlsx::{self, Marked, MarkedProblem, MarkedSheet, MarkedValue, MarkedWords};
use std::io::{Cursor, Read};

fn words() -> MarkedWords {
    let headings = ["Severity", "Sheet", "Cell", "Found", "What was expected"].map(str::to_owned);
    MarkedWords { title: "Problems".to_owned(), headings, none: "Nothing was wrong.".to_owned() }
}

fn problem(left_out: bool, sheet: &str, cell: Option<(u32, u32)>, found: &str, message: &str) -> MarkedProblem {
    let severity = if left_out { "error" } else { "warning" }.to_owned();
    MarkedProblem { left_out, severity, sheet: Some(sheet.to_owned()), cell, found: found.to_owned(), message: message.to_owned() }
}

fn sheets() -> Vec<MarkedSheet> {
    let text = |s: &str| MarkedValue::Text(s.to_owned());
    let cells = vec![
        (0, 0, text("Location")),
        (0, 1, text("L1-N")),
        (0, 2, text("Time")),
        (1, 0, text("5/7a")),
        (1, 1, text("12o.1")),
        (1, 2, MarkedValue::DateTime(46_350.5)),
        (2, 0, text("=HYPERLINK(\"x\")")),
        (2, 1, MarkedValue::Number(1196.0)),
        (2, 2, MarkedValue::Logical(true)),
        (3, 1, MarkedValue::Number(f64::NAN)),
    ];
    vec![MarkedSheet { name: "Bob's Readings".to_owned(), cells }, MarkedSheet { name: "Problems".to_owned(), cells: Vec::new() }]
}

fn problems() -> Vec<MarkedProblem> {
    vec![
        problem(true, "Bob's Readings", Some((1, 1)), "12o.1", "A number in volts was expected. Did you mean 120.1?"),
        problem(false, "Bob's Readings", Some((2, 1)), "1196", "Ten times the nominal voltage; read as it stands."),
        problem(false, "Bob's Readings", Some((2, 1)), "1196", "No unit is given; volts are assumed."),
        problem(true, "Bob's Readings", Some((5, 7)), "", "An entry was expected here."),
        problem(true, "Problems", None, "", "No header row was found in the first 30 rows."),
        MarkedProblem { sheet: None, ..problem(false, "", None, "", "The workbook holds two visit dates.") },
    ]
}

fn write(sheets: &[MarkedSheet], problems: &[MarkedProblem]) -> Vec<u8> {
    xlsx::marked(&Marked { meta: &specimen::meta(), words: &words(), sheets, problems }).expect("the copy is written")
}

fn open(bytes: &[u8]) -> Xlsx<Cursor<Vec<u8>>> {
    calamine::open_workbook_from_rs(Cursor::new(bytes.to_vec())).expect("the workbook opens")
}

fn part(bytes: &[u8], name: &str) -> String {
    let mut text = String::new();
    let mut archive = zip::ZipArchive::new(Cursor::new(bytes)).expect("an archive");
    archive.by_name(name).expect("the part is there").read_to_string(&mut text).expect("text");
    text
}

#[test]
fn the_copy_holds_the_data_and_the_list_every_problem() {
    let bytes = write(&sheets(), &problems());
    let mut book = open(&bytes);
    assert_eq!(book.sheet_names(), ["Problems (2)", "Bob's Readings", "Problems"], "the copies keep their names");
    let copy = book.worksheet_range("Bob's Readings").expect("the copy");
    let at = |r, c| copy.get_value((r, c)).cloned().unwrap_or(Data::Empty);
    assert_eq!(at(1, 1), Data::String("12o.1".to_owned()));
    assert_eq!(at(2, 0), Data::String("=HYPERLINK(\"x\")".to_owned()));
    assert_eq!(at(2, 1), Data::Float(1196.0));
    assert_eq!(at(2, 2), Data::Bool(true));
    assert!(matches!(at(1, 2), Data::DateTime(d) if (d.as_f64() - 46_350.5).abs() < 1e-9));
    let list = book.worksheet_range("Problems (2)").expect("the list");
    let line = |r: u32| (0..5).map(|c| list.get_value((r, c)).map(ToString::to_string).unwrap_or_default()).collect::<Vec<_>>();
    assert_eq!(line(1), words().headings);
    assert_eq!(line(2), ["error", "Bob's Readings", "B2", "12o.1", "A number in volts was expected. Did you mean 120.1?"]);
    assert_eq!(line(6), ["error", "Problems", "", "", "No header row was found in the first 30 rows."]);
    assert_eq!(line(7), ["warning", "", "", "", "The workbook holds two visit dates."]);
}

#[test]
fn problem_cells_are_commented_once_and_linked_from_the_list() {
    let bytes = write(&sheets(), &problems());
    let notes = part(&bytes, "xl/comments1.xml");
    assert_eq!(notes.matches("<comment ref=").count(), 3);
    for text in ["<comment ref=\"B2\"", "<comment ref=\"H6\"", "warning: No unit is given; volts are assumed."] {
        assert!(notes.contains(text), "{text}");
    }
    let list = part(&bytes, "xl/worksheets/sheet1.xml");
    assert!(list.contains("<hyperlink ref=\"C3\" location=\"'Bob''s Readings'!B2\""), "{list}");
    assert_eq!(list.matches("<hyperlink ").count(), 4);
    assert!(part(&bytes, "xl/worksheets/sheet2.xml").contains("<c r=\"H6\" s="), "an empty cell is marked too");
}

#[test]
fn a_workbook_without_problems_says_so() {
    let list = open(&write(&sheets(), &[])).worksheet_range_at(0).expect("a sheet").expect("the list");
    assert_eq!(list.get_value((2, 0)), Some(&Data::String("Nothing was wrong.".to_owned())));
}

#[test]
fn nothing_in_a_strangers_workbook_breaks_the_copy() {
    let nasty = "<r>&\"'\0\u{ffff}]]>[a]:*?/\\ =1+1 </r>";
    let long = nasty.repeat(3000);
    let cells = vec![(0, 0, MarkedValue::Text(long.clone())), (1, 0, MarkedValue::DateTime(-3.5)), (2, 0, MarkedValue::DateTime(1e300))];
    let sheets = [nasty, nasty, &long, "", "History", "_x0041_"].map(|name| MarkedSheet { name: name.to_owned(), cells: cells.clone() });
    let problems = [nasty, &long].map(|name| problem(true, name, Some((0, 0)), &long, &long));
    let bytes = write(&sheets, &problems);
    assert_eq!(open(&bytes).sheet_names().len(), 7);
    for name in ["xl/comments1.xml", "xl/worksheets/sheet1.xml", "xl/drawings/vmlDrawing1.vml", "xl/workbook.xml", "xl/sharedStrings.xml"] {
        let xml = part(&bytes, name);
        let mut reader = quick_xml::Reader::from_str(&xml);
        while !matches!(reader.read_event().expect("well-formed"), quick_xml::events::Event::Eof) {}
        assert!(!xml.contains('\0') && !xml.contains('\u{ffff}'), "{name}");
    }
}

#[test]
fn a_cell_beyond_the_worksheet_is_refused() {
    for at in [(1_048_576, 0), (0, 16_384), (u32::MAX, u32::MAX)] {
        let sheet = MarkedSheet { name: "S".to_owned(), cells: vec![(at.0, at.1, MarkedValue::Number(1.0))] };
        let meta = specimen::meta();
        assert!(xlsx::marked(&Marked { meta: &meta, words: &words(), sheets: &[sheet], problems: &[] }).is_err());
    }
}

#[test]
fn the_same_workbook_gives_the_same_bytes() {
    assert!(write(&sheets(), &problems()) == write(&sheets(), &problems()));
}
