//! Load on the legs, and what would even it.

use crate::quantity::{Amperes, VoltAmperes};
use crate::visit::Leg;

/// Load of the legs at the service.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    /// Each leg's load, from the circuit list.
    pub legs: Vec<LegLoad>,
    /// Calculated neutral current.
    pub neutral: Amperes,
    /// Largest deviation of a leg from the mean, in per cent of the mean.
    pub imbalance_percent: f64,
    /// The fewest breaker moves that bring the imbalance down; empty where none helps enough.
    pub moves: Vec<Move>,
    /// The legs after the moves.
    pub after: Vec<LegLoad>,
    /// Neutral current after the moves.
    pub neutral_after: Amperes,
    /// Imbalance after the moves, in per cent.
    pub imbalance_after_percent: f64,
}

/// Load of one leg.
#[derive(Clone, Debug, PartialEq)]
pub struct LegLoad {
    /// The leg.
    pub leg: Leg,
    /// Its apparent power, line-to-line loads shared out between their two legs.
    pub va: VoltAmperes,
    /// The share of each circuit fed from the service, by position in the circuit list.
    pub circuits: Vec<(usize, VoltAmperes)>,
}

/// Moving one circuit to another leg, or the two legs of a multiwire circuit against each other.
#[derive(Clone, Debug, PartialEq)]
pub struct Move {
    /// Position of the circuit in the circuit list.
    pub run: usize,
    /// The legs it is on now.
    pub from: String,
    /// The legs it would be on.
    pub to: String,
}
