//! Characters that steer how text is shown, wherever it is shown.

/// Bidirectional marks and overrides, invisible characters, line and paragraph separators, tags, and what XML can't hold. The
/// joiners U+200C and U+200D are none of them: scripts need them, and they do nothing beyond their neighbours.
#[must_use]
pub fn steers(c: char) -> bool {
    matches!(c, '\u{061C}' | '\u{180E}' | '\u{200B}' | '\u{200E}' | '\u{200F}' | '\u{2028}'..='\u{202E}' | '\u{2060}'..='\u{206F}')
        || matches!(c, '\u{FEFF}' | '\u{FFF9}'..='\u{FFFB}' | '\u{FFFE}' | '\u{FFFF}' | '\u{E0000}'..='\u{E007F}')
}
