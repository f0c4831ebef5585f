//! `gfci-trip`.

use super::tested::{Saying, finding, in_unit, judge, shown};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::gfci::{CURVE_END, MUST_HOLD, MUST_TRIP, longest_residual_device_time, longest_trip_time};
use crate::quantity::{Amperes, Measured, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::{Test, TestKind};
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "gfci-trip",
        signal: Signal::Warning,
        basis: "UL 943, class A: trips from 6 mA, holds below 4 mA, within (20/I)^1.43 s; 230 V systems: IEC 61008-1, 30 mA",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    // Class A devices belong to 120 V circuits; elsewhere a residual-current device of 30 mA is taken.
    let class_a = facts.visit.system.line_to_neutral.0 < 200.0;
    for test in &facts.visit.tests {
        match test.kind {
            TestKind::GfciTripCurrent if class_a => current(test, out),
            TestKind::GfciTripTime { test_milliamperes } => {
                if let Some(measured) = in_unit(test, Unit::Millisecond) {
                    time(test, test_milliamperes, class_a, measured, out);
                }
            }
            _ => {}
        }
    }
}

fn current(test: &Test, out: &mut Findings) {
    let Some(measured) = in_unit(test, Unit::Milliampere) else { return };
    let limit = Limit { low: Some(1000.0 * MUST_HOLD.0), high: Some(1000.0 * MUST_TRIP.0) };
    let verdict = judge(out, measured, 0.0, limit);
    let early = measured.value().is_some_and(|v| limit.low.is_some_and(|low| v < low));
    let (says, advice, signal) = match (verdict, early) {
        (Verdict::Pass, _) => ("gfci-trip.current-pass", "advice.none", Signal::Notice),
        (Verdict::Fail, true) => ("gfci-trip.current-early", "gfci-trip.early-advice", Signal::Notice),
        (Verdict::Fail, false) => ("gfci-trip.current-late", "gfci-trip.advice", Signal::Warning),
        (Verdict::Undecided, _) => ("gfci-trip.current-unclear", "gfci-trip.advice", Signal::Warning),
    };
    let sentence = Sentence::new(says)
        .with("value", shown(measured, 1, Unit::Milliampere))
        .number("low", 1000.0 * MUST_HOLD.0, 0, Unit::Milliampere)
        .number("high", 1000.0 * MUST_TRIP.0, 0, Unit::Milliampere);
    let saying = Saying { signal, verdict, says: sentence, advice: Sentence::new(advice) };
    out.push(finding(out, test, saying, measured, 0.0, Unit::Milliampere).limit(limit.low, limit.high));
}

/// The longest time allowed at the test current. Where that was not noted, only the ends of the curve decide: longer than at 6 mA
/// fails, shorter than at its far end passes.
fn time(test: &Test, milliamperes: Option<f64>, class_a: bool, measured: Measured, out: &mut Findings) {
    let longest = |residual: Amperes| {
        let t = if class_a { longest_trip_time(residual) } else { longest_residual_device_time(residual) };
        t.map(|t| 1000.0 * t.0)
    };
    let at = |high| judge(out, measured, 0.0, Limit { low: None, high });
    let (limit, verdict) = match milliamperes {
        Some(i) => {
            let limit = longest(Amperes(i / 1000.0));
            (limit, if limit.is_some() { at(limit) } else { Verdict::Undecided })
        }
        None => {
            let (slow, fast) = if class_a { (MUST_TRIP, CURVE_END) } else { (Amperes(0.030), Amperes(0.150)) };
            match (at(longest(slow)), at(longest(fast))) {
                (Verdict::Fail, _) => (longest(slow), Verdict::Fail),
                (_, Verdict::Pass) => (longest(fast), Verdict::Pass),
                _ => (longest(fast), Verdict::Undecided),
            }
        }
    };
    let (says, advice) = match (verdict, milliamperes) {
        (Verdict::Pass, _) => ("gfci-trip.time-pass", "advice.none"),
        (Verdict::Fail, _) => ("gfci-trip.time-late", "gfci-trip.advice"),
        (Verdict::Undecided, None) => ("gfci-trip.time-unstated", "gfci-trip.unstated-advice"),
        (Verdict::Undecided, Some(_)) => ("gfci-trip.time-below", "gfci-trip.unstated-advice"),
    };
    let sentence = Sentence::new(says)
        .with("value", shown(measured, 0, Unit::Millisecond))
        .number("limit", limit.unwrap_or_default(), 0, Unit::Millisecond)
        .number("current", milliamperes.unwrap_or_default(), 0, Unit::Milliampere);
    let signal = if verdict == Verdict::Fail { Signal::Warning } else { Signal::Notice };
    let saying = Saying { signal, verdict, says: sentence, advice: Sentence::new(advice) };
    out.push(finding(out, test, saying, measured, 0.0, Unit::Millisecond).limit(None, limit));
}
