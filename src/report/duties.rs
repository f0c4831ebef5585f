//! Who acts on a finding, and by when.

use crate::results::{Finding, Signal};

/// Who acts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Duty {
    /// A licensed electrician: whatever nobody else is named for.
    Electrician,
    /// The utility, whose the service conductors are.
    Utility,
    /// The utility, with an electrician for what is behind the meter.
    Both,
    /// Whoever takes the readings and keeps the list.
    Reader,
}

impl Duty {
    /// Key of its wording.
    pub(super) fn key(self) -> &'static str {
        match self {
            Self::Electrician => "report.who-electrician",
            Self::Utility => "report.who-utility",
            Self::Both => "report.who-both",
            Self::Reader => "report.who-reader",
        }
    }
}

/// Advice by its key in the language file: for the utility, for both, for the reader.
const UTILITY: [&str; 4] = ["neutral-path.advice-service", "neutral-shift.advice-service", "service-range.advice", "supply-voltage.advice"];
const BOTH: [&str; 2] = ["hot-path.advice-service", "breaker-conductor.service-advice"];
const READER: [&str; 28] = [
    "accuracy-assumed.advice",
    "breaker-conductor.terminals-advice",
    "calibration-lapsed.advice",
    "circuit-list.advice",
    "circuit-list.advice-unlabelled",
    "continuous-load.advice",
    "continuous-load.listed-advice",
    "element-resistance.filament-advice",
    "element-resistance.recheck",
    "gfci-trip.unstated-advice",
    "insulation-resistance.recheck",
    "insulation-resistance.weak-advice",
    "leg-sum.advice",
    "leg-sum.advice-wye",
    "nominal-band.advice",
    "nominal-band.recheck",
    "not-ruled-out.advice",
    "not-ruled-out.advice-read",
    "receptacle-pattern.advice-unclear",
    "repair-proven.advice-not-shown",
    "repeat-readings.advice",
    "service-range.recheck",
    "shared-neutral-disconnect.advice-unknown",
    "temperature-rise.possible-advice",
    "torque.unstated-advice",
    "utilization-range.recheck",
    "voltage-drop.calculated-advice",
    "voltage-drop.recheck",
];

/// Who acts on a finding; nobody in particular where the advice is the observer's own.
pub(super) fn of(finding: &Finding) -> Option<Duty> {
    match finding.advice.key {
        "observation.own-advice" => None,
        key if UTILITY.contains(&key) => Some(Duty::Utility),
        key if BOTH.contains(&key) => Some(Duty::Both),
        key if READER.contains(&key) => Some(Duty::Reader),
        _ => Some(Duty::Electrician),
    }
}

/// Key of the wording of when to act.
pub(super) fn when(signal: Signal) -> &'static str {
    match signal {
        Signal::Danger => "report.when-danger",
        Signal::Warning => "report.when-warning",
        Signal::Caution => "report.when-caution",
        Signal::Notice => "report.when-notice",
    }
}

#[cfg(test)]
mod tests {
    use super::{BOTH, READER, UTILITY};
    use crate::wording::Language;

    #[test]
    fn every_advice_named_here_exists() {
        let language = Language::english();
        for key in UTILITY.iter().chain(&BOTH).chain(&READER) {
            assert!(language.entry(key).is_some(), "{key}");
        }
    }
}
