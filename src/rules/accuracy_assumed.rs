//! `accuracy-assumed`.

use super::{Facts, Findings, Rule, Settings};
use crate::diag::CellRef;
use crate::quantity::Unit;
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::Accuracy;
use crate::wording::Sentence;
use std::collections::BTreeSet;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "accuracy-assumed",
        signal: Signal::Notice,
        basis: "JCGM 100:2008, 4.3: an uncertainty rests on what is known of the instrument",
        settings: &[],
    },
    run,
};

/// One finding for every cell at which the accuracy should stand: an instrument's row, or, where readings have no instrument, the
/// first of them.
fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    let mut said: BTreeSet<(Option<CellRef>, bool)> = BTreeSet::new();
    for row in &facts.visit.rows {
        for reading in &row.readings {
            let instrument = facts.visit.instrument_of(row, reading.quantity);
            let accuracy = facts.visit.accuracy_of(row, reading.quantity);
            let is_voltage = reading.quantity.is_voltage();
            let place = (instrument.map(|i| i.cell.clone()), is_voltage);
            if !said.insert(place) {
                continue;
            }
            let (verdict, key) = match (accuracy.assumed, instrument) {
                (false, _) => (Verdict::Pass, "accuracy-assumed.pass"),
                (true, Some(_)) => (Verdict::Fail, "accuracy-assumed.not-stated"),
                (true, None) => (Verdict::Fail, "accuracy-assumed.no-instrument"),
            };
            let says = Sentence::new(key)
                .with("instrument", instrument.map_or("", |i| i.name.value.as_str()))
                .with("quantity", Sentence::new(if is_voltage { "accuracy-assumed.volts" } else { "accuracy-assumed.amps" }))
                .number("percent", Accuracy::ASSUMED.percent, 0, Unit::Percent)
                .number("counts", Accuracy::ASSUMED.counts, 0, Unit::One);
            let cell = instrument.map_or(&reading.cell, |i| &i.cell);
            out.push(out.draft(verdict, cell, says, Sentence::new("accuracy-assumed.advice")));
        }
    }
}
