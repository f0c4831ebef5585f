//! Text into Markdown and out again, so that it comes out as exactly that text.
//!
//! A value enters the Markdown opaque: each byte of it as one private-use character, which Markdown takes for a letter. No value
//! can begin, end or break a structure, whatever stands in it and wherever the template puts it, and none is changed: blanks at
//! its ends stay, and so do entities and backslashes. The reader of the Markdown decodes texts and targets, never structure.

use crate::report::facts::visible;
use std::io::{self, Write};

/// The private-use character of byte 0; the other 255 follow.
const FIRST: u32 = 0xE000;
/// Stands for a value without text, so that what is around it stays what it is.
const NOTHING: char = '\u{E100}';

/// Writes a value opaque.
pub(super) fn opaque(text: &str, out: &mut dyn Write) -> io::Result<()> {
    if text.is_empty() {
        return write!(out, "{NOTHING}");
    }
    text.bytes().filter_map(|b| char::from_u32(FIRST + u32::from(b))).try_for_each(|c| write!(out, "{c}"))
}

/// The byte that a character stands for.
fn byte(c: char) -> Option<u8> {
    u32::from(c).checked_sub(FIRST).and_then(|b| u8::try_from(b).ok())
}

/// Whether a character belongs to an opaque value.
fn is_opaque(c: char) -> bool {
    byte(c).is_some() || c == NOTHING
}

/// The text of a template with its own characters of the opaque range taken out.
pub(super) fn plain(template: &str) -> String {
    template.chars().map(|c| if is_opaque(c) { char::REPLACEMENT_CHARACTER } else { c }).collect()
}

/// Text as a reader sees it: values as they are, what controls or reorders made visible.
pub(super) fn decoded(text: &str) -> String {
    replaced(text, |bytes, out| out.push_str(&visible(&String::from_utf8_lossy(bytes))))
}

/// A target as a reader follows it: values percent-encoded (RFC 3986), so that none can name a scheme, a host or a fragment.
pub(super) fn target(text: &str) -> String {
    replaced(text, |bytes, out| {
        for b in bytes {
            match b {
                b'A'..=b'Z' | b'a'..=b'z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' => out.push(char::from(*b)),
                b => out.push_str(&format!("%{b:02X}")),
            }
        }
    })
}

/// Puts each run of opaque bytes through `show`.
fn replaced(text: &str, show: impl Fn(&[u8], &mut String)) -> String {
    let mut out = String::with_capacity(text.len());
    let mut bytes = Vec::new();
    for c in text.chars() {
        match byte(c) {
            Some(b) => bytes.push(b),
            None => {
                show(&std::mem::take(&mut bytes), &mut out);
                if c != NOTHING {
                    out.push(c);
                }
            }
        }
    }
    show(&bytes, &mut out);
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    fn encoded(text: &str) -> String {
        let mut out = Vec::new();
        opaque(text, &mut out).unwrap();
        String::from_utf8(out).unwrap()
    }

    #[test]
    fn a_value_comes_out_as_it_went_in() {
        for text in ["", " a ", "**b**", "&amp; <b> \\", "Ω – ⚡", "\u{E041}\u{E100}"] {
            assert_eq!(decoded(&format!("x{}y", encoded(text))), format!("x{text}y"));
        }
    }

    #[test]
    fn a_value_is_letters_to_markdown() {
        assert!(encoded("# *a*\n\n> b").chars().all(|c| is_opaque(c) && !c.is_whitespace() && !c.is_ascii()));
    }

    #[test]
    fn a_value_names_no_scheme() {
        assert_eq!(target(&encoded("javascript:alert(1)")), "javascript%3Aalert%281%29");
        assert_eq!(target(&format!("https://ferry.example/?q={}", encoded("a/b é"))), "https://ferry.example/?q=a%2Fb%20%C3%A9");
    }
}
