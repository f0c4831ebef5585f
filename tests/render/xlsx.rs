//! The XLSX renderer: what it writes, read back by another library and as XML.

use crate::specimen::{self, column, document_of, row, sheet, table, words};
use calamine::{Data, Reader, Xlsx};
use midwire::quantity::Unit;
use midwire::render::xlsx;
use midwire::report::document::*;
use midwire::results::Signal;
use std::io::{Cursor, Read};
use std::sync::Arc;

fn write(document: &Document) -> Vec<u8> {
    xlsx::write(document).expect("the document is written")
}

fn open(bytes: &[u8]) -> Xlsx<Cursor<Vec<u8>>> {
    calamine::open_workbook_from_rs(Cursor::new(bytes.to_vec())).expect("the workbook opens")
}

/// The parts of the archive, in its order.
fn parts(bytes: &[u8]) -> Vec<(String, String)> {
    let mut archive = zip::ZipArchive::new(Cursor::new(bytes)).expect("an archive");
    let mut part = |i| {
        let mut file = archive.by_index(i).expect("a part");
        let mut text = String::new();
        file.read_to_string(&mut text).expect("text");
        (file.name().expect("a name").into_owned(), text)
    };
    (0..zip::ZipArchive::new(Cursor::new(bytes)).expect("an archive").len()).map(&mut part).collect()
}

fn part(bytes: &[u8], name: &str) -> String {
    parts(bytes).into_iter().find(|(n, _)| n == name).expect("the part is there").1
}

/// Every part is well-formed XML.
fn assert_well_formed(bytes: &[u8]) {
    for (name, xml) in parts(bytes) {
        let mut reader = quick_xml::Reader::from_str(&xml);
        reader.config_mut().check_end_names = true;
        loop {
            match reader.read_event() {
                Ok(quick_xml::events::Event::Eof) => break,
                Ok(event) => {
                    assert!(!event.iter().any(|b| *b < 0x20 && !matches!(b, b'\n' | b'\t' | b'\r')), "control character in {name}")
                }
                Err(e) => panic!("{name}: {e}"),
            }
        }
    }
}

/// The elements of a part that begin with one of these names, one a line.
fn elements(xml: &str, names: &[&str]) -> String {
    let split = xml.replace('<', "\n<");
    let wanted = |line: &&str| names.iter().any(|n| line.strip_prefix('<').is_some_and(|l| l.starts_with(n)));
    split.lines().filter(wanted).collect::<Vec<_>>().join("\n")
}

fn one_text(text: &str) -> Document {
    let rows = vec![row(vec![words(text)])];
    document_of(vec![sheet("Texts", vec![table("texts", "Texts", vec![column("text", "Text", None, ColumnKind::Text)], rows)])])
}

#[test]
fn numbers_formulas_and_their_values_are_read_back() {
    let bytes = write(&specimen::document());
    assert_well_formed(&bytes);
    let mut book = open(&bytes);
    assert_eq!(book.sheet_names(), ["Summary", "Findings", "Readings", "Balance"]);
    let values = book.worksheet_range("Readings").expect("the sheet");
    let formulas = book.worksheet_formula("Readings").expect("the sheet");
    let line = |r: u32| (0..11).map(|c| values.get_value((r, c)).cloned().unwrap_or(Data::Empty)).collect::<Vec<_>>();
    let text = |s: &str| Data::String(s.to_owned());
    let headings =
        ["Location", "State", "L1-N (V)", "± V", "L2-N (V)", "± V", "L1-L2 (V)", "± V", "Sum of legs (V)", "Sum less L1-L2 (V)", "Verdict"];
    assert_eq!(line(1), headings.map(text));
    let v = Data::Float;
    let expected = [
        text("panel"),
        text("as found"),
        v(120.4),
        v(0.9),
        v(118.5),
        v(0.9),
        v(238.9),
        v(0.9),
        v(120.4 + 118.5),
        v(120.4 + 118.5 - 238.9),
        text("pass"),
    ];
    assert_eq!(line(3), expected);
    assert_eq!(formulas.get_value((3, 8)).map(String::as_str), Some("C4+E4"));
    assert_eq!(formulas.get_value((3, 9)).map(String::as_str), Some("C4+E4-G4"));
    assert!(matches!(values.get_value((7, 4)), None | Some(Data::Empty)), "what was not measured stays empty");
}

#[test]
fn words_of_findings_stand_in_their_cells() {
    let mut book = open(&write(&specimen::document()));
    let values = book.worksheet_range("Findings").expect("the sheet");
    let signals: Vec<String> = (2..6).filter_map(|r| values.get_value((r, 0))).map(ToString::to_string).collect();
    assert_eq!(signals, ["DANGER", "WARNING", "CAUTION", "NOTICE"]);
    let advice = values.get_value((2, 4)).map(ToString::to_string);
    assert_eq!(
        advice.as_deref(),
        Some("Switch both breakers off and lock them. Repair by a licensed electrician before any load is connected.")
    );
}

#[test]
fn a_worksheet_is_set_up_for_reading_and_print() {
    let bytes = write(&specimen::document());
    let xml = part(&bytes, "xl/worksheets/sheet3.xml");
    insta::assert_snapshot!(elements(
        &xml,
        &[
            "sheetPr",
            "tabColor",
            "pageSetUpPr",
            "pane",
            "cols",
            "col ",
            "autoFilter",
            "conditionalFormatting",
            "cfRule",
            "formula",
            "page",
            "odd",
            "ignoredError"
        ]
    ));
    insta::assert_snapshot!("properties", elements(&part(&bytes, "docProps/core.xml"), &["dc", "cp"]));
    insta::assert_snapshot!("names", elements(&part(&bytes, "xl/workbook.xml"), &["sheet", "definedName", "calcPr"]));
}

#[test]
fn a_chart_refers_to_its_table_and_says_what_it_shows() {
    let bytes = write(&specimen::document());
    insta::assert_snapshot!(elements(&part(&bytes, "xl/charts/chart1.xml"), &["c:barDir", "c:f>", "c:pt", "c:v>"]));
    assert!(part(&bytes, "xl/drawings/drawing1.xml").contains("descr=\"Column chart: L1 carries 8200 VA, L2 8250 VA.\""));
}

#[test]
fn text_is_only_ever_text() {
    let long = "x".repeat(40_000);
    let kept = "x".repeat(32_766) + "…";
    let wide = "😀".repeat(20_000);
    let wide_kept = "😀".repeat(16_383) + "…";
    let table: &[(&str, &str)] = &[
        ("=1+1", "=1+1"),
        ("=cmd|' /C calc'!A0", "=cmd|' /C calc'!A0"),
        ("+1", "+1"),
        ("-1", "-1"),
        ("@SUM(A1)", "@SUM(A1)"),
        ("{=A1}", "{=A1}"),
        ("https://ferry-valley.example/", "https://ferry-valley.example/"),
        ("119.6", "119.6"),
        ("<b>bold</b> & \"quoted\" 'so' ]]>", "<b>bold</b> & \"quoted\" 'so' ]]>"),
        ("<r><t>raw</t></r>", "<r><t>raw</t></r>"),
        ("<r></si></r>", "<r></si></r>"),
        ("_x0041_", "_x0041_"),
        ("<r>_x0041_</r>", "<r>_x0041_</r>"),
        ("  kept  ", "  kept  "),
        ("two\r\nlines", "two\nlines"),
        ("a\0b\u{1b}[31mc\u{7f}", "a⟨U+0000⟩b⟨U+001B⟩[31mc⟨U+007F⟩"),
        ("\u{202e}gnp.exe\u{ffff}", "⟨U+202E⟩gnp.exe⟨U+FFFF⟩"),
        (&long, &kept),
        (&wide, &wide_kept),
    ];
    for (given, expected) in table {
        let bytes = write(&one_text(given));
        assert_well_formed(&bytes);
        let xml = part(&bytes, "xl/worksheets/sheet1.xml");
        assert!(!xml.contains("<f>") && !xml.contains("hyperlink"), "{given:.40}");
        let values = open(&bytes).worksheet_range("Texts").expect("the sheet");
        assert_eq!(values.get_value((2, 0)), Some(&Data::String((*expected).to_owned())), "{given:.40}");
    }
}

#[test]
fn long_and_rich_texts_are_never_refused() {
    let ampersands = "&".repeat(32_000);
    let texts = [format!("<r>{ampersands}</r>"), format!("<r>{ampersands}{ampersands}</r>"), format!("<r>{}</r>", "_x0041_".repeat(900))];
    for given in &texts {
        let bytes = write(&one_text(given));
        assert_well_formed(&bytes);
        let values = open(&bytes).worksheet_range("Texts").expect("the sheet");
        let read = values.get_value((2, 0)).map(ToString::to_string).expect("a text");
        assert!(read.trim_end_matches([' ', '…']).len() > 6000 && given.starts_with(read.trim_end_matches([' ', '…'])));
    }
    let strong = |s: &str| Inline::Strong(specimen::text(s));
    let plain = |s: &str| Inline::Text(s.to_owned());
    let rich = [
        vec![plain(&ampersands), strong("b")],
        vec![strong("_x0041_"), plain("<r>")],
        vec![strong("")],
        vec![],
        vec![strong("x"); 500],
        vec![[strong("a"), plain("b")]; 200].concat(),
    ];
    let rows = rich.iter().map(|r| row(vec![Cell::Rich(r.clone())])).collect();
    let bytes = write(&document_of(vec![sheet("Rich", vec![table("rich", "Rich", vec![column("r", "R", None, ColumnKind::Text)], rows)])]));
    assert_well_formed(&bytes);
    let values = open(&bytes).worksheet_range("Rich").expect("the sheet");
    assert_eq!(values.get_value((3, 0)).map(ToString::to_string).as_deref(), Some("_x0041_<r>"));
}

#[test]
fn text_elsewhere_breaks_nothing() {
    let nasty = "<r>&\"'\u{0}\u{ffff}]]>=(A1[x]!A1&[Page]&P\n</r>";
    let mut document = specimen::document();
    let meta = &mut document.meta;
    for field in [
        &mut meta.title,
        &mut meta.author,
        &mut meta.subject,
        &mut meta.producer,
        &mut meta.header_left,
        &mut meta.header_right,
        &mut meta.footer_left,
        &mut meta.page_words,
    ] {
        *field = nasty.repeat(20);
    }
    meta.date = Some(nasty.to_owned());
    for sheet in &mut document.sheets {
        sheet.name = nasty.to_owned();
        sheet.facts = vec![(nasty.to_owned(), nasty.to_owned())];
        sheet.tables = sheet.tables.iter().map(|t| Arc::new(renamed(t, nasty))).collect();
        if let Some(chart) = &mut sheet.chart {
            chart.title = nasty.to_owned();
            chart.alt = nasty.to_owned();
        }
    }
    let bytes = write(&document);
    assert_well_formed(&bytes);
    assert_eq!(open(&bytes).sheet_names().len(), 4);
    let footer = elements(&part(&bytes, "xl/worksheets/sheet1.xml"), &["oddHeader", "oddFooter"]);
    assert!(footer.lines().all(|l| l.chars().count() < 1500), "running lines stay short");
}

fn renamed(table: &Table, text: &str) -> Table {
    let mut table = table.clone();
    table.caption = text.to_owned();
    table.when_empty = text.to_owned();
    table.columns.iter_mut().for_each(|c| c.heading = text.to_owned());
    table.rows.iter_mut().flat_map(|r| &mut r.cells).for_each(|c| {
        if let Cell::Text(words) = c {
            *words = text.to_owned();
        }
    });
    table
}

#[test]
fn sheets_get_legal_unique_names() {
    let names = ["Readings", "readings", "a/b*c?d[e]f:g\\h", "", "A name that is much longer than a worksheet’s may be"];
    let bytes = write(&document_of(names.iter().map(|n| sheet(n, Vec::new())).collect()));
    assert_eq!(open(&bytes).sheet_names(), ["Readings", "readings (2)", "a-b-c-d-e-f-g-h", "Sheet", "A name that is much longer than"]);
}

#[test]
fn a_document_without_sheets_still_opens() {
    let bytes = write(&document_of(Vec::new()));
    assert_eq!(open(&bytes).sheet_names(), ["Report on the 120-240 V service"]);
}

#[test]
fn empty_tables_say_so() {
    let columns = vec![column("a", "A", None, ColumnKind::Text)];
    let sheets = vec![
        sheet("Empty", vec![table("empty", "Empty", columns, Vec::new())]),
        sheet("None", vec![table("none", "None", Vec::new(), vec![row(Vec::new())])]),
    ];
    let bytes = write(&document_of(sheets));
    assert_well_formed(&bytes);
    let mut book = open(&bytes);
    let values = book.worksheet_range("Empty").expect("the sheet");
    assert_eq!(values.get_value((2, 0)), Some(&Data::String("Nothing to list.".to_owned())));
    assert!(!part(&bytes, "xl/worksheets/sheet1.xml").contains("autoFilter"));
    assert!(book.worksheet_range("None").is_ok());
}

#[test]
fn what_is_no_number_is_said_in_words() {
    let numbers = [f64::INFINITY, f64::NEG_INFINITY, f64::NAN, -0.04, 1e300, f64::MIN_POSITIVE];
    let rows = numbers.iter().map(|&n| row(vec![Cell::Number(Number { uncertainty: Some(f64::NAN), ..Number::new(n, 255) })])).collect();
    let bytes =
        write(&document_of(vec![sheet("N", vec![table("n", "N", vec![column("n", "N", Some(Unit::Ohm), ColumnKind::Number)], rows)])]));
    assert_well_formed(&bytes);
    let values = open(&bytes).worksheet_range("N").expect("the sheet");
    let read: Vec<Data> = (2..8).filter_map(|r| values.get_value((r, 0)).cloned()).collect();
    let text = |s: &str| Data::String(s.to_owned());
    assert_eq!(read, [text("∞"), text("−∞"), text("?"), Data::Float(-0.04), Data::Float(1e300), Data::Float(f64::MIN_POSITIVE)]);
}

#[test]
fn rows_shorter_or_longer_than_the_columns_are_written_as_far_as_they_go() {
    let columns = vec![column("a", "A", None, ColumnKind::Name), column("b", "B", None, ColumnKind::Signal)];
    let rows = vec![row(Vec::new()), row(vec![words("a")]), row(vec![words("a"), Cell::Signal(Signal::Notice), words("beyond")])];
    let values =
        open(&write(&document_of(vec![sheet("S", vec![table("s", "S", columns, rows)])]))).worksheet_range("S").expect("the sheet");
    assert_eq!(values.get_value((4, 1)), Some(&Data::String("NOTICE".to_owned())));
    assert_eq!(values.get_value((4, 2)), None);
}

#[test]
fn the_same_document_gives_the_same_bytes() {
    assert!(write(&specimen::document()) == write(&specimen::document()));
    let undated = || Document { meta: Meta { date: None, ..specimen::meta() }, ..specimen::document() };
    assert!(write(&undated()) == write(&undated()));
}

#[test]
fn many_rows_are_written() {
    let columns = vec![column("a", "A", None, ColumnKind::Name), column("v", "V", Some(Unit::Volt), ColumnKind::Number)];
    let rows = (0..30_000).map(|n| row(vec![words(&format!("run {n}")), Cell::Number(Number::new(f64::from(n), 1))])).collect();
    let values = open(&write(&document_of(vec![sheet("Many", vec![table("many", "Many", columns, rows)])])))
        .worksheet_range("Many")
        .expect("the sheet");
    assert_eq!(values.get_value((30_001, 1)), Some(&Data::Float(29_999.0)));
}
