//! The document as a tagged PDF (PDF/A-2a).
//!
//! Blocks become strips (`flow`), strips fill pages (`page`), pages become operations (`write`, printpdf), and what that library
//! does not write is added to the finished file (`finish`, lopdf). Text is shaped and broken in `shape` (parley).

mod finish;
mod flow;
mod page;
mod shape;
mod strip;
mod structure;
mod write;

use crate::report::document::Document;
use crate::report::drawing::Measure;

/// Why there is no PDF.
#[derive(Debug, thiserror::Error)]
pub enum PdfError {
    /// A face could not be subset; it never happens with the built-in ones.
    #[error("the font {0} can't be embedded")]
    Font(String),
    /// The file could not be put together.
    #[error("{0}")]
    File(#[from] lopdf::Error),
    /// The bytes could not be written to memory.
    #[error("{0}")]
    Write(#[from] std::io::Error),
}

/// Widths of the report's own font.
#[derive(Clone, Copy, Debug, Default)]
pub struct FontMeasure;

impl Measure for FontMeasure {
    fn width(&self, text: &str, size: f64, bold: bool) -> f64 {
        f64::from(shape::width(text, size as f32, bold))
    }
}

/// The document as a PDF file.
///
/// # Errors
/// The file could not be put together; no content of a document is a reason.
pub fn write(document: &Document) -> Result<Vec<u8>, PdfError> {
    let mut flow = flow::Flow::new(document, document.meta.page.text_width() as f32);
    let pages = page::fill(document, &mut flow);
    write::write(document, &flow, &pages)
}
