//! `leg-difference`.

use super::facts::{Known, common_gain};
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{Limit, Signal};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Arrangement, Leg, ReadingRow};
use crate::wording::Sentence;

const SERVICE: Setting = Setting::new("service-percent", 3.0, Unit::Percent, (0.0, 100.0));
const ELSEWHERE: Setting = Setting::new("elsewhere-percent", 8.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec { id: "leg-difference", signal: Signal::Notice, basis: "Common practice, no source", settings: &[SERVICE, ELSEWHERE] },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        let mut legs = facts.to_neutral(row);
        // The high leg of a delta is meant to be higher.
        legs.retain(|(leg, _)| (facts.visit.system.arrangement, *leg) != (Arrangement::HighLegDelta, Leg::L2));
        let lowest = legs.iter().min_by(|a, b| a.1.value.total_cmp(&b.1.value)).copied();
        let highest = legs.iter().rev().max_by(|a, b| a.1.value.total_cmp(&b.1.value)).copied();
        if let (Some(low), Some(high)) = (lowest, highest)
            && low.0 != high.0
        {
            judge(facts, settings, row, low, high, out);
        }
    }
}

fn judge(facts: &Facts, settings: &Settings, row: &ReadingRow, low: (Leg, Known), high: (Leg, Known), out: &mut Findings) {
    let difference = high.1.value - low.1.value;
    let percent = settings.get(if facts.at_service(row) { &SERVICE } else { &ELSEWHERE });
    let limit = Limit { low: None, high: Some(facts.visit.system.line_to_neutral.0 * percent / 100.0) };
    let standard = common_gain(high.1.accuracy, difference, &[1.0, -1.0]);
    let verdict = out.judge(difference, standard, limit);
    let (says, advice) = match verdict {
        crate::results::Verdict::Pass => ("leg-difference.pass", "advice.none"),
        _ => ("leg-difference.apart", "leg-difference.advice"),
    };
    let sentence = Sentence::new(says)
        .with("low", low.0.name())
        .with("high", high.0.name())
        .number("difference", difference, 1, Unit::Volt)
        .number("limit", limit.high.unwrap_or_default(), 1, Unit::Volt);
    out.push(
        out.draft(verdict, high.1.cell(), sentence, Sentence::new(advice))
            .at(&row.location.value)
            .taken(&row.state, row.stage)
            .measured(difference, Some(out.expanded(standard)), Unit::Volt)
            .limit(limit.low, limit.high)
            .related([low.1.cell().clone()]),
    );
}
