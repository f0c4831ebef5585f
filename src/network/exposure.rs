//! What the loads on a shared neutral would see if it opened.
//!
//! Without their neutral the legs' loads are in series across the line. Resistances and filaments settle at one point, found by
//! solving the network with that neutral open. Electronic loads draw less at more volts, so they may settle at several: then the
//! volts between the two ends of the opened neutral are imposed one after the other, and wherever no current would flow through
//! it the network can rest. The range over all resting points is what is given, stable or not, since nobody can say which it is.

use super::build::{NetworkSettings, build};
use super::model::{Network, Observed};
use super::several;
use super::solve::{SolveOutcome, SolveSettings, Workspace};
use crate::quantity::{Volts, Watts};
use crate::results::{ExposedLeg, Exposure};
use crate::visit::{Conductor, Leg, Quantity, Tree, Visit};

/// Ends of a range closer than this, in volts, are one value.
const SAME: f64 = 0.5;

/// Imposed volts tried, evenly spaced, before each resting point is closed in on.
const POINTS: u32 = 96;

/// Runs times opened neutrals, at most: a list of ten thousand multiwire runs in a chain would take hours. Real ones stay far
/// below it; beyond it the neutrals nearest the source are opened, which expose the most.
const MOST_WORK: usize = 400_000;

/// Opens every shared neutral, those of the service included, one after the other. Legs without a load below the opening are
/// given too, at 0 W: whatever is plugged in there sees those volts.
#[must_use]
pub fn exposure(visit: &Visit, settings: &NetworkSettings) -> Vec<Exposure> {
    let network = build(visit, settings).network;
    let Ok(mut workspace) = Workspace::new(&network) else { return Vec::new() };
    let most = MOST_WORK / network.spans.len().max(1);
    let shared = |run: &usize| {
        let ohms = &network.spans[*run].ohms;
        ohms[3].is_some() && ohms[..3].iter().flatten().count() > 1
    };
    let runs: Vec<usize> = visit.tree.order.iter().copied().filter(shared).take(most.max(1)).collect();
    let mut exposures: Vec<Exposure> = runs
        .into_iter()
        .map(|run| {
            let mut places = Places::below(&network, &visit.tree, run);
            open(&mut workspace, &network, run, &mut places);
            Exposure { run, legs: places.worst(&network, visit) }
        })
        .collect();
    exposures.sort_by_key(|e| e.run);
    exposures
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
    fn below(network: &Network, tree: &Tree, opened: usize) -> Self {
        let mut places = Vec::new();
        let mut stack = vec![opened];
        while let Some(run) = stack.pop() {
            stack.extend(tree.children[run].iter().rev());
            for leg in Leg::ALL {
                if let Some(observed) = network.observed(run, Quantity::line_neutral(leg)) {
                    places.push(Place { run, leg, observed, watts: 0.0, low: f64::INFINITY, high: 0.0 });
                }
            }
        }
        places.sort_by_key(|p| (p.run, p.leg));
        for load in network.loads.iter().filter(|l| l.between.1 == 3) {
            let key = (load.at, load.between.0);
            if let Ok(at) = places.binary_search_by_key(&key, |p| (p.run, p.leg.index())) {
                places[at].watts += load.watts;
            }
        }
        Self(places)
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
    fn worst(&self, network: &Network, visit: &Visit) -> Vec<ExposedLeg> {
        let mut legs = Vec::new();
        for leg in Leg::ALL {
            let nominal = visit.system.nominal(Quantity::line_neutral(leg)).unwrap_or_default().0;
            let strays = |p: &Place| (p.high - nominal).abs().max((p.low - nominal).abs());
            let of_leg = || self.0.iter().filter(|p| p.leg == leg);
            let loads: f64 = of_leg().map(|p| p.watts).sum();
            let at = of_leg().filter(|p| p.watts > 0.0 || loads == 0.0).reduce(|a, b| if strays(b) > strays(a) { b } else { a });
            legs.extend(at.filter(|_| network.source.volts[leg.index()] > 0.0).map(|p| ExposedLeg {
                leg,
                volts: Volts(p.high),
                low: (p.high - p.low > SAME).then_some(Volts(p.low)),
                at: p.run,
                loads: Watts(loads),
            }));
        }
        legs
    }
}

/// Opens a run's neutral and notes the volts at every resting point.
fn open(workspace: &mut Workspace, network: &Network, run: usize, places: &mut Places) {
    let settings = SolveSettings::default();
    let mut opened = network.clone();
    opened.spans[run].ohms[3] = Some(f64::INFINITY);
    workspace.restart();
    match workspace.follow(&opened, &settings) {
        Ok(()) => places.note(workspace),
        Err(SolveOutcome::NotConverged { .. } | SolveOutcome::Malformed(_) | SolveOutcome::Several(_)) => {
            return places.note_anything(network.source.volts.iter().sum());
        }
    }
    if several::is_stiff(&opened) {
        return;
    }
    if network.is_in_phase() {
        rest_in_phase(workspace, network, run, places);
    } else {
        let first = workspace.solution(&opened);
        several::others(workspace, &opened, &settings, first, |w| places.note(w));
    }
}

/// Finds the resting points along the real axis.
fn rest_in_phase(workspace: &mut Workspace, network: &Network, run: usize, places: &mut Places) {
    let observed = Observed::Current { run, conductor: Conductor::Neutral, towards_source: false };
    let reach = 1.1 * network.source.volts.iter().fold(0.0, |a: f64, b| a.max(*b));
    let current = |workspace: &mut Workspace, volts: f64| {
        workspace.insert(run, 3, volts);
        workspace.follow(network, &SolveSettings::default()).ok()?;
        workspace.value(observed)
    };
    let mut last: Option<(f64, f64)> = None;
    for point in 0..=POINTS {
        let volts = reach * (2.0 * f64::from(point) / f64::from(POINTS) - 1.0);
        let Some(amperes) = current(workspace, volts) else {
            last = None;
            continue;
        };
        if let Some(before) = last.filter(|b| (b.1 < 0.0) != (amperes < 0.0)) {
            if let Some(rest) = close_in(before, (volts, amperes), |v| current(workspace, v)) {
                if current(workspace, rest).is_some() {
                    places.note(workspace);
                }
                current(workspace, volts);
            }
        }
        last = Some((volts, amperes));
    }
    workspace.remove();
}

/// Zero between two points of opposite sign, by the Illinois variant of regula falsi (Dowell and Jarratt, BIT 11, 1971, 168–174).
fn close_in(mut a: (f64, f64), mut b: (f64, f64), mut f: impl FnMut(f64) -> Option<f64>) -> Option<f64> {
    const TOLERANCE: f64 = 1e-6;
    for _ in 0..60 {
        if (b.0 - a.0).abs() < TOLERANCE {
            break;
        }
        let x = b.0 - b.1 * (b.0 - a.0) / (b.1 - a.1);
        let y = f(x)?;
        if y == 0.0 {
            return Some(x);
        }
        if (y < 0.0) == (b.1 < 0.0) {
            a.1 *= 0.5;
        } else {
            a = b;
        }
        b = (x, y);
        if y.abs() < 1e-12 {
            break;
        }
    }
    Some(b.0)
}
