//! The document's sheets as a workbook.
//!
//! Numbers stay numbers with a format, so that they can be calculated with; what the report computed from other columns of the
//! same row is a live formula that carries its computed value. Text is only ever text, whatever it begins with.

mod cell;
mod chart;
mod formula;
mod grid;
mod marked;
mod name;
mod page;
mod sheet;
mod style;
mod width;

pub use marked::{Marked, MarkedProblem, MarkedSheet, MarkedValue, MarkedWords, marked};

use super::text::visible;
use crate::report::document::{Document, Meta, Sheet};
use rust_xlsxwriter::{DocProperties, ExcelDateTime, Workbook};
use std::slice;
use style::Styles;

/// Rows of a worksheet (ECMA-376, as every spreadsheet program holds it).
const MOST_ROWS: usize = 1_048_576;

/// Why a workbook could not be written.
#[derive(Debug, thiserror::Error)]
#[error("the workbook can't be written: {0}")]
pub struct XlsxError(#[from] rust_xlsxwriter::XlsxError);

/// The document's sheets as the bytes of an XLSX file: the same document gives the same bytes.
///
/// A sheet with more rows than a worksheet holds goes on in a second one.
///
/// # Errors
/// The document does not fit the file format: more facts above a table than a worksheet has rows.
pub fn write(document: &Document) -> Result<Vec<u8>, XlsxError> {
    let meta = &document.meta;
    let styles = Styles::new(meta.accent);
    let mut workbook = Workbook::new();
    workbook.set_properties(&properties(meta));
    let mut names = name::Names::default();
    let title_alone = Sheet { name: meta.title.clone(), facts: Vec::new(), tables: Vec::new(), chart: None };
    let sheets = if document.sheets.is_empty() { slice::from_ref(&title_alone) } else { &document.sheets };
    for page in sheets.iter().flat_map(|s| page::pages(s, MOST_ROWS)) {
        let worksheet = workbook.add_worksheet();
        worksheet.set_name(names.unique(&page.sheet.name))?;
        sheet::write(worksheet, &page, meta, &styles)?;
    }
    Ok(workbook.save_to_buffer()?)
}

/// Title, author, subject and date. Without a date of issue the file is dated as its archive members are, never by the clock.
fn properties(meta: &Meta) -> DocProperties {
    let undated = || ExcelDateTime::from_ymd(1980, 1, 1);
    let properties = DocProperties::new()
        .set_title(visible(&meta.title))
        .set_author(visible(&meta.author))
        .set_subject(visible(&meta.subject))
        .set_comment(visible(&format!("{} · SHA-256 {}", meta.producer, meta.input_sha256)));
    match meta.date.as_deref().map_or_else(undated, |d| ExcelDateTime::parse_from_str(d).or_else(|_| undated())) {
        Ok(date) => properties.set_creation_datetime(&date),
        Err(_) => properties,
    }
}
