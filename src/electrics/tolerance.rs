//! How long equipment tolerates a voltage: the ITIC curve (Information Technology Industry Council, revised 2000).
//!
//! It describes single-phase 120 V information technology equipment, nothing else.

use crate::quantity::{Seconds, math};

/// Regions of the curve.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Region {
    /// Works on.
    Tolerated,
    /// May stop, without harm.
    NoDamage,
    /// May be damaged.
    Prohibited,
}

/// Region of a voltage, as a fraction of nominal, that lasts so long. `None` for durations shorter than the curve's 0.01 cycle of
/// 60 Hz (1/6 ms), and for numbers that are none.
#[must_use]
pub fn itic(fraction: f64, duration: Seconds) -> Option<Region> {
    let t = duration.0;
    if !(t >= 0.01 / 60.0 && fraction >= 0.0) {
        return None;
    }
    Some(if fraction > upper(t) {
        Region::Prohibited
    } else if fraction < lower(t) {
        Region::NoDamage
    } else {
        Region::Tolerated
    })
}

/// Upper line. Between 1/6 ms and 1 ms it slopes from 500 % to 200 % (straight on the curve's logarithmic time axis; the slope's
/// ends are from memory).
fn upper(t: f64) -> f64 {
    const START: f64 = 0.01 / 60.0;
    match t {
        t if t <= 0.001 => 5.0 - 3.0 * math::ln(t / START) / math::ln(0.001 / START),
        t if t <= 0.003 => 1.4,
        t if t <= 0.5 => 1.2,
        _ => 1.1,
    }
}

fn lower(t: f64) -> f64 {
    match t {
        t if t <= 0.02 => 0.0,
        t if t <= 0.5 => 0.7,
        t if t <= 10.0 => 0.8,
        _ => 0.9,
    }
}
