//! `leg-sum`.

use super::facts::Known;
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::{legs, plane};
use crate::quantity::{Unit, Volts, math};
use crate::results::{Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Arrangement, Between, Leg, Quantity, ReadingRow};
use crate::wording::Sentence;

/// Readings are taken one after the other; the supply moves between them.
const STEADINESS: Setting = Setting::new("steadiness-percent", 0.15, Unit::Percent, (0.0, 10.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "leg-sum",
        signal: Signal::Caution,
        basis: "Geometry of equal-frequency voltages; combined uncertainty by JCGM 100:2008, 5.2, one instrument's gain common",
        settings: &[STEADINESS],
    },
    run,
};

/// Two legs and the voltage between them, below this share of nominal, are one leg twice: shared-neutral-legs says so.
const ONE_LEG: f64 = 0.1;

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    use Arrangement::{HighLegDelta, OneLeg, SplitPhase, TwoLegsOfWye, Wye};
    for row in &facts.visit.rows {
        let six = six(facts, row);
        match (facts.visit.system.arrangement, six) {
            (Wye | HighLegDelta, Some(six)) => judge_plane(settings, row, &six, out),
            (SplitPhase, _) => judge_pair(facts, settings, row, (Leg::L1, Leg::L2), Pair::Opposed, out),
            (HighLegDelta, None) => judge_pair(facts, settings, row, (Leg::L3, Leg::L1), Pair::Opposed, out),
            (TwoLegsOfWye | Wye, _) => {
                for between in Between::LINE_LINE {
                    if let Between::LineLine(a, b) = between {
                        judge_pair(facts, settings, row, (a, b), Pair::ThirdOfATurn, out);
                    }
                }
            }
            (OneLeg, _) => {}
        }
    }
}

#[derive(Clone, Copy, PartialEq)]
enum Pair {
    Opposed,
    ThirdOfATurn,
}

impl Pair {
    /// What the line-to-line voltage should be, and how it changes with each leg.
    fn line(self, a: f64, b: f64) -> (f64, [f64; 2]) {
        match self {
            Self::Opposed => (legs::split_phase_line(Volts(a), Volts(b)).0, [1.0, 1.0]),
            Self::ThirdOfATurn => {
                let line = legs::wye_line(Volts(a), Volts(b)).0;
                let slope = |own: f64, other: f64| if line > 0.0 { (2.0 * own + other) / (2.0 * line) } else { 1.0 };
                (line, [slope(a, b), slope(b, a)])
            }
        }
    }
}

fn judge_pair(facts: &Facts, settings: &Settings, row: &ReadingRow, (a, b): (Leg, Leg), pair: Pair, out: &mut Findings) {
    let known = |q| facts.known(row, q);
    let (Some(first), Some(second), Some(between)) =
        (known(Quantity::line_neutral(a)), known(Quantity::line_neutral(b)), known(Quantity::Voltage(Between::LineLine(a, b))))
    else {
        return;
    };
    if between.value < ONE_LEG * facts.visit.system.line_to_line.0 && first.value + second.value > facts.visit.system.line_to_neutral.0 {
        return;
    }
    let (expected, slopes) = pair.line(first.value, second.value);
    let residual = expected - between.value;
    let standard = combined(settings, &[first, second, between], &[slopes[0], slopes[1], -1.0], residual);
    let (verdict, room) = agreement(residual, standard, settings.coverage());
    let key = match (verdict, pair, residual < 0.0) {
        (Verdict::Pass, ..) => "leg-sum.pass",
        (_, Pair::Opposed, true) => "leg-sum.below",
        (_, Pair::Opposed, false) => "leg-sum.above",
        (_, Pair::ThirdOfATurn, _) => "leg-sum.wye",
    };
    let says = Sentence::new(key)
        .with("first", first.reading.quantity.to_string())
        .with("second", second.reading.quantity.to_string())
        .with("between", between.reading.quantity.to_string())
        .number("expected", expected, 1, Unit::Volt)
        .number("measured", between.value, 1, Unit::Volt)
        .number("apart", residual.abs(), 1, Unit::Volt)
        .number("room", room, 1, Unit::Volt);
    let advice = if pair == Pair::Opposed { "leg-sum.advice" } else { "leg-sum.advice-wye" };
    out.push(
        out.of_row(verdict, row, between.cell(), says, advice)
            .measured(residual, Some(out.expanded(standard)), Unit::Volt)
            .limit(Some(-room), Some(room))
            .related([first.cell().clone(), second.cell().clone()]),
    );
}

/// All six voltages of a four-wire, three-phase system: L1-N, L2-N, L3-N, L1-L2, L2-L3, L3-L1.
fn six<'a>(facts: &Facts<'a>, row: &'a ReadingRow) -> Option<Vec<Known<'a>>> {
    Quantity::ALL.iter().take(6).map(|q| facts.known(row, *q)).collect()
}

fn judge_plane(settings: &Settings, row: &ReadingRow, six: &[Known], out: &mut Findings) {
    let volt = |i: usize| Volts(six.get(i).map_or(f64::NAN, |k| k.value));
    let voltages = plane::SixVoltages { to_neutral: [volt(0), volt(1), volt(2)], between: [volt(3), volt(4), volt(5)] };
    let (Some(misfit), Some(primary)) = (plane::misfit(&voltages), six.first()) else { return };
    let residual = misfit.volts.0;
    let standard = combined(settings, six, &misfit.weights, 0.0);
    let (verdict, room) = agreement(residual, standard, settings.coverage());
    let key = if verdict == Verdict::Pass { "leg-sum.pass-plane" } else { "leg-sum.plane" };
    let says = Sentence::new(key).number("apart", residual.abs(), 1, Unit::Volt).number("room", room, 1, Unit::Volt);
    out.push(
        out.of_row(verdict, row, primary.cell(), says, "leg-sum.advice-wye")
            .measured(residual, Some(out.expanded(standard)), Unit::Volt)
            .limit(Some(-room), Some(room))
            .related(six.iter().map(|k| k.cell().clone())),
    );
}

/// Standard uncertainty of the residual: counts and the supply's wander are independent from reading to reading, the gain error is
/// common and acts on the residual alone.
fn combined(settings: &Settings, readings: &[Known], weights: &[f64], residual: f64) -> f64 {
    let wander = settings.get(&STEADINESS) / 100.0;
    let independent = readings.iter().zip(weights).map(|(r, w)| math::hypot(r.accuracy.counts(), wander * r.value) * w);
    let gain = readings.first().map_or(0.0, |r| r.accuracy.gain(residual));
    independent.chain([gain]).map(|u| u * u).sum::<f64>().sqrt()
}

/// Readings agree when what is left over is no more than its expanded uncertainty; they disagree when it is more by a further
/// standard one. Agreement can't have room for the uncertainty twice: the limit itself is made of it.
fn agreement(residual: f64, standard: f64, k: f64) -> (Verdict, f64) {
    // Sums of decimal readings are off by a rounding of the last bit.
    let size = residual.abs() - 1e-9;
    let verdict = match size {
        s if s <= k * standard => Verdict::Pass,
        s if s <= (k + 1.0) * standard => Verdict::Undecided,
        _ => Verdict::Fail,
    };
    (verdict, k * standard)
}
