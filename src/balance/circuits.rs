//! The loads of the list gathered by circuit.

use super::{Loading, PerLeg, moves::Choice};
use crate::visit::{Between, Load, LoadKind, Run, System, Visit};
use std::collections::BTreeMap;

/// Loading by circuit. What belongs to no circuit stands under its own run.
#[derive(Clone, Debug)]
pub(super) struct Circuits {
    by_run: BTreeMap<usize, Loading>,
    movable: Vec<bool>,
}

impl Circuits {
    pub fn of(visit: &Visit, motor_power_factor: f64) -> Self {
        let order = top_down(visit);
        let movable = movable(visit, &order);
        let mut circuit: Vec<usize> = (0..visit.runs.len()).collect();
        for &run in &order {
            if let Some(parent) = visit.tree.parent[run].filter(|_| !movable[run]) {
                let above = circuit[parent];
                if movable[above] {
                    circuit[run] = above;
                }
            }
        }
        let mut by_run: BTreeMap<usize, Loading> = BTreeMap::new();
        for (run, r) in visit.runs.iter().enumerate() {
            let loading = loading(r, &visit.system, motor_power_factor);
            if loading != Loading::default() {
                by_run.entry(circuit[run]).or_default().add(&loading);
            }
        }
        Self { by_run, movable }
    }

    pub fn sum(&self) -> Loading {
        let mut sum = Loading::default();
        for loading in self.by_run.values() {
            sum.add(loading);
        }
        sum
    }

    /// The circuits that may be moved and carry load, in list order.
    pub fn movable(&self) -> impl Iterator<Item = (usize, &Loading)> {
        self.by_run.iter().filter(|(run, _)| self.movable[**run]).map(|(run, loading)| (*run, loading))
    }

    /// What each circuit puts on a leg, in list order, but for those that put nothing.
    pub fn shares(&self, leg: crate::visit::Leg) -> impl Iterator<Item = (usize, f64)> {
        self.by_run.iter().map(move |(run, l)| (*run, l.total[leg.index()])).filter(|(_, va)| *va > 0.0)
    }

    pub fn apply(&mut self, choice: &Choice) {
        if let Some(loading) = self.by_run.get_mut(&choice.run) {
            *loading = moved(loading, choice.onto);
        }
    }
}

/// The same loads with leg k taken to `onto[k]`.
pub(super) fn moved(loading: &Loading, onto: [usize; 3]) -> Loading {
    let take = |per_leg: &PerLeg| {
        let mut out = [0.0; 3];
        for (leg, va) in per_leg.iter().enumerate() {
            out[onto[leg]] += va;
        }
        out
    };
    Loading { total: take(&loading.total), to_neutral: take(&loading.to_neutral) }
}

/// Every run that is not in a ring or below one, each after the run that feeds it.
fn top_down(visit: &Visit) -> Vec<usize> {
    let parent = &visit.tree.parent;
    let mut stack: Vec<usize> = (0..visit.runs.len()).rev().filter(|&r| parent[r].is_none()).collect();
    let mut order = Vec::with_capacity(visit.runs.len());
    while let Some(run) = stack.pop() {
        order.push(run);
        stack.extend(visit.tree.children[run].iter().rev());
    }
    order
}

/// Circuits: a breaker, a source other than the utility, and no breaker further down.
fn movable(visit: &Visit, order: &[usize]) -> Vec<bool> {
    let mut breaker_below = vec![false; visit.runs.len()];
    for &run in order.iter().rev() {
        if let Some(parent) = visit.tree.parent[run] {
            breaker_below[parent] |= breaker_below[run] || visit.runs[run].breaker.is_some();
        }
    }
    let mut movable = vec![false; visit.runs.len()];
    for &run in order {
        let r = &visit.runs[run];
        movable[run] = r.breaker.is_some() && r.fed_from.is_some() && !breaker_below[run];
    }
    movable
}

fn loading(run: &Run, system: &System, motor_power_factor: f64) -> Loading {
    let factor = match run.load_kind.as_ref().map(|k| k.value) {
        Some(LoadKind::Motor) if motor_power_factor > 0.0 => 1.0 / motor_power_factor,
        _ => 1.0,
    };
    let mut out = Loading::default();
    for Load { between, watts } in &run.loads {
        let va = watts.value.0 * factor;
        match between {
            Between::LineNeutral(leg) if system.legs().contains(leg) => {
                out.total[leg.index()] += va;
                out.to_neutral[leg.index()] += va;
            }
            Between::LineLine(a, b) if system.legs().contains(a) && system.legs().contains(b) => {
                out.total[a.index()] += va / 2.0;
                out.total[b.index()] += va / 2.0;
            }
            // A leg the system does not have carries nothing; intake names the cell.
            Between::LineNeutral(_) | Between::LineLine(..) => {}
        }
    }
    out
}
