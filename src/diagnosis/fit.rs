//! The most probable unknowns of a hypothesis, and its evidence.
//!
//! With r the residuals, J their derivatives and z the whitened unknowns, minimise |r|² + |z|² (twice the negative logarithm of
//! likelihood times prior). Damped Gauss–Newton: the step d solves (JᵀJ + a·1)·d = −(Jᵀr + z) with a = 1 plus the damping. There
//! are more unknowns than readings, so it is solved in the space of the readings,
//! d = −(g − Jᵀ·(J·Jᵀ + a·1)⁻¹·J·g)/a. The evidence is Laplace's: ln E = −½·(|r|² + |z|²) − ½·ln det(1 + J·Jᵀ) − Σ ln σ.
//!
//! Preconditions: none; a network that can't be solved at a trial step counts as a bad step. Iterations are capped; the fit that
//! stands then is returned, for the continuation along added ohms mends it. Reference: MacKay, *Information Theory, Inference,
//! and Learning Algorithms* (2003), ch. 27 and 28.

use super::cholesky::Cholesky;
use super::model::{Model, Task};
use super::settings::MISREAD;
use crate::quantity::math;

/// Largest change of an unknown in one step, in its own unit (logarithms, exponents).
const LONGEST_STEP: f64 = 1.5;
/// Agreement between predicted and actual decrease of the cost at which the fit is done: a twentieth of an e-fold of evidence.
const SETTLED: f64 = 0.1;
const MOST_DAMPING: f64 = 1e6;
/// Mean square residual above which the descent begins damped.
const STIFF: f64 = 100.0;
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
}

/// Fits a task from a start, in so many iterations at most. `None` where the network is not solved at the start.
///
/// A neutral's current and its volts to ground are read without a sign. Each is taken with the sign it has at the start; where
/// the fit ends far from one, the other sign is tried and kept if it fits better.
pub(super) fn fit(model: &mut Model, task: &Task, start: &[f64], iterations: usize) -> Option<Fit> {
    model.residuals(task, start)?;
    model.take_signs();
    let mut best = descend(model, task, start, iterations)?;
    for _ in 0..MOST_FLIPS {
        model.residuals(task, &best.z)?;
        let Some(doubtful) = model.doubtful() else { break };
        model.flip(doubtful);
        match descend(model, task, &best.z, iterations) {
            Some(other) if other.cost < best.cost - SETTLED => best = other,
            _ => {
                model.flip(doubtful);
                break;
            }
        }
    }
    Some(best)
}

fn descend(model: &mut Model, task: &Task, start: &[f64], iterations: usize) -> Option<Fit> {
    let mut z = start.to_vec();
    let mut cost = cost(model, task, &z)?;
    let stiff = cost / (STIFF * model.residuals.len() as f64);
    let mut damping = if stiff > 1.0 { stiff.sqrt() } else { 0.0 };
    let mut determinant = f64::NAN;
    let mut scratch = Scratch::default();
    for _ in 0..iterations {
        model.derivatives(task, &z)?;
        scratch.prepare(model, &z);
        determinant = scratch.normal.factor(&scratch.products, 1.0)?;
        let mut done = false;
        loop {
            let a = 1.0 + damping;
            if damping > 0.0 {
                scratch.normal.factor(&scratch.products, a)?;
            }
            let predicted = scratch.step(model, a);
            let is_whole = shorten(model, task, &mut scratch.step);
            let trial: Vec<f64> = z.iter().zip(&scratch.step).map(|(z, d)| z + d).collect();
            let new = self::cost(model, task, &trial).unwrap_or(f64::INFINITY);
            if std::env::var("TRACE").is_ok() { eprintln!("cost {cost:.2} pred {predicted:.2} whole {is_whole} damping {damping:.2e} new {new:.2}"); }
            if new < cost + 1e-9 {
                let is_full = damping == 0.0 && is_whole;
                done = is_full && (cost - new - predicted).abs() < SETTLED;
                (z, cost) = (trial, new);
                damping = if damping > 0.01 { damping / 8.0 } else { 0.0 };
                break;
            }
            if predicted < SETTLED && damping == 0.0 {
                done = true;
                cost_again(model, task, &z);
                break;
            }
            damping = if damping == 0.0 { 0.3 } else { damping * 8.0 };
            if damping > MOST_DAMPING {
                cost_again(model, task, &z);
                done = true;
                break;
            }
        }
        if done {
            break;
        }
    }
    let own: f64 = model.observations.list.iter().map(|o| math::ln(o.sigma) + HALF_LN_2_PI).sum();
    let misread = task.misread.map_or(0.0, |k| math::ln(model.observations.list[k].sigma) + HALF_LN_2_PI - math::ln(2.0 * MISREAD));
    Some(Fit { z, cost, evidence: -0.5 * (cost + determinant) - own + misread })
}

/// ln evidence of a fitted task without each reading in turn, to first order about the fit: with S = 1 + J·Jᵀ and e the residuals
/// at the prior, reading k given the others is normal with precision S⁻¹ₖₖ and off by (S⁻¹e)ₖ/S⁻¹ₖₖ.
pub(super) fn without(model: &mut Model, task: &Task, fit: &Fit) -> Option<Vec<f64>> {
    model.residuals(task, &fit.z)?;
    model.derivatives(task, &fit.z)?;
    let (m, n) = (model.residuals.len(), model.width);
    let mut scratch = Scratch::default();
    scratch.prepare(model, &fit.z);
    scratch.normal.factor(&scratch.products, 1.0)?;
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
        all.push(fit.evidence - given_others - math::ln(2.0 * MISREAD));
    }
    Some(all)
}

const HALF_LN_2_PI: f64 = 0.918_938_533_204_672_7;

fn cost(model: &mut Model, task: &Task, z: &[f64]) -> Option<f64> {
    let squares = model.residuals(task, z)?;
    Some(squares + z.iter().map(|z| z * z).sum::<f64>())
}

/// Brings the model back to an accepted point.
fn cost_again(model: &mut Model, task: &Task, z: &[f64]) {
    let _ = model.residuals(task, z);
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

#[derive(Default)]
struct Scratch {
    products: Vec<f64>,
    normal: Cholesky,
    gradient: Vec<f64>,
    along: Vec<f64>,
    step: Vec<f64>,
}

impl Scratch {
    /// J·Jᵀ, g = Jᵀr + z and J·g at the present derivatives.
    fn prepare(&mut self, model: &Model, z: &[f64]) {
        let (m, n) = (model.residuals.len(), model.width);
        let row = |k: usize| &model.jacobian[k * n..][..n];
        self.products.clear();
        self.products.resize(m * m, 0.0);
        for a in 0..m {
            for b in 0..=a {
                self.products[a * m + b] = dot(row(a), row(b));
            }
        }
        self.gradient.clear();
        self.gradient.extend_from_slice(z);
        for (k, r) in model.residuals.iter().enumerate() {
            add(&mut self.gradient, row(k), *r);
        }
        self.along.clear();
        self.along.extend((0..m).map(|k| dot(row(k), &self.gradient)));
    }

    /// The step for a normal matrix J·Jᵀ + a·1 already factored, and the decrease of the cost it predicts.
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
