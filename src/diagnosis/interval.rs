//! Intervals of added resistance, by likelihood ratio.
//!
//! For the cause that is suspected the curve of its own hypothesis is read, against the weight of all other causes at 0 Ω. For
//! every other neutral the question is what it could have besides the suspected cause: the curve is followed with the suspected
//! cause in place, its own ohms left free. The evidence is already averaged over all other unknowns, so the interval is where it
//! lies within half the 95 % point of χ² below its best (Wilks; at the boundary of 0 Ω on the safe side).

use super::evidence::{Level, Weighed};
use super::fit::{Fit, fit};
use super::hypotheses::{Evaluated, Hypothesis};
use super::model::{Added, Model, OPEN, Task, added_prior};
use super::scan::{Curve, INTERVAL, Scan, log_sum};
use crate::network::SLOTS;
use crate::quantity::{Ohms, math};
use crate::results::{AddedOhms, CauseKind, NeutralInterval};

/// Ends of an interval of added ohms; no high end where an open conductor lies within.
pub(super) type Ends = (f64, Option<f64>);

/// Interval of a curve, given ln evidence at 0 Ω on the same scale.
pub(super) fn ends(curve: &[(f64, f64)], at_zero: f64) -> Ends {
    let best = curve.iter().map(|c| c.1).fold(at_zero, f64::max);
    let floor = best - INTERVAL;
    let inside = |e: f64| e >= floor;
    let points: Vec<(f64, f64)> = std::iter::once((0.0, at_zero)).chain(curve.iter().copied()).collect();
    let first = points.iter().position(|p| inside(p.1)).unwrap_or(0);
    let last = points.iter().rposition(|p| inside(p.1)).unwrap_or(0);
    let low = if first == 0 { 0.0 } else { crossing(points[first - 1], points[first], floor) };
    let high = match points.get(last + 1) {
        _ if points[last].0 >= OPEN => None,
        None => None,
        Some(next) if next.0 >= OPEN && points[last].0 > 50.0 => None,
        Some(next) => Some(crossing(points[last], *next, floor)),
    };
    (low, high)
}

/// Where the line between two points crosses a height: straight over ohms from 0, over their logarithm elsewhere.
fn crossing(a: (f64, f64), b: (f64, f64), height: f64) -> f64 {
    let share = if a.1.is_finite() && b.1.is_finite() && a.1 != b.1 { ((height - a.1) / (b.1 - a.1)).clamp(0.0, 1.0) } else { 0.5 };
    if a.0 <= 0.0 { b.0 * share } else { math::exp(math::ln(a.0) + share * math::ln(b.0 / a.0)) }
}

/// Added ohms of a cause, given that it is the cause.
pub(super) fn of_cause(levels: &[Level], weighed: &Weighed) -> Option<AddedOhms> {
    let curve = pooled(levels, weighed)?;
    let best = curve.iter().max_by(|a, b| a.1.total_cmp(&b.1))?.0;
    let (low, high) = ends(&curve, f64::NEG_INFINITY);
    Some(AddedOhms { best: (best < OPEN).then_some(Ohms(best)), low: Ohms(low), high: high.map(Ohms) })
}

/// Curve of the most probable span of a cause, over all levels of trust, each with its weight.
fn pooled(levels: &[Level], weighed: &Weighed) -> Option<Vec<(f64, f64)>> {
    let &(level, top) = weighed.members.first()?;
    let hypothesis = levels[level].all[top].hypothesis;
    pool(levels, hypothesis)
}

fn pool(levels: &[Level], hypothesis: Hypothesis) -> Option<Vec<(f64, f64)>> {
    let of_level = |l: &Level| {
        let e = l.all.iter().find(|e| e.hypothesis == hypothesis)?;
        (!e.curve.nodes.is_empty()).then(|| (math::ln(l.prior), e.curve.clone()))
    };
    let curves: Vec<(f64, Curve)> = levels.iter().filter_map(of_level).collect();
    let mut ohms: Vec<f64> = curves.iter().flat_map(|c| c.1.nodes.iter().map(|n| n.ohms)).collect();
    ohms.sort_by(f64::total_cmp);
    ohms.dedup();
    let at = |r: f64| log_sum(&curves.iter().map(|(weight, c)| weight + c.at(r)).collect::<Vec<_>>());
    (!ohms.is_empty()).then(|| ohms.iter().map(|&r| (r, at(r))).collect())
}

/// What the readings allow in the neutral of every span, with the neutral's current as fitted.
pub(super) fn neutrals(levels: &[Level], models: &mut [Model], ranked: &[Weighed]) -> Vec<Option<(Ends, f64)>> {
    let Some(top) = ranked.first() else { return Vec::new() };
    let Some(&(level, best)) = top.members.first() else { return Vec::new() };
    let site = levels[level].site;
    let base = &levels[level].all[best];
    let suspected = (top.cause.kind == CauseKind::Neutral).then(|| class_of(levels, top)).flatten();
    let model = &mut models[level];
    let Some((task, from)) = freed(model, base) else { return Vec::new() };
    let mut all = Vec::new();
    for span in 0..site.reduced.network.spans.len() {
        if site.reduced.network.spans[span].ohms[SLOTS - 1].is_none() {
            all.push(None);
            continue;
        }
        let ends = if suspected == Some(site.reduced.class[span]) {
            suspected_ends(levels, ranked, top, span)
        } else if base.hypothesis == Hypothesis::Sound {
            beside_sound(&levels[level], span).unwrap_or((0.0, None))
        } else {
            beside(model, &task, &from, span)
        };
        let amperes = model.residuals(&task, &from.z).and_then(|_| model.neutral_amperes(span)).unwrap_or(0.0);
        all.push(Some((ends, amperes)));
    }
    all
}

fn class_of(levels: &[Level], weighed: &Weighed) -> Option<usize> {
    let &(level, k) = weighed.members.first()?;
    match levels[level].all[k].hypothesis {
        Hypothesis::Neutral(span) => Some(levels[level].site.reduced.class[span]),
        _ => None,
    }
}

/// Of a span of the suspected set: its own curve against all other causes at 0 Ω.
fn suspected_ends(levels: &[Level], ranked: &[Weighed], top: &Weighed, span: usize) -> Ends {
    let own = pool(levels, Hypothesis::Neutral(span)).or_else(|| pooled(levels, top));
    let Some(curve) = own else { return (0.0, None) };
    let others: Vec<f64> = ranked
        .iter()
        .filter(|w| w.members != top.members)
        .flat_map(|w| &w.members)
        .map(|&(l, k)| math::ln(levels[l].prior) + levels[l].all[k].evidence + math::ln(levels[l].all[k].prior.max(1e-12)))
        .collect();
    let scale: f64 = math::ln(super::settings::PRIOR_SOUND);
    ends(&curve, log_sum(&others) - scale)
}

/// Of a span beside the sound network: the curve of its own hypothesis.
fn beside_sound(level: &Level, span: usize) -> Option<Ends> {
    let own = level.all.iter().find(|e| e.hypothesis == Hypothesis::Neutral(span))?;
    let curve: Vec<(f64, f64)> = own.curve.nodes.iter().map(|n| (n.ohms, n.fit.evidence)).collect();
    (!curve.is_empty()).then(|| ends(&curve, level.all[0].evidence))
}

/// Of a span beside another cause.
fn beside(model: &mut Model, task: &Task, from: &Fit, span: usize) -> Ends {
    model.restart();
    let scan = Scan { base: task, at: (span, SLOTS - 1) };
    let curve = scan.from_none(model, from);
    let points: Vec<(f64, f64)> = curve.nodes.iter().map(|n| (n.ohms, n.fit.evidence)).collect();
    ends(&points, from.evidence)
}

/// A hypothesis with its added ohms left free, unless open.
fn freed(model: &mut Model, base: &Evaluated) -> Option<(Task, Fit)> {
    let held = || (base.task.clone(), base.fit.clone());
    let Some(added) = base.task.added.first().filter(|a| a.ohms.is_some_and(|r| r < OPEN)) else { return Some(held()) };
    let (mean, spread) = added_prior();
    let task = Task { added: vec![Added { ohms: None, ..*added }], ..base.task.clone() };
    let mut z = base.fit.z.clone();
    z.push((math::ln(added.ohms?) - mean) / spread);
    model.restart();
    Some(fit(model, &task, &z, 8).map_or_else(held, |fit| (task, fit)))
}
