//! `torque`.

use super::tested::{Saying, finding, in_unit, judge, shown};
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::TestKind;
use crate::wording::Sentence;

const TOLERANCE: Setting = Setting::new("tolerance-percent", 10.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "torque",
        signal: Signal::Caution,
        basis: "NEC 110.14(D) (2017 and later): the torque on the equipment or in its instructions; tolerance common practice, no source",
        settings: &[TOLERANCE],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let share = settings.get(&TOLERANCE) / 100.0;
    for test in &facts.visit.tests {
        let TestKind::Torque { specified } = test.kind else { continue };
        let Some(measured) = in_unit(test, Unit::NewtonMetre) else { continue };
        let specified = specified.filter(|s| *s > 0.0);
        let limit = specified.map_or(Limit::default(), |s| Limit { low: Some(s * (1.0 - share)), high: Some(s * (1.0 + share)) });
        let verdict = if specified.is_some() { judge(out, measured, 0.0, limit) } else { Verdict::Undecided };
        let low = measured.value().is_some_and(|v| limit.low.is_some_and(|low| v < low));
        let (says, advice) = match (verdict, specified, low) {
            (Verdict::Pass, ..) => ("torque.pass", "advice.none"),
            (_, None, _) => ("torque.unstated", "torque.unstated-advice"),
            (Verdict::Undecided, ..) => ("torque.undecided", "torque.advice"),
            (Verdict::Fail, _, true) => ("torque.loose", "torque.advice"),
            (Verdict::Fail, _, false) => ("torque.tight", "torque.tight-advice"),
        };
        let sentence = Sentence::new(says)
            .with("value", shown(measured, 1, Unit::NewtonMetre))
            .number("specified", specified.unwrap_or_default(), 1, Unit::NewtonMetre)
            .number("tolerance", settings.get(&TOLERANCE), 0, Unit::Percent);
        let saying = Saying { signal: Signal::Caution, verdict, says: sentence, advice: Sentence::new(advice) };
        out.push(finding(out, test, saying, measured, 0.0, Unit::NewtonMetre).limit(limit.low, limit.high));
    }
}
