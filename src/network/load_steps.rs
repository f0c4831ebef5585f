//! Neutral and leg impedance from two load states read at one location.
//!
//! ```text
//! V1 = E − R_leg·I1 − R_n·(I1 − I2)        V2 = E − R_leg·I2 + R_n·(I1 − I2)
//! ```
//!
//! The leg follows from the sum of the two, V12, and with it from whatever the supply did between the rows. The neutral follows
//! from their difference, in which the supply cancels: Δ(V1 − V2) = −(R_leg + 2·R_n)·Δ(I1 − I2). So a step tells more about the
//! neutral than about the leg. Where the leg's share is too small to be read, the circuit list's ohms stand in for it.

mod read;

use super::build::{Assumption, NetworkSettings, build};
use crate::electrics::load_step::{Estimate, resistances};
use crate::quantity::{Ohms, math};
use crate::results::LoadStep;
use crate::visit::{Arrangement, Leg, Stage, Visit};
use read::Read;
use std::collections::BTreeMap;

/// A location whose currents change by less than this share of the largest change between the same two states does not lie on
/// the way to what was switched: its currents merely followed.
const ON_THE_WAY: f64 = 0.7;

/// Standard uncertainty of ohms from the circuit list, as a share: lengths and sizes are off by up to a factor of two. Common
/// practice, no source.
const LIST: f64 = 0.5;

/// Impedances from the transformer to every location that was read in two states of one stage with the volts and amperes of both
/// legs: the first state against each later one. Split phase only; elsewhere the legs' currents do not oppose each other.
#[must_use]
pub fn load_steps(visit: &Visit) -> Vec<LoadStep> {
    if visit.system.arrangement != Arrangement::SplitPhase {
        return Vec::new();
    }
    let reads: Vec<Read> = visit.rows.iter().filter_map(|row| Read::of(visit, row)).collect();
    let pairs = pairs(&reads);
    let mut largest: BTreeMap<_, f64> = BTreeMap::new();
    for (before, after) in &pairs {
        let change = largest.entry(states(before, after)).or_default();
        *change = change.max(before.change(after));
    }
    let on_the_way = |p: &&(&Read, &Read)| p.0.change(p.1) >= ON_THE_WAY * largest.get(&states(p.0, p.1)).copied().unwrap_or_default();
    let listed = if pairs.is_empty() { Vec::new() } else { listed(visit) };
    pairs.iter().filter(on_the_way).filter_map(|(before, after)| step(before, after, listed.get(before.run).copied().flatten())).collect()
}

/// Rows of one location and stage: the first with each later one of another state whose current stands clear of it.
fn pairs<'a>(reads: &'a [Read<'a>]) -> Vec<(&'a Read<'a>, &'a Read<'a>)> {
    let mut first = BTreeMap::new();
    let mut pairs = Vec::new();
    for read in reads {
        let before: &Read = first.entry((read.run, read.row.stage)).or_insert(read);
        if before.row.state != read.row.state && before.differs(read) {
            pairs.push((before, read));
        }
    }
    pairs
}

fn states<'a>(before: &Read<'a>, after: &Read<'a>) -> (Stage, &'a str, &'a str) {
    (before.row.stage, &before.row.state, &after.row.state)
}

/// Ohms of one leg from the transformer to the far end of each run, as far as the circuit list states wire and length all the
/// way.
fn listed(visit: &Visit) -> Vec<Option<Ohms>> {
    let built = build(visit, &NetworkSettings::default());
    let mut is_stated = vec![true; visit.runs.len()];
    for assumption in &built.assumptions {
        if let Assumption::Wire(run) | Assumption::Length(run) = assumption {
            is_stated[*run] = false;
        }
    }
    let mut ohms = vec![None; visit.runs.len()];
    for &run in &visit.tree.order {
        let above = visit.tree.parent[run].map_or(Some(Ohms(0.0)), |parent| ohms[parent]);
        let own = built.network.spans[run].ohms[0].filter(|_| is_stated[run]);
        ohms[run] = above.zip(own).map(|(above, own)| above + Ohms(own));
    }
    ohms
}

/// What the step from one row to another shows.
fn step(before: &Read, after: &Read, listed: Option<Ohms>) -> Option<LoadStep> {
    let switched = before.switched(after);
    let measured = resistances(before.state(switched), after.state(switched), before.with_drift())?;
    let leg = before.with_gain(measured.leg);
    let from_list = listed.map(|ohms| Estimate { ohms, expanded: ohms * (2.0 * LIST) }).filter(|_| !leg.is_resolved());
    let neutral = before.with_gain(neutral(before, after, from_list.unwrap_or(leg)));
    let resolved = |e: Estimate| e.is_resolved().then_some((e.ohms, e.expanded));
    Some(LoadStep {
        run: before.run,
        states: (before.row.state.clone(), after.row.state.clone()),
        leg: if switched == 0 { Leg::L1 } else { Leg::L2 },
        amperes: measured.neutral_current.0.abs(),
        neutral: resolved(neutral),
        line: resolved(leg),
        resolves: neutral.expanded,
        cells: before.cells.iter().chain(&after.cells).cloned().collect(),
    })
}

/// The neutral from the difference of the legs.
fn neutral(before: &Read, after: &Read, leg: Estimate) -> Estimate {
    let each = before.each();
    let volts = after.difference_of_volts() - before.difference_of_volts();
    let amperes = after.difference_of_amperes() - before.difference_of_amperes();
    let around = -volts / amperes;
    // Four readings of each kind, independent.
    let standard = 2.0 * math::hypot(each.volts.0, around.0 * each.amperes.0) / amperes.0.abs();
    let expanded = math::hypot(2.0 * standard, leg.expanded.0);
    Estimate { ohms: (around - leg.ohms) / 2.0, expanded: Ohms(expanded / 2.0) }
}
