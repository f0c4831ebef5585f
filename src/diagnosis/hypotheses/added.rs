//! Raised resistance of a neutral or of a hot leg.
//!
//! All conductors are tested to first order at once; those that could gain most are fitted in full at every level of trust, with
//! what the readings can't tell from them. Of the others, neutrals are followed from the sound fit (their curves are the
//! intervals that are reported), hot legs are weighed by the first-order test alone.

use super::super::model::{OPEN, Task};
use super::super::scan::{Curve, EXPLAINS, Scan, log_sum};
use super::super::settings::{ADDED, OPEN_HOT, OPEN_NEUTRAL};
use super::super::site::Site;
use super::{Bench, Evaluated, Hypothesis};
use crate::diagnosis::fit::Fit;
use crate::diagnosis::parameter::carry;
use crate::network::SLOTS;
use crate::quantity::math;
use crate::visit::Leg;

/// First-order gain of ln evidence from which a conductor is fitted in full.
const LIVE: f64 = 1.5;
/// Share of the greatest gain from which it is.
const RIVAL: f64 = 0.3;
/// Sets fitted in full, at most.
const MOST_LIVE: usize = 6;

/// Fall of ln evidence below the best at which a conductor is out of the question.
const MARGIN: f64 = 12.0;

/// Added ohms from which a search starts: those of a poor joint, and of one nearly parted.
const MODERATE: f64 = 2.0;
const LARGE: f64 = 16.0;

/// Conductor: span and slot.
type At = (usize, usize);

/// Adds the hypotheses of added resistance to every level.
pub(super) fn evaluate(benches: &mut [Bench], levels: &mut [Vec<Evaluated>]) {
    let Some(site) = benches.first().map(|b| b.site) else { return };
    let searched_parameters = benches.last().map_or(&[][..], |b| &b.site.parameters[..]);
    let found = search(benches, levels);
    let all: Vec<At> = (0..site.reduced.network.spans.len())
        .flat_map(|span| (0..SLOTS).map(move |slot| (span, slot)))
        .filter(|&(span, slot)| site.reduced.network.spans[span].ohms[slot].is_some())
        .collect();
    for (at, ohms, fit) in &found {
        for (bench, level) in benches.iter_mut().zip(&mut *levels) {
            let from = carry(&fit.z, searched_parameters, &bench.site.parameters);
            level.extend(in_full(bench, *at, *ohms, &from));
        }
    }
    // Where the sound network does not explain the readings, what does not explain them either needs no weight.
    let follows = best_level(benches).filter(|&b| benches[b].near.1 <= 1.0);
    let Some(follows) = follows else { return };
    for &at in all.iter().filter(|at| found.iter().all(|f| f.0 != **at)) {
        let bench = &mut benches[follows];
        let followed = (at.1 == SLOTS - 1).then(|| followed(bench, at)).flatten();
        let one = followed.or_else(|| to_first_order(bench, at));
        let Some(one) = one else { continue };
        let over = one.evidence - bench.sound.evidence;
        for (bench, level) in benches.iter().zip(&mut *levels) {
            level.push(Evaluated { evidence: bench.sound.evidence + over, ..one.clone() });
        }
    }
}

/// The level of trust that the sound fits speak for.
fn best_level(benches: &[Bench]) -> Option<usize> {
    let weight = |b: &Bench| math::ln(b.prior) + b.sound.evidence;
    (0..benches.len()).max_by(|&a, &b| weight(&benches[a]).total_cmp(&weight(&benches[b])))
}

/// Conductors to be fitted in full: of the sets that gain most, all.
fn live(benches: &[Bench]) -> Vec<At> {
    let mut sets: Vec<(f64, usize, usize)> = Vec::new();
    for bench in benches {
        let class = &bench.site.reduced.class;
        let most = bench.scores.iter().flatten().map(|s| s.gain()).fold(0.0, f64::max);
        for (span, scores) in bench.scores.iter().enumerate() {
            for (slot, score) in scores.iter().enumerate() {
                let gain = score.gain();
                if gain < LIVE.max(RIVAL * most) {
                    continue;
                }
                match sets.iter_mut().find(|s| (s.1, s.2) == (class[span], slot)) {
                    Some(set) => set.0 = set.0.max(gain / most),
                    None => sets.push((gain / most, class[span], slot)),
                }
            }
        }
    }
    sets.sort_by(|a, b| b.0.total_cmp(&a.0).then((a.1, a.2).cmp(&(b.1, b.2))));
    sets.truncate(MOST_LIVE);
    let Some(site) = benches.first().map(|b| b.site) else { return Vec::new() };
    let of_set = |&(_, class, slot): &(f64, usize, usize)| {
        let spans = 0..site.reduced.class.len();
        spans.filter(move |&s| site.reduced.class[s] == class && site.reduced.network.spans[s].ohms[slot].is_some()).map(move |s| (s, slot))
    };
    sets.iter().flat_map(of_set).collect()
}

fn hypothesis((span, slot): At) -> Hypothesis {
    Leg::ALL.get(slot).map_or(Hypothesis::Neutral(span), |leg| Hypothesis::Hot(span, *leg))
}

/// Probability before any reading, and the share of it that is open.
fn prior(site: &Site, (span, slot): At) -> (f64, f64) {
    let runs = site.reduced.runs[span].len() as f64;
    match slot {
        s if s < SLOTS - 1 => (runs * site.prior_of_hot(), OPEN_HOT),
        _ => (runs * site.prior_of_neutral(site.reduced.is_shared(span)), OPEN_NEUTRAL),
    }
}

/// Looks for the peak of every live conductor at the loosest level of trust; keeps those that come near the best.
fn search(benches: &mut [Bench], levels: &[Vec<Evaluated>]) -> Vec<(At, f64, Fit)> {
    let live = live(benches);
    let (Some(bench), Some(level)) = (benches.last_mut(), levels.last()) else { return Vec::new() };
    let mut best = level.iter().map(|e| e.evidence).fold(f64::NEG_INFINITY, f64::max);
    let base = Task::default();
    let explained = EXPLAINS * bench.site.observations.list.len() as f64;
    let (zero, near) = (bench.model.start(), bench.near.0.z.clone());
    let mut found: Vec<(At, f64, Fit)> = Vec::new();
    for at in live {
        let scan = Scan { base: &base, at };
        let rival = found.iter().filter(|f| f.2.cost < explained).max_by(|a, b| a.2.evidence.total_cmp(&b.2.evidence));
        let starts: Vec<(&[f64], f64)> = match rival {
            // One cause explains the readings: is there another nearby?
            Some((_, ohms, fit)) => vec![(&fit.z, ohms.min(MODERATE)), (&near, MODERATE), (&near, OPEN)],
            None => [&near, &zero].iter().flat_map(|z| [(&z[..], MODERATE), (&z[..], OPEN), (&z[..], LARGE)]).collect(),
        };
        if let Some((ohms, fit)) = scan.search(&mut bench.model, &starts, best - MARGIN) {
            best = best.max(fit.evidence);
            found.push((at, ohms, fit));
        }
    }
    found.retain(|f| f.2.evidence > best - MARGIN);
    found
}

/// Fits a conductor along the whole curve, from where its peak was found.
fn in_full(bench: &mut Bench, at: At, ohms: f64, start: &[f64]) -> Option<Evaluated> {
    let least = bench.sound.evidence;
    let base = Task::default();
    let scan = Scan { base: &base, at };
    let near = bench.near.0.z.clone();
    let curve = scan.about_peaks(&mut bench.model, &[(start, ohms), (&near, MODERATE)], least);
    let node = &curve.nodes[curve.peak()?];
    let (prior, open) = prior(bench.site, at);
    let (task, fit) = (scan.task(node.ohms), node.fit.clone());
    Some(Evaluated { hypothesis: hypothesis(at), prior, evidence: curve.average(open), task, fit, curve })
}

/// Follows a neutral from the sound fit.
fn followed(bench: &mut Bench, at: At) -> Option<Evaluated> {
    let base = Task::default();
    let scan = Scan { base: &base, at };
    bench.model.restart();
    let curve = scan.upwards(&mut bench.model, &bench.sound);
    let node = &curve.nodes[curve.peak()?];
    let (prior, open) = prior(bench.site, at);
    let (task, fit) = (scan.task(node.ohms), node.fit.clone());
    Some(Evaluated { hypothesis: hypothesis(at), prior, evidence: curve.average(open), task, fit, curve })
}

/// Weighs a conductor by the first-order test: ln evidence bends along added ohms as a parabola.
fn to_first_order(bench: &Bench, at: At) -> Option<Evaluated> {
    const VALUES: usize = 20;
    let score = bench.scores.get(at.0)?[at.1];
    let along = |ohms: f64| score.slope * ohms - 0.5 * score.bend * ohms * ohms;
    let value = |k: usize| ADDED.0 * math::exp(math::ln(ADDED.1 / ADDED.0) * (k as f64 + 0.5) / VALUES as f64);
    let (prior, open) = prior(bench.site, at);
    let mut parts: Vec<f64> = (0..VALUES).map(|k| along(value(k)) + math::ln((1.0 - open) / VALUES as f64)).collect();
    parts.push(along(OPEN) + math::ln(open));
    let evidence = bench.sound.evidence + log_sum(&parts);
    let task = Task::default();
    Some(Evaluated { hypothesis: hypothesis(at), prior, evidence, task, fit: bench.sound.clone(), curve: Curve::default() })
}
