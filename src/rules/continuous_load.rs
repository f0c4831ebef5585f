//! `continuous-load`.

use super::listed;
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::ampacity::continuous_limit;
use crate::quantity::{Amperes, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Leg, Quantity};
use crate::wording::Sentence;

const LIMIT: Setting = Setting::new("limit-percent", 80.0, Unit::Percent, (1.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "continuous-load",
        signal: Signal::Caution,
        basis: "NEC 210.20(A) and 215.3: 125 % of what runs three hours or more; assemblies listed for 100 % excepted",
        settings: &[LIMIT],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        let breaker = row.run.and_then(|run| facts.visit.runs.get(run)).and_then(|run| run.breaker.as_ref());
        let Some(breaker) = breaker.filter(|b| b.value.0 > 0.0) else { continue };
        for leg in facts.visit.system.legs() {
            let Some(current) = facts.known(row, Quantity::LineCurrent(*leg)) else { continue };
            let most = allowed(settings, breaker.value);
            let limit = Limit { low: None, high: Some(most) };
            let verdict = out.judge(current.value, current.standard(), limit);
            let over = current.value > breaker.value.0;
            let (says, advice) = match (verdict, over) {
                (Verdict::Pass, _) => ("continuous-load.pass", "advice.none"),
                (Verdict::Undecided, _) => ("continuous-load.undecided", "continuous-load.advice"),
                (Verdict::Fail, false) => ("continuous-load.over", "continuous-load.advice"),
                (Verdict::Fail, true) => ("continuous-load.beyond", "continuous-load.beyond-advice"),
            };
            let sentence = said(says, *leg, current.value, breaker.value, most);
            let signal = if over { Signal::Warning } else { Signal::Caution };
            out.push(
                out.draft_as(signal, verdict, current.cell(), sentence, Sentence::new(advice))
                    .at(&row.location.value)
                    .taken(&row.state, row.stage)
                    .measured(current.value, Some(out.expanded(current.standard())), Unit::Ampere)
                    .limit(limit.low, limit.high)
                    .related([breaker.cell.clone()]),
            );
        }
    }
    from_list(facts, settings, out);
}

fn allowed(settings: &Settings, breaker: Amperes) -> f64 {
    // The built-in 80 % is the inverse of 125 %; another share is the user's.
    continuous_limit(breaker).0 * settings.get(&LIMIT) / LIMIT.default
}

fn said(key: &'static str, leg: Leg, amperes: f64, breaker: Amperes, most: f64) -> Sentence {
    Sentence::new(key)
        .with("leg", leg.name())
        .number("current", amperes, 1, Unit::Ampere)
        .number("breaker", breaker.0, 0, Unit::Ampere)
        .number("limit", most, 1, Unit::Ampere)
}

/// Final circuits whose listed loads together would pass the limit. A list does not say what runs at once or how long: a NOTICE.
fn from_list(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let visit = facts.visit;
    let currents = listed::currents(visit);
    let circuits = listed::final_circuits(visit);
    for (run, r) in visit.runs.iter().enumerate().filter(|(run, _)| circuits[*run]) {
        let Some(breaker) = r.breaker.as_ref().filter(|b| b.value.0 > 0.0) else { continue };
        let Some(leg) = visit.system.legs().iter().copied().rev().max_by(|a, b| currents[run].line(*a).total_cmp(&currents[run].line(*b)))
        else {
            continue;
        };
        let amperes = currents[run].line(leg);
        if amperes <= 0.0 {
            continue;
        }
        let most = allowed(settings, breaker.value);
        let limit = Limit { low: None, high: Some(most) };
        let verdict = out.judge(amperes, 0.0, limit);
        let (says, advice) = match verdict {
            Verdict::Pass => ("continuous-load.listed-pass", "advice.none"),
            _ => ("continuous-load.listed-over", "continuous-load.listed-advice"),
        };
        out.push(
            out.draft_as(Signal::Notice, verdict, &breaker.cell, said(says, leg, amperes, breaker.value, most), Sentence::new(advice))
                .at(&r.name.value)
                .measured(amperes, None, Unit::Ampere)
                .limit(limit.low, limit.high)
                .related(r.loads.iter().map(|l| l.watts.cell.clone())),
        );
    }
}
