//! The manual: every rule of a book on its page, as typed rows and as Markdown.

use super::RULES;
use crate::quantity::Unit;
use crate::results::Signal;
use crate::rulebook::{Bounds, LimitQuantity, LimitRow, Place, Rulebook};
use crate::wording::{Language, Sentence};
use std::fmt::Write as _;

/// One rule's page.
#[derive(Clone, Debug)]
pub struct ManualPage {
    /// The rule's name.
    pub id: &'static str,
    /// Its title.
    pub title: String,
    /// Switched on.
    pub enabled: bool,
    /// Its signal word.
    pub signal: Signal,
    /// Its basis.
    pub basis: String,
    /// What it checks.
    pub checks: String,
    /// Why.
    pub why: String,
    /// How to read its findings.
    pub reading: String,
    /// Its settings.
    pub settings: Vec<ManualSetting>,
    /// Its limit rows.
    pub limits: Vec<ManualLimit>,
    /// The user's file that changed it.
    pub changed_in: Option<String>,
}

/// A setting as it is in force.
#[derive(Clone, Debug)]
pub struct ManualSetting {
    /// Its key.
    pub key: &'static str,
    /// Its value in force.
    pub value: f64,
    /// Its default.
    pub default: f64,
    /// Unit of both.
    pub unit: Unit,
    /// What it sets.
    pub meaning: String,
}

/// A limit row as it is in force.
#[derive(Clone, Debug)]
pub struct ManualLimit {
    /// Its profile.
    pub profile: String,
    /// It is used only where no profile before it has a row; the position of its profile in the order of preference, from 1.
    pub preference: usize,
    /// What it is for, in words: `120/240, line-to-neutral, service`.
    pub applies: String,
    /// Its range.
    pub range: String,
    /// Lowest value allowed, with its unit.
    pub low: Option<f64>,
    /// Highest value allowed.
    pub high: Option<f64>,
    /// Volts, or per cent of nominal.
    pub unit: Unit,
    /// Its signal word.
    pub signal: Signal,
    /// Its basis.
    pub basis: String,
}

/// The pages of a book, in its order.
#[must_use]
pub fn manual_pages(book: &Rulebook, language: &Language) -> Vec<ManualPage> {
    RULES.iter().filter_map(|rule| page(book, rule.spec.id, language)).collect()
}

fn page(book: &Rulebook, id: &'static str, language: &Language) -> Option<ManualPage> {
    let entry = book.rule(id)?;
    let text = |what: &str| language.text(&format!("{id}.{what}"));
    let settings = entry.spec.settings.iter().map(|s| ManualSetting {
        key: s.key,
        value: entry.get(s),
        default: s.default,
        unit: s.unit,
        meaning: text(&format!("set-{}", s.key)),
    });
    let signal = entry.signal.unwrap_or(entry.spec.signal);
    let mut limits: Vec<ManualLimit> = book.limits_of(id).map(|row| limit(row, &entry.profiles, entry.signal, language)).collect();
    limits.sort_by_key(|l| l.preference);
    Some(ManualPage {
        id,
        title: text("title"),
        enabled: entry.enabled,
        signal,
        basis: entry.basis().to_owned(),
        checks: text("checks"),
        why: text("why"),
        reading: text("reading"),
        settings: settings.collect(),
        limits,
        changed_in: entry.changed_in.clone(),
    })
}

fn limit(row: &LimitRow, profiles: &[String], user: Option<Signal>, language: &Language) -> ManualLimit {
    let name_of = |quantity| LimitQuantity::NAMED.iter().find(|n| n.1 == quantity).map_or("", |n| n.0);
    let place = Place::NAMED.iter().find(|n| n.1 == row.place).map_or("", |n| n.0);
    let nominal = row.nominal.map(|n| language.quantity(n, 0, Unit::Volt));
    let mut applies: Vec<String> = row.systems.iter().cloned().chain(nominal).collect();
    applies.push(name_of(row.quantity).to_owned());
    if row.place != Place::Any {
        applies.push(place.to_owned());
    }
    let (bounds, unit) = match row.bounds {
        Bounds::Volts(limit) => (limit, Unit::Volt),
        Bounds::Percent(limit) => (limit, Unit::Percent),
    };
    ManualLimit {
        profile: row.profile.clone(),
        preference: profiles.iter().position(|p| *p == row.profile).map_or(profiles.len() + 1, |i| i + 1),
        applies: applies.join(", "),
        range: row.range.clone(),
        low: bounds.low,
        high: bounds.high,
        unit,
        signal: user.or(row.signal).unwrap_or(Signal::Notice),
        basis: row.basis.clone(),
    }
}

/// The manual of a book as Markdown: what `midwire rules` prints and `docs/rules.md` holds. With names, those rules alone.
#[must_use]
pub fn manual(book: &Rulebook, language: &Language, names: &[String]) -> String {
    let mut out = format!("# {}\n\n{}\n", language.text("manual.title"), language.text("manual.intro"));
    let coverage = Sentence::new("manual.coverage").number("factor", book.coverage(), 1, Unit::One);
    let _ = write!(out, "\n{}\n", language.say(&coverage));
    for file in book.files() {
        let _ = write!(out, "\n{}\n", language.say(&Sentence::new("manual.laid-over").with("file", file.as_str())));
    }
    let wanted = |page: &&ManualPage| names.is_empty() || names.iter().any(|n| n == page.id);
    for page in manual_pages(book, language).iter().filter(wanted) {
        write_page(&mut out, page, language);
    }
    out
}

fn write_page(out: &mut String, page: &ManualPage, language: &Language) {
    let label = |key: &str| language.text(&format!("manual.{key}"));
    let _ = write!(out, "\n## {}\n\n**{}**", page.id, page.title);
    if !page.enabled {
        let _ = write!(out, " ({})", label("off"));
    }
    let _ = write!(out, "\n\n{}: {}. {}: {}.\n", label("signal"), page.signal, label("basis"), page.basis.trim_end_matches('.'));
    if let Some(file) = &page.changed_in {
        let _ = write!(out, "\n{}\n", language.say(&Sentence::new("manual.changed").with("file", file.as_str())));
    }
    for (key, text) in [("checks", &page.checks), ("why", &page.why), ("reading", &page.reading)] {
        let _ = write!(out, "\n{}: {text}\n", label(key));
    }
    write_settings(out, &page.settings, language);
    write_limits(out, &page.limits, language);
}

fn write_settings(out: &mut String, settings: &[ManualSetting], language: &Language) {
    if settings.is_empty() {
        return;
    }
    let label = |key: &str| language.text(&format!("manual.{key}"));
    let _ = write!(
        out,
        "\n| {} | {} | {} | {} |\n| --- | --- | --- | --- |\n",
        label("key"),
        label("value"),
        label("default"),
        label("meaning")
    );
    for s in settings {
        let shown = |v: f64| format!("{} {}", trimmed(v, language), s.unit).trim_end().to_owned();
        let _ = writeln!(out, "| `{}` | {} | {} | {} |", s.key, shown(s.value), shown(s.default), s.meaning);
    }
}

fn write_limits(out: &mut String, limits: &[ManualLimit], language: &Language) {
    if limits.is_empty() {
        return;
    }
    let heads = ["profile", "applies", "range", "low", "high", "signal", "basis"].map(|key| language.text(&format!("manual.{key}")));
    let _ = write!(out, "\n| {} |\n|{}\n", heads.join(" | "), " --- |".repeat(heads.len()));
    for l in limits {
        let bound = |v: Option<f64>| v.map_or_else(String::new, |v| format!("{} {}", trimmed(v, language), l.unit));
        let (low, high) = (bound(l.low), bound(l.high));
        let _ = writeln!(out, "| {} | {} | {} | {low} | {high} | {} | {} |", l.profile, l.applies, l.range, l.signal, l.basis);
    }
}

/// A number with as many decimals as it needs, at most three.
fn trimmed(value: f64, language: &Language) -> String {
    let decimals = (0u8..3).find(|d| (value - round(value, *d)).abs() < 1e-9).unwrap_or(3);
    language.number(value, decimals)
}

fn round(value: f64, decimals: u8) -> f64 {
    let scale = (0..decimals).fold(1.0, |s, _| s * 10.0);
    (value * scale).round() / scale
}
