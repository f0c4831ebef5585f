//! What a template knows: the values of a report, as text, in the words of its language.

mod actions;
mod causes;
mod groups;

use super::places::FIGURES;
use crate::diag::Severity;
use crate::quantity::Unit;
use crate::report::Source;
use crate::report::repair::Repair;
use crate::report::tables::{self, shown};
use crate::results::{Balance, Finding, Signal, Verdict};
use crate::visit::Stage;
use crate::wording::Language;
use serde::Serialize;
use std::collections::{BTreeMap, BTreeSet};

/// The values of a template; texts are as they stand in the workbook and are escaped where they are printed.
#[derive(Debug, Serialize)]
pub struct Context {
    site: BTreeMap<&'static str, String>,
    system: System,
    document: Identity,
    /// Is it safe? One of `danger`, `warning`, `open`, `caution`, `notice`, `clear`, `unjudged`.
    answer: &'static str,
    /// The worst signal word of what failed, or of what is undecided where that is the answer; empty where there is none.
    worst: &'static str,
    counts: BTreeMap<&'static str, usize>,
    findings: Vec<groups::Group>,
    /// Findings in groups beyond those told.
    more_findings: usize,
    actions: Vec<actions::Action>,
    /// How many of the actions may follow from the cause found.
    follow_ups: usize,
    /// Actions beyond those told.
    more_actions: usize,
    diagnosis: Option<causes::Causes>,
    balance: Option<Legs>,
    has: BTreeMap<String, bool>,
    left_out: LeftOut,
}

#[derive(Debug, Serialize)]
struct System {
    name: String,
    line_to_neutral: String,
    line_to_line: String,
    three_phase: bool,
}

#[derive(Debug, Serialize)]
struct Identity {
    file: String,
    sha256: String,
    program: String,
    date: String,
}

#[derive(Debug, Serialize)]
struct Legs {
    neutral: String,
    imbalance: String,
    moves: usize,
    neutral_after: String,
    imbalance_after: String,
}

#[derive(Debug, Serialize)]
struct LeftOut {
    errors: usize,
    warnings: usize,
}

impl Context {
    /// Of a checked visit.
    pub fn new(source: &Source, language: &Language, date: Option<&str>, tables: &[&str], figures: &[&str]) -> Self {
        let shown = shown(source);
        let repair = Repair::of(source);
        let standing: Vec<&Finding> = shown.iter().copied().filter(|f| !repair.as_ref().is_some_and(|r| r.settles(f))).collect();
        let counts = counts(source, &standing, shown.len());
        let (answer, worst) = answer(&standing, counts["readings"] + counts["passed"]);
        let groups = groups::groups(source, &shown, repair.as_ref(), language);
        let (actions, more_actions) = actions::actions(&groups);
        let (findings, more_findings) = groups::told(groups);
        let errors = source.problems.iter().filter(|p| p.severity == Severity::Error).count();
        Self {
            site: site(source),
            system: system(source, language),
            document: Identity {
                file: source.file.to_owned(),
                sha256: source.sha256.to_owned(),
                program: source.program.to_owned(),
                date: date.unwrap_or_default().to_owned(),
            },
            answer,
            worst: worst.map_or("", Signal::word),
            counts,
            findings,
            more_findings,
            follow_ups: actions.iter().filter(|a| a.follows).count(),
            actions,
            more_actions,
            diagnosis: source.diagnosis.and_then(|d| causes::causes(source, d, language)),
            balance: source.balance.map(|b| legs(b, language)),
            has: has(source, tables, figures),
            left_out: LeftOut { errors, warnings: source.problems.len() - errors },
        }
    }

    /// All names a template can use, dotted.
    pub(super) fn names(&self) -> Vec<String> {
        let mut names = Vec::new();
        if let Ok(table) = toml::Table::try_from(self) {
            collect("", &toml::Value::Table(table), &mut names);
        }
        names
    }
}

/// Is it safe? What failed decides, unless something worse is undecided.
fn answer(shown: &[&Finding], judged: usize) -> (&'static str, Option<Signal>) {
    let worst = |verdict| shown.iter().filter(|f| f.verdict == verdict).map(|f| f.signal).max();
    match (worst(Verdict::Fail), worst(Verdict::Undecided)) {
        (Some(Signal::Danger), _) => ("danger", Some(Signal::Danger)),
        (Some(Signal::Warning), open) if open != Some(Signal::Danger) => ("warning", Some(Signal::Warning)),
        (_, open @ Some(Signal::Danger | Signal::Warning)) => ("open", open),
        (Some(Signal::Caution), _) | (_, Some(Signal::Caution)) => ("caution", Some(Signal::Caution)),
        (Some(_), _) | (_, Some(_)) => ("notice", Some(Signal::Notice)),
        (None, None) if judged == 0 => ("unjudged", None),
        (None, None) => ("clear", None),
    }
}

/// Findings that stand, failed by signal word, and all that was looked at.
fn counts(source: &Source, standing: &[&Finding], shown: usize) -> BTreeMap<&'static str, usize> {
    let count = |s: Signal| standing.iter().filter(|f| f.signal == s && f.verdict == Verdict::Fail).count();
    let undecided = standing.iter().filter(|f| f.verdict == Verdict::Undecided).count();
    let locations: BTreeSet<&str> = source.visit.rows.iter().map(|r| r.location.value.as_str()).collect();
    [
        ("danger", count(Signal::Danger)),
        ("warning", count(Signal::Warning)),
        ("caution", count(Signal::Caution)),
        ("notice", count(Signal::Notice)),
        ("failed", standing.len() - undecided),
        ("undecided", undecided),
        ("mended", shown - standing.len()),
        ("passed", source.findings.len() - shown + source.passed_unlisted),
        ("readings", source.visit.rows.iter().map(|r| r.readings.len()).sum()),
        ("locations", locations.len()),
        ("circuits", source.visit.runs.len()),
    ]
    .into()
}

/// Which tables, figures and more there are; of every name, so that asking is no error where there is none.
fn has(source: &Source, tables: &[&str], figures: &[&str]) -> BTreeMap<String, bool> {
    let key = |name: &str| name.replace('-', "_");
    let mut has: BTreeMap<String, bool> = tables::known().chain(FIGURES).map(|n| (key(n), false)).collect();
    has.extend(tables.iter().chain(figures).map(|n| (key(n), true)));
    has.insert("photos".into(), source.visit.photos.iter().any(|p| p.bytes.is_some()));
    has.insert("as_left".into(), source.visit.rows.iter().any(|r| r.stage == Stage::AsLeft));
    has
}

fn collect(prefix: &str, value: &toml::Value, names: &mut Vec<String>) {
    match value {
        toml::Value::Table(table) => {
            for (key, inner) in table {
                let name = if prefix.is_empty() { key.clone() } else { format!("{prefix}.{key}") };
                names.push(name.clone());
                collect(&name, inner, names);
            }
        }
        toml::Value::Array(items) => items.iter().take(1).for_each(|inner| collect(prefix, inner, names)),
        _ => {}
    }
}

fn legs(balance: &Balance, language: &Language) -> Legs {
    Legs {
        neutral: language.quantity(balance.neutral.0, 1, Unit::Ampere),
        imbalance: language.quantity(balance.imbalance_percent, 0, Unit::Percent),
        moves: balance.moves.len(),
        neutral_after: language.quantity(balance.neutral_after.0, 1, Unit::Ampere),
        imbalance_after: language.quantity(balance.imbalance_after_percent, 0, Unit::Percent),
    }
}

fn site(source: &Source) -> BTreeMap<&'static str, String> {
    let s = &source.visit.site;
    let text = |l: &Option<crate::diag::Located<String>>| l.as_ref().map_or_else(String::new, |l| l.value.clone());
    [
        ("job", text(&s.job)),
        ("client", text(&s.client)),
        ("address", text(&s.address)),
        ("date", s.date.as_ref().map_or_else(String::new, |d| d.value.to_string())),
        ("purpose", text(&s.purpose)),
        ("prepared_by", text(&s.prepared_by)),
        ("licence", text(&s.licence)),
        ("company", text(&s.company)),
        ("service_rating", text(&s.service_rating)),
        ("supplied_by", text(&s.supplied_by)),
        ("code", text(&s.code)),
        ("weather", text(&s.weather)),
        ("remarks", text(&s.remarks)),
    ]
    .into()
}

fn system(source: &Source, language: &Language) -> System {
    let s = &source.visit.system;
    System {
        name: s.name.clone(),
        line_to_neutral: language.quantity(s.line_to_neutral.0, 0, Unit::Volt),
        line_to_line: language.quantity(s.line_to_line.0, 0, Unit::Volt),
        three_phase: s.legs().len() > 2,
    }
}
