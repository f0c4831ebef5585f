//! `not-ruled-out`.

use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{CauseKind, Diagnosis, NeutralInterval, NextReading, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::wording::Sentence;

const OHMS: Setting = Setting::new("ohms", 1.0, Unit::Ohm, (0.0, 1_000_000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "not-ruled-out",
        signal: Signal::Notice,
        basis: "Profile likelihood of the added resistance, 95 %; a balanced load hides an open neutral",
        settings: &[OHMS],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let Some(diagnosis) = facts.diagnosis else { return };
    let suspect = diagnosis.ranking.first().filter(|c| c.kind == CauseKind::Neutral);
    for interval in &diagnosis.neutral {
        // The suspected neutral has a finding of its own.
        if suspect.is_none_or(|c| !c.runs.contains(&interval.run)) {
            judge(facts, settings, diagnosis, interval, out);
        }
    }
}

fn judge(facts: &Facts, settings: &Settings, diagnosis: &Diagnosis, interval: &NeutralInterval, out: &mut Findings) {
    let Some(run) = facts.visit.runs.get(interval.run) else { return };
    let limit = settings.get(&OHMS);
    let high = interval.high.map(|h| h.0);
    let (verdict, key) = match high {
        Some(h) if h <= limit => (Verdict::Pass, "not-ruled-out.pass"),
        Some(_) => (Verdict::Undecided, "not-ruled-out.up-to"),
        None => (Verdict::Undecided, "not-ruled-out.open"),
    };
    let next = next_for(facts, diagnosis, interval.run);
    let says = Sentence::new(key).with("run", run.name.value.as_str()).number("ohms", high.unwrap_or_default(), 1, Unit::Ohm).number(
        "amperes",
        interval.amperes,
        1,
        Unit::Ampere,
    );
    let advice = match next {
        None => Sentence::new("not-ruled-out.advice"),
        Some(next) => Sentence::new("not-ruled-out.advice-read")
            .with("quantity", next.quantity.to_string())
            .with("at", facts.name(next.run))
            .with("load", load(next)),
    };
    let mut finding = out.draft(verdict, &run.cell, says, advice).at(&run.name.value).limit(None, Some(limit));
    if let Some(high) = high {
        finding = finding.measured(high, None, Unit::Ohm);
    }
    out.push(finding);
}

/// The first of the proposed readings that speaks of the run: it tells the run apart, or is taken below it.
fn next_for<'a>(facts: &Facts, diagnosis: &'a Diagnosis, run: usize) -> Option<&'a NextReading> {
    let below =
        |next: &&NextReading| facts.visit.tree.parent.get(next.run).is_some() && facts.visit.tree.path_up(next.run).any(|r| r == run);
    diagnosis.next.iter().find(|n| n.tells_apart.contains(&run)).or_else(|| diagnosis.next.iter().find(below))
}

fn load(next: &NextReading) -> Sentence {
    match next.load {
        None => Sentence::new("not-ruled-out.load-as-found"),
        Some((leg, watts)) => Sentence::new("not-ruled-out.load-on").number("watts", watts.0, 0, Unit::Watt).with("leg", leg.name()),
    }
}
