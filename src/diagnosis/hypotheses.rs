//! The causes that are weighed, one file a kind.

mod hot;
mod neutral;
mod reading;
mod sound;
mod supply;

use super::fit::Fit;
use super::model::{Model, Task};
use super::scan::{Curve, Scan};
use super::site::Site;
use crate::visit::Leg;

/// A cause on the reduced network.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Hypothesis {
    /// Nothing wrong.
    Sound,
    /// Resistance added in the neutral of a span.
    Neutral(usize),
    /// Resistance added in a line conductor of a span.
    Hot(usize, Leg),
    /// Supply high (`true`) or low.
    Supply(bool),
    /// A reading misread.
    Reading(usize),
}

/// A hypothesis with its weight.
#[derive(Clone, Debug)]
pub(super) struct Evaluated {
    /// Which.
    pub hypothesis: Hypothesis,
    /// Probability before any reading.
    pub prior: f64,
    /// ln of its evidence, averaged over added ohms.
    pub evidence: f64,
    /// What it changes, added ohms at their best.
    pub task: Task,
    /// The fit there.
    pub fit: Fit,
    /// Evidence along added ohms; empty for kinds without.
    pub curve: Curve,
}

/// What the evaluation of every kind is given.
pub(super) struct Bench<'a, 's> {
    /// The site.
    pub site: &'s Site,
    /// Its model.
    pub model: Model<'a>,
    /// The sound fit.
    pub sound: Fit,
    /// Best ln evidence so far.
    pub best: f64,
}

/// Iterations of a fit from afar, and of a continued one.
pub(super) const FAR: usize = 30;
/// Of a continued one.
pub(super) const NEAR: usize = 5;

/// Weighs all hypotheses; the sound one first. `None` where the sound network can't be solved.
pub(super) fn evaluate(site: &Site, model: Model) -> Option<Vec<Evaluated>> {
    let mut model = model;
    let sound = sound::evaluate(&mut model)?;
    let mut bench = Bench { site, best: sound.evidence, sound: sound.fit.clone(), model };
    let mut all = vec![sound];
    all.extend(supply::evaluate(&mut bench));
    all.extend(reading::evaluate(&mut bench));
    all.extend(neutral::evaluate(&mut bench));
    all.extend(hot::evaluate(&mut bench));
    Some(all)
}

impl Bench<'_, '_> {
    /// Evaluates resistance added in one conductor.
    fn added(&mut self, hypothesis: Hypothesis, at: (usize, usize), prior: f64, open: f64) -> Option<Evaluated> {
        let base = Task::default();
        let scan = Scan { base: &base, at, best: self.best, iterations: NEAR };
        let mut curve = scan.run(&mut self.model, &self.sound);
        if curve.height() > self.best - 8.0 {
            scan.refine(&mut self.model, &mut curve);
        }
        self.best = self.best.max(curve.height());
        let peak = curve.peak()?;
        let node = &curve.nodes[peak];
        Some(Evaluated {
            hypothesis,
            prior,
            evidence: curve.average(open),
            task: scan.task(node.ohms),
            fit: node.fit.clone(),
            curve,
        })
    }
}
