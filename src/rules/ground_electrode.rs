//! `ground-electrode`.

use super::tested::{Saying, finding, in_unit, judge, shown, standard};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::grounding::SECOND_ELECTRODE_ABOVE;
use crate::quantity::Unit;
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Measures, TestKind};
use crate::wording::Sentence;

const LIMIT: Setting = Setting::new("limit-ohms", SECOND_ELECTRODE_ABOVE.0, Unit::Ohm, (0.0, 10_000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "ground-electrode",
        signal: Signal::Notice,
        basis: "NEC 250.53(A)(2): a single rod, pipe or plate above 25 Ω wants a second electrode; no further test is asked for",
        settings: &[LIMIT],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let limit = Limit { low: None, high: Some(settings.get(&LIMIT)) };
    for test in facts.visit.tests.iter().filter(|t| t.kind == TestKind::GroundElectrode) {
        let Some(measured) = in_unit(test, Unit::Ohm) else { continue };
        let u = standard(facts, Measures::Ohms, measured.value().unwrap_or_default());
        let verdict = judge(out, measured, u, limit);
        let (says, advice) = match verdict {
            Verdict::Pass => ("ground-electrode.pass", "advice.none"),
            Verdict::Undecided => ("ground-electrode.undecided", "ground-electrode.advice"),
            Verdict::Fail => ("ground-electrode.over", "ground-electrode.advice"),
        };
        let sentence = Sentence::new(says).with("value", shown(measured, 1, Unit::Ohm)).number("limit", settings.get(&LIMIT), 0, Unit::Ohm);
        let saying = Saying { signal: Signal::Notice, verdict, says: sentence, advice: Sentence::new(advice) };
        out.push(finding(out, test, saying, measured, u, Unit::Ohm).limit(limit.low, limit.high));
    }
}
