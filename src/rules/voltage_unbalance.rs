//! `voltage-unbalance`.

use super::facts::Known;
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::unbalance::{extra_heating_percent, motor_derating, negative_sequence_percent, nema_percent};
use crate::quantity::{Unit, Volts};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Between, Quantity, ReadingRow};
use crate::wording::Sentence;

const LIMIT: Setting = Setting::new("limit-percent", 3.0, Unit::Percent, (0.0, 100.0));
const NO_MOTORS: Setting = Setting::new("no-motors-percent", 5.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "voltage-unbalance",
        signal: Signal::Caution,
        basis: "ANSI C84.1, annex on unbalance (3 % at the meter without load); NEMA MG 1, 12.45 and 14.36; IEC 61000-4-30",
        settings: &[LIMIT, NO_MOTORS],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    if facts.visit.system.legs().len() < 3 {
        return;
    }
    for row in &facts.visit.rows {
        let lines: Vec<Known> = Between::LINE_LINE.iter().filter_map(|b| facts.known(row, Quantity::Voltage(*b))).collect();
        if let [a, b, c] = lines.as_slice() {
            judge(settings, row, [*a, *b, *c], out);
        }
    }
}

fn judge(settings: &Settings, row: &ReadingRow, lines: [Known; 3], out: &mut Findings) {
    let volts = lines.map(|l| Volts(l.value));
    let Some(percent) = nema_percent(volts) else { return };
    let limit = Limit { low: None, high: Some(settings.get(&LIMIT)) };
    // The deviation is 2/3 of one voltage less 1/3 of each other one: its counts add to √6/3 of one reading's; the common gain cancels.
    let mean = volts.iter().map(|v| v.0).sum::<f64>() / 3.0;
    let counts = lines.iter().map(|l| l.accuracy.counts()).fold(0.0, f64::max);
    let standard = 100.0 * counts * (6f64.sqrt() / 3.0) / mean;
    let verdict = out.judge(percent, standard, limit);
    let no_motors = percent > settings.get(&NO_MOTORS);
    let derating = motor_derating(percent).filter(|_| !no_motors);
    let (key, advice) = match (verdict, no_motors) {
        (Verdict::Pass, _) => ("voltage-unbalance.pass", "advice.none"),
        (Verdict::Undecided, _) => ("voltage-unbalance.undecided", "voltage-unbalance.advice"),
        (Verdict::Fail, false) => ("voltage-unbalance.over", "voltage-unbalance.advice"),
        (Verdict::Fail, true) => ("voltage-unbalance.no-motors", "voltage-unbalance.stop"),
    };
    let sentence = Sentence::new(key)
        .number("percent", percent, 1, Unit::Percent)
        .number("limit", settings.get(&LIMIT), 1, Unit::Percent)
        .number("no-motors", settings.get(&NO_MOTORS), 1, Unit::Percent)
        .number("negative", negative_sequence_percent(volts).unwrap_or(100.0), 1, Unit::Percent)
        .number("derating", 100.0 * derating.unwrap_or(0.0), 0, Unit::Percent)
        .number("heating", extra_heating_percent(percent), 0, Unit::Percent);
    let signal = if no_motors { Signal::Warning } else { Signal::Caution };
    out.push(
        out.draft_as(signal, verdict, lines[0].cell(), sentence, Sentence::new(advice))
            .at(&row.location.value)
            .taken(&row.state, row.stage)
            .measured(percent, Some(out.expanded(standard)), Unit::Percent)
            .limit(limit.low, limit.high)
            .related(lines.iter().map(|l| l.cell().clone())),
    );
}
