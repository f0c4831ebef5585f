//! `repair-proven`.

use super::{Facts, Findings, Rule, Settings, cause};
use crate::results::{RepairOutcome, Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::Stage;
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "repair-proven",
        signal: Signal::Warning,
        basis: "As left readings fitted to the network of the circuit list, against the cause as found",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    let Some(repair) = facts.diagnosis.and_then(|d| d.repair.as_ref()) else { return };
    let (verdict, key, advice) = match repair.outcome {
        RepairOutcome::Proven => (Verdict::Pass, "repair-proven.pass", "advice.none"),
        RepairOutcome::NotRepaired => (Verdict::Fail, "repair-proven.still", "repair-proven.advice-still"),
        RepairOutcome::NotShown => (Verdict::Undecided, "repair-proven.not-shown", "repair-proven.advice-not-shown"),
    };
    let run = repair.found.runs.first().and_then(|r| facts.visit.runs.get(*r));
    let left = facts.visit.rows.iter().find(|r| r.stage == Stage::AsLeft);
    let Some(cell) = repair.cells.first().or(run.map(|r| &r.cell)).or(left.map(|r| &r.cell)) else { return };
    let says = cause::sentence(facts, key, &repair.found);
    let mut finding = out.draft(verdict, cell, says, Sentence::new(advice)).related(repair.cells.iter().cloned());
    finding.stage = Some(Stage::AsLeft);
    out.push(match run {
        Some(run) => finding.at(&run.name.value),
        None => finding,
    });
}
