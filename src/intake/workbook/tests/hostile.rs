//! Files made to break a reader: each is refused by the bound it exceeds or for what is broken, or costs what it holds.

use super::package::{names, ods, xlsx, zip, zip_repeated};
use super::{book, made, refusal, shown};
use crate::intake::Content;
use crate::intake::workbook::archive::Archive;
use crate::intake::workbook::read;

fn sheet(cells: &str) -> String {
    format!("<worksheet><sheetData>{cells}</sheetData></worksheet>")
}

#[test]
fn a_false_dimension_makes_no_room() {
    let cells = r#"<row r="1"><c r="A1"><v>1</v></c></row><row r="1048576"><c r="XFD1048576" t="s"><v>0</v></c></row>"#;
    let bytes = xlsx(&format!(r#"<worksheet><dimension ref="A1:XFD1048576"/><sheetData>{cells}</sheetData></worksheet>"#), &[]);
    assert_eq!(shown(&book(&bytes).sheets[0]), ["A1 1", r#"XFD1048576 "L1-N""#]);
}

#[test]
fn cells_that_can_t_be_are_damage() {
    for (cells, says) in [
        (r#"<row r="1"><c r="XFE1"><v>1</v></c></row>"#, "outside every sheet (XFE1)"),
        (r#"<row r="1"><c r="A1048577"><v>1</v></c></row>"#, "outside every sheet (A1048577)"),
        (r#"<row r="1"><c r="A4294967296"><v>1</v></c></row>"#, "a cell named A4294967296"),
        (r#"<row r="0"><c><v>1</v></c></row>"#, "a row numbered 0"),
        (r#"<row r="1"><c r="A1" t="s"><v>1</v></c></row>"#, "shared text 1, which is not there"),
        (r#"<row r="1"><c r="A1" t="s"><v>-1</v></c></row>"#, "shared text -1"),
        (r#"<row r="1"><c r="A1"><v>1</v></c><c r="A1"><v>2</v></c></row>"#, "A1 of sheet Readings stands there twice"),
        (r#"<row r="1"><c r="A1"><v>1</v></c>"#, "xl/worksheets/sheet1.xml"),
        (r#"<row r="1"><c r="A1"><v>&other;</v></c></row>"#, "&other;"),
    ] {
        let said = refusal(&xlsx(&sheet(cells), &[]));
        assert!(said.contains(says), "{said}");
    }
}

#[test]
fn numbers_that_are_none_stay_as_they_stand() {
    let cells = r#"<row><c><v>1e999</v></c><c><v>NaN</v></c><c><v>12o.1</v></c><c t="d"><v>2026-02-30</v></c><c t="b"><v>1</v></c></row>"#;
    let expected = [r#"A1 "1e999""#, r#"B1 "NaN""#, r#"C1 "12o.1""#, r#"D1 "2026-02-30""#, "E1 true"];
    assert_eq!(shown(&book(&xlsx(&sheet(cells), &[])).sheets[0]), expected);
}

#[test]
fn what_packs_small_and_unpacks_large_is_refused() {
    // Parts are read as streams, so that this costs time alone.
    let filler = format!("<!--{}-->", "x".repeat(1000)).repeat(1000);
    let said = refusal(&zip_repeated(&[("xl/workbook.xml", filler.as_bytes(), 700)]));
    assert!(said.contains("unpacks to more than 640 MB"), "{said}");
    let said = refusal(&xlsx(&" ".repeat(3 << 20), &[]));
    assert!(said.contains("a single piece of more than 1 MB"), "{said}");
}

#[test]
fn texts_without_end_are_refused() {
    let long = "L1-N ".repeat(6000);
    let strings = format!("<sst><si><t>{long}</t></si></sst>");
    let cells = format!("<row>{}</row>", r#"<c t="s"><v>0</v></c>"#.repeat(3000));
    let said = refusal(&xlsx(&sheet(&cells), &[("xl/sharedStrings.xml", &strings)]));
    assert!(said.contains("more than 64 MB of text"), "{said}");
    let many = format!("<sst>{}</sst>", "<si/>".repeat(2_000_001));
    let said = refusal(&xlsx(&sheet(""), &[("xl/sharedStrings.xml", &many)]));
    assert!(said.contains("more than 2000000 shared texts"), "{said}");
}

#[test]
fn entities_and_document_types_are_refused() {
    let bomb = r#"<!DOCTYPE a [<!ENTITY b "cccccccc"><!ENTITY d "&b;&b;&b;&b;">]><sst><si><t>&d;</t></si></sst>"#;
    let said = refusal(&xlsx(&sheet(""), &[("xl/sharedStrings.xml", bomb)]));
    assert!(said.contains("declares a document type"), "{said}");
    let attribute = r#"<workbook><sheets><sheet name="&d;" r:id="rId1"/></sheets></workbook>"#;
    let said = refusal(&xlsx(&sheet(""), &[("xl/workbook.xml", attribute)]));
    assert!(said.contains("&d;"), "{said}");
    let long = format!("<worksheet>&{};</worksheet>", "n".repeat(10_000));
    assert!(refusal(&xlsx(&long, &[])).len() < 300);
}

#[test]
fn deep_nesting_is_refused() {
    let said = refusal(&xlsx(&format!("<worksheet>{}", "<a>".repeat(100_000)), &[]));
    assert!(said.contains("more than 200 deep"), "{said}");
    let said = refusal(&ods(&"<table:table-row-group>".repeat(100_000)));
    assert!(said.contains("more than 200 deep"), "{said}");
}

#[test]
fn repetitions_cost_what_they_hold() {
    let empty = r#"<table:table-column table:visibility="collapse" table:number-columns-repeated="4294967295"/>
        <table:table-row table:number-rows-repeated="4294967295"><table:table-cell table:number-columns-repeated="4294967295"/></table:table-row>"#;
    assert!(book(&ods(&empty.repeat(1000))).sheets[0].cells.is_empty());
    let cell = |rows: u32, columns: u32| {
        format!(
            r#"<table:table-row table:number-rows-repeated="{rows}"><table:table-cell office:value-type="float" office:value="1"
               table:number-columns-repeated="{columns}"/></table:table-row>"#
        )
    };
    assert_eq!(book(&ods(&cell(1000, 100))).sheets[0].cells.len(), 100_000);
    for (rows, columns, says) in [
        (1_000_000, 3, "more than 2000000 cells"),
        (2, 1_000_000, "outside every sheet"),
        (u32::MAX, 1, "outside every sheet"),
        (1, u32::MAX, "outside every sheet"),
    ] {
        let said = refusal(&ods(&cell(rows, columns)));
        assert!(said.contains(says), "{said}");
    }
    let blanks =
        r#"<table:table-row><table:table-cell><text:p><text:s text:c="4000000000"/></text:p></table:table-cell></table:table-row>"#;
    let said = refusal(&ods(blanks));
    assert!(said.contains("a cell holds more than 1 MB of text"), "{said}");
}

const DOCUMENT: &[u8] = br#"<Relationships><Relationship Id="r" Type="a/officeDocument" Target="word/document.xml"/></Relationships>"#;

#[test]
fn what_is_no_workbook_is_named() {
    for (bytes, says) in [
        (b"".to_vec(), "the file is empty"),
        (b"%PDF-1.7 ...".to_vec(), "a PDF document"),
        (zip(&[("notes.txt", b"119.6")]), "a zip archive without a workbook in it"),
        (zip(&[("_rels/.rels", DOCUMENT), ("word/document.xml", b"<w:document/>")]), "a word processor document"),
        (zip(&[("mimetype", b"application/vnd.oasis.opendocument.text")]), "application/vnd.oasis.opendocument.text"),
        (vec![b' '; 49 << 20], "more than 48 MB"),
    ] {
        let said = refusal(&bytes);
        assert!(said.contains(says), "{said}");
    }
    let folder = [("Readings.csv".to_owned(), made!("kinds.xlsx").to_vec())];
    let said = read(&Content::Folder(&folder)).map(|_| ()).unwrap_err().to_string();
    assert!(said.contains("Readings.csv is not text"), "{said}");
}

#[test]
fn a_package_cut_short_is_damage() {
    let whole = made!("kinds.xlsx");
    for length in (4..whole.len()).step_by(97) {
        let said = refusal(&whole[..length]);
        assert!(said.contains("its end is missing"), "{length}: {said}");
    }
}

#[test]
fn a_package_with_a_false_directory_is_damage() {
    let honest = xlsx(&sheet(r#"<row><c><v>1</v></c></row>"#), &[]);
    let directory = honest.windows(4).position(|w| w == b"PK\x01\x02").unwrap();
    let lie = |at: usize, value: u8| {
        let mut bytes = honest.clone();
        bytes[directory + at] = value;
        refusal(&bytes)
    };
    for (at, value, says) in [
        (8, 1, "protected by a password"),
        (10, 99, "compressed by method 99"),
        (16, 0xff, "its checksum does not match"),
        (24, 0xff, "its length is not the one stated"),
        (45, 0xff, "not where its directory says"),
        (28, 0xff, "its directory is broken"),
    ] {
        let said = lie(at, value);
        assert!(said.contains(says), "{said}");
    }
}

#[test]
fn an_ods_that_lists_encrypted_parts_is_protected() {
    let manifest = b"<manifest:manifest><manifest:file-entry><manifest:encryption-data/></manifest:file-entry></manifest:manifest>";
    let media = b"application/vnd.oasis.opendocument.spreadsheet";
    let bytes = zip(&[("mimetype", media), ("content.xml", b"\xff\xfe..."), ("META-INF/manifest.xml", manifest)]);
    assert!(refusal(&bytes).contains("protected by a password"));
}

/// A linear congruential generator (Knuth, MMIX), so that every run tries the same.
struct Random(u64);

impl Random {
    fn below(&mut self, n: usize) -> usize {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 33) as usize % n
    }
}

/// Flips, overwrites, cuts out or doubles a few stretches.
fn spoil(bytes: &[u8], random: &mut Random) -> Vec<u8> {
    let mut spoiled = bytes.to_vec();
    for _ in 0..=random.below(4) {
        if spoiled.is_empty() {
            break;
        }
        let at = random.below(spoiled.len());
        let end = (at + 1 + random.below(16)).min(spoiled.len());
        match random.below(5) {
            0 => spoiled[at] ^= 1 << random.below(8),
            1 => spoiled[at..end].fill([0, 0xff, b'<', b'9', 0x7f][random.below(5)]),
            2 => drop(spoiled.drain(at..end)),
            3 => {
                let copy = spoiled[at..end].to_vec();
                spoiled.splice(at..at, copy);
            }
            _ => spoiled[at] = u8::try_from(random.below(256)).unwrap_or(0),
        }
    }
    spoiled
}

/// Whatever is read of a spoiled small workbook is small.
fn survives(bytes: &[u8]) {
    if let Ok(output) = read(&Content::File(bytes)) {
        let cells: usize = output.value.sheets.iter().map(|s| s.cells.len()).sum();
        assert!(cells <= 2_000_000);
        assert!(output.value.sheets.iter().all(|s| s.cells.is_sorted_by(|a, b| (a.row, a.col) < (b.row, b.col))));
    }
}

#[test]
fn spoiled_files_never_panic() {
    let mut random = Random(1904);
    for bytes in
        [made!("kinds.xlsx"), made!("kinds.ods"), made!("kinds.xls"), made!("from-1904.xls"), made!("plain.xlsb"), made!("locked.xlsx")]
    {
        for _ in 0..400 {
            survives(&spoil(bytes, &mut random));
        }
    }
}

/// Most spoiled packages fail by a checksum alone; so the parts are spoiled and packed again.
#[test]
fn spoiled_parts_never_panic() {
    let mut random = Random(1900);
    for bytes in [made!("kinds.xlsx"), made!("kinds.xlsm"), made!("hand.ods"), made!("kinds.ods"), made!("plain.xlsb")] {
        let archive = Archive::open(bytes).unwrap();
        let parts: Vec<(String, Vec<u8>)> =
            names(bytes).into_iter().map(|name| (name.clone(), archive.whole(&name, 1 << 20).unwrap().unwrap())).collect();
        for _ in 0..400 {
            let victim = random.below(parts.len());
            let spoiled = spoil(&parts[victim].1, &mut random);
            let parts =
                parts.iter().enumerate().map(|(i, (name, bytes))| (name.as_str(), if i == victim { &spoiled } else { bytes }.as_slice()));
            survives(&zip(&parts.collect::<Vec<_>>()));
        }
    }
}

/// Directory entries with their lengths in eight bytes, and bytes after the end, as some writers and mail systems leave them.
#[test]
fn honest_oddities_of_packages_are_read() {
    let mut bytes = xlsx(&sheet("<row><c><v>1</v></c></row>"), &[]);
    let last = bytes.windows(4).rposition(|w| w == b"PK\x01\x02").unwrap();
    let end = bytes.windows(4).rposition(|w| w == b"PK\x05\x06").unwrap();
    let [packed, size] = [20, 24].map(|at| bytes[last + at..last + at + 4].to_vec());
    bytes[last + 20..last + 28].fill(0xff);
    bytes[last + 30] = 20;
    bytes.splice(end..end, [&[1, 0, 16, 0], &size[..], &[0; 4], &packed[..], &[0; 4]].concat());
    bytes.extend([0; 100]);
    assert_eq!(shown(&book(&bytes).sheets[0]), ["A1 1"]);
}
