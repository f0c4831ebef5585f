//! Office Open XML workbooks in binary parts (MS-XLSB): the package of xlsx, each part a stream of records.
//!
//! The cells are read by calamine, but not from the stranger's file: what makes up the cells is first kept, checked, in a package of
//! our own ([`kept`], [`package`]). A count or a length that lies therefore never reaches the library, which makes room by the one and
//! slices by the other; and hidden rows and columns and merged areas, which it leaves out, are taken on the way.

mod kept;
mod package;
mod record;

use super::archive::Archive;
use super::bounds::{Budget, MOST_SHEETS, at_most};
use super::draft::Draft;
use super::relations::{self, Entry};
use super::serial::Kind;
use crate::intake::Refusal;
use crate::intake::grid::{Sheet, Value, Workbook};
use calamine::{DataRef, Reader, Xlsb, XlsbError};
use package::Package;
use record::{Records, wide};
use std::io::Cursor;

/// A workbook as the library reads it.
type Checked = Xlsb<Cursor<Vec<u8>>>;

/// Reads a workbook, given the name of its main part.
///
/// # Errors
/// It is broken, or beyond a bound.
pub fn read(archive: &Archive, main: &str, budget: &mut Budget) -> Result<Workbook, Refusal> {
    let book = Book::read(archive, main)?;
    let relations = relations::of(archive, main)?;
    let mut package = Package::default();
    kept::formats(archive, relations::part(&relations, "styles"), &mut package)?;
    let texts = kept::texts(archive, relations::part(&relations, "sharedStrings"), &mut package)?;
    let mut drafts = Vec::new();
    for entry in &book.entries {
        if let Some(part) = relations::worksheet(&relations, entry)? {
            let mut draft = Draft::new(&entry.name, entry.hidden);
            let name = format!("xl/{}", target(drafts.len()));
            package.part(&name, |out| kept::cells(archive, part, texts, &mut draft, budget, out))?;
            drafts.push(draft);
        }
    }
    list(drafts.len(), &mut package)?;
    let mut checked = Checked::new(Cursor::new(package.finish())).map_err(damaged)?;
    let sheets = drafts.into_iter().enumerate().map(|(number, draft)| book.sheet(&mut checked, number, draft, budget));
    Ok(Workbook { sheets: sheets.collect::<Result<_, _>>()? })
}

/// What a workbook's main part says.
#[derive(Default)]
struct Book {
    from_1904: bool,
    entries: Vec<Entry>,
}

impl Book {
    fn read(archive: &Archive, part: &str) -> Result<Self, Refusal> {
        let mut book = Self::default();
        Records::each(archive, part, |record| {
            match record.kind {
                record::BOOK_PROPERTIES => book.from_1904 = record.data.u32(0)? & 1 != 0,
                record::SHEET => {
                    let (relation, length) = wide(record.data.after(8)?)?;
                    let (name, _) = wide(record.data.after(8 + length)?)?;
                    book.entries.push(Entry { name, relation, hidden: record.data.u32(0)? != 0 });
                    at_most(book.entries.len(), MOST_SHEETS, "sheets")?;
                }
                _ => {}
            }
            Ok(())
        })?;
        Ok(book)
    }

    fn sheet(&self, checked: &mut Checked, number: usize, mut draft: Draft, budget: &mut Budget) -> Result<Sheet, Refusal> {
        let mut cells = checked.worksheet_cells_reader(&number.to_string()).map_err(damaged)?;
        while let Some(cell) = cells.next_cell().map_err(damaged)? {
            let (row, col) = cell.get_position();
            draft.put(row, col, self.value(cell.get_value()), budget)?;
        }
        draft.finish()
    }

    fn value(&self, data: &DataRef) -> Value {
        match data {
            DataRef::Int(number) => Value::Number(*number as f64),
            DataRef::Float(number) => Kind::Plain.value(*number, self.from_1904),
            DataRef::DateTime(time) if time.is_duration() => Kind::Elapsed.value(time.as_f64(), self.from_1904),
            DataRef::DateTime(time) => Kind::Moment.value(time.as_f64(), self.from_1904),
            DataRef::Bool(logical) => Value::Logical(*logical),
            DataRef::Error(error) => Value::Error(error.to_string()),
            DataRef::SharedString(text) => Value::Text((*text).to_owned()),
            DataRef::String(text) | DataRef::DateTimeIso(text) | DataRef::DurationIso(text) => Value::Text(text.clone()),
            DataRef::Empty => Value::Text(String::new()),
        }
    }
}

/// The parts that say which sheets there are, by their numbers.
fn list(sheets: usize, package: &mut Package) -> Result<(), Refusal> {
    package.part("xl/workbook.bin", |out| {
        for number in 0..sheets {
            let [relation, name] = [format!("r{number}"), number.to_string()].map(|text| counted(&text));
            out.record(record::SHEET, &[&[0; 8], &relation, &name])?;
        }
        out.record(record::END_SHEETS, &[])?;
        out.record(record::CALCULATION, &[])
    })?;
    package.part("xl/_rels/workbook.bin.rels", |out| {
        out.put(&[b"<Relationships>"])?;
        for number in 0..sheets {
            out.put(&[format!(r#"<Relationship Id="r{number}" Target="{}"/>"#, target(number)).as_bytes()])?;
        }
        out.put(&[b"</Relationships>"])
    })
}

/// Where the sheet of a number is kept.
fn target(number: usize) -> String {
    format!("worksheets/{number}.bin")
}

/// A short ASCII text after its count.
fn counted(text: &str) -> Vec<u8> {
    let units: Vec<u8> = text.encode_utf16().flat_map(u16::to_le_bytes).collect();
    [&(units.len() as u32 / 2).to_le_bytes(), units.as_slice()].concat()
}

fn damaged(error: XlsbError) -> Refusal {
    Refusal::Damaged(error.to_string())
}
