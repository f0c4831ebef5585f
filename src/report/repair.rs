//! What a repair on this visit has settled: findings of the readings as found that the readings as left take back.

use super::Source;
use crate::results::{Cause, CauseKind, Finding, RepairOutcome, Verdict};
use crate::visit::Stage;
use std::collections::BTreeSet;

/// A repair that the readings as left prove.
pub(super) struct Repair<'a> {
    /// The runs that were at fault.
    runs: BTreeSet<&'a str>,
    /// Places and states read again as left.
    read_again: BTreeSet<(&'a str, &'a str)>,
    /// Rules that find the same again as left, with place and state.
    found_again: BTreeSet<(&'a str, &'a str, &'a str)>,
}

impl<'a> Repair<'a> {
    /// The repair of a visit; none where nothing was repaired or it is not proven.
    pub(super) fn of(source: &Source<'a>) -> Option<Self> {
        let repair = source.diagnosis?.repair.as_ref().filter(|r| r.outcome == RepairOutcome::Proven)?;
        let visit = source.visit;
        let left = visit.rows.iter().filter(|r| r.stage == Stage::AsLeft);
        let again = source.findings.iter().filter(|f| f.verdict != Verdict::Pass && f.stage == Some(Stage::AsLeft));
        Some(Self {
            runs: repair.found.runs.iter().filter_map(|r| visit.runs.get(*r)).map(|r| r.name.value.as_str()).collect(),
            read_again: left.map(|r| (r.location.value.as_str(), r.state.as_str())).collect(),
            found_again: again.filter_map(|f| Some((f.rule, f.location.as_deref()?, f.state.as_deref()?))).collect(),
        })
    }

    /// Whether a finding is settled: its place was read again in the same state and the rule finds nothing there now, or it is
    /// about the very cause that the readings as left rule out.
    pub(super) fn settles(&self, finding: &Finding) -> bool {
        let Some(place) = finding.location.as_deref() else { return false };
        match (finding.stage, finding.state.as_deref()) {
            (Some(Stage::AsFound), Some(state)) => {
                self.read_again.contains(&(place, state)) && !self.found_again.contains(&(finding.rule, place, state))
            }
            (None, None) => is_about_a_cause(finding) && self.runs.contains(place),
            _ => false,
        }
    }
}

/// Findings of the diagnosis as found.
fn is_about_a_cause(finding: &Finding) -> bool {
    matches!(finding.rule, "neutral-path" | "hot-path") || finding.advice.key == "open-neutral-exposure.advice-suspect"
}

/// Rules whose findings a raised resistance or an off supply brings about by itself.
const SYMPTOMS: [&str; 9] = [
    "nominal-band",
    "service-range",
    "utilization-range",
    "leg-difference",
    "neutral-shift",
    "rise-above-source",
    "voltage-drop",
    "voltage-unbalance",
    "neutral-to-ground",
];

/// Whether a finding may be the work of a cause.
pub(super) fn may_follow(finding: &Finding, cause: &Cause) -> bool {
    match &cause.kind {
        CauseKind::None => false,
        CauseKind::Neutral | CauseKind::Hot(_) | CauseKind::Supply(_) => SYMPTOMS.contains(&finding.rule),
        CauseKind::Reading(cell) => finding.cells.contains(cell),
    }
}

#[cfg(test)]
mod tests {
    use super::SYMPTOMS;
    use crate::wording::Language;

    #[test]
    fn every_symptom_is_a_rule() {
        let language = Language::english();
        for rule in SYMPTOMS {
            assert!(language.entry(&format!("{rule}.title")).is_some(), "{rule}");
        }
    }
}
