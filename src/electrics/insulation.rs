//! Least insulation resistance.

use crate::quantity::{Ohms, Volts};

/// Whose table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Edition {
    /// IEC 60364-6:2006 and later.
    Iec2006,
    /// Older texts (IEC 60364-6-61; BS 7671 up to the sixteenth edition).
    Older,
    /// ANSI/NETA ATS table 100.1 (from memory): what acceptance testing of distribution equipment asks.
    Neta,
}

/// What is asked: DC test voltage and least resistance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Minimum {
    /// DC test voltage.
    pub test: Volts,
    /// Least insulation resistance.
    pub ohms: Ohms,
}

const fn minimum(test: f64, megohms: f64) -> Minimum {
    Minimum { test: Volts(test), ohms: Ohms(megohms * 1e6) }
}

/// The minimum for a circuit of a nominal voltage; `extra_low` for safety and protective extra-low voltage (SELV, PELV), which
/// the NETA table does not know. `None` above 1000 V. The NEC itself states no figure.
#[must_use]
pub fn least(edition: Edition, nominal: Volts, extra_low: bool) -> Option<Minimum> {
    if nominal.0.is_nan() || nominal.0 > 1000.0 {
        return None;
    }
    let up_to_500 = nominal.0 <= 500.0;
    match edition {
        Edition::Iec2006 if extra_low => Some(minimum(250.0, 0.5)),
        Edition::Iec2006 if up_to_500 => Some(minimum(500.0, 1.0)),
        Edition::Iec2006 => Some(minimum(1000.0, 1.0)),
        Edition::Older if extra_low => Some(minimum(250.0, 0.25)),
        Edition::Older if up_to_500 => Some(minimum(500.0, 0.5)),
        Edition::Older => Some(minimum(1000.0, 1.0)),
        Edition::Neta if extra_low => None,
        Edition::Neta if nominal.0 <= 250.0 => Some(minimum(500.0, 25.0)),
        Edition::Neta if nominal.0 <= 600.0 => Some(minimum(1000.0, 100.0)),
        Edition::Neta => None,
    }
}
