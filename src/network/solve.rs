//! Solving: Newton from the last or the open-circuit volts, by continuation where that fails.
//!
//! Equation: Kirchhoff's laws with the loads' laws, see the sweeps. Preconditions: [`Fault`]. A solution always exists, since
//! every law's current is bounded by a straight line; it need not be the only one. Tolerance and cap: [`SolveSettings`]. Numbers
//! that are none are refused before solving. Reference: Kersting, *Distribution System Modeling and Analysis*, chapter 11, for
//! the split-phase service; tests hold it against ngspice.

use super::adjoint::Excitation;
use super::engine::{Engine, NONE, row};
use super::model::{Fault, Law, Network, Observed, Phasor, SLOTS, Terminal, slot};
use super::sensitivity::Gradient;
use super::several;
use super::solution::Solution;
use crate::quantity::math;
use crate::visit::Conductor;

/// When to stop.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SolveSettings {
    /// Largest change of any load's voltage in the last Newton step, in volts. What is left after it is of the order of its
    /// square.
    pub tolerance: f64,
    /// Newton steps at most.
    pub iterations: usize,
}

impl Default for SolveSettings {
    fn default() -> Self {
        Self { tolerance: 1e-6, iterations: 40 }
    }
}

/// Why there is not one solution.
#[derive(Clone, Debug, PartialEq)]
pub enum SolveOutcome {
    /// The numbers make no network.
    Malformed(Fault),
    /// No solution was found; the last step still moved a load by so many volts.
    NotConverged {
        /// Volts.
        step: f64,
    },
    /// Several solutions: electronic loads in series have no stable divider. Those found, by rising volts of the first load.
    Several(Vec<Solution>),
}

/// Solves a network from its open-circuit voltages and makes sure that the solution is the only one.
///
/// # Errors
/// See [`SolveOutcome`].
pub fn solve(network: &Network, settings: &SolveSettings) -> Result<Solution, SolveOutcome> {
    let mut workspace = Workspace::new(network).map_err(SolveOutcome::Malformed)?;
    workspace.follow(network, settings)?;
    let first = workspace.solution(network);
    if several::is_stiff(network) {
        return Ok(first);
    }
    let mut all = several::others(&mut workspace, network, settings, first, |_| ());
    match all.len() {
        1 => Ok(all.remove(0)),
        _ => Err(SolveOutcome::Several(all)),
    }
}

/// Storage to solve a network of one shape many times, each time from the last solution, without allocating.
#[derive(Clone, Debug)]
pub struct Workspace {
    form: Form,
    iterations: usize,
}

/// Real arithmetic where everything is in phase: L1, L2, N. Else real and imaginary parts of L1, L2, L3, N.
#[derive(Clone, Debug)]
enum Form {
    InPhase(Engine<3, 1>),
    Turned(Engine<8, 2>),
}

/// The same expression for either form.
macro_rules! either {
    ($form:expr, $engine:ident => $do:expr) => {
        match $form {
            Form::InPhase($engine) => $do,
            Form::Turned($engine) => $do,
        }
    };
}

impl Workspace {
    /// Storage for networks of this shape.
    ///
    /// # Errors
    /// The shape is none.
    pub fn new(network: &Network) -> Result<Self, Fault> {
        let form = if network.is_in_phase() { Form::InPhase(Engine::new(network)?) } else { Form::Turned(Engine::new(network)?) };
        Ok(Self { form, iterations: 0 })
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

    /// Takes the inserted volts out.
    pub(super) fn remove(&mut self) {
        either!(&mut self.form, e => e.inserted = None);
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
        if self.iterate(network, settings).is_err() {
            self.restart();
            if self.iterate(network, settings).is_err() {
                self.continue_from_passive(network, settings)?;
            }
        }
        either!(&mut self.form, e => e.settle(network));
        Ok(())
    }

    fn iterate(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        let mut step = f64::NAN;
        for _ in 0..settings.iterations {
            self.iterations += 1;
            step = either!(&mut self.form, e => e.step(network));
            if step <= settings.tolerance {
                return Ok(());
            }
            if !step.is_finite() {
                break;
            }
        }
        Err(SolveOutcome::NotConverged { step })
    }

    /// Continuation: from the network without its electronic loads, which has one solution, to the whole.
    fn continue_from_passive(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        const STEPS: u32 = 16;
        let mut eased = network.clone();
        self.restart();
        for step in 0..=STEPS {
            let share = f64::from(step) / f64::from(STEPS);
            for (e, load) in eased.loads.iter_mut().zip(&network.loads) {
                if matches!(load.law, Law::Electronic { .. }) {
                    e.watts = load.watts * share;
                }
            }
            let outcome = self.iterate(&eased, settings);
            if outcome.is_err() {
                self.restart();
                return outcome;
            }
        }
        Ok(())
    }

    /// Value of a quantity in the last solution (see [`Observed`] for its sign); `None` for a conductor that is not there.
    #[must_use]
    pub fn value(&self, observed: Observed) -> Option<f64> {
        match &self.form {
            Form::InPhase(e) => e.observe(observed).map(|[x]| x),
            Form::Turned(e) => e.observe(observed).map(|[re, im]| math::hypot(re, im)),
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

fn phasor<const PARTS: usize>(v: &[f64]) -> Phasor {
    Phasor { re: v[0], im: if PARTS == 2 { v[1] } else { 0.0 } }
}

impl<const N: usize, const PARTS: usize> Engine<N, PARTS> {
    fn insert(&mut self, run: usize, slot: usize, volts: f64) {
        let mut inserted = [0.0; N];
        inserted[row::<PARTS>(slot)] = volts;
        self.inserted = self.place.get(run).map(|node| (*node, inserted));
    }

    /// Node and first row of a terminal; the centre tap has none.
    fn find(&self, terminal: Terminal) -> Option<Option<(usize, usize)>> {
        let Terminal::At(run, conductor) = terminal else { return Some(None) };
        let place = *self.place.get(run)?;
        let (node, slot) = match slot(conductor) {
            Some(slot) => (place, slot),
            None => (self.nodes[place].root, 3),
        };
        self.has[self.nodes[node].run][slot].then(|| Some((node, row::<PARTS>(slot))))
    }

    /// The parts of a quantity in the last solution.
    fn observe(&self, observed: Observed) -> Option<[f64; PARTS]> {
        match observed {
            Observed::Voltage { plus, minus } => {
                let (plus, minus) = (self.find(plus)?, self.find(minus)?);
                let volts = |at: Option<(usize, usize)>, p: usize| at.map_or(0.0, |(node, row)| self.nodes[node].v[row + p]);
                Some(std::array::from_fn(|p| volts(plus, p) - volts(minus, p)))
            }
            Observed::Current { run, conductor, towards_source } => {
                let (node, row) = self.find(Terminal::At(run, conductor)).filter(|_| conductor != Conductor::Ground)??;
                let sign = if towards_source { -1.0 } else { 1.0 };
                Some(std::array::from_fn(|p| sign * self.nodes[node].i[row + p]))
            }
        }
    }

    /// Excitation of the adjoint network for a quantity: along its own direction, so that the gradient is that of its magnitude;
    /// in phase, of its signed value.
    fn excitation(&self, observed: Observed) -> Option<Excitation<PARTS>> {
        let value = self.observe(observed)?;
        let length = value.iter().map(|x| x * x).sum::<f64>().sqrt();
        let direction = value.map(|x| match (PARTS, length > 0.0) {
            (1, _) => 1.0,
            (_, true) => x / length,
            (_, false) => 0.0,
        });
        Some(match observed {
            Observed::Voltage { plus, minus } => Excitation::Between(self.find(plus)?, self.find(minus)?, direction),
            Observed::Current { run, conductor, towards_source } => {
                let sign = if towards_source { -1.0 } else { 1.0 };
                Excitation::Along(self.find(Terminal::At(run, conductor))??, direction.map(|d| sign * d))
            }
        })
    }

    fn solution(&self, network: &Network, iterations: usize) -> Solution {
        let by_slot = |run: usize, of: fn(&super::engine::Node<N>) -> &[f64; N]| {
            let node = &self.nodes[self.place[run]];
            std::array::from_fn(|slot| self.has[run][slot].then(|| phasor::<PARTS>(&of(node)[row::<PARTS>(slot)..])))
        };
        let runs = 0..network.spans.len().min(self.place.len());
        let neutral = row::<PARTS>(3);
        Solution {
            volts: runs.clone().map(|run| by_slot(run, |n| &n.v)).collect::<Vec<[Option<Phasor>; SLOTS]>>(),
            amperes: runs.clone().map(|run| by_slot(run, |n| &n.i)).collect(),
            loads: self.loads.iter().map(|l| phasor::<PARTS>(&l.i)).collect(),
            load_volts: self.loads.iter().map(|l| phasor::<PARTS>(&l.v)).collect(),
            earth: runs
                .clone()
                .map(|run| {
                    let node = &self.nodes[self.place[run]];
                    phasor::<PARTS>(&node.v.map(|v| v * node.electrode)[neutral..])
                })
                .collect(),
            service: runs.map(|run| self.nodes[self.nodes[self.place[run]].root].run).map(|r| if r == NONE { 0 } else { r }).collect(),
            is_in_phase: PARTS == 1,
            iterations,
        }
    }
}
