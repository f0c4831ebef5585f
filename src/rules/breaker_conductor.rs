//! `breaker-conductor`.

use super::listed::protecting_breaker;
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::ampacity::{Column, Edition, dwelling_rating, largest_breaker, small_conductor_limit, usual_column};
use crate::quantity::{Amperes, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Arrangement, Run, Wire};
use crate::wording::Sentence;

const COLUMN: Setting = Setting::new("column-celsius", 0.0, Unit::Celsius, (0.0, 90.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "breaker-conductor",
        signal: Signal::Warning,
        basis: "NEC 240.4(B) and (D), 110.14(C), table 310.16; dwelling services 310.12 (2020 numbering)",
        settings: &[COLUMN],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let protected = protecting_breaker(facts.visit);
    let whole = carries_all(facts);
    for (run, r) in facts.visit.runs.iter().enumerate() {
        let Some(wire) = &r.wire else { continue };
        let Some(by) = protected[run].and_then(|by| facts.visit.runs.get(by)) else { continue };
        let Some(breaker) = by.breaker.as_ref().filter(|b| b.value.0 > 0.0) else { continue };
        let Some((strict, loose)) = allowed(settings, facts, wire.value, breaker.value, whole[run]) else { continue };
        let verdict = match breaker.value {
            b if b <= strict => Verdict::Pass,
            b if b <= loose => Verdict::Undecided,
            _ => Verdict::Fail,
        };
        say(facts, run, r, by, (breaker.value, strict, loose), verdict, out);
    }
}

/// Largest breaker whatever the terminals are marked, and with conductor and terminals marked for 75 °C. `None` for sizes the table
/// does not hold.
fn allowed(settings: &Settings, facts: &Facts, wire: Wire, breaker: Amperes, whole: bool) -> Option<(Amperes, Amperes)> {
    if let Some(limit) = small_conductor_limit(wire) {
        return Some((limit, limit));
    }
    let largest = |column| largest_breaker(wire, column, Edition::default());
    let set = settings.get(&COLUMN);
    let (strict, loose) = match set {
        c if c >= 90.0 => (largest(Column::C90)?, largest(Column::C90)?),
        c if c >= 75.0 => (largest(Column::C75)?, largest(Column::C75)?),
        c if c >= 60.0 => (largest(Column::C60)?, largest(Column::C60)?),
        _ => (largest(usual_column(breaker))?, largest(Column::C75)?),
    };
    // A dwelling's service, and a feeder that carries all of it, may be sized by 83 % of the rating.
    let single_phase = matches!(facts.visit.system.arrangement, Arrangement::SplitPhase | Arrangement::TwoLegsOfWye);
    let dwelling = dwelling_rating(wire).filter(|_| whole && single_phase && (100.0..=400.0).contains(&breaker.0));
    let most = |a: Amperes| dwelling.filter(|d| *d > a).unwrap_or(a);
    Some((most(strict), most(loose)))
}

/// Runs that carry the whole load: the only run fed by the utility, and on down while there is but one.
fn carries_all(facts: &Facts) -> Vec<bool> {
    let tree = &facts.visit.tree;
    let mut whole = vec![false; facts.visit.runs.len()];
    let only = |runs: &[usize]| match runs {
        &[one] => Some(one),
        _ => None,
    };
    let mut at = only(&tree.roots);
    while let Some(run) = at.filter(|&run| !whole[run]) {
        whole[run] = true;
        at = only(&tree.children[run]).filter(|_| facts.visit.runs[run].loads.is_empty());
    }
    whole
}

fn say(
    facts: &Facts,
    run: usize,
    r: &Run,
    by: &Run,
    (breaker, strict, loose): (Amperes, Amperes, Amperes),
    verdict: Verdict,
    out: &mut Findings,
) {
    let Some(wire) = &r.wire else { return };
    let service = facts.is_service(run);
    let (says, advice, signal) = match (verdict, service) {
        (Verdict::Pass, _) => ("breaker-conductor.pass", "advice.none", Signal::Notice),
        (Verdict::Undecided, _) => ("breaker-conductor.terminals", "breaker-conductor.terminals-advice", Signal::Notice),
        // What the utility fed may be the utility's, which sizes its conductors by rules of its own.
        (Verdict::Fail, true) => ("breaker-conductor.service", "breaker-conductor.service-advice", Signal::Notice),
        (Verdict::Fail, false) if small_conductor_limit(wire.value).is_some() => {
            ("breaker-conductor.small", "breaker-conductor.advice", Signal::Warning)
        }
        (Verdict::Fail, false) => ("breaker-conductor.over", "breaker-conductor.advice", Signal::Warning),
    };
    let limit = if verdict == Verdict::Fail { loose } else { strict };
    let sentence = Sentence::new(says)
        .with("wire", wire.value.to_string())
        .with("circuit", by.name.value.as_str())
        .number("breaker", breaker.0, 0, Unit::Ampere)
        .number("limit", limit.0, 0, Unit::Ampere);
    let cells = by.breaker.iter().map(|b| b.cell.clone());
    let limits = Limit { low: None, high: Some(limit.0) };
    out.push(
        out.draft_as(signal, verdict, &wire.cell, sentence, Sentence::new(advice))
            .at(&r.name.value)
            .measured(breaker.0, None, Unit::Ampere)
            .limit(limits.low, limits.high)
            .related(cells),
    );
}
