//! The electrical network of a service: every conductor, the neutral included, and every load by the law it follows.
//!
//! Nothing is reduced away: a neutral reduced into the legs (Kron) could not show a shifted neutral. A [`Network`] is plain
//! numbers; [`build()`] makes one from a visit's circuit list. [`solve()`] finds its voltages and currents, a [`Workspace`] solves
//! a network again and again while its numbers change and gives gradients, [`exposure()`] opens the shared neutrals one after the
//! other, and [`load_steps()`] reads impedances from two load states.
//!
//! Reference of all voltages is the transformer's centre tap (the star point on a wye). Quantities inside are bare numbers in V,
//! A, Ω, W.
//!
//! A service with 0.05 Ω legs whose neutral has come off, so that 25 Ω of earth are left, with 12 Ω on leg 1, 24 Ω on leg 2 and
//! 30 Ω between them (numpy and ngspice: 89.1374 V and 149.3849 V):
//!
//! ```
//! use midwire::network::{Law, Load, Network, Phasor, SolveSettings, Source, Span, solve};
//! use midwire::visit::{Leg, Quantity};
//!
//! let load = |between, ohms: f64| Load {
//!     at: 0,
//!     between,
//!     rated_volts: 120.0,
//!     watts: 120.0 * 120.0 / ohms,
//!     law: Law::Power { exponent: 1.0 },
//!     power_factor: 1.0,
//! };
//! let along = |re| Phasor { re, im: 0.0 };
//! let network = Network {
//!     source: Source {
//!         volts: [120.0, 120.0, 0.0],
//!         direction: [along(1.0), along(-1.0), along(0.0)],
//!         own: along(0.0),
//!         shared: along(0.0),
//!     },
//!     spans: vec![Span {
//!         fed_from: None,
//!         ohms: [Some(0.05), Some(0.05), None, Some(f64::INFINITY)],
//!         reactance: [0.0; 4],
//!         electrode: Some(25.0),
//!     }],
//!     loads: vec![load((0, 3), 12.0), load((1, 3), 24.0), load((0, 1), 30.0)],
//! };
//! let solution = solve(&network, &SolveSettings::default()).expect("one solution");
//! for (leg, expected) in [(Leg::L1, 89.1374), (Leg::L2, 149.3849)] {
//!     let observed = network.observed(0, Quantity::line_neutral(leg)).expect("both are there");
//!     assert!((solution.value(observed).expect("both are there") - expected).abs() < 1e-4);
//! }
//! ```

mod adjoint;
mod block;
mod build;
mod engine;
mod exposure;
mod law;
mod load_steps;
mod model;
mod reading;
mod sensitivity;
mod several;
mod solution;
mod solve;
mod sweep;
mod workspace;

pub use build::{Assumption, Built, NetworkSettings, build};
pub use exposure::exposure;
pub use load_steps::load_steps;
pub use model::{Fault, Law, Load, Network, Observed, Phasor, SLOTS, Source, Span, Terminal, slot};
pub use sensitivity::Gradient;
pub use solution::Solution;
pub use solve::{SolveOutcome, SolveSettings, solve};
pub use workspace::Workspace;
