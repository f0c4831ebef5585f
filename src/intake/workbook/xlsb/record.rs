//! Records of binary parts: kind and length in a variable number of bytes, data (MS-XLSB 2.1.4).

use super::super::archive::{Archive, Part, damage};
use super::super::bounds::{MOST_TOKEN, megabytes};
use super::super::bytes::{Data, Short};
use crate::intake::Refusal;
use encoding_rs::UTF_16LE;
use std::io::{BufRead, BufReader, Read};

pub const ROW: u32 = 0;
pub const BLANK: u32 = 1;
pub const SMALL_NUMBER: u32 = 2;
pub const ERROR: u32 = 3;
pub const LOGICAL: u32 = 4;
pub const NUMBER: u32 = 5;
pub const TEXT: u32 = 6;
pub const SHARED_LABEL: u32 = 7;
pub const FORMULA_TEXT: u32 = 8;
pub const FORMULA_NUMBER: u32 = 9;
pub const FORMULA_LOGICAL: u32 = 10;
pub const FORMULA_ERROR: u32 = 11;
pub const SHORT_BLANK: u32 = 12;
pub const SHORT_SHARED_LABEL: u32 = 18;
pub const SHARED_TEXT: u32 = 19;
pub const FORMAT: u32 = 44;
pub const CELL_FORMAT: u32 = 47;
pub const COLUMNS: u32 = 60;
pub const RICH_LABEL: u32 = 62;
pub const BEGIN_CELLS: u32 = 145;
pub const END_CELLS: u32 = 146;
pub const BOOK_PROPERTIES: u32 = 153;
pub const DIMENSION: u32 = 148;
pub const END_SHEETS: u32 = 144;
pub const CALCULATION: u32 = 157;
pub const SHEET: u32 = 156;
pub const BEGIN_TEXTS: u32 = 159;
pub const MERGED: u32 = 176;
pub const BEGIN_CELL_FORMATS: u32 = 617;
pub const END_CELL_FORMATS: u32 = 618;

/// One record.
pub struct Record<'b> {
    /// What it is.
    pub kind: u32,
    /// What it holds.
    pub data: Data<'b>,
}

/// The records of a part.
pub struct Records<'a> {
    part: BufReader<Part<'a>>,
    buffer: Vec<u8>,
}

impl Records<'_> {
    /// Gives each record of a part to a function.
    ///
    /// # Errors
    /// The part is missing, broken or beyond a bound, or what the function refuses.
    pub fn each(archive: &Archive, name: &str, mut take: impl FnMut(&Record) -> Result<(), Refusal>) -> Result<(), Refusal> {
        let part = archive.part(name)?.ok_or_else(|| Refusal::Damaged(format!("{name} is missing")))?;
        let mut records = Records { part: BufReader::with_capacity(1 << 16, part), buffer: Vec::new() };
        let allowance = records.part.get_ref().allowance();
        while !records.part.fill_buf().map_err(|e| damage(name, &e))?.is_empty() {
            allowance.step()?;
            let [kind, length] = [2, 4].map(|most| records.variable(most));
            let (kind, length) = (kind.map_err(|e| damage(name, &e))?, length.map_err(|e| damage(name, &e))? as usize);
            if length > MOST_TOKEN {
                return Err(megabytes(&format!("{name} holds a record of more than"), MOST_TOKEN, ""));
            }
            records.buffer.resize(length, 0);
            records.part.read_exact(&mut records.buffer).map_err(|e| damage(name, &e))?;
            take(&Record { kind, data: Data(&records.buffer) })?;
        }
        Ok(())
    }

    /// A number of seven bits a byte, the low ones first; the high bit says that more follow.
    fn variable(&mut self, most: u32) -> std::io::Result<u32> {
        let mut number = 0;
        for place in 0..most {
            let mut byte = [0];
            self.part.read_exact(&mut byte)?;
            number |= u32::from(byte[0] & 0x7f) << (7 * place);
            if byte[0] & 0x80 == 0 {
                break;
            }
        }
        Ok(number)
    }
}

/// A cell's record.
pub struct CellRecord<'b> {
    /// What it is: the long form of a value, or that of the result of a formula.
    pub kind: u32,
    /// Its column; none where it is the one after the last.
    pub col: Option<u32>,
    /// Its format.
    pub format: u32,
    /// Its value.
    pub value: Data<'b>,
}

impl<'b> Record<'b> {
    /// The record as that of a cell, if it is one: column, format and flags, value; or without the column.
    pub fn cell(&self) -> Result<Option<CellRecord<'b>>, Short> {
        let (kind, col, rest) = match self.kind {
            BLANK..=FORMULA_ERROR | RICH_LABEL => (self.kind, Some(self.data.u32(0)?), self.data.after(4)?),
            SHORT_BLANK..=SHORT_SHARED_LABEL => (self.kind - SHORT_BLANK + BLANK, None, self.data),
            _ => return Ok(None),
        };
        Ok(Some(CellRecord { kind, col, format: rest.u32(0)? & 0x00ff_ffff, value: rest.after(4)? }))
    }
}

/// Text after a count of four bytes, as it stands, and the length of both; the count of no text at all is all ones.
pub fn units(data: Data<'_>) -> Result<(&[u8], usize), Short> {
    let count = Some(data.u32(0)?).filter(|count| *count != u32::MAX).unwrap_or(0) as usize;
    let text = data.part(4, count.saturating_mul(2))?;
    Ok((text, 4 + text.len()))
}

/// The same, decoded.
pub fn wide(data: Data) -> Result<(String, usize), Short> {
    let (text, length) = units(data)?;
    Ok((UTF_16LE.decode_without_bom_handling(text).0.into_owned(), length))
}
