//! Currents and drops the listed loads would make, all of them on at once, by phasors.
//!
//! Power over nominal voltage, each current in phase with its voltage, motors raised by their power factor: loads as the circuit
//! list gives them, without demand factors.

use crate::electrics::conductor;
use crate::quantity::{Celsius, Ohms, math};
use crate::visit::{Arrangement, Between, Leg, LoadKind, Run, System, Visit};

/// Power factor that turns a motor's watts into volt-amperes (common practice, no source).
const MOTOR_POWER_FACTOR: f64 = 0.8;

type Phasor = (f64, f64);

fn plus(a: Phasor, b: Phasor) -> Phasor {
    (a.0 + b.0, a.1 + b.1)
}
fn times(a: Phasor, k: f64) -> Phasor {
    (a.0 * k, a.1 * k)
}
fn minus(a: Phasor, b: Phasor) -> Phasor {
    plus(a, times(b, -1.0))
}
fn length(a: Phasor) -> f64 {
    math::hypot(a.0, a.1)
}

/// Calculated currents of one run in amperes.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Currents {
    lines: [Phasor; 3],
}

impl Currents {
    /// Of a line conductor.
    pub fn line(&self, leg: Leg) -> f64 {
        length(self.lines[leg.index()])
    }

    /// Of the neutral: what the lines do not return among each other.
    pub fn neutral(&self) -> f64 {
        length(self.sum())
    }

    /// Of the neutral, where all hots hang on one leg: the currents add.
    pub fn neutral_on_one_leg(&self) -> f64 {
        self.lines.iter().map(|i| length(*i)).sum()
    }

    fn sum(&self) -> Phasor {
        self.lines.iter().fold((0.0, 0.0), |sum, i| plus(sum, *i))
    }
}

/// The nominal voltage of a load as a phasor.
fn voltage(system: &System, between: Between) -> Phasor {
    match between {
        Between::LineNeutral(leg) => system.phasor(leg),
        Between::LineLine(a, b) => minus(system.phasor(a), system.phasor(b)),
    }
}

/// Calculated currents of every run, from the loads at its far end and below. Linear in the list.
pub(super) fn currents(visit: &Visit) -> Vec<Currents> {
    let mut all: Vec<Currents> = visit.runs.iter().map(|run| own(run, &visit.system)).collect();
    for &run in visit.tree.order.iter().rev() {
        if let Some(parent) = visit.tree.parent[run] {
            let below = all[run];
            for leg in 0..3 {
                all[parent].lines[leg] = plus(all[parent].lines[leg], below.lines[leg]);
            }
        }
    }
    all
}

fn own(run: &Run, system: &System) -> Currents {
    let motor = run.load_kind.as_ref().is_some_and(|k| k.value == LoadKind::Motor);
    let factor = if motor { 1.0 / MOTOR_POWER_FACTOR } else { 1.0 };
    let mut out = Currents::default();
    for load in &run.loads {
        let volts = voltage(system, load.between);
        let square = volts.0 * volts.0 + volts.1 * volts.1;
        if square <= 0.0 {
            continue;
        }
        // |I| = P/|V| along the voltage.
        let current = times(volts, load.watts.value.0 * factor / square);
        match load.between {
            Between::LineNeutral(leg) => out.lines[leg.index()] = plus(out.lines[leg.index()], current),
            Between::LineLine(a, b) => {
                out.lines[a.index()] = plus(out.lines[a.index()], current);
                out.lines[b.index()] = minus(out.lines[b.index()], current);
            }
        }
    }
    out
}

/// Potentials of L1, L2, L3 and the neutral at the far end of a run against those at the service.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
struct Shift {
    lines: [Phasor; 3],
    neutral: Phasor,
}

/// Calculated drops from the service to the far end of every run.
pub(super) struct Drops<'a> {
    system: &'a System,
    shifts: Vec<Option<Shift>>,
}

impl<'a> Drops<'a> {
    /// Of a visit with conductors at a temperature. Runs fed by the utility drop nothing: that part is the supplier's. Unknown where
    /// current flows through a run without wire or length, and below it.
    pub fn of(visit: &'a Visit, currents: &[Currents], at: Celsius) -> Self {
        let mut shifts: Vec<Option<Shift>> = vec![None; visit.runs.len()];
        for &run in &visit.tree.order {
            shifts[run] = match visit.tree.parent[run] {
                None => Some(Shift::default()),
                Some(parent) => shifts[parent].and_then(|above| further(above, &visit.runs[run], &currents[run], at)),
            };
        }
        Self { system: &visit.system, shifts }
    }

    /// Drop of a voltage between the far ends of two runs, one above the other, in volts; a rise is negative.
    pub fn between(&self, above: usize, below: usize, between: Between) -> Option<f64> {
        Some(self.drop(below, between)? - self.drop(above, between)?)
    }

    fn drop(&self, run: usize, between: Between) -> Option<f64> {
        let shift = self.shifts.get(run).copied().flatten()?;
        let nominal = voltage(self.system, between);
        let change = match between {
            Between::LineNeutral(leg) => minus(shift.lines[leg.index()], shift.neutral),
            Between::LineLine(a, b) => minus(shift.lines[a.index()], shift.lines[b.index()]),
        };
        let size = length(nominal);
        // To first order: the part of the change that lies along the voltage.
        (size > 0.0).then(|| -(change.0 * nominal.0 + change.1 * nominal.1) / size)
    }
}

fn further(above: Shift, run: &Run, current: &Currents, at: Celsius) -> Option<Shift> {
    let ohms = |wire: Option<crate::visit::Wire>, amperes: f64| -> Option<f64> {
        if amperes <= 0.0 {
            return Some(0.0);
        }
        let Ohms(r) = conductor::resistance(wire?, run.length.as_ref()?.value, at)?;
        Some(r)
    };
    let line_wire = run.wire.as_ref().map(|w| w.value);
    let mut shift = above;
    for leg in Leg::ALL {
        let k = leg.index();
        let r = ohms(line_wire, current.line(leg))?;
        shift.lines[k] = minus(shift.lines[k], times(current.lines[k], r));
    }
    let r = ohms(run.neutral().map(|w| w.value), current.neutral())?;
    shift.neutral = plus(shift.neutral, times(current.sum(), r));
    Some(shift)
}

/// Branch circuits and what hangs on them: for every run, the run whose breaker protects it where that is known: its own, or that
/// of the circuit above it that has no further breaker below and is not fed by the utility.
pub(super) fn protecting_breaker(visit: &Visit) -> Vec<Option<usize>> {
    let final_circuit = final_circuits(visit);
    let mut protected: Vec<Option<usize>> = vec![None; visit.runs.len()];
    for &run in &visit.tree.order {
        let above = visit.tree.parent[run].and_then(|parent| protected[parent]).filter(|&circuit| final_circuit[circuit]);
        protected[run] = if visit.runs[run].breaker.is_some() { Some(run) } else { above };
    }
    protected
}

/// Runs with a breaker and none below, not fed by the utility.
pub(super) fn final_circuits(visit: &Visit) -> Vec<bool> {
    let mut breaker_below = vec![false; visit.runs.len()];
    for &run in visit.tree.order.iter().rev() {
        if let Some(parent) = visit.tree.parent[run] {
            breaker_below[parent] |= breaker_below[run] || visit.runs[run].breaker.is_some();
        }
    }
    let ends = |run: usize| visit.runs[run].breaker.is_some() && visit.tree.parent[run].is_some() && !breaker_below[run];
    (0..visit.runs.len()).map(ends).collect()
}

/// The voltages a run's conductors carry: line to neutral of its legs, and line to line of its pairs where it has no neutral.
pub(super) fn voltages(run: &Run, system: &System) -> Vec<Between> {
    let Some(legs) = run.legs.as_ref().map(|l| l.value) else { return Vec::new() };
    if legs.neutral {
        return legs.iter().filter(|leg| system.legs().contains(leg)).map(Between::LineNeutral).collect();
    }
    Between::LINE_LINE
        .into_iter()
        .filter(|pair| matches!(pair, Between::LineLine(a, b) if legs.has(*a) && legs.has(*b) && system.legs().contains(a) && system.legs().contains(b)))
        .collect()
}

/// Legs 120° apart: the neutral of two of them carries as much as a leg.
pub(super) fn is_wye(system: &System) -> bool {
    matches!(system.arrangement, Arrangement::Wye | Arrangement::TwoLegsOfWye)
}
