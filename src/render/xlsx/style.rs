//! Cell formats, and the conditional ones of signal words and verdicts.
//!
//! Nothing is said by colour alone: the words stand in the cells, the fills fall in darkness with severity, what failed is bold,
//! what is undecided is italic.

use crate::render::contrast;
use crate::report::document::Number;
use crate::report::drawing::Colour;
use crate::results::{Signal, Verdict};
use rust_xlsxwriter::{Color, ConditionalFormatCell, ConditionalFormatCellRule, Format, FormatAlign, FormatBorder, Worksheet, XlsxError};

/// The formats of a workbook.
pub(super) struct Styles {
    /// A sheet's title.
    pub title: Format,
    /// A fact's label.
    pub label: Format,
    /// A fact's value, and the line that stands where a table has no rows.
    pub value: Format,
    /// A table's caption.
    pub caption: Format,
    /// A row that heads a group.
    pub group: Format,
    /// Text, signal words and verdicts.
    pub text: Format,
    /// The accent, dark enough to be read on white.
    pub accent: [u8; 3],
    heading: Format,
    number: Format,
}

const WHITE: [u8; 3] = [0xff; 3];
const HEADING_FILL: u32 = 0xEEF2F1;
const GROUP_FILL: u32 = 0xF6F8F8;

impl Styles {
    /// The formats with a company's accent.
    pub(super) fn new(accent: [u8; 3]) -> Self {
        let accent = contrast::readable(accent, WHITE, contrast::TEXT);
        let ink = color(Colour::Ink.srgb(accent));
        let quiet = color(Colour::Quiet.srgb(accent));
        let faint = color(Colour::Faint.srgb(accent));
        let plain = Format::new().set_font_color(ink).set_align(FormatAlign::Top);
        let data = plain.clone().set_border_bottom(FormatBorder::Thin).set_border_bottom_color(faint);
        let heading = plain.clone().set_bold().set_text_wrap().set_align(FormatAlign::Bottom).set_background_color(HEADING_FILL);
        let heading = heading.set_border_bottom(FormatBorder::Medium).set_border_bottom_color(color(accent));
        Self {
            title: plain.clone().set_bold().set_font_size(16).set_font_color(color(accent)).set_align(FormatAlign::VerticalCenter),
            label: plain.clone().set_font_color(quiet),
            value: plain.clone(),
            caption: plain.set_bold().set_font_size(12),
            heading,
            group: data.clone().set_bold().set_background_color(GROUP_FILL),
            text: data.clone().set_text_wrap(),
            number: data,
            accent,
        }
    }

    /// The heading of a column; at the top where a filter's button stands below it.
    pub(super) fn heading(&self, filtered: bool) -> Format {
        if filtered { self.heading.clone().set_align(FormatAlign::Top) } else { self.heading.clone() }
    }

    /// The heading of a column of numbers.
    pub(super) fn number_heading(&self, uncertain: bool, filtered: bool) -> Format {
        spaced(self.heading(filtered), uncertain)
    }

    /// A number with its decimals, as it was judged; `uncertain` where its uncertainty may stand right of it.
    pub(super) fn number(&self, number: &Number, uncertain: bool) -> Format {
        let pattern = pattern(number.decimals);
        let unsigned = number.formula.is_none() && number.value < 0.0 && !shows_a_digit(number);
        let pattern = if unsigned { format!("{pattern};{pattern}") } else { pattern };
        let format = spaced(self.number.clone(), uncertain).set_num_format(pattern);
        match number.verdict {
            Some(verdict @ (Verdict::Fail | Verdict::Undecided)) => format.merge(&judged(verdict)),
            Some(Verdict::Pass) | None => format,
        }
    }

    /// An uncertainty beside its number: a plain number that shows as `± 0.9`.
    pub(super) fn uncertainty(&self, decimals: u8) -> Format {
        self.number.clone().set_align(FormatAlign::Left).set_num_format(format!("\"± \"{}", pattern(decimals)))
    }
}

/// Text a little away from the column at its left.
pub(super) fn inset(format: &Format, at: u16) -> Format {
    if at > 0 { format.clone().set_align(FormatAlign::Left).set_indent(1) } else { format.clone() }
}

/// Right-aligned, away from the text at its right; the uncertainty belongs close to its number.
fn spaced(format: Format, uncertain: bool) -> Format {
    format.set_align(FormatAlign::Right).set_indent(u8::from(!uncertain))
}

/// Marks signal words and verdicts wherever they stand in a range.
pub(super) fn mark_words(sheet: &mut Worksheet, rows: (u32, u32), col: u16) -> Result<(), XlsxError> {
    let words = Signal::ALL.map(|s| (s.word(), signal(s))).into_iter();
    let verdicts = [Verdict::Fail, Verdict::Undecided, Verdict::Pass].map(|v| (v.name(), judged(v)));
    for (word, format) in words.chain(verdicts) {
        let rule = ConditionalFormatCell::new().set_rule(ConditionalFormatCellRule::EqualTo(word)).set_format(format);
        sheet.add_conditional_format(rows.0, col, rows.1, col, &rule)?;
    }
    Ok(())
}

fn signal(signal: Signal) -> Format {
    let ink = Colour::Signal(signal).srgb(WHITE);
    match signal {
        Signal::Danger => Format::new().set_bold().set_font_color(color(WHITE)).set_background_color(color(ink)),
        Signal::Warning => Format::new().set_bold().set_font_color(0x3D_1604).set_background_color(0xEFB08E),
        Signal::Caution => Format::new().set_bold().set_font_color(0x3E_2F00).set_background_color(0xF6E5A6),
        Signal::Notice => Format::new().set_font_color(color(ink)).set_background_color(0xEAF1F6),
    }
}

fn judged(verdict: Verdict) -> Format {
    match verdict {
        Verdict::Fail => {
            Format::new().set_bold().set_font_color(color(Colour::Signal(Signal::Danger).srgb(WHITE))).set_background_color(0xF7DDD9)
        }
        Verdict::Undecided => Format::new().set_italic().set_background_color(0xF3F0E4),
        Verdict::Pass => Format::new().set_font_color(color(Colour::Quiet.srgb(WHITE))),
    }
}

/// Number format with so many decimals; a spreadsheet shows the decimal mark of its own language. The format allows 30.
fn pattern(decimals: u8) -> String {
    match usize::from(decimals.min(30)) {
        0 => "0".to_owned(),
        n => format!("0.{}", "0".repeat(n)),
    }
}

/// Whether rounding to its decimals leaves the number anything but zeros: a spreadsheet would show the others as `-0.0`.
fn shows_a_digit(number: &Number) -> bool {
    format!("{:.1$}", number.value, usize::from(number.decimals)).bytes().any(|b| matches!(b, b'1'..=b'9'))
}

/// A colour in the library's form.
pub(super) fn color([r, g, b]: [u8; 3]) -> Color {
    Color::RGB(u32::from(r) << 16 | u32::from(g) << 8 | u32::from(b))
}
