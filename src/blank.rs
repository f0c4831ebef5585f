//! An empty field workbook for a system: the sheets of the contract with drop-downs, input limits that say what is expected, live
//! leg-sum and deviation cells, and headers that can't be typed over.
//!
//! What it writes, filled in, reads back without a remark; a test holds this module and intake together.

mod columns;
mod sheet;

use crate::visit::System;
use crate::wording::Language;
use rust_xlsxwriter::{DocProperties, ExcelDateTime, Workbook};

pub use rust_xlsxwriter::XlsxError as Error;

/// How the workbook is to be.
#[derive(Clone, Copy)]
pub struct Options<'a> {
    /// The system it is for; decides the columns of legs.
    pub system: &'a System,
    /// The words of messages and of the how-to sheet. Headings are those intake reads in any language.
    pub language: &'a Language,
    /// Rows to fill in on each sheet.
    pub rows: u32,
}

/// Writes the workbook.
///
/// # Errors
/// The spreadsheet library refused; it never does for the systems that exist.
pub fn write(options: &Options) -> Result<Vec<u8>, Error> {
    let mut workbook = Workbook::new();
    // A fixed date: the same workbook each time.
    let made = ExcelDateTime::from_ymd(2026, 1, 1)?;
    workbook.set_properties(&DocProperties::new().set_title(options.language.text("blank.title")).set_creation_datetime(&made));
    sheet::how_to(workbook.add_worksheet(), options)?;
    sheet::visit(workbook.add_worksheet(), options)?;
    for table in columns::tables(options.system) {
        sheet::table(workbook.add_worksheet(), &table, options)?;
    }
    workbook.save_to_buffer()
}
