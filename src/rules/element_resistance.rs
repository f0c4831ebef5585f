//! `element-resistance`.

use super::tested::{Saying, finding, in_unit, judge, shown, standard};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::element::{cold_ohms, working_ohms};
use crate::quantity::{Measured, Unit, Volts, Watts};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::{Measures, Test, TestKind};
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "element-resistance",
        signal: Signal::Notice,
        basis: "Working ohms V²/P; cold filament 1/16 to 1/9 of them by the resistivity of tungsten; cold element −10/+8 %, common practice",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    for test in &facts.visit.tests {
        let TestKind::ElementResistance { rated_watts: Some(watts), rated_volts, filament } = test.kind else { continue };
        let Some(measured) = in_unit(test, Unit::Ohm) else { continue };
        let volts = rated_volts.map_or(facts.visit.system.line_to_neutral, Volts);
        judged(facts, test, (Watts(watts), volts), filament, measured, out);
    }
}

fn judged(facts: &Facts, test: &Test, (watts, volts): (Watts, Volts), filament: bool, measured: Measured, out: &mut Findings) {
    let (Some(hot), Some((low, high))) = (working_ohms(watts, volts), cold_ohms(watts, volts, filament)) else { return };
    let limit = Limit { low: Some(low.0), high: Some(high.0) };
    let u = measured.value().map_or(0.0, |v| standard(facts, Measures::Ohms, v));
    let verdict = judge(out, measured, u, limit);
    let under = match measured {
        Measured::Value(v) | Measured::AtMost(v) => v < low.0,
        Measured::OverRange(_) | Measured::NotMeasured => false,
    };
    let (says, advice, signal) = match (verdict, measured, under) {
        (Verdict::Pass, _, _) if filament => ("element-resistance.filament", "element-resistance.filament-advice", Signal::Notice),
        (Verdict::Pass, ..) => ("element-resistance.pass", "advice.none", Signal::Notice),
        (Verdict::Undecided, ..) => ("element-resistance.undecided", "element-resistance.recheck", Signal::Notice),
        (_, Measured::OverRange(_), _) => ("element-resistance.open", "element-resistance.open-advice", Signal::Notice),
        (_, _, true) => ("element-resistance.low", "element-resistance.low-advice", Signal::Caution),
        (_, _, false) => ("element-resistance.high", "element-resistance.high-advice", Signal::Notice),
    };
    let sentence = Sentence::new(says)
        .with("value", shown(measured, 1, Unit::Ohm))
        .number("low", low.0, 1, Unit::Ohm)
        .number("high", high.0, 1, Unit::Ohm)
        .number("working", hot.0, 1, Unit::Ohm)
        .number("watts", watts.0, 0, Unit::Watt)
        .number("volts", volts.0, 0, Unit::Volt);
    let saying = Saying { signal, verdict, says: sentence, advice: Sentence::new(advice) };
    out.push(finding(out, test, saying, measured, u, Unit::Ohm).limit(limit.low, limit.high));
}
