//! Runs of text.

use super::mark;
use super::markup::Markup;
use crate::report::document::Inline;

/// Writes a run of text.
pub(super) fn write(page: &mut Markup, text: &[Inline]) {
    for inline in text {
        match inline {
            Inline::Text(text) => words(page, text),
            Inline::Strong(text) => page.element("strong", &[], |page| write(page, text)),
            Inline::Emphasis(text) => page.element("em", &[], |page| write(page, text)),
            Inline::Link { href, text } => link(page, href, text),
            Inline::Signal(signal) => mark::signal(page, *signal),
            Inline::Break => page.void("br", &[]),
        }
    }
}

/// Text in which the names of quantities (`L1-N`, `N-G`) are kept on one line.
pub(super) fn words(page: &mut Markup, text: &str) {
    for (n, word) in text.split(' ').enumerate() {
        page.text(if n > 0 { " " } else { "" });
        if is_quantity(word) {
            page.element("span", &[("class", "whole")], |page| page.text(word));
        } else {
            page.text(word);
        }
    }
}

/// Two short names joined by a hyphen, with or without a mark behind them.
fn is_quantity(word: &str) -> bool {
    let is_name = |name: &str| (1..=3).contains(&name.len()) && name.bytes().all(|b| b.is_ascii_uppercase() || b.is_ascii_digit());
    word.trim_end_matches([',', '.', ':', ';', ')']).split_once('-').is_some_and(|(a, b)| is_name(a) && is_name(b))
}

/// A link within the document, to a secure page or to a mail address; the text of any other stands alone.
fn link(page: &mut Markup, href: &str, text: &[Inline]) {
    if let Some(anchor) = href.strip_prefix('#') {
        page.element("a", &[("href", &format!("#{}", identifier(anchor)))], |page| write(page, text));
    } else if href.starts_with("https://") || href.starts_with("mailto:") {
        page.element("a", &[("href", href), ("rel", "noopener noreferrer")], |page| write(page, text));
    } else {
        write(page, text);
    }
}

/// An anchor as an identifier: blanks and what has a meaning in addresses become `-`.
pub(super) fn identifier(anchor: &str) -> String {
    anchor.chars().map(|c| if c.is_alphanumeric() || matches!(c, '-' | '_' | '.') { c } else { '-' }).collect()
}
