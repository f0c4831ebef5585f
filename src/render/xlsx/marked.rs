//! A copy of a workbook's data with its problem cells coloured and commented, and a first sheet that lists them.

use super::name::Names;
use super::page::{Page, Part};
use super::style::{Styles, color};
use super::{XlsxError, cell, properties, sheet, width};
use crate::render::text::{not_finite, visible};
use crate::report::document::{Cell, Column, ColumnKind, Meta, Row, Sheet, Table};
use rust_xlsxwriter::utility::{quote_sheet_name, row_col_to_cell};
use rust_xlsxwriter::{Format, FormatBorder, FormatUnderline, Note, Url, Workbook, Worksheet};
use std::collections::BTreeMap;

/// First row of the list's entries: below its title and its headings.
const FIRST: u32 = 2;
/// Column of the list that says how much a problem costs, and the one that names its cell.
const SEVERITY: u16 = 0;
const ADDRESS: u16 = 2;
/// Hyperlinks a worksheet may hold (the limit of the most used spreadsheet program).
const MOST_LINKS: usize = 65_530;
/// Longest comment, in UTF-16 units; more is not read in a balloon.
const LONGEST_NOTE: usize = 2_000;
/// Cells that get a comment: each takes some 15 KB while the file is made. Further ones are coloured, and the list says all of them.
const MOST_NOTES: usize = 5_000;
/// The days that are dates: up to the end of 9999. Others are shown as the numbers they are.
const DATES: std::ops::Range<f64> = 0.0..2_958_466.0;

/// A workbook to be marked.
#[derive(Clone, Debug)]
pub struct Marked<'a> {
    /// Title, author, paper and running lines; the date dates the file.
    pub meta: &'a Meta,
    /// The words of the list.
    pub words: &'a MarkedWords,
    /// The workbook's sheets, in its order.
    pub sheets: &'a [MarkedSheet],
    /// Its problems, in the order they are to be listed.
    pub problems: &'a [MarkedProblem],
}

/// The words of the list of problems.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct MarkedWords {
    /// Its name: `Problems`.
    pub title: String,
    /// Headings: severity, sheet, cell, what stands there, what was expected.
    pub headings: [String; 5],
    /// Said where there are none.
    pub none: String,
}

/// A sheet's data.
#[derive(Clone, Debug, PartialEq)]
pub struct MarkedSheet {
    /// Its name.
    pub name: String,
    /// Cells by zero-based row and column.
    pub cells: Vec<(u32, u32, MarkedValue)>,
}

/// What stands in a cell.
#[derive(Clone, Debug, PartialEq)]
pub enum MarkedValue {
    /// Text, an error value or a formula as it is written: always text in the copy.
    Text(String),
    /// A number.
    Number(f64),
    /// Days of the 1900 date system.
    DateTime(f64),
    /// True or false.
    Logical(bool),
}

/// One problem.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct MarkedProblem {
    /// Whether the value was left out; otherwise it was used with a remark.
    pub left_out: bool,
    /// The word for that: `error`, `warning`.
    pub severity: String,
    /// Its sheet by name; `None` for the workbook as a whole.
    pub sheet: Option<String>,
    /// Its zero-based row and column, where it has a cell.
    pub cell: Option<(u32, u32)>,
    /// What stands there.
    pub found: String,
    /// What was expected, and what would mend it.
    pub message: String,
}

/// The marked copy as the bytes of an XLSX file: the same input gives the same bytes. The list's addresses lead to their cells.
///
/// # Errors
/// A cell lies beyond the rows or columns of a worksheet.
pub fn marked(input: &Marked) -> Result<Vec<u8>, XlsxError> {
    let styles = Styles::new(input.meta.accent);
    let mut names = Names::default();
    // The copies keep their names where the list's would be the same.
    let copies: Vec<String> = input.sheets.iter().map(|s| names.unique(&s.name)).collect();
    let mut workbook = Workbook::new();
    workbook.set_properties(&properties(input.meta));
    list(workbook.add_worksheet().set_name(names.unique(&input.words.title))?, input, &copies, &styles)?;
    let marks = marks(input.problems);
    let author = visible(&input.meta.producer);
    let mut notes = MOST_NOTES;
    for (copied, name) in input.sheets.iter().zip(&copies) {
        let worksheet = workbook.add_worksheet().set_name(name)?.set_default_note_author(author.as_ref());
        copy(worksheet, copied, marks.get(copied.name.as_str()).unwrap_or(&Marks::new()), &mut notes)?;
    }
    Ok(workbook.save_to_buffer()?)
}

/// The list of problems: a table, its severities filled as the cells are, its addresses linked.
fn list(worksheet: &mut Worksheet, input: &Marked, copies: &[String], styles: &Styles) -> Result<(), XlsxError> {
    let table = table(input);
    let listed = Sheet { name: worksheet.name(), facts: Vec::new(), tables: Vec::new(), chart: None };
    let part = Part { table: &table, rows: 0..table.rows.len() };
    sheet::write(worksheet, &Page { sheet: &listed, first: true, parts: vec![part] }, input.meta, styles)?;
    let targets: BTreeMap<&str, &String> = input.sheets.iter().map(|s| s.name.as_str()).zip(copies).collect();
    let link = styles.text.clone().set_font_color(color(styles.accent)).set_underline(FormatUnderline::Single);
    let mut links = 0;
    for (row, problem) in (FIRST..).zip(input.problems) {
        cell::write(worksheet, row, SEVERITY, &problem.severity, &styles.text.merge(&fill(problem.left_out)))?;
        let target = problem.sheet.as_deref().and_then(|s| targets.get(s)).zip(problem.cell.and_then(address));
        if let Some((name, at)) = target.filter(|_| links < MOST_LINKS) {
            let url = Url::new(format!("internal:{}!{at}", quote_sheet_name(name))).set_text(at);
            worksheet.write_url_with_format(row, ADDRESS, url, &link)?;
            links += 1;
        }
    }
    Ok(())
}

fn table(input: &Marked) -> Table {
    let kinds = [ColumnKind::Name, ColumnKind::Name, ColumnKind::Name, ColumnKind::Text, ColumnKind::Text];
    let column = |(heading, kind): (&String, _)| Column { key: String::new(), heading: heading.clone(), unit: None, kind };
    let row = |problem: &MarkedProblem| {
        let sheet = problem.sheet.clone().unwrap_or_default();
        let at = problem.cell.and_then(address).unwrap_or_default();
        let cells = [problem.severity.clone(), sheet, at, problem.found.clone(), problem.message.clone()];
        Row { cells: cells.map(Cell::Text).to_vec(), group: false }
    };
    Table {
        name: String::new(),
        caption: String::new(),
        columns: input.words.headings.iter().zip(kinds).map(column).collect(),
        rows: input.problems.iter().map(row).collect(),
        when_empty: input.words.none.clone(),
    }
}

/// The problems of a sheet by cell.
type Marks<'a> = BTreeMap<(u32, u32), Vec<&'a MarkedProblem>>;

/// The problems that have a cell, by sheet.
fn marks(problems: &[MarkedProblem]) -> BTreeMap<&str, Marks<'_>> {
    let mut marks: BTreeMap<&str, Marks> = BTreeMap::new();
    for problem in problems {
        if let (Some(sheet), Some(at)) = (&problem.sheet, problem.cell) {
            marks.entry(sheet).or_default().entry(at).or_default().push(problem);
        }
    }
    marks
}

/// A sheet's data; a cell with problems is filled, framed and commented, an empty one too.
fn copy(worksheet: &mut Worksheet, copied: &MarkedSheet, marks: &Marks, notes: &mut usize) -> Result<(), XlsxError> {
    let format = |at| marks.get(&at).map_or_else(Format::new, |p| fill(p.iter().any(|p| p.left_out)));
    for (&(row, col), problems) in marks {
        let col = narrow(col)?;
        worksheet.write_blank(row, col, &format((row, u32::from(col))))?;
        if let Some(left) = notes.checked_sub(1) {
            *notes = left;
            worksheet.insert_note(row, col, &note(problems))?;
        }
    }
    let mut widths: BTreeMap<u16, usize> = BTreeMap::new();
    for (row, col, value) in &copied.cells {
        let at = narrow(*col)?;
        let shown = write(worksheet, (*row, at), value, &format((*row, *col)))?;
        let widest = widths.entry(at).or_default();
        *widest = (*widest).max(shown);
    }
    for (col, shown) in widths {
        worksheet.set_column_width(col, width::characters(shown.clamp(6, 44)))?;
    }
    Ok(())
}

/// Writes a value and tells its width.
fn write(worksheet: &mut Worksheet, (row, col): (u32, u16), value: &MarkedValue, format: &Format) -> Result<usize, XlsxError> {
    let days = match value {
        MarkedValue::DateTime(days) if DATES.contains(days) => *days,
        MarkedValue::Number(n) | MarkedValue::DateTime(n) if !n.is_finite() => {
            cell::write(worksheet, row, col, not_finite(*n), format)?;
            return Ok(1);
        }
        MarkedValue::Text(text) => {
            cell::write(worksheet, row, col, text, format)?;
            return Ok(width::widest_line(text));
        }
        MarkedValue::Number(n) | MarkedValue::DateTime(n) => {
            worksheet.write_number_with_format(row, col, *n, format)?;
            return Ok(n.to_string().len().min(12));
        }
        MarkedValue::Logical(truth) => {
            worksheet.write_boolean_with_format(row, col, *truth, format)?;
            return Ok(5);
        }
    };
    let pattern = match (days >= 1.0, days.fract() > 0.0) {
        (true, true) => "yyyy-mm-dd hh:mm",
        (true, false) => "yyyy-mm-dd",
        (false, _) => "hh:mm",
    };
    worksheet.write_number_with_format(row, col, days, &format.clone().set_num_format(pattern))?;
    Ok(pattern.len())
}

/// The look of a problem cell: darker, framed and bold where the value was left out.
fn fill(left_out: bool) -> Format {
    let (fill, frame) = if left_out { (0xF4C7C0, FormatBorder::Medium) } else { (0xFBEFC3, FormatBorder::Thin) };
    let format = Format::new().set_background_color(fill).set_border(frame).set_border_color(0x7A1F1F);
    if left_out { format.set_bold() } else { format }
}

/// All that is wrong with a cell, in a balloon as high as it needs.
fn note(problems: &[&MarkedProblem]) -> Note {
    let said: Vec<String> = problems.iter().map(|p| format!("{}: {}", p.severity, p.message)).collect();
    let text = cell::cut(&visible(&said.join("\n\n")), LONGEST_NOTE);
    let lines = width::lines(&text, 38.0).min(30);
    Note::new(text).add_author_prefix(false).set_width(280).set_height(24 + 17 * lines)
}

fn address((row, col): (u32, u32)) -> Option<String> {
    narrow(col).ok().map(|col| row_col_to_cell(row, col))
}

fn narrow(col: u32) -> Result<u16, rust_xlsxwriter::XlsxError> {
    u16::try_from(col).map_err(|_| rust_xlsxwriter::XlsxError::RowColumnLimitError)
}
