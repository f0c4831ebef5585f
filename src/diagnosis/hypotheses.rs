//! The causes that are weighed, one file a kind, and which of them are worth a full fit.

mod added;
mod reading;
mod sound;
mod supply;

use super::evidence::Level;
use super::fit::{Fit, Score};
use super::model::{Model, Task};
use super::scan::Curve;
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

/// One level of trust at work.
pub(super) struct Bench<'a> {
    /// The site.
    pub site: &'a Site,
    /// Its model.
    pub model: Model<'a>,
    /// Probability of the level.
    pub prior: f64,
    /// The sound fit.
    pub sound: Fit,
    /// The fit that comes closest to the readings without being pulled far from the list, and its temperature.
    pub near: (Fit, f64),
    /// First-order tests of resistance added, about that fit.
    pub scores: Vec<[Score; crate::network::SLOTS]>,
}

/// Iterations of a fit from afar.
pub(super) const FAR: usize = 30;

/// Weighs all hypotheses at every level of trust. `None` where the sound network can't be solved.
pub(super) fn evaluate<'a>(sites: &'a [(f64, Site)]) -> Option<Vec<Level<'a>>> {
    let mut benches = Vec::with_capacity(sites.len());
    for (prior, site) in sites {
        let model = Model::new(&site.reduced, &site.observations, &site.parameters)?;
        benches.push(sound::bench(*prior, site, model)?);
    }
    let mut found: Vec<Vec<Evaluated>> = Vec::with_capacity(benches.len());
    for bench in &mut benches {
        let mut all = vec![sound::evaluated(bench)];
        all.extend(supply::evaluate(bench));
        all.extend(reading::evaluate(bench));
        found.push(all);
    }
    added::evaluate(&mut benches, &mut found);
    let level = |(bench, all): (Bench<'a>, Vec<Evaluated>)| Level { site: bench.site, model: bench.model, prior: bench.prior, all };
    Some(benches.into_iter().zip(found).map(level).collect())
}
