//! What the rules found, by what, and what could not be used.

use super::{Draft, number, opt, stage, state, text};
use crate::report::Source;
use crate::report::document::{Cell, ColumnKind, Number, Table};
use crate::report::repair::Repair;
use crate::results::{Finding, Limit, Signal, Verdict};
use crate::wording::Language;
use std::collections::BTreeMap;

/// Limits named with a rule.
const MOST_LIMITS: usize = 8;

/// How many findings of each signal word failed and are undecided.
pub(super) fn summary(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("summary", language)
        .column("signal", ColumnKind::Signal, None)
        .column("failed", ColumnKind::Number, None)
        .column("undecided", ColumnKind::Number, None)
        .column("mended", ColumnKind::Number, None);
    let repair = Repair::of(source);
    let (mended, standing): (Vec<&Finding>, Vec<&Finding>) =
        shown(source).into_iter().partition(|f| repair.as_ref().is_some_and(|r| r.settles(f)));
    for signal in Signal::ALL.into_iter().rev() {
        let count = |v: Verdict| number(standing.iter().filter(|f| f.signal == signal && f.verdict == v).count() as f64, 0);
        let mended = mended.iter().filter(|f| f.signal == signal).count();
        let mended = if repair.is_some() { number(mended as f64, 0) } else { Cell::Empty };
        draft.row(vec![Cell::Signal(signal), count(Verdict::Fail), count(Verdict::Undecided), mended]);
    }
    draft.finish()
}

/// Every finding that failed or is undecided, worst first.
pub(super) fn findings(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("findings", language)
        .column("signal", ColumnKind::Signal, None)
        .column("verdict", ColumnKind::Verdict, None)
        .column("rule", ColumnKind::Name, None)
        .column("location", ColumnKind::Name, None)
        .column("state", ColumnKind::Text, None)
        .column("stage", ColumnKind::Text, None)
        .column("says", ColumnKind::Text, None)
        .column("measured", ColumnKind::Text, None)
        .column("limit", ColumnKind::Text, None)
        .column("advice", ColumnKind::Text, None)
        .column("basis", ColumnKind::Text, None)
        .column("cells", ColumnKind::Text, None)
        .column("mended", ColumnKind::Name, None);
    let repair = Repair::of(source);
    for f in shown(source) {
        let mended = repair.as_ref().filter(|r| r.settles(f)).map(|_| text(&language.text("report.yes")));
        let cells: Vec<String> = f.cells.iter().map(ToString::to_string).collect();
        draft.row(vec![
            Cell::Signal(f.signal),
            Cell::Verdict(f.verdict),
            text(f.rule),
            text(f.location.as_deref().unwrap_or_default()),
            opt(f.state.as_deref(), |s| text(&state(language, s))),
            opt(f.stage, |s| text(&stage(language, s))),
            text(&language.say(&f.says)),
            text(&measured(f, language)),
            text(&limit(f, language)),
            text(&language.say(&f.advice)),
            text(&f.basis),
            text(&cells.join(", ")),
            mended.unwrap_or(Cell::Empty),
        ]);
    }
    draft.finish()
}

/// What failed or is undecided, worst signal word first, failed before undecided, else in the order of the rules.
pub(in crate::report) fn shown<'a>(source: &Source<'a>) -> Vec<&'a Finding> {
    let mut shown: Vec<&Finding> = source.findings.iter().filter(|f| f.verdict != Verdict::Pass).collect();
    shown.sort_by_key(|f| (std::cmp::Reverse(f.signal), std::cmp::Reverse(f.verdict)));
    shown
}

/// `119.6 V ± 0.9 V`, or nothing.
pub(in crate::report) fn measured(f: &Finding, language: &Language) -> String {
    let Some(m) = f.measured else { return String::new() };
    let decimals = decimals(m.value, m.uncertainty);
    let value = language.quantity(m.value, decimals, m.unit);
    m.uncertainty.map_or(value.clone(), |u| format!("{value} ± {}", language.quantity(u, decimals, m.unit)))
}

/// `114.0 V to 126.0 V`, `at most 3.0 V`, `at least …`, or nothing.
pub(in crate::report) fn limit(f: &Finding, language: &Language) -> String {
    let (Some(limit), Some(m)) = (f.limit, f.measured) else { return String::new() };
    let show = |v: f64| language.quantity(v, decimals(v, m.uncertainty), m.unit);
    match limit {
        Limit { low: Some(low), high: Some(high) } if low > 0.0 || m.value < 0.0 => {
            format!("{} {} {}", show(low), language.text("report.to"), show(high))
        }
        Limit { high: Some(high), .. } => format!("{} {}", language.text("report.at-most"), show(high)),
        Limit { low: Some(low), high: None } => format!("{} {}", language.text("report.at-least"), show(low)),
        Limit { .. } => String::new(),
    }
}

/// Digits worth showing: one where the uncertainty is a tenth or more, two for small numbers.
fn decimals(value: f64, uncertainty: Option<f64>) -> u8 {
    match uncertainty {
        Some(u) if u < 0.095 => 2,
        Some(_) => 1,
        None if value.abs() < 10.0 && value != value.round() => 2,
        None => 1,
    }
}

/// The rules that judged something, with limits and basis.
pub(super) fn basis(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("basis", language)
        .column("rule", ColumnKind::Name, None)
        .column("title", ColumnKind::Text, None)
        .column("limits", ColumnKind::Text, None)
        .column("basis", ColumnKind::Text, None);
    let used = limits_used(source, language);
    for rule in source.rules {
        let used = used.get(rule.rule.as_str()).map(|limits| limits.join("; ")).unwrap_or_default();
        let limits = if rule.limits.is_empty() { used } else { rule.limits.clone() };
        draft.row(vec![text(&rule.rule), text(&rule.title), text(&limits), text(&rule.basis)]);
    }
    draft.finish()
}

/// The limits that each rule's findings were judged by, each once, no more than a table can show.
fn limits_used<'a>(source: &Source<'a>, language: &Language) -> BTreeMap<&'a str, Vec<String>> {
    let mut used: BTreeMap<&str, Vec<String>> = BTreeMap::new();
    for f in source.findings {
        let shown = used.entry(f.rule).or_default();
        if shown.len() < MOST_LIMITS {
            let limit = limit(f, language);
            if !limit.is_empty() && !shown.contains(&limit) {
                shown.push(limit);
            }
        }
    }
    used
}

/// Cells that were left out, or used with a remark.
pub(super) fn left_out(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("left-out", language)
        .column("cell", ColumnKind::Name, None)
        .column("severity", ColumnKind::Name, None)
        .column("found", ColumnKind::Text, None)
        .column("message", ColumnKind::Text, None);
    for p in source.problems {
        let place = p.cell.as_ref().map_or_else(|| p.sheet.as_deref().unwrap_or_default().to_owned(), ToString::to_string);
        let mut message = language.say(&p.message);
        if let Some(hint) = &p.hint {
            message = format!("{message} {}", language.say(hint));
        }
        let severity = language.text(&format!("report.{}", p.severity.name()));
        draft.row(vec![text(&place), text(&severity), text(&p.found), text(&message)]);
    }
    draft.finish()
}

/// A number with what is known of it.
pub(super) fn judged(
    value: f64,
    decimals: u8,
    uncertainty: Option<f64>,
    verdict: Option<Verdict>,
    cell: Option<crate::diag::CellRef>,
) -> Number {
    Number { value, decimals, uncertainty, verdict, cell, formula: None }
}
