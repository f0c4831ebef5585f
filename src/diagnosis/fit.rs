//! The most probable unknowns of a hypothesis, and its evidence.
//!
//! With r the residuals, J their derivatives and z the whitened unknowns, minimise |r|²/T + |z|² (twice the negative logarithm of
//! likelihood times prior, at the temperature T = 1). Damped Gauss–Newton: with a = 1 plus the damping, the step d solves
//! (JᵀJ/T + a·1)·d = −g, g = Jᵀr/T + z. There are more unknowns than readings, so it is solved in the space of the readings,
//! d = −(g − Jᵀ·(J·Jᵀ + aT·1)⁻¹·J·g)/a. A descent from afar begins hot, where the prior holds the unknowns together, and cools
//! with every step. The evidence is Laplace's: ln E = −½·(|r|² + |z|²) − ½·ln det(1 + J·Jᵀ) − Σ ln σ√2π.
//!
//! Preconditions: none; a network that can't be solved at a trial step counts as a bad step. Iterations are capped; the fit that
//! stands then is returned, for the continuation along added ohms mends it. Reference: MacKay, *Information Theory, Inference,
//! and Learning Algorithms* (2003), ch. 27 and 28.

use super::cholesky::Cholesky;
use super::model::{Model, Task};
use super::settings::MISREAD;
use crate::network::SLOTS;
use crate::quantity::math;

/// Largest change of an unknown in one step, in its own unit (logarithms, exponents).
const LONGEST_STEP: f64 = 1.5;
/// Agreement between predicted and actual decrease of the cost at which the fit is done: a twentieth of an e-fold of evidence.
const SETTLED: f64 = 0.1;
const MOST_DAMPING: f64 = 1e6;
/// Mean square residual at which a descent begins above the temperature 1.
const STIFF: f64 = 20.0;
/// Least fall of the temperature when it falls.
const COOLING: f64 = 2.0;
/// Mean square residual, at the present temperature, below which it falls.
const COOLS: f64 = 4.0;
/// Steps at one temperature after which readings that are not explained there are given up.
const LINGERS: usize = 4;
/// Steps back to the valley after one step along it, at most.
const CORRECTIONS: usize = 2;
/// What the next steps together may still gain, over the last one.
const HOPE: f64 = 2.0;
/// Signs changed in one fit, at most.
const MOST_FLIPS: usize = 4;

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
/// the fit ends far from one, the other sign is tried and kept if it fits better.
pub(super) fn fit(model: &mut Model, task: &Task, start: &[f64], iterations: usize) -> Option<Fit> {
    fit_above(model, task, start, iterations, f64::NEG_INFINITY)
}

/// The same, given up (`None`) as soon as ln evidence can't be expected to come above a bound.
pub(super) fn fit_above(model: &mut Model, task: &Task, start: &[f64], iterations: usize, least: f64) -> Option<Fit> {
    model.residuals(task, start)?;
    model.take_signs();
    let (mut best, mut turned) = descend(model, task, start, iterations, least)?;
    for _ in 0..MOST_FLIPS {
        model.residuals(task, &best.z)?;
        let Some(flipped) = turned.or_else(|| model.doubtful()) else { break };
        model.flip(flipped);
        match descend(model, task, &best.z, iterations, least) {
            Some((other, next)) if other.evidence > best.evidence + SETTLED => (best, turned) = (other, next),
            _ => {
                model.flip(flipped);
                break;
            }
        }
    }
    Some(best)
}

/// Fits at a fixed temperature, without evidence: what a network that does not explain the readings comes closest to.
pub(super) fn fit_hot(model: &mut Model, task: &Task, start: &[f64], iterations: usize, temperature: f64) -> Option<Fit> {
    model.residuals(task, start)?;
    model.take_signs();
    descend_from(model, task, start, iterations, (temperature, temperature), f64::NEG_INFINITY).map(|found| found.0)
}

fn descend(model: &mut Model, task: &Task, start: &[f64], iterations: usize, least: f64) -> Option<(Fit, Option<usize>)> {
    descend_from(model, task, start, iterations, (f64::INFINITY, 1.0), least)
}

/// Descends from a temperature (at most what the start's misfit asks for) to another. Also returns the reading without a sign of
/// its own that all others would rather see with the other one.
fn descend_from(
    model: &mut Model,
    task: &Task,
    start: &[f64],
    iterations: usize,
    (hot, cold): (f64, f64),
    least: f64,
) -> Option<(Fit, Option<usize>)> {
    let own: f64 = model.observations.list.iter().map(|o| math::ln(o.sigma) + HALF_LN_2_PI).sum();
    let mut z = start.to_vec();
    let mut squares = model.residuals(task, &z)?;
    let mut temperature = (squares / (STIFF * model.residuals.len() as f64)).clamp(cold, hot.max(cold));
    let mut damping = 0.0;
    let mut determinant = f64::NAN;
    let mut scratch = Scratch::default();
    let readings = model.residuals.len() as f64;
    let mut lingered = 0;
    for _ in 0..iterations {
        if model.derivatives(task, &z).is_none() {
            break;
        }
        scratch.prepare(model, &z, temperature);
        determinant = scratch.normal.factor(&scratch.products, temperature)? - model.residuals.len() as f64 * math::ln(temperature);
        let cost = squares / temperature + norm(&z);
        let mut done = false;
        loop {
            let a = 1.0 + damping;
            if damping > 0.0 {
                scratch.normal.factor(&scratch.products, a * temperature)?;
            }
            scratch.aim(model, &z, temperature);
            let predicted = scratch.step(model, a);
            let is_whole = shorten(model, task, &mut scratch.step);
            let mut trial: Vec<f64> = z.iter().zip(&scratch.step).map(|(z, d)| z + d).collect();
            let mut new = model.residuals(task, &trial).unwrap_or(f64::INFINITY);
            let mut new_cost = new / temperature + norm(&trial);
            let mut corrections = 0;
            // The valley bends: from where the step leads too far off it, the same derivatives lead back.
            while corrections < CORRECTIONS && new_cost.is_finite() && new_cost > cost - 0.5 * predicted {
                corrections += 1;
                scratch.aim(model, &trial, temperature);
                scratch.step(model, a);
                shorten(model, task, &mut scratch.step);
                let next: Vec<f64> = trial.iter().zip(&scratch.step).map(|(z, d)| z + d).collect();
                let squares = model.residuals(task, &next).unwrap_or(f64::INFINITY);
                let next_cost = squares / temperature + norm(&next);
                if !(next_cost < new_cost) {
                    new = model.residuals(task, &trial).unwrap_or(f64::INFINITY);
                    break;
                }
                (trial, new, new_cost) = (next, squares, next_cost);
            }
            if new_cost < cost + 1e-9 {
                done = damping == 0.0 && is_whole && temperature == cold && (cost - new_cost - predicted).abs() < SETTLED;
                let hoped = new_cost - HOPE * (cost - new_cost);
                // Colder only costs more: what is out of reach here is out of reach.
                if -0.5 * (hoped + determinant) - own < least {
                    return None;
                }
                (z, squares) = (trial, new);
                damping = if damping > 0.01 { damping / 8.0 } else { 0.0 };
                break;
            }
            model.residuals(task, &z)?;
            damping = if damping == 0.0 { 0.3 } else { damping * 8.0 };
            if predicted < SETTLED || damping > MOST_DAMPING {
                squares = model.residuals(task, &z)?;
                done = temperature == cold;
                damping = 0.0;
                break;
            }
        }
        if done {
            break;
        }
        lingered += 1;
        if temperature > cold {
            if squares / temperature < COOLS * readings {
                temperature = (squares / (STIFF * readings)).min(temperature / COOLING).max(cold);
                lingered = 0;
            } else if lingered >= LINGERS {
                break;
            }
        }
    }
    let cost = squares + norm(&z);
    let misread = task.misread.map_or(0.0, |k| math::ln(model.observations.list[k].sigma) + HALF_LN_2_PI - math::ln(2.0 * MISREAD));
    let (either, turned) = if temperature > 1.0 { (0.0, None) } else { scratch.either_sign(model, &z) };
    let evidence = -0.5 * (cost + determinant) - own + misread + either;
    Some((Fit { z, cost, evidence, temperature }, turned))
}

fn norm(z: &[f64]) -> f64 {
    z.iter().map(|z| z * z).sum()
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

/// Tests resistance added in each conductor about a fit at a temperature. Span by span, slot by slot.
pub(super) fn scores(model: &mut Model, task: &Task, fit: &Fit, temperature: f64) -> Option<Vec<[Score; SLOTS]>> {
    model.residuals(task, &fit.z)?;
    model.derivatives(task, &fit.z)?;
    let by_ohms = model.by_ohms()?;
    let (m, n) = (model.residuals.len(), model.width);
    let mut scratch = Scratch::default();
    scratch.prepare(model, &fit.z, temperature);
    scratch.normal.factor(&scratch.products, temperature)?;
    let mut e: Vec<f64> = (0..m).map(|k| model.residuals[k] - dot(&model.jacobian[k * n..][..n], &fit.z)).collect();
    scratch.normal.solve(&mut e);
    let spans = by_ohms.first().map_or(0, Vec::len);
    let mut all = vec![[Score::default(); SLOTS]; spans];
    let mut d = vec![0.0; m];
    for (span, scores) in all.iter_mut().enumerate() {
        for (slot, score) in scores.iter_mut().enumerate() {
            (0..m).for_each(|k| d[k] = by_ohms[k][span][slot]);
            let slope = -dot(&d, &e);
            if slope != 0.0 {
                scratch.normal.solve_lower(&mut d);
                *score = Score { slope, bend: dot(&d, &d) };
            }
        }
    }
    Some(all)
}

/// Gain of ln evidence by taking each reading in turn for misread, to first order about a fit at a temperature: with S = T + J·Jᵀ
/// and e the residuals at the prior, reading k given the others is normal with precision S⁻¹ₖₖ and off by (S⁻¹e)ₖ/S⁻¹ₖₖ.
pub(super) fn without(model: &mut Model, task: &Task, fit: &Fit, temperature: f64) -> Option<Vec<f64>> {
    model.residuals(task, &fit.z)?;
    model.derivatives(task, &fit.z)?;
    let (m, n) = (model.residuals.len(), model.width);
    let mut scratch = Scratch::default();
    scratch.prepare(model, &fit.z, temperature);
    scratch.normal.factor(&scratch.products, temperature)?;
    let mut weights: Vec<f64> =
        (0..m).map(|k| model.residuals[k] - dot(&model.jacobian[k * n..][..n], &fit.z)).collect();
    scratch.normal.solve(&mut weights);
    let mut all = Vec::with_capacity(m);
    for k in 0..m {
        let mut unit = vec![0.0; m];
        unit[k] = 1.0;
        scratch.normal.solve(&mut unit);
        let (precision, sigma) = (unit[k], model.observations.list[k].sigma);
        let given_others = -0.5 * weights[k] * weights[k] / precision + 0.5 * math::ln(precision) - HALF_LN_2_PI - math::ln(sigma);
        all.push(-given_others - math::ln(2.0 * MISREAD));
    }
    Some(all)
}

const HALF_LN_2_PI: f64 = 0.918_938_533_204_672_7;

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

#[derive(Default)]
struct Scratch {
    products: Vec<f64>,
    normal: Cholesky,
    gradient: Vec<f64>,
    along: Vec<f64>,
    step: Vec<f64>,
}

impl Scratch {
    /// J·Jᵀ at the present derivatives, and what [`Self::aim`] does.
    fn prepare(&mut self, model: &Model, z: &[f64], temperature: f64) {
        let (m, n) = (model.residuals.len(), model.width);
        let row = |k: usize| &model.jacobian[k * n..][..n];
        self.products.clear();
        self.products.resize(m * m, 0.0);
        for a in 0..m {
            for b in 0..=a {
                self.products[a * m + b] = dot(row(a), row(b));
            }
        }
        self.aim(model, z, temperature);
    }

    /// g = Jᵀr/T + z and J·g at the present residuals and the last derivatives.
    fn aim(&mut self, model: &Model, z: &[f64], temperature: f64) {
        let (m, n) = (model.residuals.len(), model.width);
        let row = |k: usize| &model.jacobian[k * n..][..n];
        self.gradient.clear();
        self.gradient.extend_from_slice(z);
        for (k, r) in model.residuals.iter().enumerate() {
            add(&mut self.gradient, row(k), *r / temperature);
        }
        self.along.clear();
        self.along.extend((0..m).map(|k| dot(row(k), &self.gradient)));
    }

    /// What readings without a sign gain by having been either: ln(1 + p₋/p₊) each, with the probabilities of the reading with its
    /// present and the other sign given all others, to first order. And the one whose other sign is the most probable.
    fn either_sign(&mut self, model: &Model, z: &[f64]) -> (f64, Option<usize>) {
        let unsigned: Vec<usize> = model.unsigned().collect();
        if unsigned.is_empty() || self.normal.factor(&self.products, 1.0).is_none() {
            return (0.0, None);
        }
        let (m, n) = (model.residuals.len(), model.width);
        let mut weights: Vec<f64> = (0..m).map(|k| model.residuals[k] - dot(&model.jacobian[k * n..][..n], z)).collect();
        self.normal.solve(&mut weights);
        let (mut gain, mut turned) = (0.0, (0.0, None));
        let mut unit = vec![0.0; m];
        for k in unsigned {
            unit.fill(0.0);
            unit[k] = 1.0;
            self.normal.solve_lower(&mut unit);
            let precision = dot(&unit, &unit);
            let read = model.observations.list[k].value / model.observations.list[k].sigma;
            let expected = read + weights[k] / precision;
            let odds = -2.0 * read * expected * precision;
            gain += if odds < 30.0 { math::ln_1p(math::exp(odds)) } else { odds };
            if odds > turned.0 + SETTLED {
                turned = (odds, Some(k));
            }
        }
        // Until it has been turned, the sign that is the more probable is not credited: the fit is not at it.
        (if turned.1.is_some() { 0.0 } else { gain }, turned.1)
    }

    /// The step for a normal matrix J·Jᵀ + aT·1 already factored, and the decrease of the cost it predicts.
    fn step(&mut self, model: &Model, a: f64) -> f64 {
        let n = model.width;
        let mut weights = self.along.clone();
        self.normal.solve(&mut weights);
        self.step.clear();
        self.step.extend(self.gradient.iter().map(|g| -g / a));
        for (k, w) in weights.iter().enumerate() {
            add(&mut self.step, &model.jacobian[k * n..][..n], w / a);
        }
        // At a = 1: −g·d, since the quadratic's decrease is gᵀ·A⁻¹·g.
        -dot(&self.gradient, &self.step)
    }
}

/// Inner product in four running sums: the order of the additions is fixed, whatever the machine.
fn dot(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; 4];
    let (a4, b4) = (a.chunks_exact(4), b.chunks_exact(4));
    let rest: f64 = a4.remainder().iter().zip(b4.remainder()).map(|(x, y)| x * y).sum();
    for (x, y) in a4.zip(b4) {
        for k in 0..4 {
            sums[k] += x[k] * y[k];
        }
    }
    (sums[0] + sums[1]) + (sums[2] + sums[3]) + rest
}

fn add(to: &mut [f64], row: &[f64], factor: f64) {
    for (t, x) in to.iter_mut().zip(row) {
        *t += factor * x;
    }
}
