//! What the loads on a shared neutral would see if it opened.
//!
//! Without their neutral the legs' loads are in series across the line. Resistances and filaments settle at one point, found by
//! solving the network with that neutral open. Electronic loads draw less at more volts, so they may settle at several: then the
//! volts between the two ends of the opened neutral are imposed one after the other, and wherever no current would flow through
//! it the network can rest. The range over all resting points is what is given, stable or not, since nobody can say which it is.

mod branch;
mod resting;

use super::build::{NetworkSettings, build};
use super::model::{Law, Network, Observed};
use super::solve::SolveSettings;
use super::workspace::Workspace;
use crate::quantity::{Volts, Watts};
use crate::results::{ExposedLeg, Exposure};
use crate::visit::{Leg, Quantity, System, Tree, Visit};
use branch::{Branch, Whole};

/// Ends of a range closer than this, in volts, are one value.
const SAME: f64 = 0.5;

/// A leg without loads that strays from nominal by less than this share is left out.
const UNCHANGED: f64 = 0.05;

/// Runs solved, at most; a second or so. A list of ten thousand multiwire runs in a chain would take hours. Real ones stay far
/// below it; beyond it the neutrals nearest the source are opened, which expose the most.
const MOST_WORK: usize = 700_000;

/// Opens every shared neutral, those of the service included, one after the other. A leg without a load below the opening is
/// given too, at 0 W, where its volts change: whatever is plugged in there sees them.
#[must_use]
pub fn exposure(visit: &Visit, settings: &NetworkSettings) -> Vec<Exposure> {
    let network = build(visit, settings).network;
    let Ok(mut workspace) = Workspace::new(&network) else { return Vec::new() };
    let sound = workspace.follow(&network, &SolveSettings::default()).ok().map(|()| workspace.solution(&network));
    let mut whole = Whole::new(&network, &visit.tree, sound);
    let runs = shared_neutrals(&network, &visit.tree);
    let mut exposures: Vec<Exposure> = runs.into_iter().map(|run| open(&whole.branch(run), run, &visit.system)).collect();
    exposures.retain(|e| !e.legs.is_empty());
    exposures.sort_by_key(|e| e.run);
    exposures
}

/// Opens the neutral of a branch's first run.
fn open(branch: &Branch, run: usize, system: &System) -> Exposure {
    let mut places = Places::of(branch);
    if resting::points(&branch.network, |workspace| places.note(workspace)).is_none() {
        places.note_anything(system.line_to_line.0);
    }
    Exposure { run, legs: places.worst(system) }
}

/// Runs with a neutral that several legs share, those nearest the source first, as many as there is time for.
fn shared_neutrals(network: &Network, tree: &Tree) -> Vec<usize> {
    let (mut depth, mut below) = (vec![0usize; network.spans.len()], vec![1usize; network.spans.len()]);
    for &run in &tree.order {
        depth[run] = tree.parent[run].map_or(0, |p| depth[p] + 1);
    }
    for &run in tree.order.iter().rev() {
        if let Some(parent) = tree.parent[run] {
            below[parent] += below[run];
        }
    }
    let is_shared = |run: &usize| {
        let ohms = &network.spans[*run].ohms;
        ohms[3].is_some() && ohms[..3].iter().flatten().count() > 1
    };
    let mut runs: Vec<usize> = tree.order.iter().copied().filter(is_shared).collect();
    runs.sort_by_key(|run| depth[*run]);
    let may_scan = network.loads.iter().any(|l| matches!(l.law, Law::Electronic { .. }));
    let solutions = if may_scan { resting::POINTS as usize } else { 1 };
    let mut work = 0;
    let affordable = runs.iter().take_while(|run| {
        let is_in_time = work < MOST_WORK;
        work += below[**run] * solutions;
        is_in_time
    });
    let most = affordable.count();
    runs.truncate(most);
    runs
}

/// A place at which a leg's volts are watched.
#[derive(Clone, Debug)]
struct Place {
    run: usize,
    leg: Leg,
    observed: Observed,
    watts: f64,
    low: f64,
    high: f64,
}

/// All places below an opened neutral.
struct Places(Vec<Place>);

impl Places {
    fn of(branch: &Branch) -> Self {
        let mut watts = vec![[0.0; 3]; branch.runs.len()];
        for load in branch.network.loads.iter().filter(|l| l.between.1 == 3) {
            watts[load.at][load.between.0] += load.watts;
        }
        let place = |at: usize, leg: Leg| {
            let observed = branch.network.observed(at, Quantity::line_neutral(leg))?;
            Some(Place { run: branch.runs[at], leg, observed, watts: watts[at][leg.index()], low: f64::INFINITY, high: 0.0 })
        };
        Self((0..branch.runs.len()).flat_map(|at| Leg::ALL.into_iter().filter_map(move |leg| place(at, leg))).collect())
    }

    fn note(&mut self, workspace: &Workspace) {
        for place in &mut self.0 {
            let volts = workspace.value(place.observed).unwrap_or_default().abs();
            place.low = place.low.min(volts);
            place.high = place.high.max(volts);
        }
    }

    /// Nothing better is known than that the volts lie between none and those of the lines.
    fn note_anything(&mut self, line: f64) {
        for place in &mut self.0 {
            (place.low, place.high) = (0.0, line);
        }
    }

    /// For each leg the place that strays farthest from nominal, of those with a load on it, if there is one.
    fn worst(&self, system: &System) -> Vec<ExposedLeg> {
        system.legs().iter().filter_map(|leg| self.worst_of(*leg, system)).collect()
    }

    fn worst_of(&self, leg: Leg, system: &System) -> Option<ExposedLeg> {
        let nominal = system.nominal(Quantity::line_neutral(leg))?.0;
        let strays = |p: &Place| (p.high - nominal).abs().max((p.low - nominal).abs());
        let of_leg = || self.0.iter().filter(|p| p.leg == leg);
        let loads: f64 = of_leg().map(|p| p.watts).sum();
        let loaded = of_leg().filter(|p| p.watts > 0.0 || loads == 0.0);
        let worst = loaded.reduce(|a, b| if strays(b) > strays(a) { b } else { a })?;
        if loads == 0.0 && strays(worst) < UNCHANGED * nominal {
            return None;
        }
        Some(ExposedLeg {
            leg,
            volts: Volts(worst.high),
            low: (worst.high - worst.low > SAME).then_some(Volts(worst.low)),
            at: worst.run,
            loads: Watts(loads),
        })
    }
}
