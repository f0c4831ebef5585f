//! Where the neutral sits between the lines, at each location: on a beam for opposed legs, in a triangle for a wye.

use super::canvas::clean;
use super::{Figure, Scene, marks, strip, triangle};
use crate::diag::CellRef;
use crate::results::{Finding, Verdict};
use crate::visit::{Arrangement, Leg, Quantity, ReadingRow, name_key};
use crate::wording::Sentence;
use std::collections::BTreeMap;

pub(super) const NAME: &str = "neutral-position";

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    match scene.source.visit.system.arrangement {
        Arrangement::OneLeg => Vec::new(),
        Arrangement::SplitPhase => strip::figures(scene, Leg::L1, Leg::L2),
        Arrangement::TwoLegsOfWye | Arrangement::Wye => triangle::figures(scene),
        // The beam has more readings to show: the high leg is seldom brought to an outlet with a neutral.
        Arrangement::HighLegDelta => {
            let mut figures = strip::figures(scene, Leg::L1, Leg::L3);
            figures.extend(triangle::figures(scene));
            figures
        }
    }
}

/// What the rule `neutral-shift` said of each row, and what it allows.
pub(super) struct Judgements<'a> {
    by_cell: BTreeMap<&'a CellRef, &'a Finding>,
    service: Option<f64>,
    elsewhere: Option<f64>,
}

impl<'a> Judgements<'a> {
    pub fn of(scene: &Scene<'a>) -> Self {
        let visit = scene.source.visit;
        let shifts = scene.source.findings.iter().filter(|f| f.rule == "neutral-shift");
        let by_cell: BTreeMap<&CellRef, &Finding> = shifts.filter_map(|f| Some((f.cells.first()?, f))).collect();
        let mut judgements = Self { by_cell, service: None, elsewhere: None };
        for row in &visit.rows {
            let Some(high) = judgements.finding(row).and_then(|f| f.limit?.high) else { continue };
            let class = if is_service(scene, row) { &mut judgements.service } else { &mut judgements.elsewhere };
            // Far off, the rule names its outer limit; the inner one is what is allowed.
            *class = Some(class.map_or(high, |least| least.min(high)));
        }
        judgements
    }

    /// The rule judged nothing: it is switched off.
    pub fn is_empty(&self) -> bool {
        self.by_cell.is_empty()
    }

    /// The finding on a row.
    pub fn finding(&self, row: &ReadingRow) -> Option<&'a Finding> {
        row.readings.iter().find_map(|r| self.by_cell.get(&r.cell).copied())
    }

    /// The same, where it is not a pass.
    pub fn fault(&self, row: &ReadingRow) -> Option<&'a Finding> {
        self.finding(row).filter(|f| f.verdict != Verdict::Pass)
    }

    /// The shift allowed at a row, in volts.
    pub fn allowed(&self, scene: &Scene, row: &ReadingRow) -> Option<f64> {
        if is_service(scene, row) { self.service } else { self.elsewhere }
    }
}

fn is_service(scene: &Scene, row: &ReadingRow) -> bool {
    row.run.and_then(|r| scene.source.visit.runs.get(r)).is_some_and(|r| r.fed_from.is_none())
}

/// The rows that can be drawn, location by location in the order of the tree, as found before as left; locations the circuit list
/// does not know come last.
pub(super) fn in_tree_order<'a>(scene: &Scene<'a>, can_be_drawn: impl Fn(&ReadingRow) -> bool) -> Vec<&'a ReadingRow> {
    let visit = scene.source.visit;
    let n = visit.runs.len();
    let mut place: Vec<usize> = (n..2 * n).collect();
    for (i, &run) in visit.tree.order.iter().enumerate() {
        place[run] = i;
    }
    let mut unknown: BTreeMap<String, usize> = BTreeMap::new();
    let mut rows: Vec<(usize, &ReadingRow)> = Vec::new();
    for (i, row) in visit.rows.iter().enumerate().filter(|(_, r)| can_be_drawn(r)) {
        let at = match row.run.and_then(|r| place.get(r)) {
            Some(place) => *place,
            None => 2 * n + *unknown.entry(name_key(&row.location.value)).or_insert(i),
        };
        rows.push((at, row));
    }
    rows.sort_by_key(|(at, row)| (*at, row.stage));
    rows.into_iter().map(|(_, row)| row).collect()
}

/// Both are of one location.
pub(super) fn same_location(a: &ReadingRow, b: &ReadingRow) -> bool {
    match (a.run, b.run) {
        (Some(a), Some(b)) => a == b,
        (None, None) => name_key(&a.location.value) == name_key(&b.location.value),
        _ => false,
    }
}

/// The stage and state of a row, as short as they can be said.
pub(super) fn taken(row: &ReadingRow) -> String {
    match (marks::is_default_state(row), row.stage) {
        (true, stage) => stage.name().to_owned(),
        (false, crate::visit::Stage::AsFound) => clean(&row.state),
        (false, stage) => format!("{}, {}", stage.name(), clean(&row.state)),
    }
}

/// Positions of the `most` greatest, in their own order.
pub(super) fn foremost(weights: &[f64], most: usize) -> Vec<usize> {
    let mut order: Vec<usize> = (0..weights.len()).collect();
    order.sort_by(|a, b| weights[*b].total_cmp(&weights[*a]));
    order.truncate(most);
    order.sort_unstable();
    order
}

/// The volts of a leg against the neutral, where it was read and can be drawn.
pub(super) fn volts(row: &ReadingRow, quantity: Quantity) -> Option<f64> {
    row.value(quantity).filter(|v| v.is_finite() && *v >= 0.0)
}

/// What a reader who cannot see the drawing must know of the shifts: how many are judged off, and what the readings point at.
pub(super) fn alternative(scene: &Scene, judgements: &Judgements, rows: &[&ReadingRow], worst: Option<Sentence>) -> String {
    let faults = rows.iter().filter(|r| judgements.fault(r).is_some()).count();
    let key = match faults {
        _ if judgements.is_empty() => "figure.position-alt-plain",
        0 => "figure.position-alt-sound",
        _ => "figure.position-alt",
    };
    let mut parts = vec![scene.say(&Sentence::new(key).with("n", rows.len()).with("off", faults))];
    parts.extend(worst.map(|w| scene.say(&w)));
    parts.extend(scene.pointed_at());
    parts.join(" ")
}
