//! Solving.

use super::model::{Fault, Network, Observed};
use super::sensitivity::Gradient;
use super::solution::Solution;

/// When to stop.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SolveSettings {
    /// Largest change of any load's voltage in the last Newton step, in volts.
    pub tolerance: f64,
    /// Newton steps at most.
    pub iterations: usize,
}

impl Default for SolveSettings {
    fn default() -> Self {
        Self { tolerance: 1e-7, iterations: 60 }
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
    /// Several solutions: electronic loads in series have no stable divider. Those found, in order of leg 1's voltage.
    Several(Vec<Solution>),
}

/// Solves a network from its open-circuit voltages and makes sure that the solution is the only one.
///
/// # Errors
/// See [`SolveOutcome`].
pub fn solve(network: &Network, settings: &SolveSettings) -> Result<Solution, SolveOutcome> {
    let _ = (network, settings);
    todo!()
}

/// Storage to solve a network of one shape many times, each time from the last solution, without allocating.
#[derive(Clone, Debug)]
pub struct Workspace {}

impl Workspace {
    /// Storage for networks of this shape.
    ///
    /// # Errors
    /// The shape is none.
    pub fn new(network: &Network) -> Result<Self, Fault> {
        let _ = network;
        todo!()
    }

    /// Forgets the last solution: the next starts from the open-circuit voltages.
    pub fn restart(&mut self) {
        todo!()
    }

    /// Solves, starting from the last solution. Follows one solution and does not look for others.
    ///
    /// # Errors
    /// [`SolveOutcome::Malformed`] for numbers that are none, [`SolveOutcome::NotConverged`]; the next solution then starts
    /// afresh.
    pub fn follow(&mut self, network: &Network, settings: &SolveSettings) -> Result<(), SolveOutcome> {
        let _ = (network, settings);
        todo!()
    }

    /// Value of a quantity in the last solution (see [`Observed`] for its sign); `None` for a conductor that is not there.
    #[must_use]
    pub fn value(&self, observed: Observed) -> Option<f64> {
        let _ = observed;
        todo!()
    }

    /// Gradient of a quantity at the last solution. `None` for a conductor that is not there.
    pub fn gradient(&mut self, network: &Network, observed: Observed, into: &mut Gradient) -> Option<()> {
        let _ = (network, observed, into);
        todo!()
    }

    /// The last solution in full.
    #[must_use]
    pub fn solution(&self, network: &Network) -> Solution {
        let _ = network;
        todo!()
    }
}
