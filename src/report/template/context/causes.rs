//! The diagnosis, for a template.

use crate::report::Source;
use crate::report::words;
use crate::results::{Cause, CauseKind, Diagnosis, RepairOutcome};
use crate::wording::Language;
use serde::Serialize;

/// From this probability on a cause is spoken of as found.
const SURE: f64 = 0.8;
/// Runs named in a sentence.
const MOST_RUNS: usize = 8;

/// The most probable cause, and what stays open.
#[derive(Debug, Serialize)]
pub(super) struct Causes {
    /// `none`, `neutral`, `hot`, `supply` or `reading`.
    kind: &'static str,
    cause: String,
    probability: String,
    sure: bool,
    /// Interval of the added resistance.
    ohms: String,
    /// Whether several runs can't be told apart.
    together: bool,
    runs: String,
    /// Runs in which an open neutral would not have shown, and how many they are.
    open_not_shown: String,
    open_count: usize,
    /// Cells whose readings the fit did not use.
    not_used: String,
    repair: String,
    /// The readings as left prove the repair.
    mended: bool,
}

/// The most probable cause where it is probable enough to be spoken of as found.
pub(super) fn found<'a>(source: &Source<'a>) -> Option<&'a Cause> {
    source.diagnosis?.ranking.first().filter(|c| c.probability >= SURE)
}

pub(super) fn causes(source: &Source, d: &Diagnosis, language: &Language) -> Option<Causes> {
    let lead = d.ranking.first()?;
    let name = |r: &usize| source.visit.runs.get(*r).map(|r| r.name.value.clone());
    let open: Vec<String> =
        d.neutral.iter().filter(|n| n.high.is_none() && !lead.runs.contains(&n.run)).filter_map(|n| name(&n.run)).collect();
    let repair = d.repair.as_ref().map(|r| match r.outcome {
        RepairOutcome::Proven => "report.repair-proven",
        RepairOutcome::NotRepaired => "report.repair-not",
        RepairOutcome::NotShown => "report.repair-not-shown",
    });
    let runs = words::runs(source.visit, &lead.runs);
    Some(Causes {
        kind: match lead.kind {
            CauseKind::None => "none",
            CauseKind::Neutral => "neutral",
            CauseKind::Hot(_) => "hot",
            CauseKind::Supply(_) => "supply",
            CauseKind::Reading(_) => "reading",
        },
        cause: words::cause(source.visit, lead, language),
        probability: words::probability(lead.probability, language),
        sure: lead.probability >= SURE,
        ohms: lead.ohms.map_or_else(String::new, |o| words::between(o.low.0, o.high.map(|h| h.0), language)),
        together: runs.len() > 1,
        runs: words::listed(&runs, MOST_RUNS, language),
        open_count: open.len(),
        open_not_shown: words::listed(&open, MOST_RUNS, language),
        not_used: words::listed(&d.left_out.iter().map(ToString::to_string).collect::<Vec<_>>(), MOST_RUNS, language),
        mended: d.repair.as_ref().is_some_and(|r| r.outcome == RepairOutcome::Proven),
        repair: repair.map_or_else(String::new, |key| language.text(key)),
    })
}
