//! The records of one worksheet.

use super::super::binary;
use super::super::bounds::Budget;
use super::super::bytes::{Data, Short};
use super::super::draft::Draft;
use super::record::{self, Record, Records};
use super::{Entry, Globals, damaged};
use crate::intake::Refusal;
use crate::intake::grid::{Area, Sheet, Value};

/// Reads one worksheet.
///
/// # Errors
/// It is cut short, refers to what is not there, or is beyond a bound.
pub fn read(stream: &[u8], entry: &Entry, globals: &Globals, budget: &mut Budget) -> Result<Sheet, Refusal> {
    let mut reading = Reading { globals, budget, draft: Draft::new(&entry.name, entry.hidden), awaited: None };
    let broken = || damaged(&format!("sheet {} is cut short", entry.name));
    let mut depth = 0;
    for record in Records::new(stream, entry.start) {
        match record.kind {
            // A chart in the sheet has records of its own between a beginning and an end.
            record::BOF => depth += 1,
            _ if depth == 0 => return Err(broken()),
            record::END if depth == 1 => return reading.draft.finish(),
            record::END => depth -= 1,
            _ if depth > 1 => {}
            _ => reading.take(&record)?,
        }
    }
    Err(broken())
}

struct Reading<'a> {
    globals: &'a Globals,
    budget: &'a mut Budget,
    draft: Draft,
    /// The cell of a formula whose result is a text, which comes in a record of its own.
    awaited: Option<(u32, u32)>,
}

impl Reading<'_> {
    fn take(&mut self, record: &Record) -> Result<(), Refusal> {
        let data = record.data;
        let value = match record.kind {
            record::ROW if data.u16(12)? & 0x20 != 0 => return self.draft.hide_rows(data.u16(0)?.into(), data.u16(0)?.into()),
            record::COLUMNS if data.u16(8)? & 1 != 0 => return self.draft.hide_columns(data.u16(0)?.into(), data.u16(2)?.into()),
            record::MERGED => return self.merge(data),
            record::SMALL_NUMBERS => return self.small_numbers(data),
            record::RESULT => return self.text_result(data),
            record::NUMBER => self.number(data.u16(4)?, data.f64(6)?),
            record::SMALL_NUMBER => self.number(data.u16(4)?, binary::small_number(data.u32(6)?)),
            record::LABEL | record::RICH_LABEL => Value::Text(self.globals.encoding.long(data.after(6)?)?),
            record::SHARED_LABEL => Value::Text(self.globals.texts.get(data.u32(6)? as usize)?.to_owned()),
            record::LOGICAL_OR_ERROR if data.u8(7)? == 0 => Value::Logical(data.u8(6)? != 0),
            record::LOGICAL_OR_ERROR => binary::error(data.u8(6)?),
            record::FORMULA => self.result(data)?,
            _ => return Ok(()),
        };
        self.draft.put(data.u16(0)?.into(), data.u16(2)?.into(), value, self.budget)
    }

    fn number(&self, format: u16, number: f64) -> Value {
        self.globals.kind(format).value(number, self.globals.from_1904)
    }

    /// The stored result of a formula: a number, or what its last two bytes say it is instead (MS-XLS 2.5.133).
    fn result(&mut self, data: Data) -> Result<Value, Short> {
        if data.u16(12)? != 0xffff {
            return Ok(self.number(data.u16(4)?, data.f64(6)?));
        }
        Ok(match data.u8(6)? {
            0 => {
                self.awaited = Some((data.u16(0)?.into(), data.u16(2)?.into()));
                Value::Text(String::new())
            }
            1 => Value::Logical(data.u8(8)? != 0),
            2 => binary::error(data.u8(8)?),
            _ => Value::Text(String::new()),
        })
    }

    fn text_result(&mut self, data: Data) -> Result<(), Refusal> {
        let text = self.globals.encoding.long(data)?;
        self.awaited.take().map_or(Ok(()), |(row, col)| self.draft.put(row, col, Value::Text(text), self.budget))
    }

    fn small_numbers(&mut self, data: Data) -> Result<(), Refusal> {
        let numbers = data.part(4, data.0.len().saturating_sub(6))?.chunks_exact(6).map(Data);
        for (col, number) in (u32::from(data.u16(2)?)..).zip(numbers) {
            let value = self.number(number.u16(0)?, binary::small_number(number.u32(2)?));
            self.draft.put(data.u16(0)?.into(), col, value, self.budget)?;
        }
        Ok(())
    }

    fn merge(&mut self, data: Data) -> Result<(), Refusal> {
        for area in data.after(2)?.0.chunks_exact(8).take(data.u16(0)?.into()).map(Data) {
            let [top, bottom, left, right] = [area.u16(0)?, area.u16(2)?, area.u16(4)?, area.u16(6)?].map(u32::from);
            self.draft.merge(Area { top, left, bottom, right }, self.budget)?;
        }
        Ok(())
    }
}
