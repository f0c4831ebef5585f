//! `voltage-drop`.

use super::facts::{Known, common_gain};
use super::listed::{self, Drops};
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::{Celsius, Unit, math};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Between, Quantity, Stage};
use crate::wording::Sentence;
use std::collections::BTreeMap;

const ONE: Setting = Setting::new("one-percent", 3.0, Unit::Percent, (0.0, 100.0));
const BOTH: Setting = Setting::new("both-percent", 5.0, Unit::Percent, (0.0, 100.0));
const SEVERE: Setting = Setting::new("severe-percent", 10.0, Unit::Percent, (0.0, 100.0));
const CONDUCTOR: Setting = Setting::new("conductor-celsius", 75.0, Unit::Celsius, (-40.0, 90.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "voltage-drop",
        signal: Signal::Notice,
        basis: "NEC 210.19(A) and 215.2(A), informational notes (advice, 90.5(C)); conductors by chapter 9 table 8",
        settings: &[ONE, BOTH, SEVERE, CONDUCTOR],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    measured(facts, settings, out);
    calculated(facts, settings, out);
}

/// The rows a row is held against: the uppermost one with at most one breaker between, and the uppermost one at all where two or more
/// are between. By position among the readings.
#[derive(Clone, Copy, Default)]
struct Sources {
    within_one: Option<usize>,
    uppermost: Option<usize>,
    breakers: usize,
}

fn measured(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let voltages = Quantity::ALL.into_iter().filter(|q| matches!(q, Quantity::Voltage(_)) && facts.visit.system.nominal(*q).is_some());
    for quantity in voltages {
        for (row, sources) in sources(facts, quantity) {
            let both = sources.uppermost.filter(|_| sources.breakers > 1);
            for (source, setting) in [(sources.within_one, &ONE), (both, &BOTH)] {
                if let Some(source) = source {
                    compare(facts, settings, quantity, (source, row), setting, out);
                }
            }
        }
    }
}

/// Sources of every row that has any, by one walk down the tree for each state and stage.
fn sources(facts: &Facts, quantity: Quantity) -> BTreeMap<usize, Sources> {
    let visit = facts.visit;
    let mut states: BTreeMap<(&str, Stage), BTreeMap<usize, Vec<usize>>> = BTreeMap::new();
    for (i, row) in visit.rows.iter().enumerate() {
        if let Some(run) = row.run.filter(|_| row.value(quantity).is_some()) {
            states.entry((row.state.as_str(), row.stage)).or_default().entry(run).or_default().push(i);
        }
    }
    let mut found = BTreeMap::new();
    for rows in states.values().filter(|rows| rows.len() > 1) {
        let mut down: Vec<Walk> = vec![Walk::default(); visit.runs.len()];
        for &run in &visit.tree.order {
            let above = visit.tree.parent[run].map(|parent| down[parent]).unwrap_or_default();
            let mut walk = above.through(visit.runs[run].breaker.is_some());
            for &row in rows.get(&run).into_iter().flatten() {
                found.insert(row, walk.sources());
            }
            walk.read(rows.get(&run).and_then(|here| here.first()).copied());
            down[run] = walk;
        }
    }
    found.retain(|_, s: &mut Sources| s.within_one.is_some() || s.uppermost.is_some());
    found
}

/// The uppermost readings on the way down with no, with at most one, and with any number of breakers since.
#[derive(Clone, Copy, Default)]
struct Walk {
    none: Option<usize>,
    one: Option<usize>,
    any: Option<usize>,
    breakers: usize,
}

impl Walk {
    fn through(self, breaker: bool) -> Self {
        if !breaker {
            return self;
        }
        let breakers = self.breakers + usize::from(self.any.is_some());
        Self { none: None, one: self.none, any: self.any, breakers }
    }

    fn read(&mut self, row: Option<usize>) {
        self.none = self.none.or(row);
        self.one = self.one.or(row);
        self.any = self.any.or(row);
    }

    fn sources(self) -> Sources {
        Sources { within_one: self.one, uppermost: self.any, breakers: self.breakers }
    }
}

fn compare(facts: &Facts, settings: &Settings, quantity: Quantity, rows: (usize, usize), setting: &Setting, out: &mut Findings) {
    let row = |i: usize| facts.visit.rows.get(i);
    let (Some(source), Some(far)) = (row(rows.0), row(rows.1)) else { return };
    let (Some(at_source), Some(at_far)) = (facts.known(source, quantity), facts.known(far, quantity)) else { return };
    let Some(nominal) = facts.visit.system.nominal(quantity).filter(|v| v.0 > 0.0) else { return };
    let drop = at_source.value - at_far.value;
    let same = std::ptr::eq(
        facts.visit.instrument_of(source, quantity).map_or(std::ptr::null(), std::ptr::from_ref),
        facts.visit.instrument_of(far, quantity).map_or(std::ptr::null(), std::ptr::from_ref),
    );
    let standard = difference(at_source, at_far, same) * 100.0 / nominal.0;
    let percent = 100.0 * drop / nominal.0;
    let limit = Limit { low: None, high: Some(settings.get(setting)) };
    let verdict = out.judge(percent, standard, limit);
    let severe = percent > settings.get(&SEVERE);
    let (says, advice) = match (verdict, severe) {
        (Verdict::Pass, _) => ("voltage-drop.pass", "advice.none"),
        (Verdict::Undecided, _) => ("voltage-drop.undecided", "voltage-drop.recheck"),
        (Verdict::Fail, false) => ("voltage-drop.over", "voltage-drop.advice"),
        (Verdict::Fail, true) => ("voltage-drop.over", "voltage-drop.severe"),
    };
    let sentence = Sentence::new(says)
        .with("quantity", quantity.to_string())
        .with("source", source.location.value.as_str())
        .number("drop", drop, 1, Unit::Volt)
        .number("percent", percent, 1, Unit::Percent)
        .number("limit", settings.get(setting), 1, Unit::Percent);
    out.push(
        out.draft_as(if severe { Signal::Caution } else { Signal::Notice }, verdict, at_far.cell(), sentence, Sentence::new(advice))
            .at(&far.location.value)
            .taken(&far.state, far.stage)
            .measured(percent, Some(out.expanded(standard)), Unit::Percent)
            .limit(limit.low, limit.high)
            .related([at_source.cell().clone()]),
    );
}

/// Standard uncertainty of a difference: with one instrument its gain acts on the difference alone.
fn difference(a: Known, b: Known, same_instrument: bool) -> f64 {
    if same_instrument { common_gain(a.accuracy, a.value - b.value, &[1.0, -1.0]) } else { math::hypot(a.standard(), b.standard()) }
}

/// Drops the listed loads would make, at the end of every branch and feeder.
fn calculated(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let visit = facts.visit;
    let currents = listed::currents(visit);
    let drops = Drops::of(visit, &currents, Celsius(settings.get(&CONDUCTOR)));
    // The run a section begins at: what feeds its breaker; and how many breakers lie above it.
    let mut begins: Vec<Option<usize>> = vec![None; visit.runs.len()];
    let mut service: Vec<Option<usize>> = vec![None; visit.runs.len()];
    let mut breakers = vec![0usize; visit.runs.len()];
    for &run in &visit.tree.order {
        let own = usize::from(visit.runs[run].breaker.is_some());
        let Some(parent) = visit.tree.parent[run] else {
            service[run] = Some(run);
            continue;
        };
        service[run] = service[parent];
        breakers[run] = breakers[parent] + own;
        begins[run] = if own == 1 { Some(parent) } else { begins[parent].or(service[parent]) };
        if !ends_section(facts, run) || currents[run] == listed::Currents::default() {
            continue;
        }
        let whole = service[run].filter(|_| breakers[run] > 1);
        for (from, setting) in [(begins[run], &ONE), (whole, &BOTH)] {
            if let Some(from) = from {
                worst(facts, settings, &drops, (from, run), setting, out);
            }
        }
    }
}

fn ends_section(facts: &Facts, run: usize) -> bool {
    let children = &facts.visit.tree.children[run];
    children.is_empty() || children.iter().any(|&c| facts.visit.runs[c].breaker.is_some())
}

/// One finding: the voltage of the run that drops most.
fn worst(facts: &Facts, settings: &Settings, drops: &Drops, ends: (usize, usize), setting: &Setting, out: &mut Findings) {
    let run = &facts.visit.runs[ends.1];
    let percent = |between: Between| {
        let nominal = facts.visit.system.nominal(Quantity::Voltage(between)).filter(|v| v.0 > 0.0)?;
        Some((between, 100.0 * drops.between(ends.0, ends.1, between)? / nominal.0))
    };
    let all: Vec<(Between, f64)> = listed::voltages(run, &facts.visit.system).into_iter().filter_map(percent).collect();
    let Some(&(between, percent)) = all.iter().rev().max_by(|a, b| a.1.total_cmp(&b.1)) else { return };
    let limit = Limit { low: None, high: Some(settings.get(setting)) };
    let verdict = out.judge(percent, 0.0, limit);
    let (says, advice) = match verdict {
        Verdict::Pass => ("voltage-drop.calculated-pass", "advice.none"),
        _ => ("voltage-drop.calculated-over", "voltage-drop.calculated-advice"),
    };
    let sentence = Sentence::new(says)
        .with("quantity", between.to_string())
        .with("source", facts.name(ends.0))
        .number("percent", percent, 1, Unit::Percent)
        .number("limit", settings.get(setting), 1, Unit::Percent);
    let cells = run.length.iter().map(|l| l.cell.clone()).chain(run.wire.iter().map(|w| w.cell.clone()));
    out.push(
        out.draft(verdict, &run.cell, sentence, Sentence::new(advice))
            .at(&run.name.value)
            .measured(percent, None, Unit::Percent)
            .limit(limit.low, limit.high)
            .related(cells.chain(run.loads.iter().map(|l| l.watts.cell.clone()))),
    );
}
