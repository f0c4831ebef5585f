//! Intake: from the bytes of a field workbook to a [`Visit`], every value with its cell, every problem collected.
//!
//! Bytes become a grid (`workbook`, the only place that knows file formats), the grid's tables are found by their headers
//! (`header`, with the words of `synonyms.toml`), and each sheet's rows become values (`sheets`, one file a sheet).

mod cell;
mod grid;
mod header;
mod mapping;
mod sheets;
mod words;
mod workbook;

#[cfg(test)]
mod tests;

pub use grid::{Cell, Sheet, Value};
pub use mapping::{Mapping, MappingProblem};

use crate::diag::Output;
use crate::visit::Visit;
use crate::wording::Language;

/// An input: its name as given, and what it holds.
#[derive(Clone, Copy, Debug)]
pub struct Input<'a> {
    /// File name or path as the user gave it, for messages alone.
    pub name: &'a str,
    /// Its bytes.
    pub content: Content<'a>,
}

/// What an input holds.
#[derive(Clone, Copy, Debug)]
pub enum Content<'a> {
    /// A workbook file of any of the formats.
    File(&'a [u8]),
    /// A folder of csv files: file names and bytes.
    Folder(&'a [(String, Vec<u8>)]),
}

/// How to read.
#[derive(Clone, Copy)]
pub struct Options<'a> {
    /// Where photos come from.
    pub beside: &'a dyn Beside,
    /// The user's own words for sheets, columns and items, over the built-in ones.
    pub mapping: Option<&'a Mapping>,
}

/// Files that lie beside a workbook. Implemented by the command line; nothing else opens files.
pub trait Beside {
    /// The bytes of a file named in the workbook.
    ///
    /// # Errors
    /// The name points out of the folder, or there is no such file, or it can't be read.
    fn read(&self, name: &str) -> Result<Vec<u8>, BesideError>;
}

/// Why a file beside the workbook was not read.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum BesideError {
    /// An absolute path, `..`, a link or a device.
    #[error("the name points out of the workbook's folder")]
    Outside,
    /// No such file.
    #[error("there is no such file beside the workbook")]
    Missing,
    /// Too large or not readable.
    #[error("the file can't be read: {0}")]
    Unreadable(String),
}

/// Why an input could not be used at all: one clear sentence each.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum Refusal {
    /// No bytes.
    #[error("the file is empty")]
    Empty,
    /// Not one of the formats that are read.
    #[error("this is not a workbook that can be read ({0}); xlsx, xlsm, xls, xlsb, ods or a folder of csv files was expected")]
    NotAWorkbook(String),
    /// Protected by a password.
    #[error("the workbook is protected by a password; save a copy without one")]
    Encrypted,
    /// Broken inside.
    #[error("the workbook is damaged: {0}")]
    Damaged(String),
    /// Beyond a bound on size or number.
    #[error("the workbook is too large to be read safely: {0}")]
    TooLarge(String),
    /// No table of readings.
    #[error("there is no table of readings; a sheet with the columns Location and L1-N (or Location, Quantity, Value) was expected{0}")]
    NoReadings(String),
    /// A field workbook as it came, with nothing in it.
    #[error("the workbook is not filled in yet: it has no readings, no circuits and no tests; enter what was read on the sheet Readings")]
    NotFilledIn,
}

/// Reads an input.
///
/// # Errors
/// It could not be used at all; problems of single cells are in the output instead.
pub fn read(input: &Input, options: &Options) -> Result<Output<Visit>, Refusal> {
    let grid = workbook::read(&input.content)?;
    sheets::assemble(grid, options)
}

/// The sheets of an input as they stand, before any of it is understood.
///
/// # Errors
/// It could not be read at all.
pub fn sheets(input: &Input) -> Result<Vec<Sheet>, Refusal> {
    Ok(workbook::read(&input.content)?.value.sheets)
}

/// A first mapping for an input, as TOML: what is recognised with the words in force, and lines for what is not. As it is, it
/// changes nothing; it is for inputs without a table of readings, too.
///
/// # Errors
/// It could not be read at all.
pub fn first_mapping(input: &Input, language: &Language) -> Result<String, Refusal> {
    let grid = workbook::read(&input.content)?;
    Ok(sheets::draft(&grid.value, words::Words::built_in(), input.name, language))
}
