//! What the circuit list leaves to the rest of the workbook: whether legs share a neutral, and where a load without a leg lies.

use crate::diag::{CellRef, Located, Severity};
use crate::intake::cell::Reader;
use crate::intake::header::heads::line_line;
use crate::quantity::Watts;
use crate::visit::{Between, Leg, Legs, Load, Quantity, ReadingRow, Run, Tree};
use crate::wording::Sentence;

/// Entries of the circuit list that could not be settled row by row.
#[derive(Default)]
pub(super) struct Pending {
    /// Runs whose legs are known, but not their neutral: position, lines, entry.
    pub legs: Vec<(usize, [bool; 3], Located<String>)>,
    /// Loads without a leg.
    pub loads: Vec<PendingLoad>,
}

/// A load without a leg.
pub(super) struct PendingLoad {
    pub run: usize,
    pub watts: Located<Watts>,
}

pub(super) fn settle(runs: &mut [Run], pending: Pending, rows: &[ReadingRow], tree: &Tree, reader: &mut Reader<'_>) {
    settle_neutrals(runs, &pending, rows, tree, reader);
    place_loads(runs, pending.loads, reader);
    drop_impossible(runs, reader);
}

/// A neutral runs along where a load or a reading between a line and the neutral shows it, at the run's end or below.
fn settle_neutrals(runs: &mut [Run], pending: &Pending, rows: &[ReadingRow], tree: &Tree, reader: &mut Reader<'_>) {
    if pending.legs.is_empty() {
        return;
    }
    let mut shown: Vec<bool> = runs.iter().map(|r| r.has_neutral() || r.loads.iter().any(shows)).collect();
    for row in rows {
        let to_neutral = row.readings.iter().any(|r| matches!(r.quantity, Quantity::Voltage(Between::LineNeutral(_))));
        if let Some(shown) = row.run.and_then(|r| shown.get_mut(r)) {
            *shown |= to_neutral;
        }
    }
    for &run in tree.order.iter().rev() {
        if shown.get(run) == Some(&true)
            && let Some(source) = tree.parent.get(run).copied().flatten().and_then(|p| shown.get_mut(p))
        {
            *source = true;
        }
    }
    for (run, lines, entry) in &pending.legs {
        if shown.get(*run) == Some(&true) {
            if let Some(run) = runs.get_mut(*run) {
                run.legs = Some(Located::new(Legs { lines: *lines, neutral: true }, entry.cell.clone()));
            }
        } else {
            let legs = |neutral| Legs { lines: *lines, neutral }.to_string();
            let message = Sentence::new("intake.legs-neutral").with("shared", legs(true)).with("without", legs(false));
            reader.at(Severity::Error, &entry.cell, entry.value.as_str(), message);
        }
    }
}

fn shows(load: &Load) -> bool {
    matches!(load.between, Between::LineNeutral(_)) && load.watts.value.0 > 0.0
}

/// A load without a leg lies where its run leaves no choice.
fn place_loads(runs: &mut [Run], loads: Vec<PendingLoad>, reader: &mut Reader<'_>) {
    for PendingLoad { run, watts } in loads {
        let Some(run) = runs.get_mut(run) else { continue };
        let between = run.legs.as_ref().and_then(|l| only_place(l.value));
        match between {
            Some(between) => run.loads.push(Load { between, watts }),
            None => {
                let message = Sentence::new("intake.load-where").with("run", run.name.value.as_str());
                reader.at(Severity::Error, &watts.cell, watts.value.0.to_string(), message).hint =
                    Some(Sentence::new("intake.load-where-hint"));
            }
        }
    }
}

fn only_place(legs: Legs) -> Option<Between> {
    let lines: Vec<Leg> = legs.iter().collect();
    match (&lines[..], legs.neutral) {
        ([leg], true) => Some(Between::LineNeutral(*leg)),
        ([a, b], false) => line_line(*a, *b),
        _ => None,
    }
}

/// A load between conductors the run does not have can't be where it stands: named, and left out.
fn drop_impossible(runs: &mut [Run], reader: &mut Reader<'_>) {
    let mut dropped: Vec<(CellRef, f64, Between, Legs)> = Vec::new();
    for run in runs {
        let Some(legs) = run.legs.as_ref().map(|l| l.value) else { continue };
        let possible = |between: Between| match between {
            Between::LineNeutral(leg) => legs.neutral && legs.has(leg),
            Between::LineLine(a, b) => legs.has(a) && legs.has(b),
        };
        run.loads.retain(|load| {
            let keep = possible(load.between);
            if !keep && load.watts.value.0 > 0.0 {
                dropped.push((load.watts.cell.clone(), load.watts.value.0, load.between, legs));
            }
            keep
        });
    }
    for (cell, watts, between, legs) in dropped {
        let message = Sentence::new("intake.load-impossible").with("between", between.to_string()).with("legs", legs.to_string());
        reader.at(Severity::Error, &cell, watts.to_string(), message);
    }
}
