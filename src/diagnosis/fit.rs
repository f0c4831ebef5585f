//! The most probable unknowns of a hypothesis, and its evidence.
//!
//! With r the residuals, J their derivatives and z the whitened unknowns, minimise |r|²/T + |z|² (twice the negative logarithm of
//! likelihood times prior, at the temperature T = 1). Damped Gauss–Newton: with a = 1 plus the damping, the step d solves
//! (JᵀJ/T + a·1)·d = −g, g = Jᵀr/T + z. There are more unknowns than readings, so it is solved in the space of the readings,
//! d = −(g − Jᵀ·(J·Jᵀ + aT·1)⁻¹·J·g)/a. A descent from afar begins hot, where the prior holds the unknowns together, and cools
//! as the readings come to be explained. The evidence is Laplace's:
//! ln E = −½·(|r|² + |z|²) − ½·ln det(1 + J·Jᵀ) − Σ ln σ√2π.
//!
//! Preconditions: none; a network that can't be solved at a trial step counts as a bad step. Iterations are capped; the fit that
//! stands then is returned, for the continuation along added ohms mends it. Reference: MacKay, *Information Theory, Inference,
//! and Learning Algorithms* (2003), ch. 27 and 28 (from memory).

use super::linear::{Cholesky, add, dot, norm};
use super::model::{Model, Task};
use super::settings::MISREAD;
use crate::network::SLOTS;
use crate::quantity::math;

/// Largest change of an unknown in one step, in its own unit (logarithms, exponents).
const LONGEST_STEP: f64 = 1.5;
/// Agreement between predicted and actual decrease of the cost at which the fit is done: a twentieth of an e-fold of evidence.
const SETTLED: f64 = 0.1;
/// Damping a step begins with when the undamped one fails, and beyond which there is no way down.
const DAMPING: (f64, f64) = (0.3, 1e6);
/// Mean square residual at which a descent begins above the temperature 1.
const STIFF: f64 = 20.0;
/// Mean square residual, at the present temperature, below which it falls, and by how much at least.
const COOLS: (f64, f64) = (4.0, 2.0);
/// Steps at one temperature after which readings that are not explained there are given up.
const LINGERS: usize = 4;
/// Steps back to the valley after one step along it, at most.
const CORRECTIONS: usize = 2;
/// What the next steps together may still gain, over the last one.
const HOPE: f64 = 2.0;
/// Signs changed in one fit, at most.
const MOST_FLIPS: usize = 4;
/// ln √2π.
const HALF_LN_2_PI: f64 = 0.918_938_533_204_672_7;

/// Where a fit ended.
#[derive(Clone, Debug)]
pub(super) struct Fit {
    /// Whitened unknowns.
    pub z: Vec<f64>,
    /// |r|² + |z|².
    pub cost: f64,
    /// Logarithm of the evidence.
    pub evidence: f64,
    /// The temperature it ended at: above 1 where the readings could not be explained.
    pub temperature: f64,
}

/// Fits a task from a start, in so many iterations at most. `None` where the network is not solved at the start.
///
/// A neutral's current and its volts to ground are read without a sign. Each is taken with the sign it has at the start; where
/// all other readings would rather see the other one, or the fit ends far from it, that is tried and kept if it fits better.
pub(super) fn fit(model: &mut Model, task: &Task, start: &[f64], iterations: usize) -> Option<Fit> {
    fit_above(model, task, start, iterations, f64::NEG_INFINITY)
}

/// The same, given up (`None`) as soon as ln evidence can't be expected to come above a bound.
pub(super) fn fit_above(model: &mut Model, task: &Task, start: &[f64], iterations: usize, least: f64) -> Option<Fit> {
    model.residuals(task, start)?;
    model.take_signs();
    let limits = Limits { iterations, hot: f64::INFINITY, cold: 1.0, least };
    let (mut best, mut turned) = Descent::run(model, task, start, &limits)?;
    for _ in 0..MOST_FLIPS {
        model.residuals(task, &best.z)?;
        let Some(flipped) = turned.or_else(|| model.doubtful()) else { break };
        model.flip(flipped);
        match Descent::run(model, task, &best.z, &limits) {
            Some((other, next)) if other.evidence > best.evidence + SETTLED => (best, turned) = (other, next),
            _ => {
                model.flip(flipped);
                break;
            }
        }
    }
    Some(best)
}

/// Fits at a fixed temperature: what a network that does not explain the readings comes closest to.
pub(super) fn fit_hot(model: &mut Model, task: &Task, start: &[f64], iterations: usize, temperature: f64) -> Option<Fit> {
    model.residuals(task, start)?;
    model.take_signs();
    let limits = Limits { iterations, hot: temperature, cold: temperature, least: f64::NEG_INFINITY };
    Descent::run(model, task, start, &limits).map(|found| found.0)
}

/// How far a descent goes.
struct Limits {
    iterations: usize,
    /// Temperature it begins at, at most: what the start's misfit asks for, if that is less.
    hot: f64,
    /// Temperature it ends at.
    cold: f64,
    /// ln evidence that it must be able to reach.
    least: f64,
}

/// What a step came to.
enum Step {
    /// Down, by about as much as was predicted, or not at all for want of a slope.
    Settled,
    /// Down, or nowhere.
    Moved,
    /// The bound is out of reach.
    Hopeless,
}

struct Descent<'m, 'a, 't> {
    model: &'m mut Model<'a>,
    task: &'t Task,
    algebra: Algebra,
    z: Vec<f64>,
    squares: f64,
    temperature: f64,
    damping: f64,
    determinant: f64,
    /// −Σ ln σ√2π, with the density of a misread value in place of its reading's.
    constant: f64,
}

impl<'m, 'a, 't> Descent<'m, 'a, 't> {
    /// Descends. Also returns the reading without a sign of its own that all others would rather see with the other one.
    fn run(model: &'m mut Model<'a>, task: &'t Task, start: &[f64], limits: &Limits) -> Option<(Fit, Option<usize>)> {
        let squares = model.residuals(task, start)?;
        let readings = model.residuals.len() as f64;
        let temperature = (squares / (STIFF * readings)).clamp(limits.cold, limits.hot.max(limits.cold));
        let constant = constant(model, task);
        let z = start.to_vec();
        let algebra = Algebra::default();
        let mut descent = Self { model, task, algebra, z, squares, temperature, damping: 0.0, determinant: f64::NAN, constant };
        let mut lingered = 0;
        for _ in 0..limits.iterations {
            match descent.step(limits.least)? {
                Step::Hopeless => return None,
                Step::Settled if descent.temperature == limits.cold => break,
                Step::Settled | Step::Moved => {}
            }
            lingered += 1;
            if descent.cool(limits.cold) {
                lingered = 0;
            } else if descent.temperature > limits.cold && lingered >= LINGERS {
                break;
            }
        }
        Some(descent.end())
    }

    /// Lowers the temperature where the readings are explained at the present one.
    fn cool(&mut self, cold: f64) -> bool {
        let readings = self.model.residuals.len() as f64;
        let cools = self.temperature > cold && self.squares / self.temperature < COOLS.0 * readings;
        if cools {
            self.temperature = (self.squares / (STIFF * readings)).min(self.temperature / COOLS.1).max(cold);
        }
        cools
    }

    /// One step down, damped until it is one.
    fn step(&mut self, least: f64) -> Option<Step> {
        self.model.derivatives(self.task, &self.z)?;
        self.algebra.multiply(self.model);
        let readings = self.model.residuals.len() as f64;
        self.determinant = self.algebra.normal.factor(&self.algebra.products, self.temperature)? - readings * math::ln(self.temperature);
        let cost = self.squares / self.temperature + norm(&self.z);
        loop {
            let a = 1.0 + self.damping;
            if self.damping > 0.0 {
                self.algebra.normal.factor(&self.algebra.products, a * self.temperature)?;
            }
            let trial = self.trial(a, cost);
            if trial.cost < cost + 1e-9 {
                let hoped = trial.cost - HOPE * (cost - trial.cost);
                // Colder only costs more: what is out of reach here is out of reach.
                if -0.5 * (hoped + self.determinant) + self.constant < least {
                    return Some(Step::Hopeless);
                }
                let settled = self.damping == 0.0 && trial.is_whole && (cost - trial.cost - trial.predicted).abs() < SETTLED;
                (self.z, self.squares) = (trial.z, trial.squares);
                self.damping = if self.damping > 0.01 { self.damping / 8.0 } else { 0.0 };
                return Some(if settled { Step::Settled } else { Step::Moved });
            }
            self.squares = self.model.residuals(self.task, &self.z)?;
            self.damping = if self.damping == 0.0 { DAMPING.0 } else { self.damping * 8.0 };
            if trial.predicted < SETTLED || self.damping > DAMPING.1 {
                self.damping = 0.0;
                return Some(Step::Settled);
            }
        }
    }

    /// Where a step leads, with corrections: the valley bends, and from where the step leads too far off it the same derivatives
    /// lead back.
    fn trial(&mut self, a: f64, cost: f64) -> Trial {
        let (mut trial, predicted) = self.stepped(&self.z.clone(), a);
        trial.predicted = predicted;
        for _ in 0..CORRECTIONS {
            if !trial.cost.is_finite() || trial.cost <= cost - 0.5 * predicted {
                break;
            }
            let (next, _) = self.stepped(&trial.z, a);
            if next.cost.is_nan() || next.cost >= trial.cost {
                break;
            }
            trial = Trial { predicted, is_whole: trial.is_whole, ..next };
        }
        trial
    }

    /// One step from a point whose residuals are the model's, and the decrease of the cost it predicts.
    fn stepped(&mut self, from: &[f64], a: f64) -> (Trial, f64) {
        self.algebra.aim(self.model, from, self.temperature);
        let mut step = self.algebra.step(self.model, a);
        let predicted = -dot(&self.algebra.gradient, &step);
        let is_whole = shorten(self.model, self.task, &mut step);
        let z: Vec<f64> = from.iter().zip(&step).map(|(z, d)| z + d).collect();
        let squares = self.model.residuals(self.task, &z).unwrap_or(f64::INFINITY);
        let cost = squares / self.temperature + norm(&z);
        (Trial { z, squares, cost, predicted, is_whole }, predicted)
    }

    fn end(mut self) -> (Fit, Option<usize>) {
        let cost = self.squares + norm(&self.z);
        let (either, turned) = if self.temperature > 1.0 { (0.0, None) } else { self.algebra.either_sign(self.model, &self.z) };
        let evidence = -0.5 * (cost + self.determinant) + self.constant + either;
        (Fit { z: std::mem::take(&mut self.z), cost, evidence, temperature: self.temperature }, turned)
    }
}

struct Trial {
    z: Vec<f64>,
    squares: f64,
    cost: f64,
    predicted: f64,
    is_whole: bool,
}

fn constant(model: &Model, task: &Task) -> f64 {
    let width = |sigma: f64| math::ln(sigma) + HALF_LN_2_PI;
    let list = &model.observations.list;
    let all: f64 = list.iter().map(|o| width(o.sigma)).sum();
    task.misread.map_or(0.0, |k| width(list[k].sigma) - math::ln(2.0 * MISREAD)) - all
}

/// Keeps every unknown's change in bounds; whether it was so already.
fn shorten(model: &Model, task: &Task, step: &mut [f64]) -> bool {
    let mut is_whole = true;
    for (k, d) in step.iter_mut().enumerate() {
        let most = LONGEST_STEP / model.prior(task, k).1;
        if d.abs() > most {
            *d = d.clamp(-most, most);
            is_whole = false;
        }
    }
    is_whole
}

/// Gain of ln evidence by taking each reading in turn for misread, to first order about a fit at a temperature: with S = T + J·Jᵀ
/// and e the residuals at the prior, reading k given the others is normal with precision S⁻¹ₖₖ and off by (S⁻¹e)ₖ/S⁻¹ₖₖ.
pub(super) fn without(model: &mut Model, task: &Task, fit: &Fit, temperature: f64) -> Option<Vec<f64>> {
    let (algebra, weights) = Algebra::about(model, task, fit, temperature)?;
    let one = |(k, w): (usize, &f64)| {
        let (precision, sigma) = (algebra.normal.inverse_diagonal(k), model.observations.list[k].sigma);
        let given_others = -0.5 * w * w / precision + 0.5 * math::ln(precision) - HALF_LN_2_PI - math::ln(sigma);
        -given_others - math::ln(2.0 * MISREAD)
    };
    Some(weights.iter().enumerate().map(one).collect())
}

/// What a first-order test says of resistance added in a conductor.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Score {
    /// Slope of ln evidence per ohm.
    pub slope: f64,
    /// Its variance: ln evidence bends by so much per ohm squared.
    pub bend: f64,
}

impl Score {
    /// Most that added ohms could gain, of either sign: which leg carries more may be fitted wrong.
    pub fn gain(self) -> f64 {
        if self.bend > 0.0 { 0.5 * self.slope * self.slope / self.bend } else { 0.0 }
    }
}

/// Tests resistance added in each conductor about a fit at a temperature (Rao's score test). Span by span, slot by slot.
pub(super) fn scores(model: &mut Model, task: &Task, fit: &Fit, temperature: f64) -> Option<Vec<[Score; SLOTS]>> {
    let (algebra, weights) = Algebra::about(model, task, fit, temperature)?;
    let by_ohms = model.by_ohms()?;
    let spans = by_ohms.first().map_or(0, Vec::len);
    let mut all = vec![[Score::default(); SLOTS]; spans];
    let mut d = vec![0.0; weights.len()];
    for (span, scores) in all.iter_mut().enumerate() {
        for (slot, score) in scores.iter_mut().enumerate() {
            d.iter_mut().zip(&by_ohms).for_each(|(d, reading)| *d = reading[span][slot]);
            let slope = -dot(&d, &weights);
            if slope != 0.0 {
                algebra.normal.solve_lower(&mut d);
                *score = Score { slope, bend: norm(&d) };
            }
        }
    }
    Some(all)
}

/// What a change of each of some unknowns would gain by itself, freed of its prior, to first order about a fit.
pub(super) fn gains(model: &mut Model, task: &Task, fit: &Fit, temperature: f64, unknowns: &[usize]) -> Option<Vec<f64>> {
    let (algebra, weights) = Algebra::about(model, task, fit, temperature)?;
    let one = |&j: &usize| {
        let mut d: Vec<f64> = (0..weights.len()).map(|k| model.row(k)[j]).collect();
        let slope = dot(&d, &weights);
        algebra.normal.solve_lower(&mut d);
        Score { slope, bend: norm(&d) }.gain()
    };
    Some(unknowns.iter().map(one).collect())
}

/// The normal equations in the space of the readings.
#[derive(Default)]
struct Algebra {
    products: Vec<f64>,
    normal: Cholesky,
    gradient: Vec<f64>,
    along: Vec<f64>,
}

impl Algebra {
    /// The normal equations about a fit, factored, with S⁻¹e.
    fn about(model: &mut Model, task: &Task, fit: &Fit, temperature: f64) -> Option<(Self, Vec<f64>)> {
        model.residuals(task, &fit.z)?;
        model.derivatives(task, &fit.z)?;
        let mut algebra = Self::default();
        algebra.multiply(model);
        algebra.normal.factor(&algebra.products, temperature)?;
        let mut weights = at_prior(model, &fit.z);
        algebra.normal.solve(&mut weights);
        Some((algebra, weights))
    }

    /// J·Jᵀ at the present derivatives.
    fn multiply(&mut self, model: &Model) {
        let m = model.residuals.len();
        self.products.clear();
        self.products.resize(m * m, 0.0);
        for a in 0..m {
            for b in 0..=a {
                self.products[a * m + b] = dot(model.row(a), model.row(b));
            }
        }
    }

    /// g = Jᵀr/T + z and J·g at the present residuals and the last derivatives.
    fn aim(&mut self, model: &Model, z: &[f64], temperature: f64) {
        self.gradient.clear();
        self.gradient.extend_from_slice(z);
        for (k, r) in model.residuals.iter().enumerate() {
            add(&mut self.gradient, model.row(k), *r / temperature);
        }
        self.along.clear();
        self.along.extend((0..model.residuals.len()).map(|k| dot(model.row(k), &self.gradient)));
    }

    /// The step for a normal matrix J·Jᵀ + aT·1 already factored.
    fn step(&mut self, model: &Model, a: f64) -> Vec<f64> {
        self.normal.solve(&mut self.along);
        let mut step: Vec<f64> = self.gradient.iter().map(|g| -g / a).collect();
        for (k, w) in self.along.iter().enumerate() {
            add(&mut step, model.row(k), w / a);
        }
        step
    }

    /// What readings without a sign gain by having been either: ln(1 + p₋/p₊) each, with the probabilities of the reading with its
    /// present and the other sign given all others, to first order. And the one whose other sign is the most probable.
    fn either_sign(&mut self, model: &Model, z: &[f64]) -> (f64, Option<usize>) {
        let unsigned: Vec<usize> = model.unsigned().collect();
        if unsigned.is_empty() || self.normal.factor(&self.products, 1.0).is_none() {
            return (0.0, None);
        }
        let mut weights = at_prior(model, z);
        self.normal.solve(&mut weights);
        let (mut gain, mut turned) = (0.0, (SETTLED, None));
        for k in unsigned {
            let precision = self.normal.inverse_diagonal(k);
            let read = model.observations.list[k].value / model.observations.list[k].sigma;
            let expected = read + weights[k] / precision;
            let odds = -2.0 * read * expected * precision;
            gain += if odds < 30.0 { math::ln_1p(math::exp(odds)) } else { odds };
            if odds > turned.0 {
                turned = (odds, Some(k));
            }
        }
        // Until it has been turned, a sign that is the more probable is not credited: the fit is not at it.
        (if turned.1.is_some() { 0.0 } else { gain }, turned.1)
    }
}

/// Residuals at the prior's means, to first order: r − J·z.
fn at_prior(model: &Model, z: &[f64]) -> Vec<f64> {
    model.residuals.iter().enumerate().map(|(k, r)| r - dot(model.row(k), z)).collect()
}
