//! What may be moved where.

use super::circuits::{Circuits, moved};
use super::{Loading, PerLeg};
use crate::visit::{Between, Leg, Legs, Visit};

/// One possible move of one circuit.
#[derive(Clone, Debug)]
pub(super) struct Choice {
    /// The circuit.
    pub run: usize,
    /// Where each of its legs goes.
    pub onto: [usize; 3],
    /// What it changes on the legs.
    pub change: Loading,
    pub from: String,
    pub to: String,
}

/// All possible moves, by circuit in list order.
pub(super) fn choices(visit: &Visit, circuits: &Circuits, compared: &[Leg]) -> Vec<Choice> {
    let mut all = Vec::new();
    for (run, loading) in circuits.movable() {
        let Some(legs) = visit.runs[run].legs.as_ref().map(|l| l.value) else { continue };
        // Load listed on a leg the circuit does not have: unclear which is right, so it stays.
        let strays = Leg::ALL.iter().any(|leg| loading.total[leg.index()] > 0.0 && !legs.has(*leg));
        if strays || !legs.iter().all(|leg| compared.contains(&leg)) {
            continue;
        }
        for (onto, to) in places(legs, compared) {
            let change = difference(&moved(loading, onto), loading);
            if change.total.iter().any(|va| va.abs() > 0.0) {
                all.push(Choice { run, onto, change, from: legs.to_string(), to });
            }
        }
    }
    all
}

const STAY: [usize; 3] = [0, 1, 2];

/// Where a circuit of these legs may go: the mapping of its legs and how the new ones are written.
fn places(legs: Legs, compared: &[Leg]) -> Vec<([usize; 3], String)> {
    let own: Vec<Leg> = legs.iter().collect();
    match (own.as_slice(), legs.neutral) {
        (&[leg], _) => compared.iter().filter(|to| **to != leg).map(|to| (onto(&[(leg, *to)]), to.to_string())).collect(),
        (&[a, b], true) => vec![(onto(&[(a, b), (b, a)]), format!("{b} {a}"))],
        (&[a, b], false) => other_pairs(a, b, compared),
        (&[a, b, c], true) => [[b, a, c], [a, c, b], [c, b, a], [b, c, a], [c, a, b]]
            .map(|[x, y, z]| (onto(&[(a, x), (b, y), (c, z)]), format!("{x} {y} {z}")))
            .into(),
        // A three-phase load without neutral is even already.
        _ => Vec::new(),
    }
}

fn other_pairs(a: Leg, b: Leg, compared: &[Leg]) -> Vec<([usize; 3], String)> {
    Between::LINE_LINE
        .iter()
        .filter_map(|pair| match *pair {
            Between::LineLine(x, y) if compared.contains(&x) && compared.contains(&y) => Some((x, y)),
            _ => None,
        })
        .filter(|&(x, y)| (x, y) != (a, b) && (y, x) != (a, b))
        .map(|(x, y)| (onto(&[(a, x), (b, y)]), format!("{x}-{y}")))
        .collect()
}

fn onto(pairs: &[(Leg, Leg)]) -> [usize; 3] {
    let mut map = STAY;
    for (from, to) in pairs {
        map[from.index()] = to.index();
    }
    map
}

fn difference(a: &Loading, b: &Loading) -> Loading {
    let minus = |x: &PerLeg, y: &PerLeg| [x[0] - y[0], x[1] - y[1], x[2] - y[2]];
    Loading { total: minus(&a.total, &b.total), to_neutral: minus(&a.to_neutral, &b.to_neutral) }
}
