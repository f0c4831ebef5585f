//! What each writer's file has to read as.

use super::{book, made, shown};
use crate::intake::grid::{Area, Workbook};
use crate::intake::workbook::read;
use crate::intake::{Content, Refusal};

/// Column B of the sheet Kinds, whoever wrote it, down to the formulas.
const PLAIN: [&str; 15] = [
    r#"B1 "5/7a""#,
    r#"B2 "  as found ""#,
    r#"B3 "upper\nlower""#,
    r#"B4 "µΩ – 18 °C ✓ 😀""#,
    "B5 119.6",
    "B6 -42",
    "B7 1250000000",
    "B8 0.18",
    "B9 119.6",
    "B10 day 46279.0000",
    "B11 day 46279.5000",
    "B12 day 0.3958",
    "B13 day 1.5000",
    "B14 true",
    "B15 false",
];
/// The formulas where LibreOffice computed them; B18 is an empty text.
const COMPUTED: [&str; 5] = ["B16 77.6", r#"B17 "5/7a!""#, "B19 true", "B20 error #DIV/0!", "B21 error #N/A"];
/// The formulas as openpyxl writes them, without results.
const NOT_COMPUTED: [&str; 6] = [
    "B16 no result of =B5+B6",
    r#"B17 no result of =B1&"!""#,
    r#"B18 no result of ="""#,
    "B19 no result of =B5>0",
    "B20 no result of =1/0",
    "B21 no result of =NA()",
];

fn kinds(book: &Workbook, formulas: &[&str]) {
    let names: Vec<_> = book.sheets.iter().map(|s| (s.name.as_ref(), s.hidden)).collect();
    assert_eq!(names, [("Kinds", false), ("Hidden parts", false), ("Away", true), ("Empty", false)]);
    let cells = shown(&book.sheets[0]);
    let column_b: Vec<&str> = cells.iter().filter(|c| c.starts_with('B')).map(String::as_str).collect();
    assert_eq!(column_b, [PLAIN.as_slice(), formulas].concat());
    assert!(cells.contains(&r#"C1 "L1-N bold""#.to_owned()), "rich text is plain text");
    let parts = &book.sheets[1];
    assert_eq!(
        (parts.hidden_rows.as_slice(), parts.hidden_columns.as_slice()),
        ([1].as_slice(), [2].as_slice()),
        "those that hold something"
    );
    assert_eq!(parts.merged, [Area { top: 3, left: 0, bottom: 4, right: 1 }]);
    assert_eq!(parts.cells.len(), 26);
    assert_eq!(shown(&book.sheets[2]), [r#"A1 "read all the same""#]);
}

#[test]
fn every_kind_of_cell_from_xlsx() {
    kinds(&book(made!("kinds.xlsx")), &NOT_COMPUTED);
}

#[test]
fn every_kind_of_cell_from_xlsm() {
    kinds(&book(made!("kinds.xlsm")), &COMPUTED);
}

#[test]
fn every_kind_of_cell_from_xls() {
    kinds(&book(made!("kinds.xls")), &COMPUTED);
}

#[test]
fn every_kind_of_cell_from_ods() {
    kinds(&book(made!("kinds.ods")), &COMPUTED);
}

#[test]
fn dates_counted_from_1904_are_the_same_dates() {
    for bytes in [made!("from-1904.xlsx"), made!("from-1904.xls")] {
        assert_eq!(shown(&book(bytes).sheets[0]), ["A1 day 46279.0000", "A2 day 0.2500", "A3 100"]);
    }
}

#[test]
fn xls_of_another_library() {
    let book = book(made!("plain.xls"));
    let [readings, away, many] = book.sheets.as_slice() else { panic!("three sheets") };
    let expected = [
        r#"A1 "Location""#,
        r#"B1 "L1-N""#,
        r#"C1 "L2-N""#,
        r#"D1 "L1-L2""#,
        r#"A2 "5/7a – Küche ✓""#,
        "B2 119.6",
        "C2 120",
        "D2 239.65",
        "A3 day 46279.0000",
        "B3 true",
        r#"D3 "L1-N""#,
        r#"A4 "below""#,
        r#"A5 "merged""#,
    ];
    assert_eq!(shown(readings), expected);
    assert_eq!((readings.hidden_rows.as_slice(), readings.hidden_columns.as_slice()), ([3].as_slice(), [2].as_slice()));
    assert_eq!(readings.merged, [Area { top: 4, left: 0, bottom: 5, right: 1 }]);
    assert!(away.hidden);
    let long =
        |row: usize| format!("A{} {:?}", row + 1, format!("{row} {}", if row.is_multiple_of(3) { "o" } else { "Ω" }.repeat(row % 97)));
    assert_eq!(shown(many), (0..400).map(long).collect::<Vec<_>>(), "a table of texts over several records");
}

#[test]
fn xlsb() {
    let book = book(made!("plain.xlsb"));
    let expected = [
        r#"A1 "Location""#,
        r#"B1 "L1-N""#,
        r#"C1 "Date""#,
        r#"D1 "Tie""#,
        r#"E1 "Remarks""#,
        r#"A2 "5/7a – Küche ✓""#,
        "B2 119.6",
        "C2 day 46279.5000",
        "D2 true",
        r#"A3 "below""#,
        "B3 -42",
        "C3 day 46279.0000",
        "D3 false",
        r#"E3 "  blanks kept ""#,
    ];
    assert_eq!(shown(&book.sheets[0]), expected);
    assert_eq!((book.sheets[1].name.as_ref(), book.sheets[1].hidden), ("Away", true));
}

#[test]
fn ods_with_all_its_ways_to_leave_things_out() {
    let book = book(made!("hand.ods"));
    let [odd, away] = book.sheets.as_slice() else { panic!("two sheets") };
    let expected = [
        r#"A1 "  two   three\ttab\nline""#,
        r#"B1 "first\nsecond""#,
        "C1 119.6",
        "D1 119.6",
        "E1 119.6",
        r#"A2 "twice""#,
        r#"A3 "twice""#,
        r#"A4 "spanned""#,
        "C4 0.18",
        "D4 day 46279.0000",
        "E4 day 0.3958",
        "F4 true",
        "G4 no result of =SUM([.C1:.E1])",
        "H4 error Err:502",
        r#"C5 "after the covered""#,
        r#"A1047506 "last""#,
    ];
    assert_eq!(shown(odd), expected);
    assert_eq!((odd.hidden_rows.as_slice(), odd.hidden_columns.as_slice()), ([1, 2, 1_047_505].as_slice(), [2].as_slice()));
    assert_eq!(odd.merged, [Area { top: 3, left: 0, bottom: 4, right: 1 }]);
    assert!(away.hidden);
}

#[test]
fn a_password_is_told() {
    let locked = read(&Content::File(made!("locked.xlsx"))).map(|_| ());
    assert_eq!(locked, Err(Refusal::Encrypted));
    // The record that says so, put in the place of the one that names the date system.
    let mut xls = made!("plain.xls").to_vec();
    let date_mode = xls.windows(4).position(|w| w == [0x22, 0, 2, 0]).unwrap();
    xls[date_mode] = 0x2f;
    assert_eq!(read(&Content::File(&xls)).map(|_| ()), Err(Refusal::Encrypted));
}

fn folder(files: &[(&str, &[u8])]) -> (Vec<(String, Vec<String>)>, Vec<String>) {
    let files: Vec<(String, Vec<u8>)> = files.iter().map(|(name, bytes)| ((*name).to_owned(), bytes.to_vec())).collect();
    let output = read(&Content::Folder(&files)).unwrap();
    let sheets = output.value.sheets.iter().map(|s| (s.name.to_string(), shown(s))).collect();
    let said = output.problems.iter().map(|p| crate::wording::Language::english().say(&p.message)).collect();
    (sheets, said)
}

#[test]
fn a_folder_of_csv_files() {
    let files = [("Visit.csv", made!("csv-plain/Visit.csv")), ("Readings.csv", made!("csv-plain/Readings.csv"))];
    let (sheets, said) = folder(&files);
    let readings = [r#"A1 "Location""#, r#"B1 "L1-N""#, r#"C1 "Remarks""#, r#"A2 "5/7a""#, r#"B2 "119.6""#, r#"C2 "18 °C""#];
    let visit = [
        r#"A1 "Item""#,
        r#"B1 "Entry""#,
        r#"A2 "Client""#,
        r#"B2 "Okabe, Jun""#,
        r#"A4 "Remarks""#,
        r#"B4 "said \"as found\"\r\nand left""#,
    ];
    assert_eq!(sheets[0], ("Readings".to_owned(), readings.map(str::to_owned).to_vec()));
    assert_eq!(sheets[1], ("Visit".to_owned(), visit.map(str::to_owned).to_vec()));
    assert!(said.is_empty());
}

#[test]
fn a_folder_of_csv_files_of_an_office() {
    let files = [("Readings.csv", made!("csv-office/Readings.csv")), ("Visit.csv", made!("csv-office/Visit.csv"))];
    let (sheets, said) = folder(&files);
    assert_eq!(sheets[0].1[3..], [r#"A2 "Küche über dem Café""#, r#"B2 "119,6""#, r#"C2 "trocken, 18 °C""#]);
    assert_eq!(sheets[1].1[2..], [r#"A2 "Client""#, r#"B2 "Orla Penhallow – 5 Ω""#]);
    assert_eq!(said.len(), 1, "what was guessed is said");
    assert!(said[0].contains("windows-1252"), "{}", said[0]);
}

#[test]
fn marks_that_nothing_closes_are_said_once() {
    let (sheets, said) = folder(&[("Readings.csv", b"Location,Remarks\n5/7a,\"2 inch\n5/7b,\"3 inch\n")]);
    assert_eq!(sheets[0].1[2..], [r#"A2 "5/7a""#, r#"B2 "\"2 inch""#, r#"A3 "5/7b""#, r#"B3 "\"3 inch""#]);
    assert_eq!(said.len(), 1);
    assert!(said[0].starts_with("2 texts begin with a quotation mark that is never closed"), "{}", said[0]);
}
