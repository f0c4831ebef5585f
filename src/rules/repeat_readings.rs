//! `repeat-readings`.

use super::facts::common_gain;
use super::{Facts, Findings, Rule, Settings};
use crate::results::{CauseKind, Limit, Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::{Quantity, Reading, ReadingRow, Stage, name_key};
use crate::wording::Sentence;
use std::collections::BTreeMap;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "repeat-readings",
        signal: Signal::Notice,
        basis: "Repeatability, JCGM 200:2012, 2.21; difference by JCGM 100:2008, 5.2, one instrument's gain common",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    type Place<'a> = (String, &'a str, Stage, Quantity);
    let mut first: BTreeMap<Place, (&ReadingRow, &Reading)> = BTreeMap::new();
    for row in &facts.visit.rows {
        for reading in row.readings.iter().filter(|r| r.value.value().is_some()) {
            let place = (name_key(&row.location.value), row.state.as_str(), row.stage, reading.quantity);
            match first.get(&place) {
                Some(earlier) => compare(facts, *earlier, (row, reading), out),
                None => {
                    first.insert(place, (row, reading));
                }
            }
        }
    }
    misread(facts, out);
}

type At<'a> = (&'a ReadingRow, &'a Reading);

fn compare(facts: &Facts, (first_row, first): At, (row, again): At, out: &mut Findings) {
    let (Some(before), Some(after)) = (first.value.value(), again.value.value()) else { return };
    let unit = again.quantity.unit();
    let difference = after - before;
    let standard = common_gain(facts.visit.accuracy_of(row, again.quantity), difference, &[1.0, -1.0]);
    let room = out.expanded(standard);
    // The limit is the expanded uncertainty itself; a copied row is told by its very sameness.
    let is_copy = difference == 0.0 && time(first_row) == time(row);
    let verdict = match difference.abs() {
        _ if is_copy => Verdict::Undecided,
        d if d <= room + 1e-9 => Verdict::Pass,
        _ => Verdict::Fail,
    };
    let key = match verdict {
        Verdict::Pass => "repeat-readings.pass",
        Verdict::Undecided => "repeat-readings.same",
        Verdict::Fail => "repeat-readings.differ",
    };
    let says = Sentence::new(key)
        .with("quantity", again.quantity.to_string())
        .number("before", before, 1, unit)
        .number("after", after, 1, unit)
        .number("room", room, 1, unit);
    let limit = Limit { low: Some(-room), high: Some(room) };
    out.push(
        out.of_row(verdict, row, &again.cell, says, "repeat-readings.advice")
            .measured(difference, Some(room), unit)
            .limit(limit.low, limit.high)
            .related([first.cell.clone()]),
    );
}

fn time(row: &ReadingRow) -> Option<&str> {
    row.time.as_ref().map(|t| t.value.as_str())
}

/// The diagnosis holds one value misread.
fn misread(facts: &Facts, out: &mut Findings) {
    let Some(cause) = facts.diagnosis.and_then(|d| d.ranking.first()) else { return };
    let CauseKind::Reading(cell) = &cause.kind else { return };
    let found = facts.visit.rows.iter().find_map(|row| Some((row, row.readings.iter().find(|r| r.cell == *cell)?)));
    let Some((row, reading)) = found else { return };
    let value = reading.value.value().unwrap_or_default();
    let says = Sentence::new("repeat-readings.misread")
        .with("quantity", reading.quantity.to_string())
        .number("value", value, 1, reading.quantity.unit())
        .number("percent", 100.0 * cause.probability, 0, crate::quantity::Unit::Percent);
    out.push(out.of_row(Verdict::Undecided, row, cell, says, "repeat-readings.advice"));
}
