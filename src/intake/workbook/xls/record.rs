//! Records: kind, length, data (MS-XLS 2.1.4).

use super::super::bytes::{Data, u16_at};

pub const FORMULA: u16 = 0x0006;
pub const END: u16 = 0x000a;
pub const DATE_MODE: u16 = 0x0022;
pub const FILE_PASS: u16 = 0x002f;
pub const CONTINUE: u16 = 0x003c;
pub const CODE_PAGE: u16 = 0x0042;
pub const COLUMNS: u16 = 0x007d;
pub const SHEET: u16 = 0x0085;
pub const SMALL_NUMBERS: u16 = 0x00bd;
pub const RICH_LABEL: u16 = 0x00d6;
pub const CELL_FORMAT: u16 = 0x00e0;
pub const MERGED: u16 = 0x00e5;
pub const SHARED: u16 = 0x00fc;
pub const SHARED_LABEL: u16 = 0x00fd;
pub const NUMBER: u16 = 0x0203;
pub const LABEL: u16 = 0x0204;
pub const LOGICAL_OR_ERROR: u16 = 0x0205;
pub const RESULT: u16 = 0x0207;
pub const ROW: u16 = 0x0208;
pub const SMALL_NUMBER: u16 = 0x027e;
pub const FORMAT: u16 = 0x041e;
pub const BOF: u16 = 0x0809;

/// One record.
#[derive(Clone, Copy)]
pub struct Record<'a> {
    /// What it is.
    pub kind: u16,
    /// What it holds.
    pub data: Data<'a>,
}

/// The records from a place in the stream on.
pub struct Records<'a> {
    stream: &'a [u8],
    at: usize,
}

impl<'a> Records<'a> {
    /// From an offset on.
    pub fn new(stream: &'a [u8], at: usize) -> Self {
        Self { stream, at }
    }

    /// The data of the record that continues the last one, if one does.
    pub fn continuation(&mut self) -> Option<&'a [u8]> {
        if u16_at(self.stream, self.at)? != CONTINUE {
            return None;
        }
        self.next().map(|record| record.data.0)
    }
}

impl<'a> Iterator for Records<'a> {
    type Item = Record<'a>;

    fn next(&mut self) -> Option<Record<'a>> {
        let kind = u16_at(self.stream, self.at)?;
        let start = self.at + 4;
        let end = start + usize::from(u16_at(self.stream, self.at + 2)?);
        let data = self.stream.get(start..end).map(Data)?;
        self.at = end;
        Some(Record { kind, data })
    }
}
