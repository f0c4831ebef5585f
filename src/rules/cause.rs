//! The diagnosis as findings: what neutral-path, hot-path and supply-voltage have in common.

use super::{Facts, Findings, Settings};
use crate::diag::CellRef;
use crate::quantity::Unit;
use crate::results::{AddedOhms, Cause, Finding, Signal, Verdict};
use crate::rulebook::Setting;
use crate::visit::Quantity;
use crate::wording::{Arg, Sentence};

/// From this probability on a cause is taken as shown.
pub(super) const SURE: Setting = Setting::new("sure-percent", 80.0, Unit::Percent, (0.0, 100.0));
/// From this probability on a cause that is not the most probable one is said nevertheless.
pub(super) const WORTH: Setting = Setting::new("worth-percent", 30.0, Unit::Percent, (0.0, 100.0));

/// Cells of readings listed with a finding, at most.
const MOST_CELLS: usize = 24;

/// The most probable cause of a kind, with the verdict on it: shown, possible, or of no account.
pub(super) fn of_kind<'a>(facts: &Facts<'a>, settings: &Settings, is_kind: fn(&Cause) -> bool) -> Option<(Verdict, Option<&'a Cause>)> {
    let ranking = &facts.diagnosis?.ranking;
    let top = ranking.first()?;
    let best = ranking.iter().find(|c| is_kind(c));
    let all = 100.0 * ranking.iter().filter(|c| is_kind(c)).map(|c| c.probability).sum::<f64>();
    let verdict = if is_kind(top) && 100.0 * top.probability >= settings.get(&SURE) {
        Verdict::Fail
    } else if is_kind(top) || all >= settings.get(&WORTH) {
        Verdict::Undecided
    } else {
        Verdict::Pass
    };
    Some((verdict, best))
}

/// A sentence about a cause: its runs, probability and ohms.
pub(super) fn sentence(facts: &Facts, key: &'static str, cause: &Cause) -> Sentence {
    let runs: Vec<Arg> = cause.runs.iter().map(|r| Arg::from(facts.name(*r))).collect();
    Sentence::new(key).with("n", runs.len()).with("runs", runs).with("percent", percent(cause.probability)).with("ohms", ohms(cause.ohms))
}

/// A probability in per cent, never rounded to a certainty.
fn percent(probability: f64) -> Arg {
    match 100.0 * probability {
        value if value > 99.5 => Sentence::new("cause.nearly-sure").into(),
        value => Arg::Number { value, decimals: 0, unit: Unit::Percent },
    }
}

fn ohms(ohms: Option<AddedOhms>) -> Sentence {
    match ohms {
        None => Sentence::new("cause.ohms-unknown"),
        Some(AddedOhms { low, high: Some(high), .. }) => {
            Sentence::new("cause.ohms-between").number("low", low.0, 2, Unit::Ohm).number("high", high.0, 2, Unit::Ohm)
        }
        Some(AddedOhms { low, high: None, .. }) => Sentence::new("cause.ohms-from").number("low", low.0, 2, Unit::Ohm),
    }
}

/// A finding about a cause with runs, at the first of them, with the cells of their rows and of the voltages read there.
pub(super) fn finding(
    facts: &Facts,
    cause: &Cause,
    signal: Signal,
    verdict: Verdict,
    says: Sentence,
    advice: &'static str,
    out: &Findings,
) -> Option<Finding> {
    let first = cause.runs.first().and_then(|r| facts.visit.runs.get(*r))?;
    let rows = cause.runs.iter().filter_map(|r| facts.visit.runs.get(*r)).map(|r| r.cell.clone());
    let readings = voltages(facts, |run| cause.runs.contains(&run));
    let finding = out.draft_as(signal, verdict, &first.cell, says, Sentence::new(advice)).at(&first.name.value);
    Some(finding.related(rows.chain(readings)))
}

/// The finding that there is no cause of a kind, at the first run of the service.
pub(super) fn none(facts: &Facts, key: &'static str, out: &Findings) -> Option<Finding> {
    let run = facts.visit.tree.roots.first().and_then(|r| facts.visit.runs.get(*r))?;
    Some(out.draft(Verdict::Pass, &run.cell, Sentence::new(key), Sentence::new("advice.none")).at(&run.name.value))
}

/// Cells of the line-to-neutral voltages read at the far ends of some runs.
pub(super) fn voltages<'a>(facts: &Facts<'a>, is_wanted: impl Fn(usize) -> bool) -> impl Iterator<Item = CellRef> {
    let rows = facts.visit.rows.iter().filter(move |row| row.run.is_some_and(&is_wanted));
    let is_voltage = |q: Quantity| matches!(q, Quantity::Voltage(_));
    rows.flat_map(|row| &row.readings).filter(move |r| is_voltage(r.quantity)).map(|r| r.cell.clone()).take(MOST_CELLS)
}
