//! Text into cells: always text, never longer than a cell holds.

use crate::render::text::visible;
use crate::report::document::Inline;
use rust_xlsxwriter::{Format, Worksheet, XlsxError};
use std::borrow::Cow;

/// Longest text of a cell, in UTF-16 units as the format counts.
const LONGEST: usize = 32_767;
/// The library counts a rich string's markup as text. Escaped, a byte takes at most five of it, and the fonts of a run 300.
const MARKUP_PER_BYTE: usize = 5;
const MARKUP_PER_RUN: usize = 300;

/// Writes a text. One that ends too late is cut and ends in `…`.
pub(super) fn write(sheet: &mut Worksheet, row: u32, col: u16, text: &str, format: &Format) -> Result<(), XlsxError> {
    let text = limited(visible(text));
    if text.starts_with("<r>") && text.ends_with("</r>") {
        // The library takes such a string for markup of its own unless it is a rich one, or has a blank behind it.
        if !fits_rich(&text, 1) {
            sheet.write_string_with_format(row, col, cut(&text, LONGEST - 1) + " ", format)?;
            return Ok(());
        }
        sheet.write_rich_string_with_format(row, col, &[(&Format::default(), &escaped(&text))], format)?;
    } else {
        sheet.write_string_with_format(row, col, text, format)?;
    }
    Ok(())
}

/// Writes a text with strong and emphasised parts.
pub(super) fn write_rich(sheet: &mut Worksheet, row: u32, col: u16, text: &[Inline], format: &Format) -> Result<(), XlsxError> {
    let mut runs = Vec::new();
    collect(text, Face::default(), &mut runs);
    let plain = plain(text);
    if runs.iter().all(|(face, _)| *face == Face::default()) || !fits_rich(&plain, runs.len()) {
        return write(sheet, row, col, &plain, format);
    }
    let runs: Vec<(Format, String)> = runs.into_iter().map(|(face, text)| (face.format(), escaped(&visible(&text)))).collect();
    let runs: Vec<(&Format, &str)> = runs.iter().map(|(format, text)| (format, text.as_str())).collect();
    sheet.write_rich_string_with_format(row, col, &runs, format)?;
    Ok(())
}

/// The text without marks; a link's target follows its text where the two differ.
pub(super) fn plain(text: &[Inline]) -> String {
    let mut runs = Vec::new();
    collect(text, Face::default(), &mut runs);
    let joined: String = runs.into_iter().map(|(_, text)| text).collect();
    visible(&joined).into_owned()
}

#[derive(Clone, Copy, Default, PartialEq)]
struct Face {
    strong: bool,
    emphasis: bool,
}

impl Face {
    fn format(self) -> Format {
        let format = if self.strong { Format::new().set_bold() } else { Format::new() };
        if self.emphasis { format.set_italic() } else { format }
    }
}

fn collect(text: &[Inline], face: Face, runs: &mut Vec<(Face, String)>) {
    for inline in text {
        match inline {
            Inline::Text(text) => push(text, face, runs),
            Inline::Signal(signal) => push(signal.word(), Face { strong: true, ..face }, runs),
            Inline::Break => push("\n", face, runs),
            Inline::Strong(text) => collect(text, Face { strong: true, ..face }, runs),
            Inline::Emphasis(text) => collect(text, Face { emphasis: true, ..face }, runs),
            Inline::Link { href, text } => {
                collect(text, face, runs);
                if !href.starts_with('#') && plain(text) != *href {
                    push(&format!(" ({href})"), face, runs);
                }
            }
        }
    }
}

fn push(text: &str, face: Face, runs: &mut Vec<(Face, String)>) {
    match runs.last_mut() {
        _ if text.is_empty() => {}
        Some((last, run)) if *last == face => run.push_str(text),
        _ => runs.push((face, text.to_owned())),
    }
}

fn fits_rich(text: &str, runs: usize) -> bool {
    text.len() * MARKUP_PER_BYTE + runs * MARKUP_PER_RUN <= LONGEST
}

/// The text, cut to what a cell holds.
fn limited(text: Cow<'_, str>) -> Cow<'_, str> {
    // A UTF-16 unit is at least one byte of UTF-8.
    if text.len() <= LONGEST || text.encode_utf16().count() <= LONGEST {
        return text;
    }
    Cow::Owned(cut(&text, LONGEST - 1) + "…")
}

/// The beginning of a text, at most so many UTF-16 units.
pub(super) fn cut(text: &str, most: usize) -> String {
    let mut units = 0;
    let fits = |c: &char| {
        units += c.len_utf16();
        units <= most
    };
    text.chars().take_while(fits).collect()
}

/// `_x0041_` is the format's escape for a character; where a text says so itself, its underscore is escaped. The library does
/// this for plain strings alone.
fn escaped(text: &str) -> String {
    let bytes = text.as_bytes();
    let is_escape = |at: usize| {
        bytes.get(at..at + 7).is_some_and(|b| b.starts_with(b"_x") && b.ends_with(b"_") && b[2..6].iter().all(u8::is_ascii_hexdigit))
    };
    let mut escaped = String::with_capacity(text.len());
    for (at, c) in text.char_indices() {
        escaped.push_str(if is_escape(at) { "_x005F" } else { "" });
        escaped.push(c);
    }
    escaped
}
