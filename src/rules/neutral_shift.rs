//! `neutral-shift`.

use super::facts::{Known, common_gain};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::plane;
use crate::quantity::{Unit, Volts, math};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Arrangement, Leg, Quantity, ReadingRow};
use crate::wording::Sentence;

const SERVICE: Setting = Setting::new("service-percent", 2.0, Unit::Percent, (0.0, 100.0));
const ELSEWHERE: Setting = Setting::new("elsewhere-percent", 5.0, Unit::Percent, (0.0, 100.0));
const FAR: Setting = Setting::new("far-percent", 10.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "neutral-shift",
        signal: Signal::Caution,
        basis: "Geometry of the voltages; limits common practice, no source",
        settings: &[SERVICE, ELSEWHERE, FAR],
    },
    run,
};

/// Where the neutral is, against where it belongs.
struct Shift<'a> {
    volts: f64,
    standard: f64,
    /// The leg it moved away from: the one that reads high.
    high: Leg,
    readings: Vec<Known<'a>>,
}

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        let shift = match facts.visit.system.arrangement {
            Arrangement::OneLeg => None,
            Arrangement::SplitPhase => opposed(facts, row, Leg::L1, Leg::L2),
            Arrangement::HighLegDelta => opposed(facts, row, Leg::L1, Leg::L3),
            Arrangement::TwoLegsOfWye => two_of_wye(facts, row),
            Arrangement::Wye => in_triangle(facts, row),
        };
        if let Some(shift) = shift {
            judge(facts, settings, row, &shift, out);
        }
    }
}

fn judge(facts: &Facts, settings: &Settings, row: &ReadingRow, shift: &Shift, out: &mut Findings) {
    let Some(primary) = shift.readings.first() else { return };
    let limit = |setting| Limit { low: None, high: Some(facts.visit.system.line_to_neutral.0 * settings.get(setting) / 100.0) };
    let near = limit(if facts.at_service(row) { &SERVICE } else { &ELSEWHERE });
    let is_far = out.judge(shift.volts, shift.standard, limit(&FAR)) == Verdict::Fail;
    let (signal, limit) = if is_far { (Signal::Warning, limit(&FAR)) } else { (Signal::Caution, near) };
    let verdict = out.judge(shift.volts, shift.standard, limit);
    let key = if verdict == Verdict::Pass { "neutral-shift.pass" } else { "neutral-shift.moved" };
    let says = Sentence::new(key)
        .number("shift", shift.volts, 1, Unit::Volt)
        .number("limit", limit.high.unwrap_or_default(), 1, Unit::Volt)
        .with("high", shift.high.name());
    let advice = if facts.at_service(row) { "neutral-shift.advice-service" } else { "neutral-shift.advice" };
    out.push(
        out.of_row_as(signal, verdict, row, primary.cell(), says, advice)
            .measured(shift.volts, Some(out.expanded(shift.standard)), Unit::Volt)
            .limit(limit.low, limit.high)
            .related(shift.readings.iter().map(|r| r.cell().clone())),
    );
}

/// Two opposed legs: half their difference.
fn opposed<'a>(facts: &Facts<'a>, row: &'a ReadingRow, a: Leg, b: Leg) -> Option<Shift<'a>> {
    let (first, second) = (facts.known(row, Quantity::line_neutral(a))?, facts.known(row, Quantity::line_neutral(b))?);
    let half = (first.value - second.value) / 2.0;
    Some(Shift {
        volts: half.abs(),
        standard: common_gain(first.accuracy, half, &[0.5, 0.5]),
        high: if half < 0.0 { b } else { a },
        readings: vec![first, second],
    })
}

/// Two legs 120° apart: the neutral's place in the triangle of the three readings, against the apex of the isosceles one over the
/// same line-to-line voltage.
fn two_of_wye<'a>(facts: &Facts<'a>, row: &'a ReadingRow) -> Option<Shift<'a>> {
    let known = |q| facts.known(row, q);
    let first = known(Quantity::line_neutral(Leg::L1))?;
    let second = known(Quantity::line_neutral(Leg::L2))?;
    let line = known(Quantity::L1_L2)?;
    let (a, b, c) = (first.value, second.value, line.value);
    if c <= 0.0 {
        return None;
    }
    let x = (a * a - b * b + c * c) / (2.0 * c);
    // A neutral pulled onto the line between the legs leaves rounding below the root.
    let y = (a * a - x * x).max(0.0).sqrt();
    let volts = math::hypot(x - c / 2.0, y - c / (2.0 * 3f64.sqrt()));
    Some(Shift {
        volts,
        standard: common_gain(first.accuracy, volts, &[1.0, 1.0]),
        high: if a < b { Leg::L2 } else { Leg::L1 },
        readings: vec![first, second, line],
    })
}

/// Three legs: the neutral against the centroid of the triangle.
fn in_triangle<'a>(facts: &Facts<'a>, row: &'a ReadingRow) -> Option<Shift<'a>> {
    let readings: Vec<Known> = Quantity::ALL.iter().take(6).map(|q| facts.known(row, *q)).collect::<Option<_>>()?;
    let volt = |i: usize| Volts(readings.get(i).map_or(f64::NAN, |k| k.value));
    let six = plane::SixVoltages { to_neutral: [volt(0), volt(1), volt(2)], between: [volt(3), volt(4), volt(5)] };
    let volts = plane::triangle(&six)?.shift().0;
    let high = Leg::ALL.into_iter().max_by(|a, b| volt(a.index()).0.total_cmp(&volt(b.index()).0))?;
    let accuracy = readings.first()?.accuracy;
    Some(Shift { volts, standard: common_gain(accuracy, volts, &[1.0, 1.0]), high, readings })
}
