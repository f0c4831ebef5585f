//! `rise-above-source`.

use super::facts::{Known, common_gain};
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::{Unit, math};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Leg, Quantity, ReadingRow};
use crate::wording::Sentence;

const LIMIT: Setting = Setting::new("limit-percent", 4.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "rise-above-source",
        signal: Signal::Caution,
        basis: "Kirchhoff's laws: a drop in a line conductor lowers its leg, only a moved neutral raises it; limit common practice, no source",
        settings: &[LIMIT],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for leg in facts.visit.system.legs() {
        let quantity = Quantity::line_neutral(*leg);
        let sources = facts.sources(quantity);
        for (row, source) in facts.visit.rows.iter().zip(sources) {
            let source = source.and_then(|i| facts.visit.rows.get(i));
            if let Some(source) = source
                && let (Some(here), Some(there)) = (facts.known(row, quantity), facts.known(source, quantity))
            {
                judge(facts, settings, *leg, (row, here), (source, there), out);
            }
        }
    }
}

type At<'a> = (&'a ReadingRow, Known<'a>);

fn judge(facts: &Facts, settings: &Settings, leg: Leg, (row, here): At, (source, there): At, out: &mut Findings) {
    let quantity = Quantity::line_neutral(leg);
    let rise = here.value - there.value;
    let name = |row| facts.visit.instrument_of(row, quantity).map(|i| i.name.value.as_str());
    let standard = if name(row) == name(source) {
        common_gain(here.accuracy, rise, &[1.0, -1.0])
    } else {
        math::hypot(here.standard(), there.standard())
    };
    let nominal = facts.visit.system.nominal(quantity).map_or(0.0, |v| v.0);
    let limit = Limit { low: None, high: Some(nominal * settings.get(&LIMIT) / 100.0) };
    let verdict = out.judge(rise, standard, limit);
    let key = if verdict == Verdict::Pass { "rise-above-source.pass" } else { "rise-above-source.risen" };
    let says = Sentence::new(key)
        .with("leg", leg.name())
        .with("source", source.location.value.as_str())
        .number("here", here.value, 1, Unit::Volt)
        .number("there", there.value, 1, Unit::Volt)
        .number("rise", rise, 1, Unit::Volt)
        .number("limit", limit.high.unwrap_or_default(), 1, Unit::Volt);
    out.push(
        out.of_row(verdict, row, here.cell(), says, "rise-above-source.advice")
            .measured(rise, Some(out.expanded(standard)), Unit::Volt)
            .limit(limit.low, limit.high)
            .related([there.cell().clone()]),
    );
}
