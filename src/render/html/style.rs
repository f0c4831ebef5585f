//! The style sheet: a fixed part, and what depends on the document — colours, paper, running lines.

use crate::render::contrast::{self, hex, readable};
use crate::render::text::visible;
use crate::report::document::{Meta, PageSize};
use crate::report::drawing::Colour;
use crate::results::Signal;
use std::fmt::Write as _;

const FIXED: &str = include_str!("page.css");
/// Paper of the dark scheme.
const NIGHT: [u8; 3] = [0x16, 0x1b, 0x20];
/// Tints of signal colours behind text lower its contrast; this much more is asked for.
const ON_TINT: f64 = 5.6;

/// The document's style sheet.
pub(super) fn sheet(meta: &Meta) -> String {
    let paper = Colour::Paper.srgb(meta.accent);
    let day = format!(":root{{{}}}\n", colours(meta.accent, paper));
    let night = format!("@media screen and (prefers-color-scheme:dark){{:root{{{}}}}}\n", colours(meta.accent, NIGHT));
    day + &night + FIXED + &paper_rule(meta)
}

/// The colours that depend on what is behind them.
fn colours(accent: [u8; 3], paper: [u8; 3]) -> String {
    let mut css = format!("--accent:{};", hex(readable(accent, paper, contrast::TEXT)));
    for signal in Signal::ALL {
        let colour = readable(Colour::Signal(signal).srgb(accent), paper, ON_TINT);
        let _ = write!(css, "--{}:{};", signal.word().to_lowercase(), hex(colour));
    }
    let roles = if paper == NIGHT {
        [
            ("paper", NIGHT),
            ("ground", [0x10, 0x14, 0x18]),
            ("ink", [0xe6, 0xea, 0xee]),
            ("quiet", [0xa3, 0xae, 0xb8]),
            ("faint", [0x3a, 0x44, 0x4d]),
        ]
    } else {
        [
            ("paper", paper),
            ("ground", [0xf3, 0xf5, 0xf5]),
            ("ink", Colour::Ink.srgb(accent)),
            ("quiet", Colour::Quiet.srgb(accent)),
            ("faint", Colour::Faint.srgb(accent)),
        ]
    };
    for (name, colour) in roles {
        let _ = write!(css, "--{name}:{};", hex(colour));
    }
    css
}

/// Paper size, margins and running lines of the print.
fn paper_rule(meta: &Meta) -> String {
    let size = match meta.page {
        PageSize::Letter => "letter",
        PageSize::A4 => "A4",
    };
    let left = quoted(&meta.footer_left);
    let right = numbered(if meta.page_words.is_empty() { "{page} / {pages}" } else { &meta.page_words });
    format!(
        "@page{{size:{size};margin:18mm 16mm 20mm;@bottom-left{{content:{left};font:8pt sans-serif;color:#55606b}}\
         @bottom-right{{content:{right};font:8pt sans-serif;color:#55606b}}}}\n"
    )
}

/// The words for the page number as CSS content.
fn numbered(words: &str) -> String {
    let pages = |text: &str| text.split("{pages}").map(quoted).collect::<Vec<_>>().join(" counter(pages) ");
    words.split("{page}").map(pages).collect::<Vec<_>>().join(" counter(page) ")
}

/// A CSS string that can't end early: all but letters, digits and blanks is escaped by number.
fn quoted(text: &str) -> String {
    let mut css = String::from("\"");
    for c in visible(text).chars() {
        if c.is_alphanumeric() || c == ' ' {
            css.push(c);
        } else {
            let _ = write!(css, "\\{:x} ", u32::from(c));
        }
    }
    css.push('"');
    css
}
