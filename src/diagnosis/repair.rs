//! As left against as found.

use super::Examined;
use super::interval::Ends;
use super::settings::ADDED;
use crate::diag::CellRef;
use crate::results::{Cause, CauseKind, RepairEvidence, RepairOutcome};
use crate::visit::{Stage, Visit};

/// Probability from which a cause as left counts as still there, and below which as gone.
const STILL: f64 = 0.5;
const GONE: f64 = 0.05;
/// Cells listed, at most.
const MOST_CELLS: usize = 24;

/// What the readings as left show of the cause as found; `None` where nothing was found.
///
/// Resistance is proven gone where the greatest that the readings as left allow lies below the least that was found; a supply or
/// a reading where its cause is no longer probable; it is still there where the readings as left find it again. Anything else was
/// not shown.
pub(super) fn evidence(visit: &Visit, found: &Cause, left: &Examined) -> Option<RepairEvidence> {
    let now = left.ranking.first()?;
    let again: f64 = left.ranking.iter().filter(|c| is_same(found, c)).map(|c| c.probability).sum();
    let outcome = match found.kind {
        CauseKind::None => return None,
        _ if again > STILL => RepairOutcome::NotRepaired,
        CauseKind::Neutral | CauseKind::Hot(_) => bounded(found, left.asked, again),
        CauseKind::Supply(_) if again < GONE => RepairOutcome::Proven,
        CauseKind::Supply(_) | CauseKind::Reading(_) => RepairOutcome::NotShown,
    };
    Some(RepairEvidence { found: found.clone(), left: now.clone(), outcome, cells: cells(visit, found) })
}

fn bounded(found: &Cause, now: Option<Ends>, again: f64) -> RepairOutcome {
    let least = found.ohms.map_or(ADDED.0, |o| o.low.0.max(ADDED.0));
    match now {
        Some((_, Some(high))) if high < least && again < STILL => RepairOutcome::Proven,
        _ => RepairOutcome::NotShown,
    }
}

/// The same kind on a run in common.
fn is_same(found: &Cause, other: &Cause) -> bool {
    let same_kind = match (&found.kind, &other.kind) {
        (CauseKind::Reading(_), CauseKind::Reading(_)) => false,
        (a, b) => a == b,
    };
    same_kind && (found.runs.is_empty() || other.runs.iter().any(|r| found.runs.contains(r)))
}

/// Cells of the readings at or below the runs found faulty, of both stages.
fn cells(visit: &Visit, found: &Cause) -> Vec<CellRef> {
    let mut is_below = vec![found.runs.is_empty(); visit.runs.len()];
    let mut is_faulty = vec![false; visit.runs.len()];
    found.runs.iter().for_each(|r| is_faulty[*r] = true);
    for &run in &visit.tree.order {
        is_below[run] |= is_faulty[run] || visit.tree.parent[run].is_some_and(|p| is_below[p]);
    }
    let is_below = &is_below;
    let concerns = |run: usize| is_below.get(run) == Some(&true);
    let of_stage = |stage: Stage| {
        let rows = visit.rows.iter().filter(move |r| r.stage == stage && r.run.is_some_and(&concerns));
        rows.flat_map(|r| r.readings.iter().map(|x| x.cell.clone())).take(MOST_CELLS / 2)
    };
    of_stage(Stage::AsFound).chain(of_stage(Stage::AsLeft)).collect()
}
