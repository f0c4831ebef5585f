//! What is kept of a workbook's binary parts: the records that say what stands in its cells, each held against its own length and
//! against the tables it refers to, and each in one form.

use super::super::archive::Archive;
use super::super::binary;
use super::super::bounds::{Budget, MOST_CELLS, MOST_ENTRIES, at_most};
use super::super::bytes::Data;
use super::super::draft::Draft;
use super::super::serial::Kind;
use super::package::Package;
use super::record::{self, CellRecord, Records, units, wide};
use crate::intake::Refusal;
use crate::intake::grid::Area;
use std::collections::BTreeMap;

/// Mark before a text that says how it is written. Without one, a text that happens to begin like a mark is taken for another writing.
const MARK: &[u8] = &[0xff, 0xfe];

/// The cell formats, as what they make of a number: built-in formats stand for all of a kind.
pub fn formats(archive: &Archive, part: Option<&str>, package: &mut Package) -> Result<(), Refusal> {
    let mut codes = BTreeMap::new();
    let (mut in_cells, mut count) = (false, 0);
    package.part("xl/styles.bin", |out| {
        let place = out.record(record::BEGIN_CELL_FORMATS, &[&[0; 4]])?;
        let Some(part) = part else { return Ok(()) };
        Records::each(archive, part, |record| {
            match record.kind {
                record::FORMAT => drop(codes.insert(record.data.u16(0)?, Kind::of_code(&wide(record.data.after(2)?)?.0))),
                record::BEGIN_CELL_FORMATS => in_cells = true,
                record::END_CELL_FORMATS => in_cells = false,
                record::CELL_FORMAT if in_cells => {
                    let id = record.data.u16(2)?;
                    let kind = codes.get(&id).copied().unwrap_or_else(|| Kind::builtin(id.into()));
                    out.record(record::CELL_FORMAT, &[&[0, 0], &kind.example().to_le_bytes()])?;
                    count += 1;
                }
                _ => {}
            }
            at_most(count as usize, MOST_ENTRIES, "cell formats")
        })?;
        out.patch(place, &u32::to_le_bytes(count));
        Ok(())
    })
}

/// The table of shared texts, and how many there are.
pub fn texts(archive: &Archive, part: Option<&str>, package: &mut Package) -> Result<u32, Refusal> {
    let mut count = 0;
    package.part("xl/sharedStrings.bin", |out| {
        let place = out.record(record::BEGIN_TEXTS, &[&[0; 8]])?;
        let Some(part) = part else { return Ok(()) };
        Records::each(archive, part, |record| {
            if record.kind == record::SHARED_TEXT {
                written(out, record::SHARED_TEXT, &[0], record.data.after(1)?)?;
                count += 1;
            }
            at_most(count as usize, MOST_CELLS, "shared texts")
        })?;
        out.patch(place + 4, &u32::to_le_bytes(count));
        Ok(())
    })?;
    Ok(count)
}

/// The cells of a sheet; what is hidden and merged goes into the draft at once.
pub fn cells(archive: &Archive, part: &str, texts: u32, draft: &mut Draft, budget: &mut Budget, out: &mut Package) -> Result<(), Refusal> {
    let mut rows = Rows { texts, row: 0, next: 0, begun: None };
    let mut in_cells = false;
    out.record(record::DIMENSION, &[&[0; 16]])?;
    out.record(record::BEGIN_CELLS, &[])?;
    Records::each(archive, part, |record| {
        let data = record.data;
        match record.kind {
            record::BEGIN_CELLS => in_cells = true,
            record::END_CELLS => in_cells = false,
            record::ROW if in_cells => {
                (rows.row, rows.next) = (data.u32(0)?, 0);
                if data.u8(11)? & 0x10 != 0 {
                    draft.hide_rows(rows.row, rows.row)?;
                }
            }
            record::COLUMNS if data.u16(16)? & 1 != 0 => draft.hide_columns(data.u32(0)?, data.u32(4)?)?,
            record::MERGED => {
                draft.merge(Area { top: data.u32(0)?, bottom: data.u32(4)?, left: data.u32(8)?, right: data.u32(12)? }, budget)?;
            }
            _ if in_cells => {
                if let Some(cell) = record.cell()? {
                    rows.cell(&cell, draft, budget, out)?;
                }
            }
            _ => {}
        }
        Ok(())
    })?;
    out.record(record::END_CELLS, &[])?;
    Ok(())
}

/// Where in a sheet a cell stands.
struct Rows {
    /// How many shared texts there are.
    texts: u32,
    row: u32,
    /// Column of a cell that does not name its own.
    next: u32,
    /// The last row whose record was kept.
    begun: Option<u32>,
}

impl Rows {
    /// Keeps a cell that holds something, in the long form of its value; the formula behind a result is left out. Errors go into the
    /// draft at once: the library knows eight of them and stops at any other.
    fn cell(&mut self, cell: &CellRecord, draft: &mut Draft, budget: &mut Budget, out: &mut Package) -> Result<(), Refusal> {
        let col = cell.col.unwrap_or(self.next);
        self.next = col.saturating_add(1);
        if cell.kind == record::BLANK {
            return Ok(());
        }
        draft.holds(self.row, col)?;
        if matches!(cell.kind, record::ERROR | record::FORMULA_ERROR) {
            return draft.put(self.row, col, binary::error(cell.value.u8(0)?), budget);
        }
        if self.begun != Some(self.row) {
            self.begun = Some(self.row);
            out.record(record::ROW, &[&self.row.to_le_bytes()])?;
        }
        let head = [col.to_le_bytes(), cell.format.to_le_bytes()].concat();
        let value = cell.value;
        match cell.kind {
            record::SMALL_NUMBER => out.record(record::SMALL_NUMBER, &[&head, value.part(0, 4)?]),
            record::NUMBER | record::FORMULA_NUMBER => out.record(record::NUMBER, &[&head, value.part(0, 8)?]),
            record::LOGICAL | record::FORMULA_LOGICAL => out.record(record::LOGICAL, &[&head, value.part(0, 1)?]),
            record::SHARED_LABEL => out.record(record::SHARED_LABEL, &[&head, &self.number(value)?.to_le_bytes()]),
            record::TEXT | record::FORMULA_TEXT => written(out, record::TEXT, &head, value),
            record::RICH_LABEL => written(out, record::TEXT, &head, value.after(1)?),
            _ => Ok(0),
        }?;
        Ok(())
    }

    /// The number of a shared text that is there.
    fn number(&self, value: Data) -> Result<u32, Refusal> {
        let number = value.u32(0)?;
        let missing = || Refusal::Damaged(format!("a cell refers to the shared text {number}, which is not there"));
        if number < self.texts { Ok(number) } else { Err(missing()) }
    }
}

/// Puts a record that ends in a text, marked and counted anew.
fn written(out: &mut Package, kind: u32, head: &[u8], text: Data) -> Result<usize, Refusal> {
    let (text, _) = units(text)?;
    let count = u32::try_from(text.len() / 2 + 1).unwrap_or(u32::MAX);
    out.record(kind, &[head, &count.to_le_bytes(), MARK, text])
}
