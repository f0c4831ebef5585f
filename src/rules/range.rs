//! The limit engine: voltages against limit rows.

use super::{Facts, Findings, Settings};
use crate::results::{Finding, Limit, Signal, Verdict};
use crate::rulebook::LimitRow;
use crate::visit::{Quantity, Reading, ReadingRow};
use crate::wording::Sentence;

/// What a limit rule says, by verdict; the keys of its section.
pub(super) struct Says {
    pub pass: &'static str,
    pub fail_low: &'static str,
    pub fail_high: &'static str,
    pub undecided: &'static str,
    pub advice: &'static str,
    pub recheck: &'static str,
}

/// Holds every voltage of the visit against the limit rows of the rule.
pub(super) fn run(says: &Says, facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        for reading in &row.readings {
            let rows = rows_for(facts, settings, row, reading.quantity);
            let finding = judged(says, facts, row, reading, &rows, out);
            finding.into_iter().for_each(|f| out.push(f));
        }
    }
}

/// The limit rows for a reading: of the first profile that has any, the first of each range.
fn rows_for<'a>(facts: &Facts, settings: &Settings<'a>, row: &ReadingRow, quantity: Quantity) -> Vec<(&'a LimitRow, Limit)> {
    let at_service = facts.at_service(row);
    for profile in settings.profiles() {
        let mut ranges: Vec<(&LimitRow, Limit)> = Vec::new();
        for limit_row in settings.limits().iter().filter(|l| l.profile == *profile) {
            if let Some(limit) = limit_row.for_reading(quantity, &facts.visit.system, at_service)
                && ranges.iter().all(|(l, _)| l.range != limit_row.range)
            {
                ranges.push((limit_row, limit));
            }
        }
        if !ranges.is_empty() {
            return ranges;
        }
    }
    Vec::new()
}

/// One finding a reading: of the ranges, the one with the worst outcome; where all pass, the first.
fn judged(
    says: &Says,
    facts: &Facts,
    row: &ReadingRow,
    reading: &Reading,
    ranges: &[(&LimitRow, Limit)],
    out: &Findings,
) -> Option<Finding> {
    let value = reading.value.value()?;
    let standard = facts.visit.accuracy_of(row, reading.quantity).standard(value);
    let mut worst: Option<(Verdict, Signal, &LimitRow, Limit)> = None;
    for &(limit_row, limit) in ranges {
        let verdict = out.judge(value, standard, limit);
        let signal = limit_row.signal.unwrap_or(Signal::Notice);
        if worst.is_none_or(|(v, s, ..)| (v, s) < (verdict, signal) && verdict != Verdict::Pass) {
            worst = Some((verdict, signal, limit_row, limit));
        }
    }
    let (verdict, signal, limit_row, limit) = worst?;
    let (key, advice) = match verdict {
        Verdict::Pass => (says.pass, "advice.none"),
        Verdict::Undecided => (says.undecided, says.recheck),
        Verdict::Fail if limit.low.is_some_and(|low| value < low) => (says.fail_low, says.advice),
        Verdict::Fail => (says.fail_high, says.advice),
    };
    let unit = reading.quantity.unit();
    let sentence = Sentence::new(key)
        .with("quantity", reading.quantity.to_string())
        .number("value", value, 1, unit)
        .number("low", limit.low.unwrap_or(0.0), 1, unit)
        .number("high", limit.high.unwrap_or(0.0), 1, unit)
        .with("range", limit_row.range.as_str())
        .with("profile", limit_row.profile.as_str());
    let mut finding = out
        .draft_as(signal, verdict, &reading.cell, sentence, Sentence::new(advice))
        .at(&row.location.value)
        .taken(&row.state, row.stage)
        .measured(value, Some(out.expanded(standard)), unit)
        .limit(limit.low, limit.high);
    finding.basis = out.basis_or(&limit_row.basis).to_owned();
    Some(finding)
}
