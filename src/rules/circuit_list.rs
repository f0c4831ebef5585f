//! `circuit-list`.

use super::facts::{name_cells, names};
use super::{Facts, Findings, Rule, Settings};
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::{Leg, Run, TreeFault};
use crate::wording::{Arg, Sentence};

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "circuit-list",
        signal: Signal::Caution,
        basis: "NEC 408.4(A): every circuit legibly identified by its purpose and told apart from all others",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    for fault in &facts.visit.tree.faults {
        tree_fault(facts, *fault, out);
    }
    for (i, run) in facts.visit.runs.iter().enumerate() {
        let parent = facts.visit.tree.parent.get(i).copied().flatten().and_then(|p| facts.visit.runs.get(p));
        conductors(facts, run, parent, out);
    }
    unlabelled(facts, out);
}

fn tree_fault(facts: &Facts, fault: TreeFault, out: &mut Findings) {
    let (run, key) = match fault {
        TreeFault::UnknownSource { run } => (run, "circuit-list.unknown-source"),
        TreeFault::Loop { run } => (run, "circuit-list.loop"),
        TreeFault::Duplicate { run, .. } => (run, "circuit-list.duplicate"),
    };
    let Some(run) = facts.visit.runs.get(run) else { return };
    let source = run.fed_from.as_ref();
    let cell = match fault {
        TreeFault::Duplicate { .. } => &run.name.cell,
        _ => source.map_or(&run.cell, |s| &s.cell),
    };
    let says = Sentence::new(key).with("run", run.name.value.as_str()).with("source", source.map_or("", |s| s.value.as_str()));
    let finding = out.draft(Verdict::Fail, cell, says, Sentence::new("circuit-list.advice")).at(&run.name.value);
    let first = match fault {
        TreeFault::Duplicate { first, .. } => facts.visit.runs.get(first).map(|r| r.name.cell.clone()),
        _ => None,
    };
    out.push(finding.related(first));
}

/// A run can't have a leg the system lacks, nor a leg or a neutral its source does not bring.
fn conductors(facts: &Facts, run: &Run, parent: Option<&Run>, out: &mut Findings) {
    let Some(legs) = &run.legs else { return };
    let system: Vec<Leg> = legs.value.iter().filter(|l| !facts.visit.system.legs().contains(l)).collect();
    let source = parent.and_then(|p| p.legs.as_ref()).map(|l| l.value);
    let missing: Vec<Leg> = legs.value.iter().filter(|l| source.is_some_and(|s| !s.has(*l))).collect();
    let (key, missing) = if !system.is_empty() {
        ("circuit-list.leg-of-system", system)
    } else if !missing.is_empty() {
        ("circuit-list.leg-of-source", missing)
    } else if legs.value.neutral && source.is_some_and(|s| !s.neutral) {
        ("circuit-list.neutral-of-source", Vec::new())
    } else {
        return;
    };
    let says = Sentence::new(key)
        .with("run", run.name.value.as_str())
        .with("source", parent.map_or("", |p| p.name.value.as_str()))
        .with("system", facts.visit.system.name.as_str())
        .with("legs", missing.iter().map(|l| Arg::from(l.name())).collect::<Vec<_>>());
    let finding = out.draft(Verdict::Fail, &legs.cell, says, Sentence::new("circuit-list.advice")).at(&run.name.value);
    out.push(finding.related(parent.and_then(|p| p.legs.as_ref()).map(|l| l.cell.clone())));
}

/// Circuits at a breaker whose purpose nobody wrote down; said once.
fn unlabelled(facts: &Facts, out: &mut Findings) {
    let blank = |r: &&Run| r.breaker.is_some() && r.serves.as_ref().is_none_or(|s| s.value.trim().is_empty());
    let runs: Vec<&Run> = facts.visit.runs.iter().filter(blank).collect();
    let Some(first) = runs.first() else { return };
    let says = Sentence::new("circuit-list.unlabelled").with("n", runs.len()).with("runs", names(&runs));
    out.push(
        out.draft_as(Signal::Notice, Verdict::Fail, &first.name.cell, says, Sentence::new("circuit-list.advice-unlabelled"))
            .at(&first.name.value)
            .related(name_cells(&runs)),
    );
}
