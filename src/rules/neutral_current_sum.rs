//! `neutral-current-sum`.

use super::facts::{Known, common_gain};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::neutral;
use crate::quantity::{Amperes, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Arrangement, Leg, Quantity, ReadingRow};
use crate::wording::Sentence;

const SHARE: Setting = Setting::new("allowed-percent", 5.0, Unit::Percent, (0.0, 100.0));
const LEAST: Setting = Setting::new("allowed-amperes", 0.5, Unit::Ampere, (0.0, 1000.0));
const GROUND: Setting = Setting::new("ground-amperes", 1.0, Unit::Ampere, (0.0, 1000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "neutral-current-sum",
        signal: Signal::Caution,
        basis: "Kirchhoff's current law; vector sum for equal power factors (NEC 310.15(E), 220.61); objectionable current NEC 250.6",
        settings: &[SHARE, LEAST, GROUND],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        neutral_against_legs(facts, settings, row, out);
        if let Some(ground) = facts.known(row, Quantity::GroundCurrent) {
            in_ground(settings, row, &ground, out);
        }
    }
}

fn neutral_against_legs(facts: &Facts, settings: &Settings, row: &ReadingRow, out: &mut Findings) {
    let Some(measured) = facts.known(row, Quantity::NeutralCurrent) else { return };
    let Some((expected, legs)) = expected(facts, row) else { return };
    let largest = legs.iter().map(|k| k.value).fold(0.0, f64::max);
    let room = settings.get(&SHARE) / 100.0 * largest + settings.get(&LEAST);
    let standard = common_gain(measured.accuracy, measured.value - expected, &[1.0, 1.0, 1.0]);
    let limit = Limit { low: Some((expected - room).max(0.0)), high: Some(expected + room) };
    let verdict = out.judge(measured.value, standard, limit);
    let is_low = measured.value < expected;
    let (key, signal) = match verdict {
        Verdict::Pass => ("neutral-current-sum.pass", Signal::Notice),
        _ if is_low => ("neutral-current-sum.less", Signal::Caution),
        _ => ("neutral-current-sum.more", Signal::Notice),
    };
    let says = Sentence::new(key).number("measured", measured.value, 1, Unit::Ampere).number("expected", expected, 1, Unit::Ampere).number(
        "room",
        room,
        1,
        Unit::Ampere,
    );
    let advice = if is_low { "neutral-current-sum.advice-less" } else { "neutral-current-sum.advice-more" };
    out.push(
        out.of_row_as(signal, verdict, row, measured.cell(), says, advice)
            .measured(measured.value, Some(out.expanded(standard)), Unit::Ampere)
            .limit(limit.low, limit.high)
            .related(legs.iter().map(|k| k.cell().clone())),
    );
}

/// The vector sum of the leg currents at this place, and the readings it is made of. `None` where a leg of the run was not measured,
/// and on a high-leg delta with more than one leg, whose line currents do not return in the neutral.
fn expected<'a>(facts: &Facts<'a>, row: &'a ReadingRow) -> Option<(f64, Vec<Known<'a>>)> {
    let system = &facts.visit.system;
    let of_run = row.run.and_then(|r| facts.visit.runs.get(r)).and_then(|r| r.legs.as_ref());
    let legs: Vec<Leg> = match of_run {
        Some(legs) => legs.value.iter().collect(),
        None => system.legs().to_vec(),
    };
    let known: Vec<Known> = legs.iter().map(|leg| facts.known(row, Quantity::LineCurrent(*leg))).collect::<Option<_>>()?;
    let ampere = |i: usize| Amperes(known.get(i).map_or(0.0, |k| k.value));
    let sum = match (legs.len(), system.arrangement) {
        (0, _) => return None,
        (1, _) => ampere(0),
        (_, Arrangement::HighLegDelta) => return None,
        (2, Arrangement::SplitPhase) => neutral::split_phase(ampere(0), ampere(1)),
        _ => neutral::wye(ampere(0), ampere(1), ampere(2)),
    };
    Some((sum.0, known))
}

fn in_ground(settings: &Settings, row: &ReadingRow, ground: &Known, out: &mut Findings) {
    let limit = Limit { low: None, high: Some(settings.get(&GROUND)) };
    let verdict = out.judge(ground.value, ground.standard(), limit);
    let key = if verdict == Verdict::Pass { "neutral-current-sum.pass-ground" } else { "neutral-current-sum.ground" };
    let says = Sentence::new(key).number("measured", ground.value, 2, Unit::Ampere).number("limit", settings.get(&GROUND), 2, Unit::Ampere);
    out.push(
        out.of_row(verdict, row, ground.cell(), says, "neutral-current-sum.advice-less")
            .measured(ground.value, Some(out.expanded(ground.standard())), Unit::Ampere)
            .limit(limit.low, limit.high),
    );
}
