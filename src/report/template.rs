//! Templates: Tera yields Markdown, Markdown yields blocks.
//!
//! Values reach the Markdown opaque, so that no text of a workbook can become structure. Computed things are placed by images of
//! special schemes: `![caption](table:NAME)`, `figure:NAME`, `facts:NAME`, `photos:`, `signoff:`, and `signal:WORD` within a line.
//! A quotation that begins with `[!WARNING] Title` is a callout. Between two lines `+++` at the top stands TOML: the document's
//! title, and the sheets of the XLSX.

mod context;
mod escape;
mod front;
mod markdown;
mod names;
mod places;

pub(super) use context::Context;
pub(super) use front::{Front, SheetPlan};
pub(super) use places::Places;

use super::TemplateError;
use super::document::Block;
use std::io::{self, Write};

/// Most bytes of Markdown a template may yield.
const MOST_BYTES: usize = 16 << 20;

/// A template put into blocks, with its front matter.
pub(super) fn fill(file: &str, text: &str, context: &Context, places: &Places) -> Result<(Front, Vec<Block>), TemplateError> {
    let (front, body) = front::split(file, text)?;
    names::check(file, &front, text)?;
    let markdown = render(file, &escape::plain(&body), context)?;
    Ok((front, markdown::blocks(&markdown, places)))
}

fn render(file: &str, body: &str, context: &Context) -> Result<String, TemplateError> {
    let fail = |e: &tera::Error| error(file, e, context);
    let mut tera = tera::Tera::new();
    tera.set_escape_fn(escape::opaque);
    tera.autoescape_on([""]);
    // Filters that would let a value past the escape, or change it for another language, do nothing here.
    for filter in ["safe", "escape", "escape_html", "escape_xml", "newlines_to_br"] {
        tera.register_filter(filter, |value: tera::Value, _: tera::Kwargs, _: &tera::State| value);
    }
    tera.add_raw_template(file, body).map_err(|e| fail(&e))?;
    let values = tera::Context::from_serialize(context).map_err(|e| fail(&e))?;
    let mut out = Bounded(Vec::new());
    tera.render_to(file, &values, &mut out).map_err(|e| fail(&e))?;
    Ok(String::from_utf8_lossy(&out.0).into_owned())
}

/// A writer that refuses to grow without bound.
struct Bounded(Vec<u8>);

impl Write for Bounded {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        if self.0.len() + bytes.len() > MOST_BYTES {
            return Err(io::Error::other("the template yields more than 16 MB of text"));
        }
        self.0.extend_from_slice(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

fn error(file: &str, e: &tera::Error, context: &Context) -> TemplateError {
    let (line, message) = match e.kind() {
        tera::ErrorKind::SyntaxError(r) | tera::ErrorKind::RenderingError(r) => (r.span().start_line, r.message().to_owned()),
        _ => placed(&root(e), file),
    };
    let known = context.names();
    let near = names::quoted(&message).and_then(|name| names::nearest(name, known.iter().map(String::as_str)));
    TemplateError { file: file.to_owned(), line, message: names::hinted(&message, near) }
}

/// Line and message of an error that tells its place in words: `error: MESSAGE`, then `--> FILE:LINE:COLUMN`.
fn placed(text: &str, file: &str) -> (usize, String) {
    let message = text.lines().next().unwrap_or_default();
    let place = text.split_once(&format!("--> {file}:")).and_then(|(_, rest)| rest.split(':').next()?.parse().ok());
    (place.unwrap_or(1), message.strip_prefix("error: ").unwrap_or(message).to_owned())
}

/// The innermost message.
fn root(e: &tera::Error) -> String {
    let mut at: &dyn std::error::Error = e;
    while let Some(source) = at.source() {
        at = source;
    }
    at.to_string()
}
