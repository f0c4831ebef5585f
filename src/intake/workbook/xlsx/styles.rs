//! The styles part: which cell formats show a number as a date or time.

use super::super::archive::Archive;
use super::super::bounds::{MOST_ENTRIES, at_most};
use super::super::serial::Kind;
use super::super::xml::Node;
use crate::intake::Refusal;
use std::collections::BTreeMap;

/// The kind of number of each cell format, by its index.
///
/// # Errors
/// The part is broken or lists too much.
pub fn read(archive: &Archive, name: &str) -> Result<Vec<Kind>, Refusal> {
    let mut xml = super::open(archive, name)?;
    let mut codes: BTreeMap<u32, Kind> = BTreeMap::new();
    let mut ids: Vec<u32> = Vec::new();
    // The same `xf` stands in the named styles as well; only those of the cells count.
    let mut depth = 0;
    let mut in_cells = None;
    loop {
        match xml.next()? {
            Node::Open(tag) => {
                depth += 1;
                match tag.name() {
                    b"cellXfs" => in_cells = Some(depth),
                    b"numFmt" => {
                        if let (Some(Ok(id)), Some(code)) = (tag.get("numFmtId")?.map(|id| id.parse()), tag.get("formatCode")?) {
                            codes.entry(id).or_insert_with(|| Kind::of_code(&code));
                            at_most(codes.len(), MOST_ENTRIES, "number formats")?;
                        }
                    }
                    b"xf" if in_cells.is_some_and(|cells| depth == cells + 1) => {
                        ids.push(tag.get("numFmtId")?.and_then(|id| id.parse().ok()).unwrap_or(0));
                        at_most(ids.len(), MOST_ENTRIES, "cell formats")?;
                    }
                    _ => {}
                }
            }
            Node::Close => {
                in_cells = in_cells.filter(|cells| *cells != depth);
                depth -= 1;
            }
            Node::Text(_) => {}
            Node::End => return Ok(ids.iter().map(|id| codes.get(id).copied().unwrap_or_else(|| Kind::builtin(*id))).collect()),
        }
    }
}
