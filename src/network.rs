//! The electrical network of a service: every conductor, the neutral included, and every load by the law it follows.
//!
//! Nothing is reduced away: a neutral reduced into the legs (Kron) could not show a shifted neutral. A [`Network`] is plain
//! numbers; [`build`] makes one from a visit's circuit list. [`solve`] finds its voltages and currents, a [`Workspace`] solves
//! a network again and again while its numbers change and gives gradients, [`exposure`] opens the shared neutrals one after the
//! other, and [`load_steps`] reads impedances from two load states.
//!
//! Reference of all voltages is the transformer's centre tap (the star point on a wye). Quantities inside are bare numbers in V,
//! A, Ω, W.

mod adjoint;
mod block;
mod build;
mod engine;
mod exposure;
mod law;
mod load_steps;
mod model;
mod sensitivity;
mod several;
mod solution;
mod solve;
mod sweep;

pub use build::{Assumption, Built, NetworkSettings, build};
pub use exposure::exposure;
pub use load_steps::load_steps;
pub use model::{Fault, Law, Load, Network, Observed, Phasor, SLOTS, Source, Span, Terminal, slot};
pub use sensitivity::Gradient;
pub use solution::Solution;
pub use solve::{SolveOutcome, SolveSettings, Workspace, solve};
