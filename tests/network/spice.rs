//! Every node of eight services against ngspice.

use super::support::{L1, L2, N, electronic, lamp, load, near, run, service};
use midwire::network::{Law, Network, Solution, SolveOutcome, SolveSettings, solve};
use serde_json::Value;

const NAMES: [&str; 4] = ["L1", "L2", "L3", "N"];

fn network(case: &Value) -> Network {
    let mut network = service("120/240", 120.0);
    for leg in [L1, L2] {
        network.source.volts[leg] = case["supply_volts"][leg].as_f64().unwrap();
    }
    let runs = case["runs"].as_array().unwrap();
    for (at, r) in runs.iter().enumerate() {
        let fed_from = r["fed_from"].as_str().map(|name| runs.iter().position(|o| o["run"] == name).unwrap());
        run(&mut network, fed_from, NAMES.map(|name| r["ohms"][name].as_f64()));
        network.spans[at].electrode = fed_from.is_none().then(|| case["electrode_ohms"].as_f64().unwrap());
        for l in r["loads"].as_array().unwrap() {
            let (between, rated) = match l[0].as_str().unwrap() {
                "L1-N" => ((L1, N), 120.0),
                "L2-N" => ((L2, N), 120.0),
                _ => ((L1, L2), 240.0),
            };
            let watts = l[1].as_f64().unwrap();
            network.loads.push(match l[2].as_str().unwrap() {
                "resistive" => load(at, between, rated, watts, Law::Power { exponent: 1.0 }),
                "filament" => lamp(at, between, watts),
                _ => electronic(at, between, watts),
            });
        }
    }
    network
}

/// Largest difference from the volts printed.
fn difference(case: &Value, solution: &Solution) -> f64 {
    let runs = case["runs"].as_array().unwrap().iter().enumerate();
    let nodes = runs.flat_map(|(at, r)| NAMES.iter().enumerate().filter_map(move |(s, n)| Some((at, s, r["volts"][*n].as_f64()?))));
    nodes.map(|(at, slot, volts)| (solution.volts[at][slot].unwrap().re - volts).abs()).fold(0.0, f64::max)
}

#[test]
fn every_node_agrees_within_a_millivolt() {
    let file: Value = serde_json::from_str(include_str!("../data/networks.json")).unwrap();
    let cases = file["networks"].as_array().unwrap();
    assert_eq!(cases.len(), 8);
    for case in cases {
        let solutions = match solve(&network(case), &SolveSettings::default()) {
            Ok(one) => vec![one],
            Err(SolveOutcome::Several(all)) => all,
            Err(other) => panic!("{}: {other:?}", case["name"]),
        };
        let says_several = case["name"].as_str().unwrap().contains("three solutions");
        assert_eq!(solutions.len(), if says_several { 3 } else { 1 }, "{}", case["name"]);
        let nearest = solutions.iter().map(|s| difference(case, s)).fold(f64::INFINITY, f64::min);
        assert!(nearest < 1e-3, "{}: {nearest} V", case["name"]);
    }
}

/// The same numbers in complex arithmetic, forced by a reactance too small to matter.
#[test]
fn complex_arithmetic_agrees_with_real() {
    let file: Value = serde_json::from_str(include_str!("../data/networks.json")).unwrap();
    for case in file["networks"].as_array().unwrap() {
        let mut network = network(case);
        network.spans[0].reactance[L1] = 1e-9;
        if let Ok(solution) = solve(&network, &SolveSettings::default()) {
            near(difference(case, &solution), 0.0, 1e-3);
            assert!(!solution.is_in_phase);
        }
    }
}
