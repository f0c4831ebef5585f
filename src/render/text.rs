//! Text as a report may show it: nothing hidden, nothing that reorders its surroundings.

use std::borrow::Cow;
use std::fmt::Write as _;

/// The text with control characters and characters that hide or reorder text made visible; line ends become `\n`, tabs stay.
///
/// Joiners and directional marks (U+200C to U+200F) stay: scripts need them, and they change nothing beyond their neighbours.
pub(super) fn visible(text: &str) -> Cow<'_, str> {
    if !text.chars().any(|c| c == '\r' || hidden(c)) {
        return Cow::Borrowed(text);
    }
    let mut shown = String::with_capacity(text.len());
    let mut chars = text.chars().peekable();
    while let Some(c) = chars.next() {
        match c {
            '\r' if chars.peek() == Some(&'\n') => {}
            '\r' => shown.push('\n'),
            c if hidden(c) => {
                let _ = write!(shown, "⟨U+{:04X}⟩", u32::from(c));
            }
            c => shown.push(c),
        }
    }
    Cow::Owned(shown)
}

/// Control characters, invisible spaces, line separators, bidirectional embeddings and isolates, annotations, tags, and the code
/// points that no XML document may hold.
fn hidden(c: char) -> bool {
    (c.is_control() && !matches!(c, '\n' | '\t' | '\r'))
        || matches!(c, '\u{180E}' | '\u{200B}' | '\u{2028}'..='\u{202E}' | '\u{2060}'..='\u{206F}' | '\u{FEFF}')
        || matches!(c, '\u{FFF9}'..='\u{FFFB}' | '\u{FFFE}' | '\u{FFFF}' | '\u{E0000}'..='\u{E007F}')
}

/// What stands in place of a number that is none.
pub(super) fn not_finite(value: f64) -> &'static str {
    match value {
        v if v == f64::INFINITY => "∞",
        v if v == f64::NEG_INFINITY => "−∞",
        _ => "?",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_hides_or_reorders_is_shown() {
        let table = [
            ("5/7a north wall", "5/7a north wall"),
            ("a\r\nb\rc\nd\te", "a\nb\nc\nd\te"),
            ("\u{1b}[31mred", "⟨U+001B⟩[31mred"),
            ("nul\0", "nul⟨U+0000⟩"),
            ("\u{85}\u{202e}abc\u{2066}", "⟨U+0085⟩⟨U+202E⟩abc⟨U+2066⟩"),
            ("\u{ffff}\u{feff}", "⟨U+FFFF⟩⟨U+FEFF⟩"),
            ("می‌خواهم", "می‌خواهم"),
        ];
        for (given, shown) in table {
            assert_eq!(visible(given), shown);
        }
    }
}
