//! Office Open XML workbooks (ECMA-376): xlsx, xlsm and their templates, transitional or strict.

mod sheet;
mod strings;
mod styles;

use super::archive::Archive;
use super::bounds::{Budget, MOST_SHEETS, at_most};
use super::relations::{self, Entry};
use super::texts::Texts;
use super::xml::{Node, Xml};
use crate::intake::Refusal;
use crate::intake::grid::Workbook;

/// Whether a package's main part is a workbook, and not a document or a presentation.
///
/// # Errors
/// The part is broken.
pub fn is_book(archive: &Archive, main: &str) -> Result<bool, Refusal> {
    let mut xml = open(archive, main)?;
    loop {
        match xml.next()? {
            Node::Open(tag) => return Ok(tag.name() == b"workbook"),
            Node::End => return Ok(false),
            Node::Close | Node::Text(_) => {}
        }
    }
}

/// What the cells of all sheets refer to.
struct Book {
    from_1904: bool,
    sheets: Vec<Entry>,
}

/// Reads a workbook, given the name of its main part.
///
/// # Errors
/// It is broken, or beyond a bound.
pub fn read(archive: &Archive, main: &str, budget: &mut Budget) -> Result<Workbook, Refusal> {
    let book = book(archive, main)?;
    let relations = relations::of(archive, main)?;
    let kinds = relations::part(&relations, "styles").map_or(Ok(Vec::new()), |name| styles::read(archive, name))?;
    let texts = relations::part(&relations, "sharedStrings").map_or(Ok(Texts::default()), |name| strings::read(archive, name))?;
    let context = sheet::Context { kinds: &kinds, texts: &texts, from_1904: book.from_1904 };
    let mut sheets = Vec::new();
    for entry in &book.sheets {
        if let Some(part) = relations::worksheet(&relations, entry)? {
            sheets.push(sheet::read(archive, part, entry, &context, budget)?);
        }
    }
    Ok(Workbook { sheets })
}

fn book(archive: &Archive, main: &str) -> Result<Book, Refusal> {
    let mut xml = open(archive, main)?;
    let mut book = Book { from_1904: false, sheets: Vec::new() };
    loop {
        match xml.next()? {
            Node::Open(tag) if tag.name() == b"workbookPr" => book.from_1904 = tag.get("date1904")?.is_some_and(|v| is_true(&v)),
            Node::Open(tag) if tag.name() == b"sheet" => {
                let hidden = tag.get("state")?.is_some_and(|state| state != "visible");
                let (name, relation) = (tag.get("name")?.unwrap_or_default(), tag.get("id")?.unwrap_or_default());
                book.sheets.push(Entry { name, relation, hidden });
                at_most(book.sheets.len(), MOST_SHEETS, "sheets")?;
            }
            Node::End => return Ok(book),
            _ => {}
        }
    }
}

/// A part that has to be there.
fn open<'a>(archive: &'a Archive, name: &'a str) -> Result<Xml<'a>, Refusal> {
    let part = archive.part(name)?.ok_or_else(|| Refusal::Damaged(format!("{name} is missing")))?;
    Ok(Xml::new(name, part))
}

/// `xsd:boolean`.
fn is_true(text: &str) -> bool {
    matches!(text, "1" | "true" | "on")
}
