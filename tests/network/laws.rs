//! What any network must obey.

use super::support::any::{Loads, network};
use super::support::{L1, L2, N, near, resistor, run, service, solved, volts};
use midwire::network::{Network, Phasor, SLOTS, Solution, SolveSettings, Source, Workspace, solve};
use proptest::prelude::*;

/// One solution of a network that may have several.
fn one(network: &Network) -> Solution {
    let mut workspace = Workspace::new(network).unwrap();
    workspace.follow(network, &SolveSettings { tolerance: 1e-9, iterations: 60 }).unwrap();
    workspace.solution(network)
}

fn potential(solution: &Solution, source: &Source, run: Option<usize>, slot: usize) -> f64 {
    match run {
        Some(run) => solution.volts[run][slot].unwrap().re,
        None if slot == N => 0.0,
        None => source.volts[slot] * source.direction[slot].re,
    }
}

/// Volts of every conductor of every run.
fn all_volts(solution: &Solution) -> Vec<f64> {
    solution.volts.iter().flatten().flatten().map(|p| p.re).collect()
}

fn swapped<T: Copy>(slots: [T; SLOTS]) -> [T; SLOTS] {
    [slots[L2], slots[L1], slots[2], slots[N]]
}

proptest! {
    #[test]
    fn ohm_and_kirchhoff_hold(network in network(Loads::Every)) {
        let solution = one(&network);
        for (at, span) in network.spans.iter().enumerate() {
            for slot in [L1, L2, N] {
                let into = solution.amperes[at][slot].unwrap().re;
                let children = network.spans.iter().enumerate().filter(|(_, s)| s.fed_from == Some(at));
                let mut out: f64 = children.map(|(child, _)| solution.amperes[child][slot].unwrap().re).sum();
                for (load, i) in network.loads.iter().zip(&solution.loads).filter(|(l, _)| l.at == at) {
                    out += i.re * (f64::from(u8::from(load.between.0 == slot)) - f64::from(u8::from(load.between.1 == slot)));
                }
                out += if slot == N { solution.earth[at].re } else { 0.0 };
                prop_assert!((into - out).abs() < 1e-9, "{into} into run {at}, {out} out of it");
                let drop = potential(&solution, &network.source, span.fed_from, slot) - potential(&solution, &network.source, Some(at), slot);
                let ohms = span.ohms[slot].unwrap();
                prop_assert!((drop / ohms.max(1.0) - into * ohms / ohms.max(1.0)).abs() < 1e-7, "{drop} V along {ohms} Ω with {into} A");
            }
        }
    }

    #[test]
    fn power_balances(network in network(Loads::Every)) {
        let solution = one(&network);
        let loads: f64 = solution.loads.iter().zip(&solution.load_volts).map(|(i, v)| i.re * v.re).sum();
        let lost = |(at, slot): (usize, usize)| {
            let (span, i) = (&network.spans[at], solution.amperes[at][slot].unwrap().re);
            i * (potential(&solution, &network.source, span.fed_from, slot) - potential(&solution, &network.source, Some(at), slot))
        };
        let wires: f64 = (0..network.spans.len()).flat_map(|at| [L1, L2, N].map(|s| (at, s))).map(lost).sum();
        let earth = solution.earth[0].re * solution.volts[0][N].unwrap().re;
        let source: f64 = [L1, L2].map(|s| potential(&solution, &network.source, None, s) * solution.amperes[0][s].unwrap().re).iter().sum();
        prop_assert!((source - loads - wires - earth).abs() < 1e-6 * source.abs().max(1.0), "{source} W from {loads}, {wires}, {earth} W");
    }

    #[test]
    fn resistive_networks_superpose(network in network(Loads::Resistive)) {
        let alone = |leg: usize| {
            let mut part = network.clone();
            part.source.volts[1 - leg] = 0.0;
            all_volts(&one(&part))
        };
        let sum: Vec<f64> = alone(L1).iter().zip(alone(L2)).map(|(a, b)| a + b).collect();
        for (whole, sum) in all_volts(&one(&network)).iter().zip(sum) {
            prop_assert!((whole - sum).abs() < 1e-7, "{whole} V against {sum} V");
        }
    }

    /// Ohms times k and watts over k leave the volts alone.
    #[test]
    fn impedances_scale(network in network(Loads::Resistive), k in 0.1f64..10.0) {
        let mut scaled = network.clone();
        for span in &mut scaled.spans {
            span.ohms = span.ohms.map(|o| o.map(|o| o * k));
            span.electrode = span.electrode.map(|o| o * k);
        }
        scaled.loads.iter_mut().for_each(|l| l.watts /= k);
        for (a, b) in all_volts(&one(&network)).iter().zip(all_volts(&one(&scaled))) {
            prop_assert!((a - b).abs() < 1e-7);
        }
    }

    #[test]
    fn swapping_the_legs_swaps_the_answers(network in network(Loads::Resistive)) {
        let mut other = network.clone();
        other.source.volts.swap(L1, L2);
        for span in &mut other.spans {
            span.ohms = swapped(span.ohms);
        }
        for load in &mut other.loads {
            let swap = |s| match s { L1 => L2, L2 => L1, s => s };
            load.between = (swap(load.between.0), swap(load.between.1));
        }
        let (a, b) = (one(&network), one(&other));
        for (a, b) in a.volts.iter().zip(&b.volts) {
            for (a, b) in a.iter().zip(swapped(*b)) {
                prop_assert!((a.unwrap_or_default().re + b.unwrap_or_default().re).abs() < 1e-8);
            }
        }
    }

    /// The order in which runs and loads are listed is a matter of names.
    #[test]
    fn the_order_of_the_list_changes_nothing(network in network(Loads::Resistive)) {
        let last = network.spans.len() - 1;
        let mut turned = network.clone();
        turned.spans.reverse();
        turned.loads.reverse();
        turned.spans.iter_mut().for_each(|s| s.fed_from = s.fed_from.map(|f| last - f));
        turned.loads.iter_mut().for_each(|l| l.at = last - l.at);
        let (a, b) = (one(&network), one(&turned));
        for (a, b) in a.volts.iter().zip(b.volts.iter().rev()) {
            for (a, b) in a.iter().flatten().zip(b.iter().flatten()) {
                prop_assert!((*a - *b).magnitude() < 1e-8);
            }
        }
    }

    /// Complex arithmetic finds what real arithmetic finds.
    #[test]
    fn complex_arithmetic_agrees(network in network(Loads::Resistive)) {
        let mut turned = network.clone();
        turned.source.own = Phasor { re: 0.0, im: 1e-12 };
        for (a, b) in all_volts(&one(&network)).iter().zip(all_volts(&one(&turned))) {
            prop_assert!((a - b).abs() < 1e-7);
        }
    }
}

/// A ladder without end has the input resistance (R + √(R² + 4·R/G))/2, R in series and G across at each rung (textbook).
#[test]
fn a_chain_of_ten_thousand_runs() {
    let (half, shunt) = (0.01, 50.0);
    let mut network = service("230", 230.0);
    for at in 0..10_000 {
        let fed_from = if at == 0 { None } else { Some(at - 1) };
        run(&mut network, fed_from, [Some(half), None, None, Some(half)]);
        network.loads.push(resistor(at, (L1, N), shunt));
    }
    let solution = solve(&network, &SolveSettings::default()).unwrap();
    let series = 2.0 * half;
    let input = f64::midpoint(series, (series * series + 4.0 * series * shunt).sqrt());
    near(230.0 / solution.amperes[0][L1].unwrap().re, input, 1e-9);
}

/// Voltage dividers over eighteen decades, by hand.
#[test]
fn extreme_ratios_lose_no_digits() {
    for (wire, load) in [(1e-9, 1.0), (1.0, 1e9), (1e9, 1.0), (1.0, 1e-9), (1e6, 14.4), (1e-9, 1e9)] {
        let mut network = service("230", 230.0);
        run(&mut network, None, [Some(wire), None, None, Some(0.0)]);
        network.loads.push(resistor(0, (L1, N), load));
        let expected = 230.0 * load / (wire + load);
        near(volts(&solved(&network), 0, L1, N) / expected, 1.0, 1e-12);
    }
}

/// An open conductor with nothing on it stands at the volts it is cut from; by definition, no source.
#[test]
fn an_open_conductor_without_load_floats_at_its_feed() {
    let mut network = service("120/240", 120.0);
    let ohms = [Some(0.01), Some(0.01), None, Some(0.01)];
    run(&mut network, None, ohms);
    run(&mut network, Some(0), [Some(0.01), Some(f64::INFINITY), None, Some(0.01)]);
    network.loads.push(resistor(1, (L1, N), 12.0));
    let solution = solved(&network);
    near(solution.volts[1][L2].unwrap().re, solution.volts[0][L2].unwrap().re, 1e-9);
}
