//! Tables as people lay them out.

use super::book::{Book, VISIT, problems, readings};
use crate::intake::Refusal;

/// Reads a sheet of readings, and compares what was read and what was said.
fn check(what: &str, rows: &str, expected: &str, said: &str) {
    check_book(what, Book::new().sheet("Visit", VISIT).sheet("R", rows), expected, said);
}

fn check_book(what: &str, book: Book, expected: &str, said: &str) {
    let out = book.visit();
    assert_eq!(readings(&out.value), expected, "{what}");
    assert_eq!(problems(&out.problems), said, "{what}");
}

const TWO: &str = "SVC: L1-N 120.1, L2-N 119.9";

#[test]
fn headers_in_any_place_order_and_case() {
    for (what, rows) in [
        ("first row", "Location|L1-N|L2-N\nSVC|120.1|119.9"),
        ("letter case", "LOCATION|l1-n|L2-n\nSVC|120.1|119.9"),
        ("below a title", "Voltage readings, 14 September\n\nLocation|L1-N|L2-N\nSVC|120.1|119.9"),
        ("title above other columns", "|Voltage\nLocation|L1-N|L2-N\nSVC|120.1|119.9"),
        ("far from the corner", "\n\n\n||Location|L1-N|L2-N\n||SVC|120.1|119.9"),
        ("row 30", &format!("{}Location|L1-N|L2-N\nSVC|120.1|119.9", "\n".repeat(29))),
        ("blank rows between", "Location|L1-N|L2-N\n\n\nSVC|120.1|119.9\n\n"),
        ("blank column between", "Location||L1-N|L2-N\nSVC||120.1|119.9"),
        ("phases", "Point|VAN|VBN\nSVC|120.1|119.9"),
        ("phases with hyphens", "Outlet|A-N|B-N\nSVC|120.1|119.9"),
        ("legs in words", "Place|Leg 1 to neutral|Leg 2 to neutral\nSVC|120.1|119.9"),
        ("units", "Location|L1-N (V)|L2-N [V]\nSVC|120.1|119.9"),
        ("units in words", "Location|L1-N Volts|L2-N volts\nSVC|120.1|119.9"),
        ("line breaks", "Test point|L1\u{2013}N|V L2 N\nSVC|120.1|119.9"),
        ("circuits for locations", "Ckt #|L1-N|L2-N\nSVC|120.1|119.9"),
        ("header over two rows", "Location|Voltage|\n|L1-N|L2-N\nSVC|120.1|119.9"),
        ("units below the names", "Location|L1-N|L2-N\n|V|V\nSVC|120.1|119.9"),
        ("units in brackets below", "Location|L1-N|L2-N\n|(V)|(V)\nSVC|120.1|119.9"),
        ("header again on the next page", "Location|L1-N|L2-N\nLocation|L1-N|L2-N\nSVC|120.1|119.9"),
        ("notes", "Location|L1-N|L2-N\nSVC|120.1|119.9\nAll readings with the heater off"),
        ("not measured", "Location|L1-N|L2-N|L1-L2\nSVC|120.1|119.9|n/a\nSP1|-|n/a|"),
        ("numbers as text", "Location|L1-N|L2-N\nSVC|'120.1|'119,9"),
        ("long", "Location|Quantity|Value|Unit\nSVC|L1-N|120.1|V\nSVC|L2-N|119.9|V"),
        ("long without a unit", "Location|Quantity|Value\nSVC|L1-N|120.1\nSVC|L2-N|119.9"),
        ("long with the unit in the cell", "Location|Between|Reading\nSVC|A-N|120.1 V\nSVC|B-N|119.9 V"),
        ("long with the unit in the header", "Location|Measured between|Volts\nSVC|L1-N|120.1\nSVC|L2-N|119.9"),
        ("long in kilovolts", "Location|Quantity|Value|Unit\nSVC|L1-N|0.1201|kV\nSVC|L2-N|119.9|V"),
    ] {
        check(what, rows, TWO, "");
    }
}

#[test]
fn groups_over_columns() {
    let expected = "SVC: L1-N 120.1, L2-N 119.9, I L1 10.2, I L2 8.4, I N 1.9";
    let rows = "Location|Voltage|||Current\n|L1-N||L2-N|L1|L2|N\nSVC|120.1||119.9|10.2|8.4|1.9";
    let merged = Book::new().sheet("Visit", VISIT).sheet("R", rows).merged(&["B1:D1", "E1:G1", "A1:A2"]);
    check_book("merged groups", merged, expected, "");
    check("groups without merging", "Location|Voltage||Current\n|L1-N|L2-N|L1|L2|N\nSVC|120.1|119.9|10.2|8.4|1.9", expected, "");
    let amps = "Location|Volts||Amps\n|L1-N|L2-N|L1|L2|N\nSVC|120.1|119.9|10.2|8.4|1.9";
    check("volts and amps", amps, expected, "");
}

#[test]
fn states_stages_and_merged_locations() {
    let rows = "Location|State|Stage|L1-N\nSVC|as found|as found|120.1\n|1500 W heater on|as found|119.2\n|as found|as left|120.3";
    let expected = "SVC: L1-N 120.1\nSVC [1500 W heater on]: L1-N 119.2\nSVC (as left): L1-N 120.3";
    check_book("merged location", Book::new().sheet("Visit", VISIT).sheet("R", rows).merged(&["A2:A4"]), expected, "");
    check("location missing", rows, "SVC: L1-N 120.1", "error R!A3 no-location\nerror R!A4 no-location");
    check("no state, no stage", "Location|L1-N\nSVC|120.1", "SVC: L1-N 120.1", "");
    check("blank state", "Location|State|Stage|L1-N\nSVC|||120.1", "SVC: L1-N 120.1", "");
    check("state as a stage", "Location|State|L1-N\nSVC|as left|120.1", "SVC [as left] (as left): L1-N 120.1", "");
    check("stage in other words", "Location|Before/after|L1-N\nSVC|After repair|120.1", "SVC (as left): L1-N 120.1", "");
    check("stage misspelt", "Location|Stage|L1-N\nSVC|as lift|120.1", "SVC: L1-N 120.1", "error R!B2 choice");
    check("blanks are single", "Location|L1-N\n'  north   wall |120.1", "north wall: L1-N 120.1", "");
}

#[test]
fn before_and_after_may_stand_side_by_side() {
    let expected = "SVC: L1-N 120.1, L2-N 119.9\nSVC (as left): L1-N 120.2, L2-N 120\nSP1: L1-N 118";
    check(
        "in the header",
        "Location|As found L1-N|As found L2-N|As left L1-N|As left L2-N\nSVC|120.1|119.9|120.2|120\nSP1|118|",
        expected,
        "",
    );
    check(
        "behind the quantity",
        "Location|L1-N (before)|L2-N before|L1-N after|L2-N after\nSVC|120.1|119.9|120.2|120\nSP1|118|",
        expected,
        "",
    );
    let rows = "Location|As found||As left|\n|L1-N|L2-N|L1-N|L2-N\nSVC|120.1|119.9|120.2|120\nSP1|118|";
    check("over columns", rows, expected, "");
    check_book("merged", Book::new().sheet("Visit", VISIT).sheet("R", rows).merged(&["B1:C1", "D1:E1", "A1:A2"]), expected, "");
}

#[test]
fn repeated_rows_and_columns_are_kept() {
    check("rows", "Location|L1-N\nSVC|120.1\nSVC|120.1", "SVC: L1-N 120.1\nSVC: L1-N 120.1", "");
    check("columns", "Location|L1-N|VAN\nSVC|120.1|120.2", "SVC: L1-N 120.1, L1-N 120.2", "warning R!C1 quantity-twice");
    check(
        "long",
        "Location|Quantity|Value\nSVC|L1-N|120.1\nSVC|L1-N|120.2\nSVC|L2-N|119",
        "SVC: L1-N 120.1\nSVC: L1-N 120.2, L2-N 119",
        "",
    );
}

#[test]
fn long_rows_taken_together_are_one_set() {
    let rows = "Location|State|Time|Quantity|Value\nSVC||@09:04|L1-N|120.1\n9||@09:08|L1-N|119.2\nSVC||@09:04|L2-N|119.9\nSVC|heater on|@09:04|L1-N|118\nSVC||@09:30|L1-N|120.2";
    let expected = "SVC: L1-N 120.1, L2-N 119.9\n9: L1-N 119.2\nSVC [heater on]: L1-N 118\nSVC: L1-N 120.2";
    check("long", rows, expected, "");
    check(
        "amperes",
        "Location|Quantity|Value|Unit\nSVC|L1|10.2|A\nSVC|L1|120.1|V\nSVC|I N|1.9|A",
        "SVC: I L1 10.2, L1-N 120.1, I N 1.9",
        "",
    );
    check(
        "bad rows",
        "Location|Quantity|Value|Unit\nSVC|L1-N|120.1|V\nSVC|colour|3|V\nSVC||119|V\nSVC|L2-N|119|furlongs\nSVC|L2-N|12o|V\nSVC|L1-L2|240|A",
        "SVC: L1-N 120.1",
        "error R!B3 unknown-quantity\nerror R!B4 no-quantity\nerror R!D5 unknown-unit\nerror R!C6 letters\nerror R!C7 other-unit",
    );
}

#[test]
fn totals_and_notes_are_no_readings() {
    check("total", "Location|L1-N\nSVC|120.1\nAverage|120.1", "SVC: L1-N 120.1", "warning R!A3 total-row");
    check("total elsewhere", "Remarks|Location|L1-N\n|SVC|120.1\nmean||120.1", "SVC: L1-N 120.1", "warning R!A3 total-row");
    check("a note with a number", "Location|L1-N\nSVC|120.1\n|119.9", "SVC: L1-N 120.1", "error R!A3 no-location");
    check("a total without numbers", "Location|L1-N\nSVC|120.1\nTotal|", "SVC: L1-N 120.1", "");
    let circuits = "Circuit|Breaker A\nTotal|20\n9|15";
    let book = Book::new().sheet("Visit", VISIT).sheet("Circuits", circuits).sheet("R", "Location|L1-N\nTotal|120.1");
    check_book("a circuit by that name", book, "Total: L1-N 120.1", "warning Circuits no-fed-from");
}

#[test]
fn columns_without_a_place_are_named() {
    check("unknown", "Location|L1-N|Glove class\nSVC|120.1|00", "SVC: L1-N 120.1", "warning R!C1 unplaced-column");
    check("bare leg", "Location|L1-N|L2\nSVC|120.1|119", "SVC: L1-N 120.1", "warning R!C1 unplaced-column");
    check("second location", "Location|L1-N|Where\nSVC|120.1|cellar", "SVC: L1-N 120.1", "warning R!C1 second-column");
    check(
        "no header",
        "Location|L1-N||L2-N\nSVC|120.1|7|119.9\nSP1|120|8|119",
        "SVC: L1-N 120.1, L2-N 119.9\nSP1: L1-N 120, L2-N 119",
        "warning R!C2 no-header",
    );
    check(
        "volts of one conductor",
        "Location|Volts L1|V2\nSVC|120.1|119.9",
        TWO,
        "warning R!B1 neutral-implied\nwarning R!C1 neutral-implied",
    );
    check(
        "third leg",
        "Location|L1-N|L3-N\nSVC|120.1|119.9\nSP1|120|119",
        "SVC: L1-N 120.1, L3-N 119.9\nSP1: L1-N 120, L3-N 119",
        "warning R!C2 leg-of-system",
    );
}

#[test]
fn a_hot_is_the_one_its_circuit_has() {
    let circuits = "Circuit|Fed from|Legs\nSVC||L1 L2\n8|SVC|L2\n12|SVC|L1-L2";
    let book = |rows: &str| Book::new().sheet("Visit", VISIT).sheet("Circuits", circuits).sheet("R", rows);
    check_book("receptacle", book("Location|H-N|H-G|N-G\n8|120.1|120.3|0.2"), "8: L2-N 120.1, L2-G 120.3, N-G 0.2", "");
    check_book("two hots", book("Location|H-N\nSVC|120.1"), "", "error R!B2 which-hot");
    check_book("line to line", book("Location|L-L\nSVC|240.1\n12|239.8"), "SVC: L1-L2 240.1\n12: L1-L2 239.8", "");
    check("one leg", "Location|L-N\nSVC|120.1", "", "error R!B2 which-hot");
    let one = Book::new().sheet("Visit", "Item|Entry\nSystem|230").sheet("R", "Location|L-N|L-PE\n9|229.1|229.3");
    check_book("230", one, "9: L1-N 229.1, L1-G 229.3", "");
}

#[test]
fn every_table_in_whatever_sheet_is_read() {
    let stacked = "Circuit|Breaker A|Fed from\nSVC|200|\n9|15|SVC\n\nReadings\nLocation|L1-N|L2-N\nSVC|120.1|119.9";
    check("one below another", stacked, TWO, "");
    let beside = "Location|L1-N|L2-N||Instrument|Measures|Serial\nSVC|120.1|119.9||M1|volts|7";
    let out = Book::new().sheet("Visit", VISIT).sheet("R", beside).visit();
    assert_eq!((readings(&out.value), problems(&out.problems)), (TWO.to_owned(), String::new()));
    assert_eq!(out.value.instruments.len(), 1);
    let two = Book::new().sheet("Visit", VISIT).sheet("Panel A", "Location|L1-N\nSVC|120.1").sheet("Panel B", "Point|L1-N\nSP1|119");
    check_book("two sheets", two, "SVC: L1-N 120.1\nSP1: L1-N 119", "");
    let both = "Circuit|Fed from|Breaker A|Wire|L1-N|L2-N\nSVC||200|4/0 Al|120.1|119.9";
    let out = Book::new().sheet("Visit", VISIT).sheet("All", both).visit();
    assert_eq!((readings(&out.value), out.value.runs.len(), problems(&out.problems)), (TWO.to_owned(), 1, String::new()));
    let misnamed = Book::new().sheet("Visit", VISIT).sheet("Circuits", "Location|L1-N|L2-N\nSVC|120.1|119.9");
    check_book("a sheet's name does not decide", misnamed, TWO, "");
    let strange =
        Book::new().sheet("Visit", VISIT).sheet("R", "Location|L1-N|L2-N\nSVC|120.1|119.9").sheet("Sketch", "a house\n|and a tree");
    check_book("a sheet without a table", strange, TWO, "warning Sketch no-table");
}

#[test]
fn what_a_sheet_reckons_is_not_read() {
    let rows = "Location|L1-N|L2-N|L1-L2|L1-N off nominal %|L2-N off nominal %|Leg sum less L1-L2\nSVC|120|120|240|0|0|0\nSP1|119|121|240|=B3|-1|0";
    check("field workbook", rows, "SVC: L1-N 120, L2-N 120, L1-L2 240\nSP1: L1-N 119, L2-N 121, L1-L2 240", "");
    let book = Book::new()
        .sheet("How to", "Field workbook\n\nVisit: one line an item.")
        .sheet("Visit", VISIT)
        .sheet("R", "Location|L1-N\nSVC|120");
    check_book("a sheet for people", book, "SVC: L1-N 120", "");
}

#[test]
fn hidden_parts_are_read_and_said_once() {
    let rows = "Location|L1-N|L2-N\nSVC|120.1|119.9";
    let mut book = Book::new().sheet("Visit", VISIT).sheet("R", rows);
    book.last().hidden_rows = vec![1];
    check_book("row", book, TWO, "warning R hidden-rows");
    let mut book = Book::new().sheet("Visit", VISIT).sheet("R", rows);
    book.last().hidden_columns = vec![1, 2];
    check_book("columns", book, TWO, "warning R hidden-columns");
    let mut book = Book::new().sheet("Visit", VISIT).sheet("R", rows);
    book.last().hidden = true;
    check_book("sheet", book, TWO, "warning R hidden-sheet");
}

#[test]
fn names_that_became_dates_are_named() {
    let circuits = "Circuit|Fed from|Legs\nSVC||L1 L2\n@2026-01-03|SVC|L1 L2\n1/3a|@2026-01-03|L1 L2";
    let book = Book::new().sheet("Visit", VISIT).sheet("Circuits", circuits).sheet("R", "Location|L1-N\n@2026-03-01|120.1");
    let out = book.visit();
    assert_eq!(readings(&out.value), "1/3: L1-N 120.1");
    assert_eq!(out.value.rows[0].run, Some(1));
    assert_eq!(out.value.tree.order, [0, 1, 2]);
    assert_eq!(problems(&out.problems), "warning Circuits!A3 made-a-date\nwarning Circuits!B4 made-a-date\nwarning R!A2 made-a-date");
}

#[test]
fn an_input_without_readings_is_refused_with_what_comes_nearest() {
    let refusal = Book::new().sheet("Visit", VISIT).sheet("R", "Place|State|L1N voltage now|Notes\nSVC||120|").read();
    let text = refusal.map(|_| ()).unwrap_err().to_string();
    assert!(text.contains("R, row 1: Place | State | L1N voltage now | Notes"), "{text}");
    assert!(Book::new().read().is_err());
    let empty = Book::new().sheet("R", "Location|L1-N").read().map(|_| ()).unwrap_err();
    assert_eq!(empty, Refusal::NotFilledIn, "a table without rows is a table, but says nothing");
    assert!(Book::new().sheet("R", "Location|L1-N\nSVC|n/a").read().is_ok(), "what could not be measured was entered all the same");
    assert!(Book::new().sheet("R", "Location|L1-N").sheet("C", "Circuit|Fed from|Breaker|Wire\n5||20|12 Cu").read().is_ok());
}
