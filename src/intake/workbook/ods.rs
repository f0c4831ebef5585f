//! OpenDocument spreadsheets (ODF 1.3): ods and its templates.

mod paragraph;
mod table;

use super::archive::Archive;
use super::bounds::{Budget, MOST_NAMED, MOST_SHEETS, at_most};
use super::xml::{Node, Xml};
use crate::intake::Refusal;
use crate::intake::grid::Workbook;
use std::collections::BTreeSet;

/// The part with the cells.
pub const CONTENT: &str = "content.xml";
/// The part that lists the others.
pub const MANIFEST: &str = "META-INF/manifest.xml";

/// Reads a workbook.
///
/// # Errors
/// It is protected, broken, or beyond a bound.
pub fn read(archive: &Archive, budget: &mut Budget) -> Result<Workbook, Refusal> {
    if is_encrypted(archive)? {
        return Err(Refusal::Encrypted);
    }
    let part = archive.part(CONTENT)?.ok_or_else(|| Refusal::Damaged(format!("{CONTENT} is missing")))?;
    let mut xml = Xml::new(CONTENT, part);
    let mut hidden = BTreeSet::new();
    let mut style = String::new();
    let mut sheets = Vec::new();
    loop {
        match xml.next()? {
            Node::Open(tag) => match tag.name() {
                b"style" => style = tag.get("name")?.unwrap_or_default(),
                b"table-properties" if tag.get("display")?.as_deref() == Some("false") => {
                    hidden.insert(std::mem::take(&mut style));
                    at_most(hidden.len(), MOST_NAMED, "styles that hide a sheet")?;
                }
                // Changes kept for review, and copies of other workbooks' tables, hold tables that are none of this workbook's.
                b"tracked-changes" | b"dde-links" => xml.skip()?,
                b"table" => {
                    let name = tag.get("name")?.unwrap_or_default();
                    let hidden = tag.get("style-name")?.is_some_and(|style| hidden.contains(&style));
                    sheets.extend(table::read(&mut xml, &name, hidden, budget)?);
                    at_most(sheets.len(), MOST_SHEETS, "sheets")?;
                }
                _ => {}
            },
            Node::End => return Ok(Workbook { sheets }),
            _ => {}
        }
    }
}

/// Whether the manifest lists how parts were encrypted.
fn is_encrypted(archive: &Archive) -> Result<bool, Refusal> {
    let Some(part) = archive.part(MANIFEST)? else { return Ok(false) };
    let mut xml = Xml::new(MANIFEST, part);
    loop {
        match xml.next()? {
            Node::Open(tag) if tag.name() == b"encryption-data" => return Ok(true),
            Node::End => return Ok(false),
            _ => {}
        }
    }
}
