//! Label and value pairs, photos, and the lines to sign on.

use super::Source;
use super::document::{CaptionedImage, Image};
use crate::diag::steers;
use crate::quantity::Unit;
use crate::wording::Language;
use std::fmt::Write as _;

/// Pairs by name: `site`, `service`, `document`.
pub(super) fn all(source: &Source, language: &Language, date: Option<&str>) -> Vec<(&'static str, Vec<(String, String)>)> {
    vec![("site", site(source, language)), ("service", service(source, language)), ("document", document(source, language, date))]
}

/// Keeps the pairs that say something, labels in words.
fn pairs(language: &Language, items: &[(&str, Option<String>)]) -> Vec<(String, String)> {
    let full = items.iter().filter_map(|(key, value)| Some((*key, value.as_deref().map(visible).filter(|v| !v.is_empty())?)));
    full.map(|(key, value)| (language.text(&format!("facts.{key}")), value)).collect()
}

fn site(source: &Source, language: &Language) -> Vec<(String, String)> {
    let s = &source.visit.site;
    let text = |l: &Option<crate::diag::Located<String>>| l.as_ref().map(|l| l.value.clone());
    pairs(
        language,
        &[
            ("job", text(&s.job)),
            ("client", text(&s.client)),
            ("address", text(&s.address)),
            ("date", s.date.as_ref().map(|d| d.value.to_string())),
            ("purpose", text(&s.purpose)),
            ("prepared-by", text(&s.prepared_by)),
            ("licence", text(&s.licence)),
            ("company", text(&s.company)),
        ],
    )
}

fn service(source: &Source, language: &Language) -> Vec<(String, String)> {
    let s = &source.visit.site;
    let system = &source.visit.system;
    let text = |l: &Option<crate::diag::Located<String>>| l.as_ref().map(|l| l.value.clone());
    let volts = |v: f64| language.quantity(v, 0, Unit::Volt);
    let nominal = format!("{} ({} / {})", system.name, volts(system.line_to_neutral.0), volts(system.line_to_line.0));
    pairs(
        language,
        &[
            ("system", Some(nominal)),
            ("service-rating", text(&s.service_rating)),
            ("supplied-by", text(&s.supplied_by)),
            ("code", text(&s.code)),
            ("weather", text(&s.weather)),
            ("remarks", text(&s.remarks)),
        ],
    )
}

fn document(source: &Source, language: &Language, date: Option<&str>) -> Vec<(String, String)> {
    pairs(
        language,
        &[
            ("workbook", Some(source.file.rsplit(['/', '\\']).next().unwrap_or(source.file).to_owned())),
            ("sha256", Some(source.sha256.to_owned())),
            ("program", Some(source.program.to_owned())),
            ("issued", date.map(str::to_owned)),
        ],
    )
}

/// Photos that could be read, with their captions.
pub(super) fn photos(source: &Source) -> Vec<CaptionedImage> {
    let photo = |p: &crate::visit::Photo| {
        let parts = [p.location.as_ref(), p.caption.as_ref()].into_iter().flatten().map(|l| visible(&l.value));
        let caption = parts.collect::<Vec<_>>().join(": ");
        let caption = if caption.is_empty() { visible(&p.file.value) } else { caption };
        Some(CaptionedImage { image: Image { bytes: p.bytes.clone()?, alt: caption.clone() }, caption })
    };
    source.visit.photos.iter().filter_map(photo).collect()
}

/// Who signs, with what is known.
pub(super) fn sign_off(source: &Source, language: &Language) -> Vec<(String, Option<String>)> {
    let s = &source.visit.site;
    let known = |l: &Option<crate::diag::Located<String>>| l.as_ref().map(|l| visible(&l.value));
    vec![
        (language.text("facts.name"), known(&s.prepared_by)),
        (language.text("facts.licence"), known(&s.licence)),
        (language.text("facts.signed-on"), None),
        (language.text("facts.signature"), None),
    ]
}

/// A text on one line, with characters that control or reorder made visible.
#[must_use]
pub fn visible(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut chars = text.chars().peekable();
    while let Some(c) = chars.next() {
        match c {
            '\r' if chars.peek() == Some(&'\n') => {}
            '\r' | '\n' | '\t' => out.push(' '),
            c if c.is_control() || steers(c) => {
                let _ = write!(out, "⟨U+{:04X}⟩", u32::from(c));
            }
            c => out.push(c),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::visible;

    #[test]
    fn what_controls_or_reorders_is_shown() {
        for (given, shown) in [
            ("north wall\r\nbehind the stove\rleft\tside", "north wall behind the stove left side"),
            ("\u{1b}[31mred\0", "⟨U+001B⟩[31mred⟨U+0000⟩"),
            ("\u{202e}gpj.exe\u{2066}", "⟨U+202E⟩gpj.exe⟨U+2066⟩"),
            ("می\u{200c}خواهم", "می\u{200c}خواهم"),
        ] {
            assert_eq!(visible(given), shown);
        }
    }
}
