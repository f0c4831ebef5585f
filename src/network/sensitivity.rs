//! Gradients of observed quantities, by the adjoint network.

use super::model::{Network, SLOTS};

/// Derivatives of one observed quantity. Made once, filled again and again.
#[derive(Clone, Debug, PartialEq)]
pub struct Gradient {
    /// By the natural logarithm of the ohms of each conductor of each run. Where ohms are a sum, the share of a part is
    /// part/sum times this.
    pub ohms: Vec<[f64; SLOTS]>,
    /// By the natural logarithm of each load's watts.
    pub watts: Vec<f64>,
    /// By the exponent of each load; 0 for loads without one.
    pub exponent: Vec<f64>,
    /// By the open-circuit volts of each leg.
    pub source: [f64; 3],
    /// By the natural logarithm of the ohms of all electrodes together.
    pub electrode: f64,
}

impl Gradient {
    /// A gradient of the size a network needs, all zero.
    #[must_use]
    pub fn of(network: &Network) -> Self {
        let loads = network.loads.len();
        Self {
            ohms: vec![[0.0; SLOTS]; network.spans.len()],
            watts: vec![0.0; loads],
            exponent: vec![0.0; loads],
            source: [0.0; 3],
            electrode: 0.0,
        }
    }
}
