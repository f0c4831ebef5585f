//! `insulation-resistance`.

use super::tested::{Saying, finding, in_unit, judge, shown, standard};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::insulation::{Edition, least};
use crate::quantity::{Measured, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Measures, Test, TestKind};
use crate::wording::Sentence;

const LEAST: Setting = Setting::new("least-megohms", 1.0, Unit::Megohm, (0.0, 100_000.0));
const OPERATING: Setting = Setting::new("operating-percent", 30.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "insulation-resistance",
        signal: Signal::Caution,
        basis: "IEC 60364-6:2006 and later, table of minimum insulation resistance; uncertainty IEC 61557-2; the NEC states no figure",
        settings: &[LEAST, OPERATING],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for test in &facts.visit.tests {
        if let TestKind::InsulationResistance { test_volts } = test.kind
            && let Some(measured) = in_unit(test, Unit::Megohm)
        {
            judged(facts, settings, test, test_volts, measured, out);
        }
    }
}

fn judged(facts: &Facts, settings: &Settings, test: &Test, test_volts: Option<f64>, measured: Measured, out: &mut Findings) {
    let limit = Limit { low: Some(settings.get(&LEAST)), high: None };
    let value = measured.value().unwrap_or_default();
    // Without a stated accuracy: the most an insulation tester may be off in use.
    let stated = standard(facts, Measures::Ohms, value);
    let u = if stated > 0.0 { stated } else { value * settings.get(&OPERATING) / 100.0 / settings.coverage() };
    let asked = least(Edition::Iec2006, facts.visit.system.line_to_neutral, false).map_or(0.0, |m| m.test.0);
    let weak = test_volts.is_some_and(|v| v < asked);
    let verdict = match judge(out, measured, u, limit) {
        // A lower test voltage than asked proves less: low readings count, good ones do not.
        Verdict::Pass if weak => Verdict::Undecided,
        verdict => verdict,
    };
    let (says, advice) = match verdict {
        Verdict::Pass => ("insulation-resistance.pass", "advice.none"),
        Verdict::Undecided if weak => ("insulation-resistance.weak", "insulation-resistance.weak-advice"),
        Verdict::Undecided => ("insulation-resistance.undecided", "insulation-resistance.recheck"),
        Verdict::Fail => ("insulation-resistance.low", "insulation-resistance.advice"),
    };
    let sentence = Sentence::new(says)
        .with("value", shown(measured, 2, Unit::Megohm))
        .number("limit", settings.get(&LEAST), 1, Unit::Megohm)
        .number("test", test_volts.unwrap_or_default(), 0, Unit::Volt)
        .number("asked", asked, 0, Unit::Volt);
    let saying = Saying { signal: Signal::Caution, verdict, says: sentence, advice: Sentence::new(advice) };
    out.push(finding(out, test, saying, measured, u, Unit::Megohm).limit(limit.low, limit.high));
}
