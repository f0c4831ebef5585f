//! Bytes to grid: the only place that knows the formats of workbooks.
//!
//! Every format is read by a streaming reader of its own rather than through a library for spreadsheets, for two reasons. What a
//! stranger's file may cost is bounded ([`bounds`]): libraries make room for what a file states about itself, and on a false
//! statement they take gigabytes, abort or hang. And the grid needs what they leave out: hidden rows and columns, formulas without
//! a stored result, the difference between a moment and an elapsed time.

mod archive;
mod binary;
mod bounds;
mod bytes;
mod compound;
mod csv_folder;
mod draft;
mod kind;
mod ods;
mod relations;
mod serial;
mod texts;
mod xls;
mod xlsb;
mod xlsx;
mod xml;

#[cfg(test)]
mod tests;

use super::grid::Workbook;
use super::{Content, Refusal};
use crate::diag::Output;
use archive::Archive;
use bounds::{Budget, MOST_BYTES, megabytes};
use compound::Compound;
use kind::Kind;

/// Most characters of what a refusal says.
const LONGEST: usize = 200;

/// Reads an input into plain cells.
///
/// # Errors
/// It is no workbook, is protected or damaged, or is beyond a bound.
pub(super) fn read(content: &Content) -> Result<Output<Workbook>, Refusal> {
    let size = match content {
        Content::File(bytes) => bytes.len(),
        Content::Folder(files) => files.iter().map(|(_, bytes)| bytes.len()).sum(),
    };
    let output = match content {
        _ if size == 0 => Err(Refusal::Empty),
        _ if size > MOST_BYTES => Err(megabytes("it is more than", MOST_BYTES, "long")),
        Content::File(bytes) => file(bytes).map(|value| Output { value, problems: Vec::new() }),
        Content::Folder(files) => csv_folder::read(files, &mut Budget::new()),
    };
    output.map_err(shortened)
}

/// A refusal whose words are no longer than a line or two: names in them come from the file.
fn shortened(refusal: Refusal) -> Refusal {
    let short = |text: String| if text.chars().count() > LONGEST { text.chars().take(LONGEST).chain(['…']).collect() } else { text };
    match refusal {
        Refusal::NotAWorkbook(text) => Refusal::NotAWorkbook(short(text)),
        Refusal::Damaged(text) => Refusal::Damaged(short(text)),
        Refusal::TooLarge(text) => Refusal::TooLarge(short(text)),
        other => other,
    }
}

fn file(bytes: &[u8]) -> Result<Workbook, Refusal> {
    let mut budget = Budget::new();
    match kind::of(bytes).map_err(|what| Refusal::NotAWorkbook(what.to_owned()))? {
        Kind::Package => package(&Archive::open(bytes)?, &mut budget),
        Kind::Compound => xls::read(&Compound::open(bytes)?, &mut budget),
    }
}

/// A zip package: by its declared media type where it is OpenDocument, by the relation of its main part otherwise.
fn package(archive: &Archive, budget: &mut Budget) -> Result<Workbook, Refusal> {
    if let Some(media) = archive.whole("mimetype", 256)? {
        let media = String::from_utf8_lossy(&media);
        return match media.trim().strip_prefix("application/vnd.oasis.opendocument.") {
            Some("spreadsheet" | "spreadsheet-template") => ods::read(archive, budget),
            _ => Err(Refusal::NotAWorkbook(format!("a file of the type {}", media.trim()))),
        };
    }
    if archive.has(ods::CONTENT) && archive.has(ods::MANIFEST) {
        return ods::read(archive, budget);
    }
    let relations = relations::of(archive, "")?;
    let main = relations::part(&relations, "officeDocument").unwrap_or("xl/workbook.xml");
    match main.rsplit_once('.') {
        Some((_, "bin")) if archive.has(main) => xlsb::read(archive, main, budget),
        Some((_, "xml")) if archive.has(main) && xlsx::is_book(archive, main)? => xlsx::read(archive, main, budget),
        _ => Err(Refusal::NotAWorkbook(unlike(main).to_owned())),
    }
}

/// What a main part that is none of a workbook belongs to.
fn unlike(main: &str) -> &'static str {
    match main.split('/').next() {
        Some("word") => "a word processor document",
        Some("ppt") => "a presentation",
        _ => "a zip archive without a workbook in it",
    }
}
