//! `shared-neutral-legs`.

use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Between, Quantity, ReadingRow};
use crate::wording::Sentence;

const LEAST: Setting = Setting::new("least-percent", 25.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "shared-neutral-legs",
        signal: Signal::Warning,
        basis: "NEC article 100 (multiwire branch circuit), 210.4; currents of one leg add in a shared neutral, which no breaker protects",
        settings: &[LEAST],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        let run = row.run.and_then(|r| facts.visit.runs.get(r));
        // A place that is not in the circuit list is looked at as well: two hots on one leg are no better for it.
        if run.is_some_and(|r| !r.shares_neutral()) {
            continue;
        }
        for between in Between::LINE_LINE {
            judge(facts, settings, row, between, out);
        }
    }
}

fn judge(facts: &Facts, settings: &Settings, row: &ReadingRow, between: Between, out: &mut Findings) {
    let Between::LineLine(a, b) = between else { return };
    let system = &facts.visit.system;
    let known = |q| facts.known(row, q);
    let (Some(line), Some(first), Some(second)) =
        (known(Quantity::Voltage(between)), known(Quantity::line_neutral(a)), known(Quantity::line_neutral(b)))
    else {
        return;
    };
    let least = settings.get(&LEAST) / 100.0;
    let is_live = |volts: f64| volts > 0.5 * system.line_to_neutral.0;
    if !is_live(first.value) || !is_live(second.value) {
        return;
    }
    let limit = Limit { low: Some(least * system.line_to_line.0), high: None };
    let verdict = out.judge(line.value, line.standard(), limit);
    let key = if verdict == Verdict::Pass { "shared-neutral-legs.pass" } else { "shared-neutral-legs.one-leg" };
    let says = Sentence::new(key)
        .with("between", between.to_string())
        .number("line", line.value, 1, Unit::Volt)
        .with("first", first.reading.quantity.to_string())
        .number("a", first.value, 1, Unit::Volt)
        .with("second", second.reading.quantity.to_string())
        .number("b", second.value, 1, Unit::Volt);
    out.push(
        out.of_row(verdict, row, line.cell(), says, "shared-neutral-legs.advice")
            .measured(line.value, Some(out.expanded(line.standard())), Unit::Volt)
            .limit(limit.low, limit.high)
            .related([first.cell().clone(), second.cell().clone()]),
    );
}
