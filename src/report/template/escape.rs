//! Text into Markdown, so that it comes out as exactly that text.

use crate::report::facts::steers;
use std::io::{self, Write};

/// Writes a text with every ASCII punctuation mark behind a backslash (CommonMark 2.4), line ends and tabs as blanks, and
/// characters that control or reorder made visible.
pub(super) fn markdown(text: &str, out: &mut dyn Write) -> io::Result<()> {
    for c in text.chars() {
        match c {
            '\n' | '\t' | '\u{2028}' | '\u{2029}' => out.write_all(b" ")?,
            '\r' => {}
            c if c.is_ascii_punctuation() => write!(out, "\\{c}")?,
            c if c.is_control() || steers(c) => write!(out, "⟨U+{:04X}⟩", u32::from(c))?,
            c => write!(out, "{c}")?,
        }
    }
    Ok(())
}
