//! Evidence along added ohms, from none to open.
//!
//! From a fit the curve is continued value by value in both directions, each fit beginning where the last ended. So it follows
//! the readings round mirror images (a neutral's volts are read without their sign) and out of local minima. A direction is left
//! when the evidence has fallen far below its best.

use super::fit::{Fit, fit, fit_above};
use super::model::{Added, Model, OPEN, Task, added_prior};
use super::settings::ADDED;
use crate::quantity::math;

/// Steps of the grid, each doubling the last value.
const STEPS: usize = 8;
/// Fall of ln evidence below the curve's best at which a direction is left.
const FALLEN: f64 = 4.0;
/// ln of the likelihood ratio that bounds a 95 % interval: half the 95 % point of χ² with one degree of freedom.
pub(super) const INTERVAL: f64 = 1.92;
/// Mean square residual (with the unknowns' own) below which the readings are explained.
pub(super) const EXPLAINS: f64 = 2.0;
/// Iterations of a continued fit.
const NEAR: usize = 15;
/// How much further below a continued fit is given up unfinished.
const OUT_OF_REACH: f64 = 4.0;
/// Iterations of a fit from afar.
const SEARCH: usize = 15;

/// One value along the curve.
#[derive(Clone, Debug)]
pub(super) struct Node {
    /// Added ohms; [`OPEN`] for open.
    pub ohms: f64,
    /// The fit there.
    pub fit: Fit,
}

/// The evidence along added ohms of one conductor.
#[derive(Clone, Debug, Default)]
pub(super) struct Curve {
    /// By rising ohms, open last. Values given up are missing.
    pub nodes: Vec<Node>,
}

/// What is scanned.
#[derive(Clone, Debug)]
pub(super) struct Scan<'t> {
    /// What the hypothesis changes besides.
    pub base: &'t Task,
    /// Span and slot of the conductor.
    pub at: (usize, usize),
}

impl Scan<'_> {
    /// Added ohms of a value as a task.
    pub fn task(&self, ohms: f64) -> Task {
        self.base.with(Added { span: self.at.0, slot: self.at.1, ohms: Some(ohms) })
    }

    /// Follows the curve up from the fit without added ohms, until it has fallen.
    pub fn upwards(&self, model: &mut Model, from: &Fit) -> Curve {
        let mut curve = Curve::default();
        self.follow(model, &mut curve, from, grid().chain([OPEN]));
        curve
    }

    /// The most probable added ohms, looked for from several starts until the readings are explained; the fit with them held there.
    /// Fits that can't come within reach of an evidence are given up.
    pub fn search(&self, model: &mut Model, starts: &[(&[f64], f64)], least: f64) -> Option<(f64, Fit)> {
        let explained = EXPLAINS * model.residuals.len() as f64;
        let mut best: Option<(f64, Fit)> = None;
        for &(start, ohms) in starts {
            model.restart();
            let Some(found) = self.peak(model, start, ohms, least) else { continue };
            if best.as_ref().is_none_or(|b| found.1.evidence > b.1.evidence) {
                best = Some(found);
            }
            if best.as_ref().is_some_and(|b| b.1.cost < explained) {
                break;
            }
        }
        best
    }

    /// Follows the curve both ways from the peaks found from several starts.
    pub fn about_peaks(&self, model: &mut Model, starts: &[(&[f64], f64)], least: f64) -> Curve {
        let mut curve = Curve::default();
        for &(start, ohms) in starts {
            model.restart();
            let Some((ohms, at)) = self.peak(model, start, ohms, least) else { continue };
            if curve.at(ohms) > at.evidence - 0.1 {
                continue;
            }
            curve.put(ohms, at.clone());
            self.follow(model, &mut curve, &at, grid().filter(|g| *g > ohms * 1.001).chain([OPEN]));
            self.follow(model, &mut curve, &at, grid().rev().filter(|g| *g < ohms * 0.999));
        }
        self.refine(model, &mut curve);
        curve
    }

    /// The most probable added ohms from a start, or an open conductor fitted from it.
    fn peak(&self, model: &mut Model, start: &[f64], ohms: f64, least: f64) -> Option<(f64, Fit)> {
        if ohms >= OPEN {
            fit_above(model, &self.task(OPEN), start, SEARCH, least).map(|fit| (OPEN, fit))
        } else {
            self.free(model, start, ohms, least)
        }
    }

    /// The most probable added ohms from a start, and the fit with them held there.
    fn free(&self, model: &mut Model, start: &[f64], ohms: f64, least: f64) -> Option<(f64, Fit)> {
        let task = self.base.with(Added { span: self.at.0, slot: self.at.1, ohms: None });
        let (mean, spread) = added_prior();
        let mut z = start.to_vec();
        z.push((math::ln(ohms) - mean) / spread);
        let found = fit_above(model, &task, &z, SEARCH, least)?;
        let ohms = math::exp(mean + spread * found.z.last()?).clamp(ADDED.0, ADDED.1);
        let held = fit(model, &self.task(ohms), &found.z[..start.len()], NEAR)?;
        Some((ohms, held))
    }

    /// Follows the curve along values, until it has fallen.
    fn follow(&self, model: &mut Model, curve: &mut Curve, from: &Fit, values: impl Iterator<Item = f64>) {
        let (mut from, mut best) = (from.clone(), from.evidence);
        for ohms in values {
            let least = best - FALLEN - OUT_OF_REACH;
            let Some(fit) = fit_above(model, &self.task(ohms), &from.z, NEAR, least) else {
                // Not finished, but it lies no higher than this: enough to say where the curve falls.
                curve.put(ohms, Fit { evidence: least, ..from });
                break;
            };
            best = best.max(fit.evidence);
            from.clone_from(&fit);
            curve.put(ohms, fit);
            if from.evidence < best - FALLEN {
                break;
            }
        }
    }

    /// Adds values about the peak, where the curve is narrower than the grid.
    fn refine(&self, model: &mut Model, curve: &mut Curve) {
        for _ in 0..8 {
            let Some(peak) = curve.peak() else { return };
            if curve.nodes[peak].ohms >= OPEN {
                return;
            }
            let height = curve.nodes[peak].fit.evidence;
            let neighbours = [peak.checked_sub(1), (peak + 1 < curve.nodes.len()).then_some(peak + 1)];
            let steepest = neighbours
                .into_iter()
                .flatten()
                .filter(|&k| curve.nodes[k].ohms < OPEN && height - curve.nodes[k].fit.evidence > 1.0)
                .map(|k| math::ln(curve.nodes[k].ohms / curve.nodes[peak].ohms))
                .filter(|gap| gap.abs() > 0.02)
                .max_by(|a, b| a.abs().total_cmp(&b.abs()));
            let Some(gap) = steepest else { return };
            let ohms = curve.nodes[peak].ohms * math::exp(gap / 2.0);
            let start = curve.nodes[peak].fit.z.clone();
            match fit(model, &self.task(ohms), &start, NEAR) {
                Some(fit) => curve.put(ohms, fit),
                None => return,
            };
        }
    }
}

/// The values, doubling.
fn grid() -> impl DoubleEndedIterator<Item = f64> {
    (0..=STEPS).map(|k| ADDED.0 * math::exp(math::ln(ADDED.1 / ADDED.0) * k as f64 / STEPS as f64))
}

impl Curve {
    /// Puts in a value, or improves it.
    fn put(&mut self, ohms: f64, fit: Fit) {
        let at = self.nodes.partition_point(|n| n.ohms < ohms * (1.0 - 1e-9));
        match self.nodes.get_mut(at).filter(|n| n.ohms <= ohms * (1.0 + 1e-9)) {
            Some(node) if node.fit.evidence >= fit.evidence => {}
            Some(node) => node.fit = fit,
            None => self.nodes.insert(at, Node { ohms, fit }),
        }
    }

    /// The most probable value.
    pub fn peak(&self) -> Option<usize> {
        (0..self.nodes.len()).max_by(|&a, &b| self.nodes[a].fit.evidence.total_cmp(&self.nodes[b].fit.evidence))
    }

    /// ln evidence at a value: straight between the nodes over the logarithm of the ohms, nothing outside them.
    pub fn at(&self, ohms: f64) -> f64 {
        let above = self.nodes.partition_point(|n| n.ohms < ohms * (1.0 - 1e-9));
        match (above.checked_sub(1).and_then(|k| self.nodes.get(k)), self.nodes.get(above)) {
            (_, Some(n)) if n.ohms <= ohms * (1.0 + 1e-9) => n.fit.evidence,
            (Some(a), Some(b)) if b.ohms < OPEN => {
                let share = math::ln(ohms / a.ohms) / math::ln(b.ohms / a.ohms);
                a.fit.evidence + share * (b.fit.evidence - a.fit.evidence)
            }
            _ => f64::NEG_INFINITY,
        }
    }

    /// ln of the evidence averaged over the prior of the added ohms: log-uniform, and a share for open.
    pub fn average(&self, open: f64) -> f64 {
        let range = math::ln(ADDED.1 / ADDED.0);
        let mut parts = Vec::with_capacity(self.nodes.len());
        for pair in self.nodes.windows(2).filter(|p| p[1].ohms < OPEN) {
            let (a, b) = (pair[0].fit.evidence, pair[1].fit.evidence);
            let width = math::ln(pair[1].ohms / pair[0].ohms);
            parts.push(mean_exponential(a, b) + math::ln(width / range * (1.0 - open)));
        }
        if let Some(node) = self.nodes.last().filter(|n| n.ohms >= OPEN) {
            parts.push(node.fit.evidence + math::ln(open));
        }
        log_sum(&parts)
    }
}

/// ln of the mean of eˣ over x running straight from a to b.
fn mean_exponential(a: f64, b: f64) -> f64 {
    let (high, fall) = (a.max(b), (a - b).abs());
    if fall < 1e-6 { high } else { high + math::ln((1.0 - math::exp(-fall)) / fall) }
}

/// ln Σ eˣ.
pub(super) fn log_sum(x: &[f64]) -> f64 {
    let high = x.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    if high == f64::NEG_INFINITY { high } else { high + math::ln(x.iter().map(|x| math::exp(x - high)).sum()) }
}
