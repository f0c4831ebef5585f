//! What is taken for probable before any reading, with the reasons.

use crate::network::NetworkSettings;

/// How a diagnosis is made.
#[derive(Clone, Debug, PartialEq, Default)]
pub struct DiagnosisSettings {
    /// What is taken where the circuit list is silent, and how loads behave.
    pub network: NetworkSettings,
}

/// How far the circuit list is trusted: spreads (one standard deviation) of natural logarithms.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Trust {
    /// Probability of this level before any reading.
    pub prior: f64,
    /// Of a run's ohms.
    pub ohms: f64,
    /// Of a stated load's watts.
    pub watts: f64,
    /// There may be loads nobody wrote down: median watts and spread on each leg of each location.
    pub extra: Option<(f64, f64)>,
}

/// The levels. A careful list: lengths paced out and bends forgotten, 10 to 15 % of ohms with temperature; nameplates, 10 %. A
/// careless one: lengths and watts guessed within a factor of two (a uniform guess of the logarithm between ½ and 2 spreads by
/// ln 2·2/√12 = 0.4), now and then a wire size read one or two gauges off (a factor of 1.6 each), a heater not written down.
pub(super) const TRUST: [Trust; 2] =
    [Trust { prior: 0.6, ohms: 0.12, watts: 0.10, extra: None }, Trust { prior: 0.4, ohms: 0.45, watts: 0.40, extra: Some((4.0, 2.0)) }];

/// Spread of the logarithm of a run's ohms where its length or wire is not stated: a length of 4 to 60 m is ±2 such spreads.
pub(super) const GUESSED: f64 = 0.7;

/// Watts of a load of which the list says nothing: median, and spread of the logarithm. A lamp to a heater, 20 to 1500 W, is
/// about ±1.5 such spreads.
pub(super) const UNLISTED: (f64, f64) = (120.0, 1.4);

/// Likewise between two lines: water heater, dryer, range, 1.5 to 6 kW.
pub(super) const UNLISTED_LINE_LINE: (f64, f64) = (3000.0, 0.6);

/// Watts of what is switched on in a further state: from a lamp to two heaters.
pub(super) const SWITCHED: (f64, f64) = (300.0, 1.5);

/// Likewise where it may be anywhere: at the panel, and at any other place, where it is most likely not.
pub(super) const SWITCHED_WIDE: (f64, f64) = (30.0, 2.0);
/// At any other place.
pub(super) const ANYWHERE: (f64, f64) = (4.0, 2.0);

/// Watts switched on at a place, where the state states them (`1500 W heater on`): spread of the logarithm; it may be on either leg.
pub(super) const STATED: f64 = 0.5;

/// Exponent of the current of a load whose kind is not stated, between these: constant power −1, filament 0.55, resistive 1.
pub(super) const EXPONENT_RANGE: (f64, f64) = (-0.3, 1.05);

/// Its place in that range, as a logit: median and spread. The median is a filament's; one spread up is nearly resistive, one down
/// constant current.
pub(super) const EXPONENT: (f64, f64) = (0.8, 1.3);

/// Spread of the supply's logarithm on a sound service: ANSI C84.1 range A is ±5 %, and few services lie near its ends.
pub(super) const SUPPLY: f64 = 0.02;

/// Supply off: this far from nominal (logarithm), and its spread: from the end of range A to well outside range B.
pub(super) const SUPPLY_OFF: (f64, f64) = (0.085, 0.03);

/// How far one leg of the supply may differ from the others: halves of one winding, taps alike.
pub(super) const SUPPLY_LEG: f64 = 0.001;

/// How far the supply moves between two rows of readings.
pub(super) const DRIFT: f64 = 0.0024;

/// Ohms of the way through electrode and earth: median and spread of the logarithm; 5 to 100 Ω.
pub(super) const ELECTRODE: (f64, f64) = (22.0, 0.8);

/// Share of an instrument's stated gain error that varies from reading to reading (range, wave shape, contact, clamp position);
/// the rest is common to the visit.
pub(super) const SCATTER: f64 = 0.2;

/// Added ohms that a fault may have, log-uniform between: less drowns in the spread of sound connections, more is as good as open.
pub(super) const ADDED: (f64, f64) = (0.2, 51.2);

/// Share of faults that are open: a loose neutral burns on until it parts; of a hot leg an open is found before anyone measures.
pub(super) const OPEN_NEUTRAL: f64 = 0.35;
/// Likewise of a hot leg.
pub(super) const OPEN_HOT: f64 = 0.04;

/// How much more often resistance grows in the hot leg of a two-wire circuit than in its neutral: breaker, switch and device
/// contacts all lie in the leg, the neutral has splices and a bar.
pub(super) const TWO_WIRE: f64 = 5.0;

/// Probability of each kind of cause before any reading. A diagnosis is asked for where something was noticed; what is noticed
/// with lights that brighten and dim is a neutral more often than all else together, and one visit in three finds nothing.
pub(super) const PRIOR_SOUND: f64 = 0.25;
/// Of a neutral that legs share, over all runs with one.
pub(super) const PRIOR_NEUTRAL: f64 = 0.48;
/// Of a hot leg, over all of them.
pub(super) const PRIOR_HOT: f64 = 0.12;
/// Of the supply, low or high.
pub(super) const PRIOR_SUPPLY: f64 = 0.075;
/// Of a misread value, over all voltage readings.
pub(super) const PRIOR_READING: f64 = 0.075;

/// A misread voltage stands anywhere within so many volts: digits swapped or slipped.
pub(super) const MISREAD: f64 = 60.0;

/// Readings used, at most; of more, rows are taken evenly out of all. The cost of a fit grows with their square.
pub(super) const MOST_READINGS: usize = 150;

/// Runs up to which a list is taken as it is; of longer ones loads on the way are moved to the end of their span, and what hangs
/// unmeasured on one place is one.
pub(super) const MOST_RUNS: usize = 400;

/// Arithmetic operations spent on one level of trust, at most: about a second. An ordinary visit takes a twentieth.
pub(super) const MOST_WORK: f64 = 2.5e9;
