//! Storage for solving one shape of network again and again.

use super::engine::Engine;
use super::model::{Fault, Network, Observed};
use super::sensitivity::Gradient;
use super::solution::Solution;
use super::solve::{SolveOutcome, SolveSettings};
use super::sweep::Slope;
use crate::quantity::math;

/// Storage to solve a network of one shape many times, each time from the last solution, without allocating.
#[derive(Clone, Debug)]
pub struct Workspace {
    form: Form,
    iterations: usize,
}

/// Real arithmetic where everything is in phase, else real and imaginary parts; with or without a third leg.
#[derive(Clone, Debug)]
enum Form {
    InPhase(Engine<3, 1>),
    TwoLegs(Engine<6, 2>),
    ThreeLegs(Engine<8, 2>),
}

impl Form {
    fn of(network: &Network) -> Result<Self, Fault> {
        let third = network.source.volts[2] != 0.0 || network.spans.iter().any(|s| s.ohms[2].is_some());
        Ok(match (network.is_in_phase(), third) {
            (true, _) => Self::InPhase(Engine::new(network)?),
            (_, false) => Self::TwoLegs(Engine::new(network)?),
            (_, true) => Self::ThreeLegs(Engine::new(network)?),
        })
    }
}

/// The same expression for either form.
macro_rules! either {
    ($form:expr, $engine:ident => $do:expr) => {
        match $form {
            Form::InPhase($engine) => $do,
            Form::TwoLegs($engine) => $do,
            Form::ThreeLegs($engine) => $do,
        }
    };
}

impl Workspace {
    /// Storage for networks of this shape.
    ///
    /// # Errors
    /// The shape is none.
    pub fn new(network: &Network) -> Result<Self, Fault> {
        Ok(Self { form: Form::of(network)?, iterations: 0 })
    }

    /// Forgets the last solution: the next starts from the open-circuit voltages.
    pub fn restart(&mut self) {
        either!(&mut self.form, e => e.restart());
    }

    /// Starts the next solution with every load's open-circuit volts times the factor of its leg (of its first line).
    pub(super) fn start_from(&mut self, network: &Network, factors: [f64; 3]) {
        either!(&mut self.form, e => {
            e.restart();
            for (attached, load) in e.loads.iter_mut().zip(&network.loads) {
                let leg = load.between.0.min(load.between.1).min(2);
                attached.v = attached.v.map(|v| v * factors[leg]);
            }
        });
    }

    /// Drives so many volts into a conductor of a run, away from the source. In phase only.
    pub(super) fn insert(&mut self, run: usize, slot: usize, volts: f64) {
        either!(&mut self.form, e => e.insert(run, slot, volts));
    }

    /// Solves, starting from the last solution. Follows one solution and does not look for others.
    ///
    /// # Errors
    /// [`SolveOutcome::Malformed`] for numbers that are none, [`SolveOutcome::NotConverged`]; the next solution then starts
    /// afresh.
    pub fn follow(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        self.iterations = 0;
        if matches!(self.form, Form::InPhase(_)) && !network.is_in_phase() {
            *self = Self::new(network).map_err(SolveOutcome::Malformed)?;
        }
        either!(&mut self.form, e => e.take_numbers(network)).map_err(SolveOutcome::Malformed)?;
        let mut outcome = self.iterate(network, settings);
        if outcome.is_err() {
            self.restart();
            outcome = self.iterate(network, settings).or_else(|_| self.descend(network, settings));
        }
        if outcome.is_err() {
            self.restart();
            return outcome;
        }
        either!(&mut self.form, e => e.settle(network));
        Ok(())
    }

    fn iterate(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        let mut step = f64::NAN;
        for _ in 0..settings.iterations {
            self.iterations += 1;
            step = either!(&mut self.form, e => e.step(network, Slope::Tangent));
            if step <= settings.tolerance {
                return Ok(());
            }
            if !step.is_finite() {
                break;
            }
        }
        Err(SolveOutcome::NotConverged { step })
    }

    /// Chord steps from the open-circuit volts until they are small, then Newton's. Where every current rises more slowly than
    /// its voltage, a chord lies above the load's content ∫I·dV, so that each step lowers the content of the whole network
    /// (Millar, *Philosophical Magazine* 42, 1951, 1150; from memory): it can't cycle as the tangents may.
    fn descend(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        const STEPS: usize = 400;
        const NEAR: f64 = 1e-3;
        self.restart();
        let mut step = f64::INFINITY;
        for _ in 0..STEPS {
            self.iterations += 1;
            step = either!(&mut self.form, e => e.step(network, Slope::Chord));
            if step <= NEAR {
                break;
            }
        }
        if step <= NEAR { self.iterate(network, settings) } else { Err(SolveOutcome::NotConverged { step }) }
    }

    /// Value of a quantity in the last solution (see [`Observed`] for its sign); `None` for a conductor that is not there.
    #[must_use]
    pub fn value(&self, observed: Observed) -> Option<f64> {
        let length = |[re, im]: [f64; 2]| math::hypot(re, im);
        match &self.form {
            Form::InPhase(e) => e.observe(observed).map(|[x]| x),
            Form::TwoLegs(e) => e.observe(observed).map(length),
            Form::ThreeLegs(e) => e.observe(observed).map(length),
        }
    }

    /// Gradient of a quantity at the last solution. `None` for a conductor that is not there.
    pub fn gradient(&mut self, network: &Network, observed: Observed, into: &mut Gradient) -> Option<()> {
        either!(&mut self.form, e => {
            let excitation = e.excitation(observed)?;
            e.adjoint(excitation);
            e.gradient(network, into);
        });
        Some(())
    }

    /// The last solution in full.
    #[must_use]
    pub fn solution(&self, network: &Network) -> Solution {
        either!(&self.form, e => e.solution(network, self.iterations))
    }
}
