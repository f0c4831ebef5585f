//! From evidence to probabilities of causes.

use super::hypotheses::{Evaluated, Hypothesis};
use super::model::Model;
use super::scan::log_sum;
use super::settings::MOST_RUNS;
use super::site::Site;
use crate::network::SLOTS;
use crate::quantity::math;
use crate::results::{Cause, CauseKind, SupplyDirection};
use crate::visit::{Leg, Visit};
use std::collections::BTreeMap;

/// A cause with the hypotheses it is made of.
#[derive(Clone, Debug)]
pub(super) struct Weighed {
    /// The cause, its probability set.
    pub cause: Cause,
    /// Its hypotheses: level of trust and position there; the most probable first. Empty where no reading speaks of it.
    pub members: Vec<(usize, usize)>,
}

/// The hypotheses of one level of trust.
pub(super) struct Level<'a> {
    /// The site at that level.
    pub site: &'a Site,
    /// Its model.
    pub model: Model<'a>,
    /// Probability of the level before any reading.
    pub prior: f64,
    /// Its hypotheses, the sound one first.
    pub all: Vec<Evaluated>,
}

/// The hypotheses of one cause, with their weights.
struct Group {
    kind: CauseKind,
    class: Option<usize>,
    members: Vec<(f64, (usize, usize))>,
}

impl Group {
    fn weighed(mut self, levels: &[Level], total: f64) -> Weighed {
        self.members.sort_by(|a, b| b.0.total_cmp(&a.0));
        let runs = self.class.map_or_else(Vec::new, |c| runs_of(levels[0].site, &self.kind, c));
        let weights: Vec<f64> = self.members.iter().map(|m| m.0).collect();
        let probability = math::exp(log_sum(&weights) - total);
        let members = self.members.into_iter().map(|m| m.1).collect();
        Weighed { cause: Cause { kind: self.kind, runs, probability, ohms: None }, members }
    }
}

/// Groups the hypotheses of all levels into causes and ranks them.
pub(super) fn rank(visit: &Visit, levels: &[Level]) -> Vec<Weighed> {
    let mut groups: Vec<Group> = Vec::new();
    let mut add = |kind: CauseKind, class: Option<usize>, member: (usize, usize), weight: f64| {
        let same = groups.iter_mut().find(|g| g.kind == kind && g.class == class);
        match same {
            Some(group) => group.members.push((weight, member)),
            None => groups.push(Group { kind, class, members: vec![(weight, member)] }),
        }
    };
    for (l, level) in levels.iter().enumerate() {
        for (k, e) in level.all.iter().enumerate() {
            let (kind, span) = name(level.site, e.hypothesis);
            let class = span.map(|s| level.site.reduced.class[s]);
            add(kind, class, (l, k), math::ln(level.prior * e.prior) + e.evidence);
        }
    }
    let hidden = hidden(visit, levels);
    let weights = groups.iter().flat_map(|g| g.members.iter().map(|m| m.0)).chain(hidden.iter().map(|h| h.2));
    let total = log_sum(&weights.collect::<Vec<_>>());
    let mut ranked: Vec<Weighed> = groups.into_iter().map(|g| g.weighed(levels, total)).collect();
    ranked.extend(hidden.into_iter().map(|(kind, runs, weight)| Weighed {
        cause: Cause { kind, runs, probability: math::exp(weight - total), ohms: None },
        members: Vec::new(),
    }));
    ranked.sort_by(|a, b| b.cause.probability.total_cmp(&a.cause.probability));
    ranked
}

/// Faults that no reading speaks of: in the runs that were cut away, a branch at a time. They weigh what the sound network
/// weighs.
fn hidden(visit: &Visit, levels: &[Level]) -> Vec<(CauseKind, Vec<usize>, f64)> {
    let Some(site) = levels.first().map(|l| l.site) else { return Vec::new() };
    let sound: Vec<f64> = levels.iter().filter_map(|l| Some(math::ln(l.prior) + l.all.first()?.evidence)).collect();
    let sound = log_sum(&sound);
    let mut groups: BTreeMap<(usize, usize), (Vec<usize>, f64)> = BTreeMap::new();
    let mut top = vec![None; visit.runs.len()];
    for &run in visit.tree.order.iter().filter(|r| site.reduced.attached[**r] != Some(**r)) {
        let branch = if visit.runs.len() > MOST_RUNS { site.reduced.attached[run] } else { Some(run) };
        top[run] = visit.tree.parent[run].and_then(|p| top[p]).or(branch);
    }
    for &run in &visit.tree.order {
        let Some(at) = top[run] else { continue };
        let Some(legs) = visit.runs[run].legs.as_ref().map(|l| l.value) else { continue };
        let lines = legs.iter().map(|l| (l.index(), site.prior_of_hot()));
        let neutral = legs.neutral.then(|| (SLOTS - 1, site.prior_of_neutral(legs.count() > 1)));
        for (slot, prior) in lines.chain(neutral) {
            let group = groups.entry((at, slot)).or_default();
            group.0.push(run);
            group.1 += prior;
        }
    }
    let kind = |slot: usize| Leg::ALL.get(slot).map_or(CauseKind::Neutral, |l| CauseKind::Hot(*l));
    groups.into_iter().map(|((_, slot), (runs, prior))| (kind(slot), runs, sound + math::ln(prior))).collect()
}

fn name(site: &Site, hypothesis: Hypothesis) -> (CauseKind, Option<usize>) {
    match hypothesis {
        Hypothesis::Sound => (CauseKind::None, None),
        Hypothesis::Neutral(span) => (CauseKind::Neutral, Some(span)),
        Hypothesis::Hot(span, leg) => (CauseKind::Hot(leg), Some(span)),
        Hypothesis::Supply(true) => (CauseKind::Supply(SupplyDirection::High), None),
        Hypothesis::Supply(false) => (CauseKind::Supply(SupplyDirection::Low), None),
        Hypothesis::Reading(k) => (CauseKind::Reading(site.observations.list[k].cell.clone()), None),
    }
}

/// The runs of a class that have the conductor a cause is about, in the order of the circuit list.
fn runs_of(site: &Site, kind: &CauseKind, class: usize) -> Vec<usize> {
    let slot = match kind {
        CauseKind::Hot(leg) => leg.index(),
        _ => SLOTS - 1,
    };
    let reduced = &site.reduced;
    let spans = (0..reduced.class.len()).filter(|&s| reduced.class[s] == class && reduced.network.spans[s].ohms[slot].is_some());
    let mut runs: Vec<usize> = spans.flat_map(|s| reduced.runs[s].iter().copied()).collect();
    runs.sort_unstable();
    runs
}
