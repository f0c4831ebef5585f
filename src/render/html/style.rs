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
    let night =
        format!("@media screen and (prefers-color-scheme:dark){{:root{{{}}}\n{}}}\n", colours(meta.accent, NIGHT), drawings(meta.accent));
    day + &night + FIXED + &paper_rule(meta)
}

/// The colours that depend on what is behind them.
fn colours(accent: [u8; 3], paper: [u8; 3]) -> String {
    let night = paper == NIGHT;
    let by_day = |colour: Colour, at_night| if night { at_night } else { colour.srgb(accent) };
    let mut css = String::new();
    let mut set = |name: &str, colour| {
        let _ = write!(css, "--{name}:{};", hex(colour));
    };
    set("paper", paper);
    set("ground", if night { [0x10, 0x14, 0x18] } else { [0xf3, 0xf5, 0xf5] });
    set("ink", by_day(Colour::Ink, [0xe6, 0xea, 0xee]));
    set("quiet", by_day(Colour::Quiet, [0xa3, 0xae, 0xb8]));
    set("faint", by_day(Colour::Faint, [0x45, 0x50, 0x5a]));
    set("band", by_day(Colour::Band, [0x24, 0x32, 0x33]));
    set("accent", readable(accent, paper, contrast::TEXT));
    for signal in Signal::ALL {
        let at_night = match signal {
            Signal::Danger => [0xff, 0x7b, 0x8a],
            Signal::Warning => [0xf5, 0x9a, 0x5c],
            Signal::Caution => [0xdd, 0xbd, 0x52],
            Signal::Notice => [0x84, 0xb8, 0xda],
        };
        set(&signal.word().to_lowercase(), readable(by_day(Colour::Signal(signal), at_night), paper, ON_TINT));
    }
    css
}

/// Drawings carry the colours of the day; at night the same roles take theirs.
fn drawings(accent: [u8; 3]) -> String {
    let roles = [
        ("paper", Colour::Paper),
        ("ink", Colour::Ink),
        ("quiet", Colour::Quiet),
        ("faint", Colour::Faint),
        ("band", Colour::Band),
        ("accent", Colour::Accent),
    ];
    let roles = roles.map(|(name, role)| (name.to_owned(), role)).into_iter();
    let roles = roles.chain(Signal::ALL.map(|s| (s.word().to_lowercase(), Colour::Signal(s))));
    let mut css = String::new();
    for (name, role) in roles {
        let day = hex(role.srgb(accent));
        for paint in ["fill", "stroke"] {
            let _ = writeln!(css, ".drawing [{paint}=\"{day}\"]{{{paint}:var(--{name})}}");
        }
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

#[cfg(test)]
mod tests {
    use super::*;

    fn variable(css: &str, name: &str) -> [u8; 3] {
        let value = css.split(&format!("--{name}:#")).nth(1).and_then(|s| s.get(..6)).expect("the variable is set");
        [0, 2, 4].map(|i| u8::from_str_radix(&value[i..i + 2], 16).expect("a hexadecimal colour"))
    }

    // WCAG 2.2: 4.5 for text, 3 for graphical objects (success criterion 1.4.11).
    #[test]
    fn text_can_be_read_on_every_ground_by_day_and_at_night() {
        for accent in [[0x1f, 0x4d, 0x45], [0xff, 0xe0, 0x40], [0; 3], [255; 3], [0x80; 3]] {
            for paper in [[255; 3], NIGHT] {
                let css = colours(accent, paper);
                for name in ["ink", "quiet", "accent", "danger", "warning", "caution", "notice"] {
                    assert!(contrast::ratio(variable(&css, name), paper) >= 4.5, "{name} on {paper:?}");
                }
                for signal in Signal::ALL {
                    let colour = variable(&css, &signal.word().to_lowercase());
                    let tint = [0, 1, 2].map(|i| ((u16::from(colour[i]) * 6 + u16::from(paper[i]) * 94) / 100) as u8);
                    assert!(contrast::ratio(colour, tint) >= 4.5, "{signal} on its tint");
                    assert!(contrast::ratio(variable(&css, "ink"), tint) >= 4.5 && contrast::ratio(variable(&css, "quiet"), tint) >= 4.5);
                }
            }
        }
    }

    #[test]
    fn css_strings_end_where_they_should() {
        assert_eq!(quoted("a\"}b\\</style>"), r#""a\22 \7d b\5c \3c \2f style\3e ""#);
        assert_eq!(numbered("Page {page} of {pages}"), r#""Page " counter(page) " of " counter(pages) """#);
    }
}
