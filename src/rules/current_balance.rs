//! `current-balance`.

use super::{Facts, Findings, Rule, Settings};
use crate::quantity::{Unit, math};
use crate::results::{Balance, Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Quantity, ReadingRow};
use crate::wording::Sentence;

const LIMIT: Setting = Setting::new("limit-percent", 50.0, Unit::Percent, (0.0, 1000.0));
const LISTED: Setting = Setting::new("listed-percent", 30.0, Unit::Percent, (0.0, 1000.0));
const FROM: Setting = Setting::new("from-amperes", 20.0, Unit::Ampere, (0.0, 100_000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "current-balance",
        signal: Signal::Notice,
        basis: "Common practice, no source; NEC 210.11(B) on even sharing of branch-circuit loads",
        settings: &[LIMIT, LISTED, FROM],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in facts.visit.rows.iter().filter(|row| facts.at_service(row)) {
        measured(facts, settings, row, out);
    }
    if let Some(balance) = facts.balance {
        listed(facts, settings, balance, out);
    }
}

fn measured(facts: &Facts, settings: &Settings, row: &ReadingRow, out: &mut Findings) {
    let legs = facts.visit.system.legs();
    let known: Vec<_> = legs.iter().filter_map(|leg| Some((*leg, facts.known(row, Quantity::LineCurrent(*leg))?))).collect();
    let heaviest = known.iter().rev().max_by(|a, b| a.1.value.total_cmp(&b.1.value));
    let Some((leg, most)) = heaviest.filter(|(_, most)| known.len() == legs.len() && known.len() > 1 && most.value >= settings.get(&FROM))
    else {
        return;
    };
    let mean = known.iter().map(|(_, k)| k.value).sum::<f64>() / known.len() as f64;
    let deviation = known.iter().map(|(_, k)| (k.value - mean).abs()).fold(0.0, f64::max);
    let percent = 100.0 * deviation / mean;
    // One clamp's gain error cancels in a ratio; what is left are the counts.
    let standard = 100.0 * math::hypot(most.accuracy.counts(), most.accuracy.counts()) / mean;
    let limit = Limit { low: None, high: Some(settings.get(&LIMIT)) };
    let verdict = out.judge(percent, standard, limit);
    let key = if verdict == Verdict::Pass { "current-balance.pass" } else { "current-balance.uneven" };
    let says = Sentence::new(key)
        .number("percent", percent, 0, Unit::Percent)
        .number("limit", settings.get(&LIMIT), 0, Unit::Percent)
        .with("leg", leg.name())
        .number("amperes", most.value, 1, Unit::Ampere);
    out.push(
        out.of_row(verdict, row, most.cell(), says, "current-balance.advice")
            .measured(percent, Some(out.expanded(standard)), Unit::Percent)
            .limit(limit.low, limit.high)
            .related(known.iter().map(|(_, k)| k.cell().clone())),
    );
}

fn listed(facts: &Facts, settings: &Settings, balance: &Balance, out: &mut Findings) {
    let heaviest = balance.legs.iter().rev().max_by(|a, b| a.va.0.total_cmp(&b.va.0));
    let place = facts.visit.tree.roots.first().or(facts.visit.tree.order.first()).and_then(|r| facts.visit.runs.get(*r));
    let (Some(heaviest), Some(place)) = (heaviest, place) else { return };
    if heaviest.va.0 < settings.get(&FROM) * facts.visit.system.line_to_neutral.0 {
        return;
    }
    let limit = Limit { low: None, high: Some(settings.get(&LISTED)) };
    let verdict = out.judge(balance.imbalance_percent, 0.0, limit);
    let key = match verdict {
        Verdict::Pass => "current-balance.pass-listed",
        _ if balance.moves.is_empty() => "current-balance.uneven-listed",
        _ => "current-balance.uneven-moves",
    };
    let says = Sentence::new(key)
        .number("percent", balance.imbalance_percent, 0, Unit::Percent)
        .number("limit", settings.get(&LISTED), 0, Unit::Percent)
        .with("leg", heaviest.leg.name())
        .number("amperes", balance.neutral.0, 1, Unit::Ampere)
        .with("moves", balance.moves.len())
        .number("after", balance.imbalance_after_percent, 0, Unit::Percent);
    out.push(
        out.draft(verdict, &place.cell, says, Sentence::new("current-balance.advice"))
            .at(&place.name.value)
            .measured(balance.imbalance_percent, None, Unit::Percent)
            .limit(limit.low, limit.high),
    );
}
