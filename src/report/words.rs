//! Results in words, as tables, templates and captions share them.

use super::Source;
use crate::quantity::Unit;
use crate::results::{Cause, CauseKind, SupplyDirection};
use crate::wording::{Arg, Language, Sentence};

/// A cause in a few words.
pub(super) fn cause(source: &Source, cause: &Cause, language: &Language) -> String {
    let runs: Vec<Arg> = cause.runs.iter().filter_map(|&r| source.visit.runs.get(r)).map(|r| Arg::from(r.name.value.as_str())).collect();
    let sentence = match &cause.kind {
        CauseKind::None => Sentence::new("report.cause-none"),
        CauseKind::Neutral => Sentence::new("report.cause-neutral"),
        CauseKind::Hot(leg) => Sentence::new("report.cause-hot").with("leg", leg.name()),
        CauseKind::Supply(SupplyDirection::Low) => Sentence::new("report.cause-supply-low"),
        CauseKind::Supply(SupplyDirection::High) => Sentence::new("report.cause-supply-high"),
        CauseKind::Reading(cell) => Sentence::new("report.cause-reading").with("cell", cell.to_string()),
    };
    language.say(&sentence.with("n", runs.len()).with("runs", runs))
}

/// An interval of ohms: `0.12 Ω to 4.5 Ω`, `from 3.4 Ω up`.
pub(super) fn between(low: f64, high: Option<f64>, language: &Language) -> String {
    let show = |ohms: f64| language.quantity(ohms, if ohms < 10.0 { 2 } else { 0 }, Unit::Ohm);
    match high {
        Some(high) => format!("{} {} {}", show(low), language.text("report.to"), show(high)),
        None => language.say(&Sentence::new("report.from-up").with("low", show(low))),
    }
}
