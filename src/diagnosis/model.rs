//! From unknowns to readings: residuals and their derivatives.

use super::observation::Observations;
use super::parameter::{Parameter, Target};
use super::reduce::Reduced;
use super::settings::{ADDED, EXPONENT_RANGE, MOST_WORK};
use crate::network::{Gradient, Law, Network, Observed, SLOTS, SolveSettings, Span, Workspace};
use crate::quantity::math;
use crate::visit::{Conductor, Quantity};

/// Ohms of an open conductor.
pub(super) const OPEN: f64 = 1e6;

/// Resistance added in one conductor of a span.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Added {
    /// The span.
    pub span: usize,
    /// The conductor.
    pub slot: usize,
    /// How much; `None`: an unknown of the fit.
    pub ohms: Option<f64>,
}

/// What a hypothesis changes.
#[derive(Clone, Debug, PartialEq, Default)]
pub(super) struct Task {
    /// Added resistances, at most one of them an unknown.
    pub added: Vec<Added>,
    /// A reading that is left out as misread.
    pub misread: Option<usize>,
    /// Prior of the supply, where it is another one: mean and spread.
    pub supply: Option<(f64, f64)>,
}

impl Task {
    /// The same with one more added resistance.
    pub fn with(&self, added: Added) -> Self {
        let mut task = self.clone();
        task.added.push(added);
        task
    }

    fn has_unknown(&self) -> bool {
        self.added.iter().any(|a| a.ohms.is_none())
    }
}

/// Prior of the logarithm of added ohms where they are an unknown: over the range of [`ADDED`] nearly even.
pub(super) fn added_prior() -> (f64, f64) {
    let (low, high) = (math::ln(ADDED.0), math::ln(ADDED.1));
    ((low + high) / 2.0, (high - low) / 3.0)
}

/// A site ready to be fitted. Unknowns are whitened: z has a standard normal prior.
#[derive(Clone, Debug)]
pub(super) struct Model<'a> {
    reduced: &'a Reduced,
    /// The observations.
    pub observations: &'a Observations,
    parameters: &'a [Parameter],
    network: Network,
    spaces: Vec<Workspace>,
    gradient: Gradient,
    unknowns: Vec<f64>,
    /// e to the unknowns that are logarithms; the exponents themselves.
    factors: Vec<f64>,
    predicted: Vec<f64>,
    /// Sign each reading is taken with, where its own is not known.
    signs: Vec<f64>,
    /// (predicted − read)/σ, one a reading; 0 for one left out.
    pub residuals: Vec<f64>,
    /// Their derivatives by z, a row a reading.
    jacobian: Vec<f64>,
    /// Unknowns of the present task.
    width: usize,
    work: f64,
}

impl<'a> Model<'a> {
    /// Storage for a site; `None` where its network is none.
    pub fn new(reduced: &'a Reduced, observations: &'a Observations, parameters: &'a [Parameter]) -> Option<Self> {
        let space = Workspace::new(&reduced.network).ok()?;
        let m = observations.list.len();
        Some(Self {
            reduced,
            observations,
            parameters,
            network: reduced.network.clone(),
            spaces: vec![space; observations.states.len()],
            gradient: Gradient::of(&reduced.network),
            unknowns: Vec::new(),
            factors: Vec::new(),
            predicted: vec![0.0; m],
            signs: vec![1.0; m],
            residuals: vec![0.0; m],
            jacobian: Vec::new(),
            width: 0,
            work: 0.0,
        })
    }

    /// The unknowns before any reading.
    pub fn start(&self) -> Vec<f64> {
        vec![0.0; self.parameters.len()]
    }

    /// Unknowns that are watts of loads nobody wrote down, with the whitened value of so many watts.
    pub fn extras(&self, watts: f64) -> Vec<(usize, f64)> {
        let one = |(k, p): (usize, &Parameter)| match p.target {
            Target::Watts(l) if self.reduced.loads[l].is_extra => {
                Some((k, (math::ln(watts / self.reduced.network.loads[l].watts) - p.mean) / p.spread))
            }
            _ => None,
        };
        self.parameters.iter().enumerate().filter_map(one).collect()
    }

    /// Forgets the last solutions, as after a jump.
    pub fn restart(&mut self) {
        self.spaces.iter_mut().for_each(Workspace::restart);
    }

    /// Mean and spread of an unknown under a task.
    pub fn prior(&self, task: &Task, k: usize) -> (f64, f64) {
        match (self.parameters.get(k), task.supply) {
            (Some(p), Some(supply)) if p.target == Target::Supply => supply,
            (Some(p), _) => (p.mean, p.spread),
            (None, _) => added_prior(),
        }
    }

    /// Computes the residuals; returns their sum of squares, `None` where the network was not solved or the work is used up.
    pub fn residuals(&mut self, task: &Task, z: &[f64]) -> Option<f64> {
        let size = (self.network.spans.len() * SPAN_WORK + self.network.loads.len() * LOAD_WORK) as f64;
        self.work += size * self.spaces.len() as f64;
        if self.work > MOST_WORK {
            return None;
        }
        self.width = self.parameters.len() + usize::from(task.has_unknown());
        self.unknowns.clear();
        for (k, z) in z.iter().enumerate().take(self.width) {
            let (mean, spread) = self.prior(task, k);
            self.unknowns.push(mean + spread * z);
        }
        self.factors.clear();
        let factor = |(p, x): (&Parameter, &f64)| match p.target {
            Target::Exponent(_) => exponent(*x).0,
            Target::Gain(_) | Target::Drift(_) | Target::Supply => *x,
            _ => math::exp(*x),
        };
        self.factors.extend(self.parameters.iter().zip(&self.unknowns).map(factor));
        let mut squares = 0.0;
        for state in 0..self.spaces.len() {
            self.take(task, state);
            if self.spaces[state].follow(&self.network, &SOLVE).is_err() {
                // A solution followed too far; from the open circuit there is another way.
                self.spaces[state].restart();
                self.spaces[state].follow(&self.network, &SOLVE).ok()?;
            }
            for (k, o) in self.observations.list.iter().enumerate().filter(|(_, o)| o.state == state) {
                self.predicted[k] = self.spaces[state].value(o.observed)?;
                let scale = 1.0 + self.error_of(o.row, o.gain);
                let size = self.predicted[k] * self.signs[k];
                let r = if task.misread == Some(k) { 0.0 } else { (size * scale - o.value) / o.sigma };
                self.residuals[k] = r;
                squares += r * r;
            }
        }
        squares.is_finite().then_some(squares)
    }

    /// Drift and gain together.
    fn error_of(&self, row: usize, gain: usize) -> f64 {
        let n = self.parameters.len();
        let drifts = n - self.observations.rows;
        let gains = drifts - self.observations.gains.len();
        self.unknowns[drifts + row] + self.unknowns[gains + gain]
    }

    /// Amperes in the neutral of a span at the last residuals: the most in any state.
    pub fn neutral_amperes(&self, span: usize) -> Option<f64> {
        let observed = Observed::Current { run: span, conductor: Conductor::Neutral, towards_source: true };
        self.spaces.iter().filter_map(|s| s.value(observed)).map(f64::abs).reduce(f64::max)
    }

    /// Takes each reading with its own sign, where it is not known with that of the last prediction.
    pub fn take_signs(&mut self) {
        for (k, o) in self.observations.list.iter().enumerate() {
            self.signs[k] = o.sign.unwrap_or_else(|| self.predicted[k].signum());
        }
    }

    /// Readings without a sign of their own.
    pub fn unsigned(&self) -> impl Iterator<Item = usize> + '_ {
        let list = self.observations.list.iter().enumerate();
        list.filter(|(_, o)| o.sign.is_none() && matches!(o.quantity, Quantity::NeutralGround | Quantity::NeutralCurrent)).map(|(k, _)| k)
    }

    /// A reading without a sign of its own that the last prediction is far from, and might be nearer with the other one.
    pub fn doubtful(&self) -> Option<usize> {
        let far = |k: &usize| {
            let o = &self.observations.list[*k];
            o.sign.is_none() && self.residuals[*k] < -DOUBT
        };
        (0..self.residuals.len()).filter(far).min_by(|&a, &b| self.residuals[a].total_cmp(&self.residuals[b]))
    }

    /// Takes a reading with the other sign.
    pub fn flip(&mut self, k: usize) {
        self.signs[k] = -self.signs[k];
    }

    /// Puts the unknowns into the network.
    fn take(&mut self, task: &Task, state: usize) {
        let nominal = &self.reduced.network;
        self.network.source.volts = nominal.source.volts;
        let mut supply = 1.0;
        for (p, x) in self.parameters.iter().zip(&self.factors) {
            match p.target {
                Target::Supply => supply = math::exp(*x),
                Target::Leg(l) => self.network.source.volts[l] = nominal.source.volts[l] * supply * x,
                Target::Electrode => {
                    for (span, base) in self.network.spans.iter_mut().zip(&nominal.spans) {
                        span.electrode = base.electrode.map(|r| r * x);
                    }
                }
                Target::Span(s) => {
                    self.network.spans[s].ohms = nominal.spans[s].ohms.map(|o| o.map(|r| r * x));
                    self.network.spans[s].reactance = nominal.spans[s].reactance.map(|r| r * x);
                }
                Target::Watts(l) => {
                    let is_on = self.reduced.loads[l].state.is_none_or(|s| s == state);
                    self.network.loads[l].watts = if is_on { nominal.loads[l].watts * x } else { 0.0 };
                }
                Target::Exponent(l) => self.network.loads[l].law = Law::Power { exponent: *x },
                Target::Gain(_) | Target::Drift(_) => {}
            }
        }
        for a in &task.added {
            let ohms = a.ohms.unwrap_or_else(|| math::exp(self.unknowns.last().copied().unwrap_or_default()));
            if let Some(r) = self.network.spans[a.span].ohms[a.slot].as_mut() {
                *r += ohms;
            }
        }
    }

    /// Computes the derivatives at the last residuals.
    pub fn derivatives(&mut self, task: &Task, z: &[f64]) -> Option<()> {
        let (m, n) = (self.observations.list.len() as f64, self.width as f64);
        self.work += m * (n + (self.network.spans.len() * SPAN_WORK / 10) as f64) + m * m * (n + m / 3.0) / 2.0;
        self.jacobian.clear();
        self.jacobian.resize(self.observations.list.len() * self.width, 0.0);
        debug_assert_eq!(z.len(), self.width);
        for state in 0..self.spaces.len() {
            self.take(task, state);
            for k in 0..self.observations.list.len() {
                if self.observations.list[k].state == state && task.misread != Some(k) {
                    self.derive(task, state, k)?;
                }
            }
        }
        Some(())
    }

    /// Derivatives of a residual by the whitened unknowns.
    pub fn row(&self, k: usize) -> &[f64] {
        &self.jacobian[k * self.width..][..self.width]
    }

    /// Derivatives of the residuals by ohms added in each conductor, at the last derivatives' solution.
    pub fn by_ohms(&mut self) -> Option<Vec<Vec<[f64; SLOTS]>>> {
        let mut all = Vec::with_capacity(self.observations.list.len());
        for (k, o) in self.observations.list.iter().enumerate() {
            self.spaces[o.state].gradient(&self.network, o.observed, &mut self.gradient)?;
            let factor = self.signs[k] / o.sigma;
            let per_ohm = |(by_log, span): (&[f64; SLOTS], &Span)| {
                std::array::from_fn(|s| span.ohms[s].filter(|r| *r > 0.0).map_or(0.0, |r| factor * by_log[s] / r))
            };
            all.push(self.gradient.ohms.iter().zip(&self.network.spans).map(per_ohm).collect());
        }
        Some(all)
    }

    fn derive(&mut self, task: &Task, state: usize, k: usize) -> Option<()> {
        let o = &self.observations.list[k];
        self.spaces[state].gradient(&self.network, o.observed, &mut self.gradient)?;
        let scale = 1.0 + self.error_of(o.row, o.gain);
        let sign = self.signs[k];
        let by_prediction = sign * scale / o.sigma;
        let by_error = sign * self.predicted[k] / o.sigma;
        let row = &mut self.jacobian[k * self.width..][..self.width];
        let g = &self.gradient;
        let by_supply: f64 = (0..3).map(|l| g.source[l] * self.network.source.volts[l]).sum();
        for (j, p) in self.parameters.iter().enumerate() {
            let d = match p.target {
                Target::Supply => by_supply,
                Target::Leg(l) => g.source[l] * self.network.source.volts[l],
                Target::Electrode => g.electrode,
                Target::Span(s) if task.added.iter().all(|a| a.span != s) => g.ohms[s].iter().sum(),
                Target::Span(s) => {
                    let (nominal, present) = (&self.reduced.network.spans[s], &self.network.spans[s]);
                    (0..SLOTS).map(|slot| g.ohms[s][slot] * own_share(nominal, present, slot, self.factors[j])).sum()
                }
                Target::Watts(l) => g.watts[l],
                Target::Exponent(l) => g.exponent[l] * exponent(self.unknowns[j]).1,
                Target::Gain(gain) => {
                    if gain == o.gain {
                        row[j] = by_error * p.spread;
                    }
                    continue;
                }
                Target::Drift(r) => {
                    if r == o.row {
                        row[j] = by_error * p.spread;
                    }
                    continue;
                }
            };
            let spread = if p.target == Target::Supply { task.supply.map_or(p.spread, |s| s.1) } else { p.spread };
            row[j] = d * by_prediction * spread;
        }
        if let Some(a) = task.added.iter().find(|a| a.ohms.is_none()) {
            let ohms = math::exp(self.unknowns[self.width - 1]);
            let sum = self.network.spans[a.span].ohms[a.slot].unwrap_or(1.0);
            row[self.width - 1] = g.ohms[a.span][a.slot] * ohms / sum * by_prediction * added_prior().1;
        }
        Some(())
    }
}

/// Share of a span's calculated ohms, times a factor, in what its conductor has with the added ones.
fn own_share(nominal: &Span, present: &Span, slot: usize, factor: f64) -> f64 {
    match (nominal.ohms[slot], present.ohms[slot]) {
        (Some(own), Some(sum)) if sum > 0.0 => own * factor / sum,
        _ => 0.0,
    }
}

/// Exponent of a load of unknown kind and its derivative: an unknown without bounds, bent into the range of [`EXPONENT_RANGE`].
pub(super) fn exponent(x: f64) -> (f64, f64) {
    let share = 1.0 / (1.0 + math::exp(-x));
    let range = EXPONENT_RANGE.1 - EXPONENT_RANGE.0;
    (EXPONENT_RANGE.0 + range * share, range * share * (1.0 - share))
}

/// Operations to solve for a span and for a load, about.
const SPAN_WORK: usize = 1500;
const LOAD_WORK: usize = 900;

/// Standard deviations by which a reading falls short before its other sign is tried.
const DOUBT: f64 = 3.0;

/// Tolerances well below any meter's width.
const SOLVE: SolveSettings = SolveSettings { tolerance: 3e-3, iterations: 25 };
