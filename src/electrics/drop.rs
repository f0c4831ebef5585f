//! Voltage drop of circuits on magnitudes.

use super::conductor::OhmsPerMetre;
use crate::quantity::{Amperes, Metres, Ohms, Volts};

/// Drop of a two-wire circuit, out and back: 2·I·L·R. NEC 210.19(A) and 215.2(A) informational notes advise 3 % for a branch or
/// a feeder and 5 % for both; notes are advice (90.5(C)).
#[must_use]
pub fn two_wire(current: Amperes, length: Metres, conductor: OhmsPerMetre) -> Volts {
    one_way(current, length, conductor) * 2.0
}

/// Drop along one conductor: I·L·R. Of a neutral it is what N-G reads at its end.
#[must_use]
pub fn one_way(current: Amperes, length: Metres, conductor: OhmsPerMetre) -> Volts {
    current * (conductor * length)
}

/// Line-to-line drop of a balanced three-phase circuit: √3·I·L·R.
#[must_use]
pub fn three_phase(current: Amperes, length: Metres, conductor: OhmsPerMetre) -> Volts {
    one_way(current, length, conductor) * 3f64.sqrt()
}

/// Drop in the conductor and the neutral of a multiwire circuit's leg 1: I₁·R + (I₁ − I₂)·Rₙ, split phase, loads in phase.
/// Negative on the lighter leg: its voltage rises.
#[must_use]
pub fn multiwire(leg: Amperes, other: Amperes, line: Ohms, neutral: Ohms) -> Volts {
    leg * line + (leg - other) * neutral
}

/// A drop in per cent of a voltage.
#[must_use]
pub fn percent(drop: Volts, of: Volts) -> f64 {
    100.0 * (drop / of)
}
