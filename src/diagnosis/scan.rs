//! Evidence along added ohms, from none to open.
//!
//! The fit is continued from one value to the next, upwards from the sound network and downwards from the open conductor, so that
//! it follows the readings round mirror images (a neutral voltage is read without its sign) and out of local minima. A direction
//! is left when the evidence has fallen far below the best known.

use super::fit::{Fit, fit};
use super::model::{Added, Model, OPEN, Task};
use super::settings::ADDED;
use crate::quantity::math;

/// Values per octave step: each doubles the last.
const STEPS: usize = 9;
/// Fall of ln evidence below the best at which a direction is left.
const HOPELESS: f64 = 18.0;
/// ln of the likelihood ratio that bounds a 95 % interval: half the 95 % point of χ² with one degree of freedom.
pub(super) const INTERVAL: f64 = 1.92;

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
    /// Best evidence known of any hypothesis.
    pub best: f64,
    /// Iterations a value.
    pub iterations: usize,
}

impl Scan<'_> {
    /// Added ohms of a value as a task.
    pub fn task(&self, ohms: f64) -> Task {
        self.base.with(Added { span: self.at.0, slot: self.at.1, ohms: Some(ohms) })
    }

    /// Follows the curve from the fit without the added ohms.
    pub fn run(&self, model: &mut Model, from: &Fit) -> Curve {
        let mut curve = Curve::default();
        let last = self.upwards(model, from, &mut curve);
        let prior = vec![0.0; from.z.len()];
        self.downwards(model, &[&last, &from.z, &prior], &mut curve);
        curve
    }

    fn upwards(&self, model: &mut Model, from: &Fit, curve: &mut Curve) -> Vec<f64> {
        let mut z = from.z.clone();
        for ohms in grid() {
            let Some(fit) = fit(model, &self.task(ohms), &z, self.iterations) else { break };
            z.clone_from(&fit.z);
            let is_hopeless = fit.evidence < self.best - HOPELESS;
            let falls = curve.nodes.last().is_some_and(|n| n.fit.evidence > fit.evidence + 1.0);
            curve.nodes.push(Node { ohms, fit });
            if is_hopeless && falls {
                break;
            }
        }
        z
    }

    fn downwards(&self, model: &mut Model, starts: &[&Vec<f64>], curve: &mut Curve) {
        let mut open: Option<Fit> = None;
        for start in starts {
            model.restart();
            let Some(fit) = fit(model, &self.task(OPEN), start, 2 * self.iterations) else { continue };
            if open.as_ref().is_none_or(|o| fit.evidence > o.evidence) {
                open = Some(fit);
            }
        }
        let Some(open) = open else { return };
        let mut z = open.z.clone();
        let mut best = open.evidence.max(self.best);
        let mut hopeless = open.evidence < best - HOPELESS;
        curve.put(OPEN, open);
        for ohms in grid().rev() {
            if hopeless {
                break;
            }
            let Some(fit) = fit(model, &self.task(ohms), &z, self.iterations) else { break };
            z.clone_from(&fit.z);
            best = best.max(fit.evidence);
            hopeless = fit.evidence < best - HOPELESS;
            if !curve.put(ohms, fit) {
                break;
            }
        }
    }

    /// Adds values about the peak, where the curve is narrower than the grid.
    pub fn refine(&self, model: &mut Model, curve: &mut Curve) {
        for _ in 0..6 {
            let Some(peak) = curve.peak() else { return };
            if curve.nodes[peak].ohms >= OPEN {
                return;
            }
            let neighbours = [peak.checked_sub(1), (peak + 1 < curve.nodes.len()).then_some(peak + 1)];
            let height = curve.nodes[peak].fit.evidence;
            let steep = neighbours.into_iter().flatten().filter(|&k| curve.nodes[k].ohms < OPEN);
            let gaps: Vec<(usize, f64)> = steep
                .filter(|&k| height - curve.nodes[k].fit.evidence > 0.7)
                .map(|k| (k, math::ln(curve.nodes[k].ohms / curve.nodes[peak].ohms)))
                .filter(|g| g.1.abs() > 0.01)
                .collect();
            if gaps.is_empty() {
                return;
            }
            let (at, start) = (curve.nodes[peak].ohms, curve.nodes[peak].fit.z.clone());
            for (_, gap) in gaps {
                let ohms = at * math::exp(gap / 2.0);
                if let Some(fit) = fit(model, &self.task(ohms), &start, self.iterations) {
                    curve.put(ohms, fit);
                }
            }
        }
    }
}

/// The values, doubling.
fn grid() -> impl DoubleEndedIterator<Item = f64> {
    (0..=STEPS).map(|k| ADDED.0 * math::exp(math::ln(ADDED.1 / ADDED.0) * k as f64 / STEPS as f64))
}

impl Curve {
    /// Puts in a value, or improves it; whether it was better than what stood there.
    fn put(&mut self, ohms: f64, fit: Fit) -> bool {
        let at = self.nodes.partition_point(|n| n.ohms < ohms * (1.0 - 1e-9));
        match self.nodes.get_mut(at).filter(|n| n.ohms <= ohms * (1.0 + 1e-9)) {
            Some(node) if node.fit.evidence + 0.02 >= fit.evidence => false,
            Some(node) => {
                node.fit = fit;
                true
            }
            None => {
                self.nodes.insert(at, Node { ohms, fit });
                true
            }
        }
    }

    /// The most probable value.
    pub fn peak(&self) -> Option<usize> {
        (0..self.nodes.len()).max_by(|&a, &b| self.nodes[a].fit.evidence.total_cmp(&self.nodes[b].fit.evidence))
    }

    /// Best ln evidence.
    pub fn height(&self) -> f64 {
        self.peak().map_or(f64::NEG_INFINITY, |p| self.nodes[p].fit.evidence)
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
