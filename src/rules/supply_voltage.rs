//! `supply-voltage`.

use super::{Facts, Findings, Rule, Settings, cause};
use crate::results::{Cause, CauseKind, Signal, SupplyDirection, Verdict};
use crate::rulebook::RuleSpec;
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "supply-voltage",
        signal: Signal::Caution,
        basis: "Readings fitted to the network of the circuit list (Kirchhoff's laws, Bayes' rule); ANSI C84.1 for what the supply should be",
        settings: &[cause::SURE, cause::WORTH],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let Some((verdict, best)) = cause::of_kind(facts, settings, |c| matches!(c.kind, CauseKind::Supply(_))) else { return };
    match (verdict, best) {
        (Verdict::Pass, _) | (_, None) => cause::none(facts, "supply-voltage.pass", out).into_iter().for_each(|f| out.push(f)),
        (_, Some(best)) => off(facts, best, verdict, out),
    }
}

fn off(facts: &Facts, best: &Cause, verdict: Verdict, out: &mut Findings) {
    let key = match best.kind {
        CauseKind::Supply(SupplyDirection::High) => "supply-voltage.high",
        _ => "supply-voltage.low",
    };
    // A supply has no row of its own: the service's, else the first reading.
    let service = facts.visit.tree.roots.first().and_then(|r| facts.visit.runs.get(*r));
    let Some(cell) = service.map(|r| &r.cell).or(facts.visit.rows.first().map(|r| &r.cell)) else { return };
    let finding = out.draft(verdict, cell, cause::sentence(facts, key, best), Sentence::new("supply-voltage.advice"));
    let finding = match service {
        Some(run) => finding.at(&run.name.value),
        None => finding,
    };
    out.push(finding.related(cause::voltages(facts, |run| facts.is_service(run))));
}
