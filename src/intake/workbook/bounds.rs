//! How much of a stranger's file is read, so that any file at all costs at most a few hundred megabytes and a few seconds.
//!
//! No figure a file states about itself (a dimension, a count, a repetition) makes room for anything: room is taken for what was
//! really read, and each of these bounds counts what was really read.

use crate::intake::Refusal;

/// Most bytes of an input.
pub const MOST_BYTES: usize = 48 << 20;
/// Most parts in a zip package; a large workbook with a picture on each of 200 sheets has about 1000.
pub const MOST_PARTS: usize = 10_000;
/// Most bytes of all parts that are read of a package, inflated.
pub const MOST_INFLATED: u64 = 640 << 20;
/// Most steps through all parts that are read: tags, attributes and runs of text of XML, records of binary parts. The largest workbook
/// within the other bounds takes some 20 million.
pub const MOST_STEPS: u32 = 50_000_000;
/// Most bytes of one XML tag or run of text, and of one record of a binary part; and of the text of
/// one cell. Spreadsheets allow some 32,000 characters in a cell.
pub const MOST_TOKEN: usize = 1 << 20;
/// Most bytes of a name: of a sheet, a style, a part.
pub const MOST_NAME: usize = 4096;
/// Deepest nesting of XML elements. Field workbooks have about 12.
pub const DEEPEST: usize = 200;
/// Most sheets.
pub const MOST_SHEETS: usize = 1_000;
/// Most cells that hold something, on all sheets: 100,000 readings with 20 columns each.
pub const MOST_CELLS: usize = 2_000_000;
/// Most bytes of text in all cells.
pub const MOST_TEXT: usize = 64 << 20;
/// Most bytes of the table of shared texts.
pub const MOST_SHARED: usize = 48 << 20;
/// Most bytes of what is kept of the binary parts of a package to be read as cells.
pub const MOST_KEPT: usize = 64 << 20;
/// Most merged areas, on all sheets.
pub const MOST_MERGED: usize = 20_000;
/// Most relations of a part, and most styles that hide a sheet.
pub const MOST_NAMED: usize = 4_000;
/// Most cell formats, number formats, hidden stretches of rows and the like.
pub const MOST_ENTRIES: usize = 1 << 20;
/// Rows of the largest sheet any of the formats can hold.
pub const ROWS: u32 = 1 << 20;
/// Columns of the largest sheet.
pub const COLUMNS: u32 = 1 << 14;

/// What a workbook may still hold.
#[derive(Debug)]
pub struct Budget {
    cells: usize,
    text: usize,
    merged: usize,
}

impl Budget {
    /// Nothing read yet.
    pub fn new() -> Self {
        Self { cells: MOST_CELLS, text: MOST_TEXT, merged: MOST_MERGED }
    }

    /// Takes one cell with so many bytes of text.
    pub fn cell(&mut self, text: usize) -> Result<(), Refusal> {
        self.cells = self.cells.checked_sub(1).ok_or_else(|| Refusal::TooLarge(format!("it holds more than {MOST_CELLS} cells")))?;
        self.text(text)
    }

    /// Takes so many bytes of text that are kept.
    pub fn text(&mut self, text: usize) -> Result<(), Refusal> {
        self.text = self.text.checked_sub(text).ok_or_else(|| megabytes("its cells hold more than", MOST_TEXT, "of text"))?;
        Ok(())
    }

    /// Takes one merged area.
    pub fn merged(&mut self) -> Result<(), Refusal> {
        let left = self.merged.checked_sub(1);
        self.merged = left.ok_or_else(|| Refusal::TooLarge(format!("it holds more than {MOST_MERGED} merged areas")))?;
        Ok(())
    }
}

/// Refuses more than a number of things.
pub fn at_most(number: usize, most: usize, things: &str) -> Result<(), Refusal> {
    if number > most { Err(Refusal::TooLarge(format!("it holds more than {most} {things}"))) } else { Ok(()) }
}

/// Adds to the text of a cell.
pub fn add(text: &mut String, piece: &str) -> Result<(), Refusal> {
    if text.len() + piece.len() > MOST_TOKEN {
        return Err(megabytes("a cell holds more than", MOST_TOKEN, "of text"));
    }
    text.push_str(piece);
    Ok(())
}

/// A refusal that names a bound in megabytes.
pub fn megabytes(before: &str, most: usize, after: &str) -> Refusal {
    Refusal::TooLarge(format!("{before} {} MB {after}", most >> 20).trim_end().to_owned())
}
