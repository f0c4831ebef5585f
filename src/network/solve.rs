//! Solving: Newton from the last or the open-circuit volts, by descent along chords where that fails.
//!
//! Equation: Kirchhoff's laws with the loads' laws, see the sweeps. Preconditions: [`Fault`]. A solution always exists, since
//! no law's current rises more steeply than a straight line (exponents up to 1); it need not be the only one. Tolerance and cap: [`SolveSettings`]. Numbers
//! that are none are refused before solving. Reference: Kersting, *Distribution System Modeling and Analysis*, chapter 11, for
//! the split-phase service; tests hold it against ngspice.

use super::model::{Fault, Network};
use super::several;
use super::solution::Solution;
use super::workspace::Workspace;

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
