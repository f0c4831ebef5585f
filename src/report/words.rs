//! Results in words, as tables, templates and captions share them.

use crate::quantity::Unit;
use crate::results::{Cause, CauseKind, SupplyDirection};
use crate::visit::Visit;
use crate::wording::{Arg, Language, Sentence};

/// So many places are told with what is there.
pub(super) const FEW: usize = 4;
/// Less than this is shown as no ohms at all.
const LEAST_OHMS: f64 = 0.005;

/// A cause in a few words.
#[must_use]
pub fn cause(visit: &Visit, cause: &Cause, language: &Language) -> String {
    let runs: Vec<Arg> = runs(visit, &cause.runs).into_iter().map(Arg::from).collect();
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

/// Names of runs, and what they serve where they are few enough to be looked for.
pub(super) fn runs(visit: &Visit, runs: &[usize]) -> Vec<String> {
    let is_few = runs.len() <= FEW;
    let known = runs.iter().filter_map(|&r| visit.runs.get(r));
    known.map(|r| place(&r.name.value, r.serves.as_ref().map(|s| s.value.as_str()).filter(|_| is_few))).collect()
}

/// A place by its name and what is there: `5/7 (living room)`.
pub(super) fn place(name: &str, serves: Option<&str>) -> String {
    serves.map_or_else(|| name.to_owned(), |serves| format!("{name} ({serves})"))
}

/// An interval of ohms: `0.12 Ω to 4.50 Ω`, `up to 4.50 Ω`, `3.40 Ω or more`.
pub(super) fn between(low: f64, high: Option<f64>, language: &Language) -> String {
    let key = match (low < LEAST_OHMS, high) {
        (true, Some(_)) => "report.ohms-up-to",
        (false, Some(_)) => "report.ohms-between",
        (true, None) => "report.ohms-any",
        (false, None) => "report.ohms-from",
    };
    let ohms = |s: Sentence, name, ohms: f64| s.number(name, ohms, digits(ohms), Unit::Ohm);
    let sentence = ohms(Sentence::new(key), "low", low);
    language.say(&high.into_iter().fold(sentence, |s, high| ohms(s, "high", high)))
}

/// A probability: `97 %`, `more than 99 %` where rounding would make it a certainty.
pub(super) fn probability(p: f64, language: &Language) -> String {
    match 100.0 * p {
        percent if percent > 99.5 => language.text("cause.nearly-sure"),
        percent => language.quantity(percent, 0, Unit::Percent),
    }
}

/// Digits of ohms worth showing.
pub(super) fn digits(ohms: f64) -> u8 {
    if ohms < 10.0 { 2 } else { 0 }
}

/// A text with a full stop where it ends in a word.
pub(super) fn ended(mut text: String) -> String {
    if text.ends_with(char::is_alphanumeric) {
        text.push('.');
    }
    text
}

/// Names as a sentence lists them; beyond `most` only how many.
pub(super) fn listed(names: &[String], most: usize, language: &Language) -> String {
    let mut list: Vec<Arg> = names.iter().take(most).map(|n| Arg::from(n.as_str())).collect();
    if names.len() > most {
        list.push(Sentence::new("advice.more").with("n", names.len() - most).into());
    }
    language.arg(&list.into())
}
