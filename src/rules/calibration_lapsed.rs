//! `calibration-lapsed`.

use super::{Facts, Findings, Rule, Settings};
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::Instrument;
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "calibration-lapsed",
        signal: Signal::Caution,
        basis: "Metrological traceability as ISO/IEC 17025:2017, 6.4 and 6.5 ask for it; compared with the visit date, not with today",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    for instrument in &facts.visit.instruments {
        judge(facts, instrument, out);
    }
}

fn judge(facts: &Facts, instrument: &Instrument, out: &mut Findings) {
    let date = facts.visit.site.date.as_ref();
    let until = instrument.calibrated_until.as_ref();
    let (verdict, key) = match (date, until) {
        (Some(date), Some(until)) if until.value < date.value => (Verdict::Fail, "calibration-lapsed.lapsed"),
        (Some(_), Some(_)) => (Verdict::Pass, "calibration-lapsed.pass"),
        (_, None) => (Verdict::Undecided, "calibration-lapsed.not-stated"),
        (None, Some(_)) => (Verdict::Undecided, "calibration-lapsed.no-date"),
    };
    let says = Sentence::new(key)
        .with("instrument", instrument.name.value.as_str())
        .with("until", until.map(|d| d.value.to_string()).unwrap_or_default())
        .with("date", date.map(|d| d.value.to_string()).unwrap_or_default());
    let cell = until.map_or(&instrument.cell, |u| &u.cell);
    out.push(out.draft(verdict, cell, says, Sentence::new("calibration-lapsed.advice")).related(date.map(|d| d.cell.clone())));
}
