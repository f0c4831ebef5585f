//! The readings that would say most next.
//!
//! Two needs. Causes the readings leave undecided, the runs of one set among them, are told apart by the reading whose values
//! under each differ most for its uncertainty: the worth is the expected gain in bits, by the pairwise bound of Kolchinsky and
//! Tracey (*Estimating mixture entropy with pairwise distances*, Entropy 19, 2017; from memory). Neutrals that are not ruled out
//! are bounded by a load of known size far out on them: the worth is the bits by which their interval would shrink.

use super::interval::Ends;
use super::model::OPEN;
use super::settings::{ADDED, DiagnosisSettings};
use crate::network::{self, Network, SLOTS, SolveSettings, Workspace};
use crate::quantity::{Watts, math};
use crate::results::{Cause, CauseKind, NextReading, SupplyDirection};
use crate::visit::{Leg, Quantity, Visit};

/// The load that is proposed: a portable heater.
const HEATER: Watts = Watts(1500.0);
/// Causes told apart, at most, and the least probability they must have.
const MOST_CAUSES: usize = 8;
const WORTH: f64 = 0.02;
/// Places tried, at most.
const MOST_PLACES: usize = 6;
/// Runs times places tried, at most.
const MOST_SPANS: usize = 6000;
/// Readings proposed, at most: to tell causes apart, and in all.
const MOST_TELLING: usize = 3;
const MOST: usize = 8;
/// By how much more a reading must say for a load to be carried there.
const WORTH_A_LOAD: f64 = 1.1;
/// Bits below which a reading is not worth the walk.
const LEAST_BITS: f64 = 0.1;
/// Standard deviation of a reading's prediction in volts: a meter's width and a supply that moves.
const OWN: f64 = 0.5;
/// Share of what a cause moves a reading that its loads leave uncertain.
const LOOSE: f64 = 0.3;

/// A cause on one run: what is told apart.
struct Suspect {
    run: Option<usize>,
    slot: usize,
    ohms: f64,
    supply: f64,
    probability: f64,
}

/// Proposes readings, best first.
pub(super) fn propose(visit: &Visit, settings: &DiagnosisSettings, ranking: &[Cause], neutral: &[(usize, Ends)]) -> Vec<NextReading> {
    let network = network::build(visit, &settings.network).network;
    let mut all = telling(visit, &network, &suspects(visit, ranking));
    let limit = MOST.saturating_sub(all.len());
    all.extend(bounding(visit, ranking, neutral).into_iter().take(limit));
    all
}

/// The probable causes run by run.
fn suspects(visit: &Visit, ranking: &[Cause]) -> Vec<Suspect> {
    let mut all = Vec::new();
    for cause in ranking.iter().filter(|c| c.probability > WORTH) {
        let mut add = |run, slot, supply| {
            let share = cause.probability / cause.runs.len().max(1) as f64;
            let ohms = cause.ohms.map_or(OPEN, |o| o.best.map_or(OPEN, |b| b.0));
            all.push(Suspect { run, slot, ohms, supply, probability: share });
        };
        match cause.kind {
            CauseKind::None => add(None, 0, 1.0),
            CauseKind::Supply(direction) => add(None, 0, if direction == SupplyDirection::Low { 0.92 } else { 1.08 }),
            CauseKind::Neutral => cause.runs.iter().for_each(|&r| add(Some(r), SLOTS - 1, 1.0)),
            CauseKind::Hot(leg) => cause.runs.iter().for_each(|&r| add(Some(r), leg.index(), 1.0)),
            CauseKind::Reading(_) => {}
        }
    }
    all.retain(|s| s.run.is_none_or(|r| r < visit.runs.len()));
    all.sort_by(|a, b| b.probability.total_cmp(&a.probability));
    all.truncate(MOST_CAUSES);
    all
}

/// Readings that tell the suspects apart.
fn telling(visit: &Visit, network: &Network, suspects: &[Suspect]) -> Vec<NextReading> {
    if suspects.len() < 2 {
        return Vec::new();
    }
    let mut places: Vec<usize> = Vec::new();
    for run in suspects.iter().filter_map(|s| s.run) {
        if !places.contains(&run) {
            places.push(run);
        }
    }
    // On lists of thousands of runs each trial takes its time.
    places.truncate((MOST_SPANS / network.spans.len().max(1)).min(MOST_PLACES));
    let mut all = Vec::new();
    for &run in &places {
        let Some(legs) = visit.runs[run].legs.as_ref().map(|l| l.value) else { continue };
        let mut best = None;
        let loads = std::iter::once(None).chain(legs.iter().take(2).filter(|_| legs.neutral).map(Some));
        for load in loads {
            best = better(best, best_quantity(network, suspects, run, load, legs.neutral));
        }
        all.extend(best);
    }
    all.sort_by(|a, b| b.worth.total_cmp(&a.worth));
    all.truncate(MOST_TELLING);
    all
}

/// The quantity at a place, in one load state, that tells most.
fn best_quantity(network: &Network, suspects: &[Suspect], run: usize, load: Option<Leg>, neutral: bool) -> Option<NextReading> {
    let mut quantities = vec![Quantity::L1_L2];
    if neutral {
        quantities.extend(Leg::ALL.map(Quantity::line_neutral));
        quantities.push(Quantity::NeutralGround);
    }
    let predicted: Vec<Vec<f64>> = suspects.iter().map(|s| predict(network, s, run, load, &quantities)).collect::<Option<_>>()?;
    let one = |q: usize| {
        let values: Vec<f64> = predicted.iter().map(|p| p[q]).collect();
        let worth = bits(suspects, &values);
        (worth > LEAST_BITS).then(|| NextReading {
            run,
            quantity: quantities[q],
            load: load.map(|leg| (leg, HEATER)),
            tells_apart: told_apart(suspects, &values),
            worth,
        })
    };
    (0..quantities.len()).filter_map(one).max_by(|a, b| a.worth.total_cmp(&b.worth))
}

/// The one worth more; without a load switched on where that is nearly as good.
fn better(a: Option<NextReading>, b: Option<NextReading>) -> Option<NextReading> {
    match (a, b) {
        (Some(a), Some(b)) => Some(if b.worth > WORTH_A_LOAD * a.worth { b } else { a }),
        (a, b) => a.or(b),
    }
}

/// Values of quantities at a place under a cause; not a number for quantities that are not there.
fn predict(network: &Network, suspect: &Suspect, run: usize, load: Option<Leg>, quantities: &[Quantity]) -> Option<Vec<f64>> {
    let mut changed = network.clone();
    changed.source.volts = changed.source.volts.map(|v| v * suspect.supply);
    if let Some(ohms) = suspect.run.and_then(|r| changed.spans[r].ohms[suspect.slot].as_mut()) {
        *ohms += suspect.ohms;
    }
    if let Some(leg) = load {
        let rated_volts = network.source.volts[leg.index()];
        let law = network::Law::Power { exponent: 1.0 };
        let between = (leg.index(), SLOTS - 1);
        changed.loads.push(network::Load { at: run, between, rated_volts, watts: HEATER.0, law, power_factor: 1.0 });
    }
    let mut space = Workspace::new(&changed).ok()?;
    space.follow(&changed, &SolveSettings { tolerance: 0.01, iterations: 40 }).ok()?;
    let value = |q: &Quantity| changed.observed(run, *q).and_then(|o| space.value(o)).map_or(f64::NAN, f64::abs);
    Some(quantities.iter().map(value).collect())
}

/// Uncertainty of the difference of two predictions.
fn width(a: f64, b: f64) -> f64 {
    math::hypot(OWN, LOOSE * (a - b))
}

/// Expected gain in bits: Σ pᵢ·log₂(1/Σ pⱼ·exp(−Cᵢⱼ)) with C the Bhattacharyya distance of two normal values.
fn bits(suspects: &[Suspect], values: &[f64]) -> f64 {
    if values.iter().any(|v| !v.is_finite()) {
        return 0.0;
    }
    let total: f64 = suspects.iter().map(|s| s.probability).sum();
    let overlap = |a: f64| {
        let near = |(s, &b): (&Suspect, &f64)| {
            let apart = (a - b) / width(a, b);
            s.probability / total * math::exp(-apart * apart / 8.0)
        };
        suspects.iter().zip(values).map(near).sum::<f64>()
    };
    suspects.iter().zip(values).map(|(s, &v)| -s.probability / total * math::ln(overlap(v))).sum::<f64>() / std::f64::consts::LN_2
}

/// Runs that some pair of values, two widths apart, has between it.
fn told_apart(suspects: &[Suspect], values: &[f64]) -> Vec<usize> {
    let apart = |a: f64, b: f64| (a - b).abs() > 2.0 * width(a, b);
    let mut runs: Vec<usize> =
        suspects.iter().zip(values).filter(|(_, a)| values.iter().any(|b| apart(**a, *b))).filter_map(|(s, _)| s.run).collect();
    runs.sort_unstable();
    runs.dedup();
    runs
}

/// Readings with a heater at the far ends of the neutrals that are not ruled out, each of which bounds all of them on its way.
fn bounding(visit: &Visit, ranking: &[Cause], neutral: &[(usize, Ends)]) -> Vec<NextReading> {
    let suspected = ranking.first().filter(|c| c.kind == CauseKind::Neutral).map_or(&[][..], |c| &c.runs[..]);
    let resolved = 2.0 * OWN / (HEATER.0 / 120.0);
    let gain = |ends: &Ends| math::ln(ends.1.unwrap_or(ADDED.1).max(resolved) / resolved) / std::f64::consts::LN_2;
    let mut open = vec![None; visit.runs.len()];
    for (run, ends) in neutral.iter().filter(|n| n.1.1.is_none_or(|h| h > 1.0) && !suspected.contains(&n.0)) {
        open[*run] = Some(gain(ends));
    }
    let mut all = Vec::new();
    // From the far ends inwards; what a reading covers needs no other.
    for &run in visit.tree.order.iter().rev() {
        if open[run].is_none() {
            continue;
        }
        let Some(leg) = visit.runs[run].legs.as_ref().and_then(|l| l.value.iter().next()) else { continue };
        let mut covered: Vec<usize> = visit.tree.path_up(run).filter(|r| open[*r].is_some()).collect();
        let worth = covered.iter().filter_map(|r| open[*r].take()).sum();
        covered.sort_unstable();
        all.push(NextReading { run, quantity: Quantity::line_neutral(leg), load: Some((leg, HEATER)), tells_apart: covered, worth });
    }
    all.sort_by(|a, b| b.worth.total_cmp(&a.worth));
    all
}
