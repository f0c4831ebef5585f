//! Whether a solution is the only one, and the others where it is not.
//!
//! Electronic loads draw less current at more voltage. Fed stiffly they have one working point; in series across an open neutral
//! each holds the other anywhere between collapse and overvoltage.

use super::model::{Law, Load, Network};
use super::solution::Solution;
use super::solve::SolveSettings;
use super::workspace::Workspace;

/// Solutions whose loads all agree within so many volts are one.
const SAME: f64 = 0.01;

/// Shares of the open-circuit volts per leg that the search starts from.
const STARTS: [[f64; 3]; 10] = [
    [0.02, 1.98, 1.0],
    [1.98, 0.02, 1.0],
    [0.4, 1.6, 1.0],
    [1.6, 0.4, 1.0],
    [1.0, 0.02, 1.98],
    [1.0, 1.98, 0.02],
    [0.02, 1.0, 1.98],
    [1.98, 1.0, 0.02],
    [0.05, 0.05, 1.7],
    [0.3, 0.3, 0.3],
];

/// No more than one solution is possible: the loop each load hangs on, times the steepest fall of its current with voltage, adds
/// up to less than 1, so that the nodal equations stay monotone. Sufficient, not necessary.
pub(super) fn is_stiff(network: &Network) -> bool {
    let falling: Vec<(&Load, f64)> = network.loads.iter().map(|l| (l, steepest_fall(l))).filter(|f| f.1 > 0.0).collect();
    if falling.is_empty() {
        return true;
    }
    let ohms = loops(network);
    let source = network.source.own.magnitude() + network.source.shared.magnitude();
    let total: f64 = falling.iter().map(|(l, fall)| (ohms[l.at][l.between.0] + ohms[l.at][l.between.1] + 2.0 * source) * fall).sum();
    total < 1.0
}

/// Largest −dI/dV of a load, in siemens. Of I = P·V/(V² + k²) it is P/(8·k²), at V = √3·k.
fn steepest_fall(load: &Load) -> f64 {
    match load.law {
        Law::Electronic { knee } => load.watts / (8.0 * knee * knee),
        Law::Power { exponent } if exponent < 0.0 => f64::INFINITY,
        Law::Power { .. } => 0.0,
    }
}

/// Ohms from the source to the far end of each run, per conductor.
fn loops(network: &Network) -> Vec<[f64; 4]> {
    let mut fed: Vec<Vec<usize>> = vec![Vec::new(); network.spans.len()];
    let mut stack = Vec::new();
    for (run, span) in network.spans.iter().enumerate() {
        match span.fed_from {
            Some(parent) => fed[parent].push(run),
            None => stack.push(run),
        }
    }
    let mut ohms = vec![[0.0; 4]; network.spans.len()];
    while let Some(run) = stack.pop() {
        let span = &network.spans[run];
        let above = span.fed_from.map_or([0.0; 4], |p| ohms[p]);
        ohms[run] = std::array::from_fn(|s| above[s] + span.ohms[s].unwrap_or(0.0) + span.reactance[s].abs());
        stack.extend(&fed[run]);
    }
    ohms
}

/// All solutions found, the first one included, by rising volts of the first load; each further one is shown to `note`.
pub(super) fn others(
    workspace: &mut Workspace,
    network: &Network,
    settings: &SolveSettings,
    first: Solution,
    mut note: impl FnMut(&Workspace),
) -> Vec<Solution> {
    let mut found = vec![first];
    for start in STARTS {
        workspace.start_from(network, start);
        if workspace.follow(network, settings).is_err() {
            continue;
        }
        let next = workspace.solution(network);
        if !found.iter().any(|s| is_same(s, &next)) {
            note(workspace);
            found.push(next);
        }
    }
    let first_load = |s: &Solution| s.load_volts.first().map_or(0.0, |v| v.magnitude());
    found.sort_by(|a, b| first_load(a).total_cmp(&first_load(b)));
    found
}

fn is_same(a: &Solution, b: &Solution) -> bool {
    a.load_volts.iter().zip(&b.load_volts).all(|(a, b)| (*a - *b).magnitude() < SAME)
}
