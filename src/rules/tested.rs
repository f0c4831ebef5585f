//! What the rules of the Tests sheet have in common.

use super::{Facts, Findings};
use crate::quantity::{Measured, Unit};
use crate::results::{Finding, Limit, Signal, Verdict};
use crate::visit::{Measures, Test};
use crate::wording::Sentence;

/// The result in another unit of its kind; `None` where it is of another kind.
pub(super) fn in_unit(test: &Test, unit: Unit) -> Option<Measured> {
    let factor = match (test.unit, unit) {
        (from, to) if from == to => 1.0,
        (Unit::Ohm, Unit::Megohm) => 1e-6,
        (Unit::Megohm, Unit::Ohm) => 1e6,
        (Unit::Second, Unit::Millisecond) | (Unit::Ampere, Unit::Milliampere) => 1e3,
        (Unit::Millisecond, Unit::Second) | (Unit::Milliampere, Unit::Ampere) => 1e-3,
        _ => return None,
    };
    Some(match test.value.value {
        Measured::NotMeasured => return None,
        Measured::Value(v) => Measured::Value(v * factor),
        Measured::OverRange(range) => Measured::OverRange(range.map(|r| r * factor)),
        Measured::AtMost(most) => Measured::AtMost(most * factor),
    })
}

/// Standard uncertainty by the only (or first) instrument listed that measures the kind; 0 where none states an accuracy.
pub(super) fn standard(facts: &Facts, measures: Measures, value: f64) -> f64 {
    let accuracy = facts.visit.instruments.iter().filter(|i| i.measures.value == measures).find_map(|i| i.accuracy());
    accuracy.map_or(0.0, |a| a.standard(value))
}

/// Verdict on a result that may be a bound only: `<0.5` fails a minimum above it, `>999` passes one below it.
pub(super) fn judge(out: &Findings, measured: Measured, standard: f64, limit: Limit) -> Verdict {
    match measured {
        Measured::Value(v) => out.judge(v, standard, limit),
        Measured::AtMost(most) => match (limit.low, limit.high) {
            (Some(low), _) if most < low => Verdict::Fail,
            (None, Some(high)) if most <= high => Verdict::Pass,
            _ => Verdict::Undecided,
        },
        // Without its range, over range is taken as beyond any limit: that is what the instrument means by it.
        Measured::OverRange(range) => match (limit.low, limit.high) {
            (Some(low), None) if range.is_none_or(|r| r >= low) => Verdict::Pass,
            (_, Some(high)) if range.is_none_or(|r| r >= high) => Verdict::Fail,
            _ => Verdict::Undecided,
        },
        Measured::NotMeasured => Verdict::Undecided,
    }
}

/// What a rule says of a test.
pub(super) struct Saying {
    pub signal: Signal,
    pub verdict: Verdict,
    pub says: Sentence,
    pub advice: Sentence,
}

/// A finding on a test: its place, its stage, its cells, what was measured with expanded uncertainty.
pub(super) fn finding(out: &Findings, test: &Test, saying: Saying, measured: Measured, standard: f64, unit: Unit) -> Finding {
    let mut finding = out.draft_as(saying.signal, saying.verdict, &test.value.cell, saying.says, saying.advice);
    if let Some(location) = &test.location {
        finding = finding.at(&location.value).related([location.cell.clone()]);
    }
    finding.stage = Some(test.stage);
    match measured.value() {
        Some(v) => finding.measured(v, (standard > 0.0).then(|| out.expanded(standard)), unit),
        None => finding,
    }
}

/// A result in words: `0.45 MΩ`, `at most 0.5 MΩ`, `over range`.
pub(super) fn shown(measured: Measured, decimals: u8, unit: Unit) -> Sentence {
    match measured {
        Measured::Value(v) => Sentence::new("tested.value").number("value", v, decimals, unit),
        Measured::AtMost(v) => Sentence::new("tested.at-most").number("value", v, decimals, unit),
        Measured::OverRange(Some(v)) => Sentence::new("tested.over").number("value", v, decimals, unit),
        Measured::OverRange(None) | Measured::NotMeasured => Sentence::new("tested.over-range"),
    }
}
