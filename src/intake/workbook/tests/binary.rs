//! Workbooks in binary parts, written record by record: every form a cell can have (MS-XLSB 2.1.7.62), and counts that lie.

use super::package::zip;
use super::{book, refusal, shown};

/// A record: kind and length of seven bits a byte, data.
fn record(kind: u32, data: &[u8]) -> Vec<u8> {
    let mut bytes = Vec::new();
    for mut number in [kind, u32::try_from(data.len()).unwrap()] {
        while number > 0x7f {
            bytes.push(u8::try_from(number & 0x7f).unwrap() | 0x80);
            number >>= 7;
        }
        bytes.push(u8::try_from(number).unwrap());
    }
    bytes.extend(data);
    bytes
}

/// A text after its count.
fn text(text: &str) -> Vec<u8> {
    let units: Vec<u16> = text.encode_utf16().collect();
    let count = u32::try_from(units.len()).unwrap().to_le_bytes();
    count.into_iter().chain(units.into_iter().flat_map(u16::to_le_bytes)).collect()
}

/// A row's record, shown or hidden.
fn row(number: u32, hidden: bool) -> Vec<u8> {
    record(0, &[&number.to_le_bytes(), &[0; 7][..], &[u8::from(hidden) << 4]].concat())
}

/// A cell that names its column.
fn cell(kind: u32, col: u32, format: u32, value: &[u8]) -> Vec<u8> {
    record(kind, &[&col.to_le_bytes(), &format.to_le_bytes(), value].concat())
}

/// A cell in the column after the last.
fn next(kind: u32, format: u32, value: &[u8]) -> Vec<u8> {
    record(kind, &[&format.to_le_bytes(), value].concat())
}

/// Formats 0 to 4: a number, a date, elapsed time, elapsed time and a number by codes of the workbook's own. The count is false.
fn styles() -> Vec<u8> {
    let code = |id: u16, code: &str| record(44, &[&id.to_le_bytes(), text(code).as_slice()].concat());
    let format = |id: u16| record(47, &[&[0, 0], &id.to_le_bytes()[..], &[0; 12]].concat());
    let cells: Vec<u8> = [0, 14, 46, 164, 165].into_iter().flat_map(format).collect();
    // Fonts and the formats of named styles stand before those of cells.
    let before = [record(611, &[1, 0, 0, 0]), record(43, &[0x69, 2, 0x67, 2]), record(626, &[]), format(14), record(627, &[])].concat();
    [record(278, &[]), code(164, "[h]:mm"), code(165, "0.0\" volts m\""), before, record(617, &[0xff; 4]), cells, record(618, &[])].concat()
}

/// Shared texts 0 and 1, the second with runs behind it. The counts are false.
fn texts() -> Vec<u8> {
    let rich = [&[1], text("L1-N bold").as_slice(), &[1, 0, 0, 0, 0, 0, 2, 0]].concat();
    let plain = [&[0], text("5/7a").as_slice()].concat();
    [record(159, &[0xff; 8]), record(19, &plain), record(19, &rich), record(160, &[])].concat()
}

fn sheet(cells: &[Vec<u8>]) -> Vec<u8> {
    [record(129, &[]), record(145, &[]), cells.concat(), record(146, &[]), record(130, &[])].concat()
}

/// A workbook of one sheet, counted from 1904 or not.
fn xlsb(sheet: &[u8], from_1904: bool) -> Vec<u8> {
    let listed = [&[0; 8], text("a").as_slice(), &text("Readings")].concat();
    let main = [record(153, &[u8::from(from_1904), 0, 0, 0]), record(156, &listed), record(144, &[])].concat();
    zip(&[
        ("_rels/.rels", br#"<Relationships><Relationship Id="r" Type="a/officeDocument" Target="xl/workbook.bin"/></Relationships>"#),
        (
            "xl/_rels/workbook.bin.rels",
            br#"<Relationships><Relationship Id="a" Type="a/worksheet" Target="elsewhere/one.bin"/>
                <Relationship Id="b" Type="a/styles" Target="looks.bin"/>
                <Relationship Id="c" Type="a/sharedStrings" Target="words.bin"/></Relationships>"#,
        ),
        ("xl/workbook.bin", &main),
        ("xl/looks.bin", &styles()),
        ("xl/words.bin", &texts()),
        ("xl/elsewhere/one.bin", sheet),
    ])
}

/// 119.6 as a floating-point number, and 11.96 and 46279 packed into four bytes.
fn numbers() -> [Vec<u8>; 3] {
    [119.6f64.to_le_bytes().to_vec(), ((1196u32 << 2) | 3).to_le_bytes().to_vec(), ((46_279u32 << 2) | 2).to_le_bytes().to_vec()]
}

/// A workbook with every form of a cell.
pub fn every_form() -> Vec<u8> {
    let [long, hundredths, whole] = numbers();
    let formula = [0, 0, 3, 0, 0, 0, 0x1e, 1, 0];
    let cells = [
        row(0, false),
        cell(1, 0, 0, &[]),
        cell(2, 1, 4, &hundredths),
        cell(2, 2, 1, &whole),
        cell(3, 3, 0, &[0x2b]),
        cell(4, 4, 0, &[1]),
        cell(5, 5, 0, &long),
        cell(6, 6, 0, &text("below")),
        cell(7, 7, 0, &[0, 0, 0, 0]),
        row(1, true),
        cell(8, 1, 0, &[text("5/7a!").as_slice(), &formula].concat()),
        cell(9, 2, 2, &[1.5f64.to_le_bytes().as_slice(), &formula].concat()),
        cell(10, 3, 0, &[&[0], formula.as_slice()].concat()),
        cell(11, 4, 0, &[&[7], formula.as_slice()].concat()),
        cell(62, 5, 0, &[&[0], text("rich").as_slice()].concat()),
        row(2, false),
        next(13, 3, &1.5f64.to_bits().to_le_bytes()[4..]),
        next(12, 0, &[]),
        next(14, 0, &[0x99]),
        next(15, 0, &[0]),
        next(16, 4, &long),
        next(17, 0, &text("")),
        next(18, 0, &[1, 0, 0, 0]),
    ];
    xlsb(&sheet(&cells), false)
}

#[test]
fn every_form_of_a_cell() {
    let expected = [
        "B1 11.96",
        "C1 day 46279.0000",
        "D1 error #GETTING_DATA",
        "E1 true",
        "F1 119.6",
        r#"G1 "below""#,
        r#"H1 "5/7a""#,
        r#"B2 "5/7a!""#,
        "C2 day 1.5000",
        "D2 false",
        "E2 error #DIV/0!",
        r#"F2 "rich""#,
        "A3 day 1.5000",
        "C3 error #ERROR",
        "D3 false",
        "E3 119.6",
        r#"G3 "L1-N bold""#,
    ];
    let book = book(&every_form());
    assert_eq!(shown(&book.sheets[0]), expected);
    assert_eq!(book.sheets[0].hidden_rows, [1]);
}

#[test]
fn dates_of_binary_parts_counted_from_1904_are_the_same_dates() {
    let days = |days: u32| ((days << 2) | 2).to_le_bytes();
    let cells = [row(0, false), cell(2, 0, 1, &days(46_279 - 1462)), cell(2, 1, 2, &days(2)), cell(2, 2, 0, &days(100))];
    assert_eq!(shown(&book(&xlsb(&sheet(&cells), true)).sheets[0]), ["A1 day 46279.0000", "B1 day 2.0000", "C1 100"]);
}

/// Texts whose first bytes are those of a mark of UTF-16 or UTF-8.
#[test]
fn texts_that_begin_like_a_mark_are_texts() {
    let odd = ["\u{feff}L1", "\u{bbef}\u{c3bf}", "\u{fffe}L2"];
    let cells: Vec<Vec<u8>> = (0..).zip(odd).map(|(col, odd)| cell(6, col, 0, &text(odd))).collect();
    let expected: Vec<String> = ["A1", "B1", "C1"].iter().zip(odd).map(|(at, odd)| format!("{at} {odd:?}")).collect();
    assert_eq!(shown(&book(&xlsb(&sheet(&[row(0, false), cells.concat()]), false)).sheets[0]), expected);
}

#[test]
fn records_that_lie_are_damage() {
    let [long, ..] = numbers();
    for (cells, says) in [
        (vec![row(1 << 20, false), cell(5, 0, 0, &long)], "outside every sheet (A1048577)"),
        (vec![row(u32::MAX, false), cell(5, 0, 0, &long)], "outside every sheet"),
        (vec![cell(5, 1 << 14, 0, &long)], "outside every sheet (XFE1)"),
        (vec![cell(5, u32::MAX, 0, &long), next(16, 0, &long)], "outside every sheet"),
        (vec![cell(5, 0, 0, &long), cell(5, 0, 0, &long)], "A1 of sheet Readings stands there twice"),
        (vec![cell(7, 0, 0, &[2, 0, 0, 0])], "shared text 2, which is not there"),
        (vec![cell(7, 0, 0, &[0xff; 4])], "shared text 4294967295, which is not there"),
        (vec![cell(6, 0, 0, &[0xfe, 0xff, 0xff, 0x7f, b'L', 0])], "cut short"),
        (vec![cell(5, 0, 0, &long[..7])], "cut short"),
        (vec![cell(2, 0, 0, &[])], "cut short"),
        (vec![record(5, &[0; 7])], "cut short"),
        (vec![vec![5, 0xff, 0xff, 0xff, 0x7f]], "a record of more than 1 MB"),
        (vec![vec![5, 0x20, 0, 0]], "xl/elsewhere/one.bin"),
    ] {
        let said = refusal(&xlsb(&sheet(&cells), false));
        assert!(said.contains(says), "{said}");
    }
    assert!(shown(&book(&xlsb(&sheet(&[row(u32::MAX, false)]), false)).sheets[0]).is_empty(), "a row without cells");
    let format = cell(5, 0, 0x00ff_ffff, &long);
    assert_eq!(shown(&book(&xlsb(&sheet(&[format]), false)).sheets[0]), ["A1 119.6"], "a format that is not there");
}

#[test]
fn what_is_kept_of_binary_parts_is_bounded() {
    let long = cell(6, 0, 0, &text(&"L1-N ".repeat(6000)));
    let cells: Vec<Vec<u8>> = (0..1200).flat_map(|number| [row(number, false), long.clone()]).collect();
    let said = refusal(&xlsb(&sheet(&cells), false));
    assert!(said.contains("its cells and texts take more than 64 MB"), "{said}");
}
