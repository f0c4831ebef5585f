//! `neutral-load`.

use super::listed::{self, Currents};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::ampacity::{Column, Edition, ampacity, usual_column};
use crate::electrics::neutral::feeder_load;
use crate::quantity::{Amperes, Unit};
use crate::results::{Limit, Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Between, Leg, LoadKind, Quantity, ReadingRow, Run};
use crate::wording::Sentence;

const ONE_LEG: Setting = Setting::new("one-leg-percent", 25.0, Unit::Percent, (0.0, 80.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "neutral-load",
        signal: Signal::Warning,
        basis: "NEC 220.61 (120.61 in 2026) and 310.15(E), table 310.16; 210.4 for multiwire circuits",
        settings: &[ONE_LEG],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let on_one_leg = on_one_leg(facts, settings);
    let currents = listed::currents(facts.visit);
    let protected = listed::protecting_breaker(facts.visit);
    for (run, r) in facts.visit.runs.iter().enumerate().filter(|(_, r)| r.shares_neutral()) {
        let breaker = protected[run].and_then(|by| facts.visit.runs[by].breaker.as_ref()).map(|b| b.value);
        let carries = carries(r, breaker);
        match on_one_leg.get(run).copied().flatten() {
            Some(row) => adds(facts, run, row, carries.zip(breaker), out),
            None => {
                if let Some(carries) = carries {
                    calculated(facts, run, &currents[run], carries, out);
                }
            }
        }
    }
    measured(facts, &protected, out);
}

/// Ampacity of the neutral by the usual column: of the breaker where one is known, else of the ampacity itself.
fn carries(run: &Run, breaker: Option<Amperes>) -> Option<Amperes> {
    let wire = run.neutral()?.value;
    let at = |column| ampacity(wire, column, Edition::default());
    match breaker {
        Some(breaker) => at(usual_column(breaker)),
        None => at(Column::C75).filter(|a| a.0 > 100.0).or_else(|| at(Column::C60)),
    }
}

/// Runs below or at which the two hots of a multiwire run read nearly nothing to each other while both read their volts to neutral:
/// they hang on one leg. For each run, the row that shows it.
fn on_one_leg<'a>(facts: &Facts<'a>, settings: &Settings) -> Vec<Option<&'a ReadingRow>> {
    let visit = facts.visit;
    let share = settings.get(&ONE_LEG) / 100.0;
    let mut shown: Vec<Option<&ReadingRow>> = vec![None; visit.runs.len()];
    for row in &visit.rows {
        let Some(run) = row.run.filter(|&run| visit.runs.get(run).is_some_and(Run::shares_neutral)) else { continue };
        let same = Between::LINE_LINE.iter().any(|pair| {
            let Between::LineLine(a, b) = *pair else { return false };
            let read = |q| row.value(q);
            let legs = [a, b].map(|leg| read(Quantity::line_neutral(leg)));
            let ([Some(va), Some(vb)], Some(vab)) = (legs, read(Quantity::Voltage(*pair))) else { return false };
            // Both are live: half of nominal at least. And the three can be true at once: two sides of a triangle are apart by
            // no more than the third; else one is misread.
            let live = 0.5 * visit.system.line_to_neutral.0;
            va > live && vb > live && vab < share * (va + vb) && (va - vb).abs() <= vab.max(0.1 * (va + vb))
        });
        if same {
            shown[run] = shown[run].or(Some(row));
        }
    }
    // A circuit is wired at its breakers: what shows at an outlet holds for the run that feeds it while that shares the neutral too.
    let circuits = listed::final_circuits(visit);
    for &run in visit.tree.order.iter().rev() {
        if let (Some(row), Some(parent)) = (shown[run], visit.tree.parent[run])
            && !circuits[run]
            && visit.runs[parent].shares_neutral()
            && !facts.is_service(parent)
        {
            shown[parent] = shown[parent].or(Some(row));
        }
    }
    shown
}

/// Both hots on one leg: the neutral may carry what both breakers let through, and nothing protects it.
fn adds(facts: &Facts, run: usize, row: &ReadingRow, known: Option<(Amperes, Amperes)>, out: &mut Findings) {
    let r = &facts.visit.runs[run];
    let hots = r.legs.as_ref().map_or(2, |l| l.value.count());
    let mut pair = Between::LINE_LINE.iter().filter_map(|b| row.reading(Quantity::Voltage(*b))).map(|r| r.cell.clone());
    let primary = pair.next().unwrap_or_else(|| row.cell.clone());
    let advice = Sentence::new("neutral-load.one-leg-advice");
    let finding = match known {
        Some((carries, breaker)) => {
            let sum = breaker * hots as f64;
            let says =
                Sentence::new("neutral-load.one-leg").number("current", sum.0, 0, Unit::Ampere).number("limit", carries.0, 0, Unit::Ampere);
            out.draft(Verdict::Fail, &primary, says, advice).measured(sum.0, None, Unit::Ampere).limit(None, Some(carries.0))
        }
        None => out.draft(Verdict::Fail, &primary, Sentence::new("neutral-load.one-leg-unknown"), advice),
    };
    let cells = pair.chain(r.legs.iter().map(|l| l.cell.clone()));
    out.push(finding.related(cells).at(&r.name.value).taken(&row.state, row.stage));
}

fn calculated(facts: &Facts, run: usize, currents: &Currents, carries: Amperes, out: &mut Findings) {
    let r = &facts.visit.runs[run];
    let listed = Amperes(neutral_of(facts, run, currents));
    // Feeders: the part over 200 A counts 70 %.
    let amperes = feeder_load(listed);
    if amperes.0 <= 0.0 {
        return;
    }
    let Some(wire) = r.neutral() else { return };
    let limit = Limit { low: None, high: Some(carries.0) };
    let verdict = out.judge(amperes.0, 0.0, limit);
    let (says, advice) = match verdict {
        Verdict::Pass => ("neutral-load.pass", "advice.none"),
        _ => ("neutral-load.over", "neutral-load.advice"),
    };
    let sentence = Sentence::new(says).with("wire", wire.value.to_string()).number("current", amperes.0, 1, Unit::Ampere).number(
        "limit",
        carries.0,
        0,
        Unit::Ampere,
    );
    // Loads as listed are an upper bound; what a clamp reads is judged below.
    out.push(
        out.draft_as(Signal::Caution, verdict, &wire.cell, sentence, Sentence::new(advice))
            .at(&r.name.value)
            .measured(amperes.0, None, Unit::Ampere)
            .limit(limit.low, limit.high)
            .related(r.loads.iter().map(|l| l.watts.cell.clone())),
    );
}

/// Neutral current by phasors; of electronic loads on a wye the sum, whose third harmonics add in the neutral (310.15(E)(3)).
fn neutral_of(facts: &Facts, run: usize, currents: &Currents) -> f64 {
    let electronic = facts.visit.runs[run].load_kind.as_ref().is_some_and(|k| k.value == LoadKind::Electronic);
    let most = Leg::ALL.iter().map(|leg| currents.line(*leg)).fold(0.0, f64::max);
    if electronic && listed::is_wye(&facts.visit.system) {
        // Up to √3 times a leg with all third harmonic.
        (3f64.sqrt() * most).min(currents.neutral_on_one_leg()).max(currents.neutral())
    } else {
        currents.neutral()
    }
}

/// What the clamp read on the neutral of a run.
fn measured(facts: &Facts, protected: &[Option<usize>], out: &mut Findings) {
    for row in &facts.visit.rows {
        let Some(run) = row.run.filter(|&run| facts.visit.runs[run].has_neutral()) else { continue };
        let Some(current) = facts.known(row, Quantity::NeutralCurrent) else { continue };
        let r = &facts.visit.runs[run];
        let breaker = protected[run].and_then(|by| facts.visit.runs[by].breaker.as_ref()).map(|b| b.value);
        let (Some(carries), Some(wire)) = (carries(r, breaker), r.neutral()) else { continue };
        let limit = Limit { low: None, high: Some(carries.0) };
        let verdict = out.judge(current.value, current.standard(), limit);
        let (says, advice) = match verdict {
            Verdict::Pass => ("neutral-load.measured-pass", "advice.none"),
            Verdict::Undecided => ("neutral-load.measured-undecided", "neutral-load.advice"),
            Verdict::Fail => ("neutral-load.measured-over", "neutral-load.advice"),
        };
        let sentence = Sentence::new(says).with("wire", wire.value.to_string()).number("current", current.value, 1, Unit::Ampere).number(
            "limit",
            carries.0,
            0,
            Unit::Ampere,
        );
        out.push(
            out.draft(verdict, current.cell(), sentence, Sentence::new(advice))
                .at(&row.location.value)
                .taken(&row.state, row.stage)
                .measured(current.value, Some(out.expanded(current.standard())), Unit::Ampere)
                .limit(limit.low, limit.high)
                .related([wire.cell.clone()]),
        );
    }
}
