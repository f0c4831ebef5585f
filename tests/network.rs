//! The network against outside solvers, published examples and the laws of circuits.

#[path = "network/support.rs"]
mod support;

#[path = "network/exposure.rs"]
mod exposure;
#[path = "network/gradients.rs"]
mod gradients;
#[path = "network/laws.rs"]
mod laws;
#[path = "network/published.rs"]
mod published;
#[path = "network/several.rs"]
mod several;
#[path = "network/spice.rs"]
mod spice;
#[path = "network/steps.rs"]
mod steps;
#[path = "network/three_phase.rs"]
mod three_phase;
