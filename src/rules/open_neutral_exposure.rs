//! `open-neutral-exposure`.

use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{CauseKind, ExposedLeg, Exposure, Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::Quantity;
use crate::wording::Sentence;

const HIGH: Setting = Setting::new("high-percent", 110.0, Unit::Percent, (100.0, 1000.0));
const LOW: Setting = Setting::new("low-percent", 90.0, Unit::Percent, (0.0, 100.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "open-neutral-exposure",
        signal: Signal::Notice,
        basis: "Network of the circuit list with the neutral opened; steady band of the ITIC curve (2000), 90 to 110 % of nominal. \
                NEC 300.13(B)",
        settings: &[HIGH, LOW],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for exposure in facts.exposure {
        judge(facts, settings, exposure, out);
    }
}

fn judge(facts: &Facts, settings: &Settings, exposure: &Exposure, out: &mut Findings) {
    let band = |leg: &ExposedLeg| {
        let nominal = facts.visit.system.nominal(Quantity::line_neutral(leg.leg)).unwrap_or(facts.visit.system.line_to_neutral).0;
        Limit { low: Some(nominal * settings.get(&LOW) / 100.0), high: Some(nominal * settings.get(&HIGH) / 100.0) }
    };
    let excess = |leg: &ExposedLeg| leg.volts.0 / band(leg).high.unwrap_or(f64::INFINITY);
    let highest = exposure.legs.iter().rev().max_by(|a, b| excess(a).total_cmp(&excess(b)));
    let (Some(highest), Some(run)) = (highest, facts.visit.runs.get(exposure.run)) else { return };
    let limit = band(highest);
    let is_out = |leg: &ExposedLeg| {
        [Some(leg.volts.0), leg.low.map(|v| v.0)].into_iter().flatten().any(|v| out.judge(v, 0.0, band(leg)) == Verdict::Fail)
    };
    let is_off = exposure.legs.iter().any(is_out);
    let verdict = if is_off { Verdict::Fail } else { Verdict::Pass };
    let key = match (is_off, highest.low) {
        (false, _) => "open-neutral-exposure.pass",
        (true, None) => "open-neutral-exposure.exposed",
        (true, Some(_)) => "open-neutral-exposure.exposed-range",
    };
    let says = Sentence::new(key)
        .with("run", run.name.value.as_str())
        .with("leg", highest.leg.name())
        .with("at", facts.name(highest.at))
        .number("volts", highest.volts.0, 0, Unit::Volt)
        .number("low", highest.low.unwrap_or(highest.volts).0, 0, Unit::Volt)
        .number("watts", highest.loads.0, 0, Unit::Watt)
        .number("limit", limit.high.unwrap_or_default(), 0, Unit::Volt);
    // What would happen is a notice; where the readings point at this very neutral it may be happening.
    let is_suspect =
        facts.diagnosis.and_then(|d| d.ranking.first()).is_some_and(|c| c.kind == CauseKind::Neutral && c.runs.contains(&exposure.run));
    let (signal, advice) = if is_suspect {
        (Signal::Warning, "open-neutral-exposure.advice-suspect")
    } else {
        (Signal::Notice, "open-neutral-exposure.advice")
    };
    let places = exposure.legs.iter().filter_map(|l| facts.visit.runs.get(l.at)).map(|r| r.cell.clone());
    out.push(
        out.draft_as(signal, verdict, &run.cell, says, Sentence::new(advice))
            .at(&run.name.value)
            .measured(highest.volts.0, None, Unit::Volt)
            .limit(limit.low, limit.high)
            .related(places),
    );
}
