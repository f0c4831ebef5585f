//! Grounding electrodes and their conductors.

use super::conductor::square_millimetres;
use crate::quantity::Ohms;
use crate::visit::{Metal, Wire, WireSize};

/// A single rod, pipe or plate above this needs a second electrode, and no further test is asked for (NEC 250.53(A)(2)).
pub const SECOND_ELECTRODE_ABOVE: Ohms = Ohms(25.0);

/// NEC table 250.66: largest service conductor, copper and aluminium, then the electrode conductor, copper and aluminium. A
/// supplier's copy that prints 1 instead of 1/0 in the first aluminium entry is a misprint.
const TABLE_250_66: [(WireSize, WireSize, WireSize, WireSize); 6] = [
    (WireSize::Awg(2), WireSize::Awg(0), WireSize::Awg(8), WireSize::Awg(6)),
    (WireSize::Awg(0), WireSize::Awg(-2), WireSize::Awg(6), WireSize::Awg(4)),
    (WireSize::Awg(-2), WireSize::Kcmil(250), WireSize::Awg(4), WireSize::Awg(2)),
    (WireSize::Kcmil(350), WireSize::Kcmil(500), WireSize::Awg(2), WireSize::Awg(0)),
    (WireSize::Kcmil(600), WireSize::Kcmil(900), WireSize::Awg(0), WireSize::Awg(-2)),
    (WireSize::Kcmil(1100), WireSize::Kcmil(1750), WireSize::Awg(-1), WireSize::Awg(-3)),
];

/// Smallest grounding electrode conductor for a service conductor, before the caps for rods and concrete-encased electrodes.
#[must_use]
pub fn electrode_conductor(service: Wire, metal: Metal) -> Option<WireSize> {
    let area = square_millimetres(service.size)?;
    // The sizes of the table differ by a fifth and more; a per mille covers the rounding of the gauge formula.
    let within = |size| square_millimetres(size).is_some_and(|most| area <= most * 1.001);
    let row = TABLE_250_66.iter().find(|row| within(if service.metal == Metal::Copper { row.0 } else { row.1 }));
    Some(match (row, metal) {
        (Some(row), Metal::Copper) => row.2,
        (Some(row), Metal::Aluminium) => row.3,
        (None, Metal::Copper) => WireSize::Awg(-2),
        (None, Metal::Aluminium) => WireSize::Kcmil(250),
    })
}
