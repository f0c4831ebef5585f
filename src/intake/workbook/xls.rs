//! Excel binary workbooks (MS-XLS, BIFF8, and BIFF5 before it): a stream of records, of which a dozen hold what is wanted.

mod record;
mod sheet;
mod strings;

use super::bounds::{Budget, MOST_ENTRIES, MOST_SHEETS, at_most};
use super::compound::Compound;
use super::serial::Kind;
use super::texts::Texts;
use crate::intake::Refusal;
use crate::intake::grid::Workbook;
use record::{Record, Records};
use std::collections::BTreeMap;
use strings::Encoding;

/// What the cells of all sheets refer to.
struct Globals {
    encoding: Encoding,
    from_1904: bool,
    codes: BTreeMap<u16, Kind>,
    formats: Vec<u16>,
    texts: Texts,
    sheets: Vec<Entry>,
}

/// A sheet as the workbook lists it.
struct Entry {
    name: String,
    hidden: bool,
    start: usize,
}

/// Reads a workbook.
///
/// # Errors
/// It is protected, damaged, no workbook at all, or beyond a bound.
pub fn read(file: &Compound, budget: &mut Budget) -> Result<Workbook, Refusal> {
    if file.has("EncryptedPackage") {
        return Err(Refusal::Encrypted);
    }
    let stream = match file.stream("Workbook")? {
        Some(stream) => stream,
        None => file.stream("Book")?.ok_or_else(|| Refusal::NotAWorkbook(unlike(file).to_owned()))?,
    };
    records(&stream, budget)
}

fn records(stream: &[u8], budget: &mut Budget) -> Result<Workbook, Refusal> {
    let globals = globals(stream)?;
    let sheets = globals.sheets.iter().map(|entry| sheet::read(stream, entry, &globals, budget));
    Ok(Workbook { sheets: sheets.collect::<Result<_, _>>()? })
}

/// What a compound file without a workbook looks like.
fn unlike(file: &Compound) -> &'static str {
    match () {
        () if file.has("WordDocument") => "a word processor document",
        () if file.has("PowerPoint Document") => "a presentation",
        () => "a compound file without a workbook in it, such as a message or an installer",
    }
}

fn globals(stream: &[u8]) -> Result<Globals, Refusal> {
    let mut records = Records::new(stream, 0);
    let first = records.next().filter(|r| r.kind == record::BOF).ok_or_else(|| damaged("it does not begin as a workbook does"))?;
    let is_wide = first.data.u16(0)? == 0x0600;
    let mut globals = Globals {
        encoding: Encoding::new(is_wide),
        from_1904: false,
        codes: BTreeMap::new(),
        formats: Vec::new(),
        texts: Texts::default(),
        sheets: Vec::new(),
    };
    while let Some(record) = records.next() {
        match record.kind {
            record::END => return Ok(globals),
            record::FILE_PASS => return Err(Refusal::Encrypted),
            record::SHARED => globals.texts = strings::shared(record.data, &mut records)?,
            _ => globals.take(&record)?,
        }
    }
    Err(damaged("it ends before its sheets"))
}

impl Globals {
    fn take(&mut self, record: &Record) -> Result<(), Refusal> {
        let data = record.data;
        match record.kind {
            record::CODE_PAGE => self.encoding.set_code_page(data.u16(0)?),
            record::DATE_MODE => self.from_1904 = data.u16(0)? == 1,
            record::FORMAT => {
                let code =
                    if self.encoding.is_wide() { self.encoding.long(data.after(2)?)? } else { self.encoding.short(data.after(2)?)? };
                self.codes.insert(data.u16(0)?, Kind::of_code(&code));
            }
            record::CELL_FORMAT => {
                self.formats.push(data.u16(2)?);
                at_most(self.formats.len(), MOST_ENTRIES, "cell formats")?;
            }
            // Charts, macro sheets and modules are listed along with the worksheets.
            record::SHEET if data.u8(5)? == 0 => {
                let (start, hidden) = (data.u32(0)? as usize, data.u8(4)? & 3 != 0);
                self.sheets.push(Entry { name: self.encoding.short(data.after(6)?)?, hidden, start });
                at_most(self.sheets.len(), MOST_SHEETS, "sheets")?;
            }
            _ => {}
        }
        Ok(())
    }

    /// The kind of number of a cell format.
    fn kind(&self, format: u16) -> Kind {
        let id = self.formats.get(usize::from(format)).copied().unwrap_or(0);
        self.codes.get(&id).copied().unwrap_or_else(|| Kind::builtin(u32::from(id)))
    }
}

fn damaged(what: &str) -> Refusal {
    Refusal::Damaged(what.to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::intake::grid::Value;

    fn record(kind: u16, data: &[u8]) -> Vec<u8> {
        [&kind.to_le_bytes()[..], &u16::try_from(data.len()).unwrap().to_le_bytes(), data].concat()
    }

    /// No writer at hand writes BIFF5 any more, so this is put together by hand, the layout from memory: 8-bit text in the code page
    /// named, here 1251.
    #[test]
    fn the_older_form_has_text_in_a_code_page() {
        let globals = |start: u32| {
            let sheet = [&start.to_le_bytes()[..], &[0, 0, 3, 0xcb, b'1', b'N']].concat();
            let parts =
                [(record::BOF, vec![0, 5, 5, 0]), (record::CODE_PAGE, vec![0xe3, 4]), (record::SHEET, sheet), (record::END, vec![])];
            parts.iter().flat_map(|(kind, data)| record(*kind, data)).collect::<Vec<_>>()
        };
        let start = globals(0).len();
        let cells = [
            (record::BOF, vec![0, 5, 0x10, 0]),
            (record::LABEL, vec![2, 0, 1, 0, 0, 0, 4, 0, 0xd9, 0xe8, 0xf2, b' ']),
            (record::RICH_LABEL, vec![3, 0, 1, 0, 0, 0, 2, 0, b'O', b'L', 1, 0, 0]),
            (record::END, vec![]),
        ];
        let cells = cells.iter().flat_map(|(kind, data)| record(*kind, data));
        let stream: Vec<u8> = globals(u32::try_from(start).unwrap()).into_iter().chain(cells).collect();
        let book = records(&stream, &mut Budget::new()).unwrap();
        assert_eq!(book.sheets[0].name.as_ref(), "Л1N");
        assert_eq!(book.sheets[0].get(2, 1), Some(&Value::Text("Щит ".to_owned())));
        assert_eq!(book.sheets[0].get(3, 1), Some(&Value::Text("OL".to_owned())));
    }
}
