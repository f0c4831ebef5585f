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
use crate::results::{AddedOhms, Cause, CauseKind};

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
    let low = match first.checked_sub(1) {
        None => 0.0,
        // Open alone: all that was tried below is excluded.
        Some(below) if points[first].0 >= OPEN => points[below].0,
        Some(below) => crossing(points[below], points[first], floor),
    };
    let high = match points.get(last + 1) {
        _ if points[last].0 >= OPEN => None,
        None => None,
        Some(next) if next.0 >= OPEN => None,
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
    let of_level = |l: &'_ Level| {
        let k = l.all.iter().position(|e| e.hypothesis == hypothesis && !e.curve.nodes.is_empty())?;
        Some((math::ln(l.prior), k))
    };
    let found: Vec<Option<(f64, usize)>> = levels.iter().map(of_level).collect();
    let curves: Vec<(f64, &Curve)> =
        levels.iter().zip(&found).filter_map(|(l, f)| f.map(|(weight, k)| (weight, &l.all[k].curve))).collect();
    let mut ohms: Vec<f64> = curves.iter().flat_map(|c| c.1.nodes.iter().map(|n| n.ohms)).collect();
    ohms.sort_by(f64::total_cmp);
    ohms.dedup();
    let at = |r: f64| log_sum(&curves.iter().map(|(weight, c)| weight + c.at(r)).collect::<Vec<_>>());
    (!ohms.is_empty()).then(|| ohms.iter().map(|&r| (r, at(r))).collect())
}

/// What the readings allow besides the suspected cause.
pub(super) struct Bounds<'l, 'a> {
    levels: &'l mut [Level<'a>],
    ranked: &'l [Weighed],
    top: &'l Weighed,
    level: usize,
    base: Evaluated,
    task: Task,
    from: Fit,
}

impl<'l, 'a> Bounds<'l, 'a> {
    /// Prepares to bound resistances besides the most probable cause that the readings speak of.
    pub fn new(levels: &'l mut [Level<'a>], ranked: &'l [Weighed]) -> Option<Self> {
        let top = ranked.iter().find(|w| !w.members.is_empty())?;
        let &(level, best) = top.members.first()?;
        let base = levels.get(level)?.all.get(best)?.clone();
        let (task, from) = freed(&mut levels[level].model, &base)?;
        Some(Self { levels, ranked, top, level, base, task, from })
    }

    /// The neutral of every span, with its current as fitted.
    pub fn neutrals(&mut self) -> Vec<Option<(Ends, f64)>> {
        let suspected = (self.top.cause.kind == CauseKind::Neutral).then(|| class_of(self.levels, self.top)).flatten();
        let site = self.levels[self.level].site;
        let mut all = Vec::with_capacity(site.reduced.network.spans.len());
        for span in 0..site.reduced.network.spans.len() {
            if site.reduced.network.spans[span].ohms[SLOTS - 1].is_none() {
                all.push(None);
                continue;
            }
            let ends = if suspected == Some(site.reduced.class[span]) {
                suspected_ends(self.levels, self.ranked, self.top, span)
            } else {
                self.beside((span, SLOTS - 1))
            };
            all.push(Some((ends, 0.0)));
        }
        let model = &mut self.levels[self.level].model;
        if model.residuals(&self.task, &self.from.z).is_some() {
            for (span, known) in all.iter_mut().enumerate() {
                if let Some((_, amperes)) = known {
                    *amperes = model.neutral_amperes(span).unwrap_or(0.0);
                }
            }
        }
        all
    }

    /// The resistance another cause is about, wherever among its runs it allows most.
    pub fn of(&mut self, cause: &Cause) -> Option<Ends> {
        let slot = match cause.kind {
            CauseKind::Neutral => SLOTS - 1,
            CauseKind::Hot(leg) => leg.index(),
            _ => return None,
        };
        let reduced = &self.levels[self.level].site.reduced;
        let is_asked =
            |s: &usize| reduced.network.spans[*s].ohms[slot].is_some() && reduced.runs[*s].iter().any(|r| cause.runs.contains(r));
        let spans: Vec<usize> = (0..reduced.runs.len()).filter(is_asked).collect();
        let runs: usize = spans.iter().map(|s| reduced.runs[*s].len()).sum();
        if runs < cause.runs.len() || spans.is_empty() {
            return None;
        }
        let ends: Vec<Ends> = spans.into_iter().map(|s| self.beside((s, slot))).collect();
        let low = ends.iter().map(|e| e.0).fold(f64::INFINITY, f64::min);
        Some((low, ends.iter().map(|e| e.1).try_fold(0.0, |most, high| high.map(|h| h.max(most)))))
    }

    /// A conductor beside the suspected cause; beside the sound network the curve of its own hypothesis, where it has one.
    fn beside(&mut self, at: (usize, usize)) -> Ends {
        let level = &mut self.levels[self.level];
        let own = (self.base.hypothesis == Hypothesis::Sound && at.1 == SLOTS - 1)
            .then(|| level.all.iter().find(|e| e.hypothesis == Hypothesis::Neutral(at.0)))
            .flatten()
            .filter(|e| !e.curve.nodes.is_empty());
        let points = |curve: &Curve| curve.nodes.iter().map(|n| (n.ohms, n.fit.evidence)).collect::<Vec<_>>();
        if let Some(own) = own {
            return ends(&points(&own.curve), level.all[0].evidence);
        }
        level.model.restart();
        let curve = Scan { base: &self.task, at }.upwards(&mut level.model, &self.from);
        ends(&points(&curve), self.from.evidence)
    }
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
