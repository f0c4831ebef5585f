//! `shared-neutral-disconnect`.

use super::facts::{name_cells, names};
use super::{Facts, Findings, Rule, Settings};
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::Run;
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "shared-neutral-disconnect",
        signal: Signal::Caution,
        basis: "NEC 210.4(B): all ungrounded conductors of a multiwire branch circuit disconnect together where it begins; \
                handle ties 240.15(B)(1)",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    let mut unknown: Vec<&Run> = Vec::new();
    for run in multiwire_branch_circuits(facts) {
        let says = |key| Sentence::new(key).with("run", run.name.value.as_str());
        let advice = Sentence::new("shared-neutral-disconnect.advice");
        match &run.tie {
            Some(tie) if tie.value => {
                out.push(out.draft(Verdict::Pass, &tie.cell, says("shared-neutral-disconnect.pass"), advice).at(&run.name.value))
            }
            Some(tie) => out.push(
                out.draft(Verdict::Fail, &tie.cell, says("shared-neutral-disconnect.none"), advice)
                    .at(&run.name.value)
                    .related([run.name.cell.clone()]),
            ),
            None => unknown.push(run),
        }
    }
    // Said once, however many: where the workbook has no such column it is one omission, not many.
    if let Some(first) = unknown.first() {
        let says = Sentence::new("shared-neutral-disconnect.unknown").with("n", unknown.len()).with("runs", names(&unknown));
        out.push(
            out.draft(Verdict::Undecided, &first.name.cell, says, Sentence::new("shared-neutral-disconnect.advice-unknown"))
                .at(&first.name.value)
                .related(name_cells(&unknown)),
        );
    }
}

/// Runs that share a neutral, begin at a breaker and feed no further breaker: the rest are services, feeders and continuations.
fn multiwire_branch_circuits<'a>(facts: &Facts<'a>) -> impl Iterator<Item = &'a Run> {
    let visit = facts.visit;
    let tree = &visit.tree;
    let mut feeds_breaker = vec![false; visit.runs.len()];
    // Children stand after their parents in the order, so backwards every run is complete before its parent asks.
    for &run in tree.order.iter().rev() {
        let below = visit.runs.get(run).is_some_and(|r| r.breaker.is_some()) || feeds_breaker[run];
        if let Some(parent) = tree.parent[run] {
            feeds_breaker[parent] |= below;
        }
    }
    let is_fed = |i: usize| tree.parent.get(i).is_some_and(Option::is_some);
    visit
        .runs
        .iter()
        .enumerate()
        .filter(move |(i, r)| r.shares_neutral() && r.breaker.is_some() && is_fed(*i) && !feeds_breaker[*i])
        .map(|(_, r)| r)
}
