//! Everything a fit of one stage needs: reduced network, observations, unknowns.

use super::observation::{Observations, observe, usable_rows};
use super::parameter::{Parameter, parameters};
use super::reduce::{Reduced, reduce};
use super::settings::{self, DiagnosisSettings, Trust};
use super::switched::Switched;
use crate::diag::CellRef;
use crate::network::SLOTS;
use crate::quantity::math;
use crate::visit::{Between, Conductor, Leg, ReadingRow, Stage, Visit};
use std::collections::HashSet;

/// What is looked at, and how widely.
#[derive(Clone, Debug)]
pub(super) struct View {
    /// The stage whose readings are fitted.
    pub stage: Stage,
    /// What is switched on in a further state may be anywhere.
    pub is_wide: bool,
    /// Readings left out, because nothing explains the others with them.
    pub without: Vec<CellRef>,
}

/// A site at one stage and one level of trust.
#[derive(Clone, Debug)]
pub(super) struct Site {
    /// The reduced network.
    pub reduced: Reduced,
    /// The readings.
    pub observations: Observations,
    /// The unknowns.
    pub parameters: Vec<Parameter>,
    /// How many runs have a neutral that legs share.
    pub neutrals: usize,
    /// How many line conductors there are.
    pub hots: usize,
    listed: Vec<f64>,
}

impl Site {
    /// The site, or `None` where fewer than two readings can be used or the list makes no network.
    pub fn new(visit: &Visit, view: &View, settings: &DiagnosisSettings, trust: &Trust) -> Option<Self> {
        let rows = usable_rows(visit, view.stage);
        let mut measured = vec![false; visit.runs.len()];
        for run in rows.iter().filter_map(|r| r.run) {
            measured[run] = true;
        }
        let mut reduced = reduce(visit, &measured, settings)?;
        let mut observations = observe(visit, &rows, &reduced);
        observations.list.retain(|o| !view.without.contains(&o.cell));
        if observations.list.len() < 2 {
            return None;
        }
        add_switched(visit, &mut reduced, &observations, view.is_wide);
        if let Some(extra) = trust.extra {
            add_extra(&mut reduced, extra);
        }
        let parameters = parameters(&reduced, &observations, trust);
        let fed = || visit.tree.order.iter().filter_map(|r| visit.runs.get(*r));
        let neutrals = fed().filter(|r| r.shares_neutral()).count();
        let hots = fed().filter_map(|r| r.legs.as_ref()).map(|l| l.value.count()).sum();
        Some(Self { reduced, observations, parameters, neutrals, hots, listed: listed_neutral(visit) })
    }
}

impl Site {
    /// Readings of the stage that could be fitted and are not: left out of the view, or of rows there was no room for.
    pub fn left_out(&self, visit: &Visit, view: &View) -> Vec<CellRef> {
        let used: HashSet<usize> = usable_rows(visit, view.stage).iter().map(|r| std::ptr::from_ref(*r).addr()).collect();
        let is_fed = |row: &&ReadingRow| row.run.is_some_and(|r| self.reduced.attached.get(r).is_some_and(Option::is_some));
        let spare = visit.rows.iter().filter(|r| r.stage == view.stage && !used.contains(&std::ptr::from_ref(*r).addr())).filter(is_fed);
        let spare = spare.flat_map(|r| r.readings.iter().filter(|x| x.value.value().is_some())).map(|x| x.cell.clone());
        view.without.iter().cloned().chain(spare).collect()
    }

    /// Amperes in the neutral of a run by the watts of the circuit list alone, none where the list is silent.
    pub fn listed_neutral_amperes(&self, run: usize) -> f64 {
        self.listed.get(run).copied().unwrap_or_default()
    }

    /// Probability before any reading of resistance in one line conductor of one run.
    pub fn prior_of_hot(&self) -> f64 {
        settings::PRIOR_HOT / self.hots.max(1) as f64
    }

    /// Likewise in one run's neutral, shared by legs or not.
    pub fn prior_of_neutral(&self, is_shared: bool) -> f64 {
        if is_shared { settings::PRIOR_NEUTRAL / self.neutrals.max(1) as f64 } else { self.prior_of_hot() / settings::TWO_WIRE }
    }
}

/// In every state but the first something is switched. Where the state names a place of the list, it is there; else at the panel.
/// Where it names a leg it is on that leg, else on any.
///
/// In a wide view it may, where no place is named, also be anywhere else.
fn add_switched(visit: &Visit, reduced: &mut Reduced, observations: &Observations, is_wide: bool) {
    let Some(panel) = reduced.network.spans.iter().position(|s| s.fed_from.is_none()) else { return };
    for (state, text) in observations.states.iter().enumerate().skip(1) {
        let switched = Switched::read(visit, text);
        let place = switched.run.and_then(|run| reduced.attached[run]).and_then(|run| reduced.within[run]).unwrap_or(panel);
        let legs = switched.leg.map_or(0..SLOTS - 1, |leg| leg.index()..leg.index() + 1);
        let unstated = if is_wide { settings::SWITCHED_WIDE } else { settings::SWITCHED };
        let prior = switched.watts.filter(|_| switched.leg.is_some()).map_or(unstated, |w| (w, settings::STATED));
        for leg in legs {
            reduced.add_unlisted((place, leg), prior, Some(state), false);
        }
        if is_wide && switched.run.is_none() {
            for span in reduced.with(Conductor::Neutral).into_iter().filter(|s| *s != panel) {
                (0..SLOTS - 1).for_each(|leg| reduced.add_unlisted((span, leg), settings::ANYWHERE, Some(state), true));
            }
        }
    }
}

/// Loads nobody wrote down, on every leg of every place with a neutral.
fn add_extra(reduced: &mut Reduced, extra: (f64, f64)) {
    for span in reduced.with(Conductor::Neutral) {
        for leg in 0..SLOTS - 1 {
            reduced.add_unlisted((span, leg), extra, None, true);
        }
    }
}

/// Neutral current of every run by the watts of the circuit list: the difference of its legs' currents at rated volts, at least.
fn listed_neutral(visit: &Visit) -> Vec<f64> {
    let volts = visit.system.line_to_neutral.0;
    let mut watts = vec![[0.0f64; 3]; visit.runs.len()];
    for &run in visit.tree.order.iter().rev() {
        for load in &visit.runs[run].loads {
            if let Between::LineNeutral(leg) = load.between {
                watts[run][leg.index()] += load.watts.value.0;
            }
        }
        if let Some(parent) = visit.tree.parent[run] {
            (0..3).for_each(|l| watts[parent][l] += watts[run][l]);
        }
    }
    let phasor = |l: usize| visit.system.phasor(Leg::ALL[l]);
    let current = |w: &[f64; 3]| {
        let sum = (0..3).map(|l| (w[l] * phasor(l).0, w[l] * phasor(l).1)).fold((0.0, 0.0), |a, b| (a.0 + b.0, a.1 + b.1));
        math::hypot(sum.0, sum.1) / (volts * volts)
    };
    watts.iter().map(current).collect()
}
