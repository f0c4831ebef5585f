//! `neutral-to-ground`.

use super::facts::common_gain;
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::{Measured, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Quantity, Reading, ReadingRow};
use crate::wording::Sentence;

const HIGH: Setting = Setting::new("high-volts", 5.0, Unit::Volt, (0.0, 1000.0));
const SEVERE: Setting = Setting::new("severe-volts", 50.0, Unit::Volt, (0.0, 1000.0));
const NONE: Setting = Setting::new("none-volts", 0.1, Unit::Volt, (0.0, 1000.0));
const DROP: Setting = Setting::new("drop-volts", 3.0, Unit::Volt, (0.0, 1000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "neutral-to-ground",
        signal: Signal::Caution,
        basis: "Common practice: up to 2 V under load is usual, 3 to 4 V under heavy load not rare; the NEC sets no limit. \
                Neutral tied to ground beyond the service: NEC 250.24, 250.142(B). 50 V to ground: 29 CFR 1910.333(a)(1)",
        settings: &[HIGH, SEVERE, NONE, DROP],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    // What a leg loses on its way is asked of the first leg alone: only one-leg runs are looked at.
    let sources: Vec<(Quantity, Vec<Option<usize>>)> =
        facts.visit.system.legs().iter().map(|l| Quantity::line_neutral(*l)).map(|q| (q, facts.sources(q))).collect();
    for (i, row) in facts.visit.rows.iter().enumerate() {
        for reading in row.readings.iter().filter(|r| r.quantity == Quantity::NeutralGround) {
            high(facts, settings, row, reading, out);
            for (quantity, sources) in &sources {
                if let Some(source) = sources.get(i).copied().flatten().and_then(|s| facts.visit.rows.get(s)) {
                    nearly_none(facts, settings, (row, reading), source, *quantity, out);
                }
            }
        }
    }
}

fn high(facts: &Facts, settings: &Settings, row: &ReadingRow, reading: &Reading, out: &mut Findings) {
    let limit = |setting| Limit { low: None, high: Some(settings.get(setting)) };
    // An upper bound can show that it is within the limit, nothing else.
    let (value, standard) = match reading.value {
        Measured::Value(v) => (v, facts.visit.accuracy_of(row, reading.quantity).standard(v)),
        Measured::AtMost(v) if v <= settings.get(&HIGH) => (v, 0.0),
        _ => return,
    };
    let is_severe = out.judge(value, standard, limit(&SEVERE)) == Verdict::Fail;
    let (signal, limit) = if is_severe { (Signal::Warning, limit(&SEVERE)) } else { (Signal::Caution, limit(&HIGH)) };
    let verdict = out.judge(value, standard, limit);
    let key = if verdict == Verdict::Pass { "neutral-to-ground.pass" } else { "neutral-to-ground.high" };
    let says = Sentence::new(key).number("value", value, 1, Unit::Volt).number("limit", limit.high.unwrap_or_default(), 1, Unit::Volt);
    out.push(
        out.of_row_as(signal, verdict, row, &reading.cell, says, "neutral-to-ground.advice")
            .measured(value, Some(out.expanded(standard)), Unit::Volt)
            .limit(limit.low, limit.high),
    );
}

/// On a one-leg run from the service a drop of the leg is lost half in its neutral, and shows against ground, unless the neutral
/// touches ground on the way. (Drop in the line conductor alone would look the same, hence undecided.)
fn nearly_none(
    facts: &Facts,
    settings: &Settings,
    (row, reading): (&ReadingRow, &Reading),
    source: &ReadingRow,
    quantity: Quantity,
    out: &mut Findings,
) {
    let run = row.run.and_then(|r| facts.visit.runs.get(r));
    let is_two_wire = run.and_then(|r| r.legs.as_ref()).is_some_and(|l| l.value.neutral && l.value.count() == 1);
    let (Some(value), Some(here), Some(there)) = (reading.value.value(), facts.known(row, quantity), facts.known(source, quantity)) else {
        return;
    };
    if !is_two_wire || !facts.at_service(source) || value > settings.get(&NONE) {
        return;
    }
    let drop = there.value - here.value;
    let standard = common_gain(here.accuracy, drop, &[1.0, -1.0]);
    let least = Limit { low: None, high: Some(settings.get(&DROP)) };
    if out.judge(drop, standard, least) != Verdict::Fail {
        return;
    }
    let says = Sentence::new("neutral-to-ground.none")
        .number("value", value, 1, Unit::Volt)
        .number("drop", drop, 1, Unit::Volt)
        .with("quantity", quantity.to_string());
    out.push(
        out.of_row(Verdict::Undecided, row, &reading.cell, says, "neutral-to-ground.advice-none")
            .measured(value, Some(out.expanded(facts.visit.accuracy_of(row, reading.quantity).standard(value))), Unit::Volt)
            .related([here.cell().clone(), there.cell().clone()]),
    );
}
