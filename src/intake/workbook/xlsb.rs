//! Office Open XML workbooks in binary parts (MS-XLSB): the package of xlsx, each part a stream of records.

mod record;

use super::archive::Archive;
use super::binary;
use super::bounds::{Budget, MOST_ENTRIES, MOST_SHEETS, at_most};
use super::draft::Draft;
use super::relations::{self, Entry};
use super::serial::Kind;
use super::texts::Texts;
use crate::intake::Refusal;
use crate::intake::grid::{Area, Sheet, Value, Workbook};
use record::{CellRecord, Records, wide};
use std::collections::BTreeMap;

/// What the cells of all sheets refer to.
#[derive(Default)]
struct Context {
    from_1904: bool,
    kinds: Vec<Kind>,
    texts: Texts,
}

/// Reads a workbook, given the name of its main part.
///
/// # Errors
/// It is broken, or beyond a bound.
pub fn read(archive: &Archive, main: &str, budget: &mut Budget) -> Result<Workbook, Refusal> {
    let mut context = Context::default();
    let entries = context.book(archive, main)?;
    let relations = relations::of(archive, main)?;
    relations::part(&relations, "styles").map_or(Ok(()), |name| context.styles(archive, name))?;
    relations::part(&relations, "sharedStrings").map_or(Ok(()), |name| context.texts(archive, name))?;
    let mut sheets = Vec::new();
    for entry in &entries {
        if let Some(part) = relations::worksheet(&relations, entry)? {
            sheets.push(context.sheet(archive, part, entry, budget)?);
        }
    }
    Ok(Workbook { sheets })
}

impl Context {
    fn book(&mut self, archive: &Archive, part: &str) -> Result<Vec<Entry>, Refusal> {
        let mut entries = Vec::new();
        Records::each(archive, part, |record| {
            match record.kind {
                record::BOOK_PROPERTIES => self.from_1904 = record.data.u32(0)? & 1 != 0,
                record::SHEET => {
                    let (relation, length) = wide(record.data.after(8)?)?;
                    let (name, _) = wide(record.data.after(8 + length)?)?;
                    entries.push(Entry { name, relation, hidden: record.data.u32(0)? != 0 });
                    at_most(entries.len(), MOST_SHEETS, "sheets")?;
                }
                _ => {}
            }
            Ok(())
        })?;
        Ok(entries)
    }

    fn styles(&mut self, archive: &Archive, part: &str) -> Result<(), Refusal> {
        let mut codes = BTreeMap::new();
        let mut in_cells = false;
        Records::each(archive, part, |record| {
            match record.kind {
                record::FORMAT => drop(codes.insert(record.data.u16(0)?, Kind::of_code(&wide(record.data.after(2)?)?.0))),
                record::BEGIN_CELL_FORMATS => in_cells = true,
                record::END_CELL_FORMATS => in_cells = false,
                record::CELL_FORMAT if in_cells => {
                    let id = record.data.u16(2)?;
                    self.kinds.push(codes.get(&id).copied().unwrap_or_else(|| Kind::builtin(id.into())));
                }
                _ => {}
            }
            at_most(self.kinds.len(), MOST_ENTRIES, "cell formats")
        })
    }

    fn texts(&mut self, archive: &Archive, part: &str) -> Result<(), Refusal> {
        Records::each(archive, part, |record| match record.kind {
            record::SHARED_TEXT => self.texts.push(&wide(record.data.after(1)?)?.0),
            _ => Ok(()),
        })
    }

    fn sheet(&self, archive: &Archive, part: &str, entry: &Entry, budget: &mut Budget) -> Result<Sheet, Refusal> {
        let mut draft = Draft::new(&entry.name, entry.hidden);
        let (mut row, mut next) = (0, 0);
        let mut in_cells = false;
        Records::each(archive, part, |record| {
            let data = record.data;
            match record.kind {
                record::BEGIN_CELLS => in_cells = true,
                record::END_CELLS => in_cells = false,
                record::ROW if in_cells => {
                    (row, next) = (data.u32(0)?, 0);
                    if data.u8(11)? & 0x10 != 0 {
                        draft.hide_rows(row, row)?;
                    }
                }
                record::COLUMNS if data.u16(16)? & 1 != 0 => draft.hide_columns(data.u32(0)?, data.u32(4)?)?,
                record::MERGED => {
                    draft.merge(Area { top: data.u32(0)?, bottom: data.u32(4)?, left: data.u32(8)?, right: data.u32(12)? }, budget)?;
                }
                _ if in_cells => {
                    if let Some(cell) = record.cell()? {
                        let col = cell.col.unwrap_or(next);
                        next = col.saturating_add(1);
                        draft.put(row, col, self.value(&cell)?, budget)?;
                    }
                }
                _ => {}
            }
            Ok(())
        })?;
        draft.finish()
    }

    fn value(&self, cell: &CellRecord) -> Result<Value, Refusal> {
        let data = cell.value;
        let kind = self.kinds.get(cell.format as usize).copied().unwrap_or(Kind::Plain);
        Ok(match cell.kind {
            record::SMALL_NUMBER => kind.value(binary::small_number(data.u32(0)?), self.from_1904),
            record::NUMBER | record::FORMULA_NUMBER => kind.value(data.f64(0)?, self.from_1904),
            record::ERROR | record::FORMULA_ERROR => binary::error(data.u8(0)?),
            record::LOGICAL | record::FORMULA_LOGICAL => Value::Logical(data.u8(0)? != 0),
            record::SHARED_LABEL => Value::Text(self.texts.get(data.u32(0)? as usize)?.to_owned()),
            record::RICH_LABEL => Value::Text(wide(data.after(1)?)?.0),
            record::TEXT | record::FORMULA_TEXT => Value::Text(wide(data)?.0),
            _ => Value::Text(String::new()),
        })
    }
}
