//! What the built-in templates say, as snapshots to be read, and what holds for any of their text.

use crate::made::Made;
use crate::outline;
use midwire::report::document::{Block, Document};
use std::collections::BTreeSet;
use std::fmt::Write as _;

/// No gaps, no leftovers, no wrong plurals; tables whole; link targets unique.
pub fn holds_together(document: &Document, what: &str) {
    let text = outline::document(document);
    for wrong in [
        "⟨report",
        "⟨table",
        "⟨who",
        "  .",
        " .\n",
        " ,",
        "..",
        "(s)",
        " 1 readings",
        " 1 places",
        " 1 cells",
        "{{",
        "{%",
        "<b></b>",
        "<i></i>",
    ] {
        assert!(!text.contains(wrong), "{what} has {wrong:?}: {}", around(&text, wrong));
    }
    let mut anchors = BTreeSet::new();
    for block in &document.blocks {
        match block {
            Block::Heading { anchor, .. } => assert!(!anchor.is_empty() && anchors.insert(anchor), "{what}: {anchor}"),
            Block::Table(table) => {
                assert!(table.rows.iter().all(|r| r.cells.len() == table.columns.len()), "{what}: {}", table.name);
            }
            _ => {}
        }
    }
    assert!(document.sheets.iter().all(|s| !s.tables.is_empty()), "{what}");
}

fn around<'a>(text: &'a str, wrong: &str) -> &'a str {
    text.lines().find(|l| l.contains(wrong.trim_end())).unwrap_or_default()
}

/// What every report must say.
pub fn has_its_cautions(document: &Document) {
    let text = outline::document(document);
    for caution in [
        "Work on live parts is for qualified people",
        "call to the utility",
        "the authority having jurisdiction",
        "no certificate of compliance",
    ] {
        assert!(text.contains(caution), "{caution}");
    }
}

fn whole(made: &Made, template: &str) -> String {
    let document = made.built_in(template);
    holds_together(&document, template);
    has_its_cautions(&document);
    outline::document(&document)
}

#[test]
fn a_client_reads_of_a_bad_neutral() {
    insta::assert_snapshot!(whole(&Made::house(), "client"));
}

#[test]
fn the_letter_of_it() {
    insta::assert_snapshot!(whole(&Made::house(), "letter"));
}

#[test]
fn the_record_of_a_repair() {
    insta::assert_snapshot!(whole(&Made::repaired(), "record"));
}

#[test]
fn one_reading_alone() {
    let made = Made::of("readings = [{ at = \"kitchen\", V = { L1-N = 119.8 } }]");
    insta::assert_snapshot!(whole(&made, "client"));
}

#[test]
fn nothing_measured() {
    for template in ["client", "record", "letter"] {
        let text = whole(&Made::of(""), template);
        assert!(text.contains("Nothing was measured that could be judged"), "{text}");
        assert!(!text.contains("unsafe"), "{text}");
    }
}

/// A house with as many receptacles as asked for, each of them low.
fn many(places: usize) -> Made {
    let mut fixture = String::from("readings = [\n");
    for n in 0..places {
        let _ = writeln!(fixture, "  {{ at = \"R{n}\", V = {{ L1-N = {} }} }},", 100.0 + (n % 50) as f64 / 10.0);
    }
    fixture.push(']');
    Made::of(&fixture)
}

#[test]
fn several_hundred_alike_are_one_entry_with_its_places() {
    let document = many(300).built_in("client");
    holds_together(&document, "300 places");
    let text = outline::document(&document);
    let (_, findings) = text.split_once("## Findings").unwrap();
    let (findings, _) = findings.split_once("## Readings").unwrap();
    assert!(
        findings.contains("L1-N is 100.0 V") && findings.contains("This is the farthest off of 300; the others are at R1, R2"),
        "{findings}"
    );
    assert!(findings.contains("and 275 more"), "{findings}");
    assert!(findings.lines().count() < 60, "{findings}");
    let sheet = document.sheets.iter().flat_map(|s| &s.tables).find(|t| t.name == "findings").unwrap();
    assert!(sheet.rows.len() >= 600, "the workbook has them all");
}

#[test]
fn ten_thousand_places_are_no_burden() {
    let made = many(10_000);
    let document = made.built_in("client");
    assert!(document.blocks.len() < 400, "{}", document.blocks.len());
}
