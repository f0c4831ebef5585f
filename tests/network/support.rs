//! One short way to write a network down.

use midwire::network::{Law, Load, Network, Phasor, SLOTS, Solution, SolveSettings, Source, Span, Terminal, solve};
use midwire::visit::{Conductor, Leg, System};

pub const L1: usize = 0;
pub const L2: usize = 1;
pub const L3: usize = 2;
pub const N: usize = 3;

/// A network without runs, its source ideal.
pub fn service(system: &str, volts: f64) -> Network {
    let system = System::named(system).unwrap();
    let nominal = system.line_to_neutral.0;
    let mut source = Source { volts: [0.0; 3], direction: [Phasor::default(); 3], own: Phasor::default(), shared: Phasor::default() };
    for leg in system.legs() {
        let (re, im) = system.phasor(*leg);
        let length = Phasor { re, im }.magnitude();
        source.volts[leg.index()] = volts * length / nominal;
        source.direction[leg.index()] = Phasor { re: re / length, im: im / length };
    }
    Network { source, spans: Vec::new(), loads: Vec::new() }
}

/// Adds a run; ohms of L1, L2, L3, N.
pub fn run(network: &mut Network, fed_from: Option<usize>, ohms: [Option<f64>; SLOTS]) -> usize {
    network.spans.push(Span { fed_from, ohms, reactance: [0.0; SLOTS], electrode: None });
    network.spans.len() - 1
}

/// A service of one run with like legs.
pub fn three_wire(volts: f64, leg: f64, neutral: f64) -> Network {
    let mut network = service("120/240", volts);
    run(&mut network, None, [Some(leg), Some(leg), None, Some(neutral)]);
    network
}

pub fn load(at: usize, between: (usize, usize), rated_volts: f64, watts: f64, law: Law) -> Load {
    Load { at, between, rated_volts, watts, law, power_factor: 1.0 }
}

pub fn resistor(at: usize, between: (usize, usize), ohms: f64) -> Load {
    load(at, between, 100.0, 10_000.0 / ohms, Law::Power { exponent: 1.0 })
}

pub fn lamp(at: usize, between: (usize, usize), watts: f64) -> Load {
    load(at, between, 120.0, watts, Law::Power { exponent: 0.55 })
}

pub fn electronic(at: usize, between: (usize, usize), watts: f64) -> Load {
    load(at, between, 120.0, watts, Law::Electronic { knee: 30.0 })
}

/// An impedance as a load.
pub fn impedance(at: usize, between: (usize, usize), ohms: f64, reactance: f64) -> Load {
    let square = ohms * ohms + reactance * reactance;
    let admitted = load(at, between, 100.0, 10_000.0 * ohms / square, Law::Power { exponent: 1.0 });
    Load { power_factor: ohms / square.sqrt(), ..admitted }
}

pub fn solved(network: &Network) -> Solution {
    solve(network, &SolveSettings { tolerance: 1e-9, iterations: 60 }).unwrap_or_else(|e| panic!("{e:?}"))
}

pub fn conductor(slot: usize) -> Conductor {
    if slot == N { Conductor::Neutral } else { Conductor::Line(Leg::ALL[slot]) }
}

/// Volts between two conductors at a run's far end.
pub fn volts(solution: &Solution, run: usize, a: usize, b: usize) -> f64 {
    let at = |slot| Terminal::At(run, conductor(slot));
    solution.voltage(at(a), at(b)).unwrap().magnitude()
}

/// Amperes in a conductor of a run.
pub fn amperes(solution: &Solution, run: usize, slot: usize) -> f64 {
    solution.amperes[run][slot].unwrap().magnitude()
}

#[track_caller]
pub fn near(got: f64, expected: f64, within: f64) {
    assert!((got - expected).abs() <= within, "{got} is not {expected} ± {within}");
}

/// Random split-phase services, among them near-open and near-short conductors.
pub mod any {
    use super::{L1, L2, L3, N, electronic, lamp, resistor, run, service};
    use midwire::network::{Load, Network};
    use proptest::prelude::*;

    /// What loads to draw.
    #[derive(Clone, Copy, Debug, PartialEq)]
    pub enum Loads {
        Resistive,
        Every,
    }

    fn ohms() -> impl Strategy<Value = f64> {
        prop_oneof![
            8 => (-2.5f64..0.5).prop_map(|e| 10f64.powf(e)),
            1 => Just(1e-9),
            1 => (1.0f64..4.0).prop_map(|e| 10f64.powf(e)),
            1 => Just(1e6),
        ]
    }

    fn one_load(at: usize, loads: Loads) -> impl Strategy<Value = Load> {
        let between = prop_oneof![3 => Just((L1, N)), 3 => Just((L2, N)), 1 => Just((L1, L2))];
        let kinds = if loads == Loads::Resistive { 0..1 } else { 0..3 };
        (between, 20.0f64..2000.0, kinds).prop_map(move |(between, watts, kind)| match kind {
            0 => resistor(at, between, 14_400.0 / watts),
            1 => lamp(at, between, watts),
            _ => electronic(at, between, watts.min(300.0)),
        })
    }

    fn one_run(at: usize, loads: Loads) -> impl Strategy<Value = (usize, [f64; 3], Vec<Load>)> {
        (0..at.max(1), [ohms(), ohms(), ohms()], proptest::collection::vec(one_load(at, loads), 0..3))
    }

    /// Wye services with reactive wires, motors, lamps, electronic loads.
    pub fn wye() -> impl Strategy<Value = Network> {
        let place = prop_oneof![Just((L1, N)), Just((L2, N)), Just((L3, N)), Just((L1, L2)), Just((L3, L1))];
        let one = (0usize..6, place, 20.0f64..2000.0, 0..4, 0.5f64..1.0);
        let wires = (prop::array::uniform4(ohms()), prop::array::uniform4(0.0f64..0.2), 0usize..6);
        let runs = proptest::collection::vec(wires, 1..6);
        (runs, proptest::collection::vec(one, 0..8)).prop_map(|(runs, loads)| {
            let mut network = service("208Y/120", 120.0);
            for (at, (ohms, reactance, parent)) in runs.iter().enumerate() {
                run(&mut network, (at > 0).then_some(parent % at.max(1)), ohms.map(Some));
                network.spans[at].reactance = *reactance;
            }
            for (at, between, watts, kind, power_factor) in loads {
                let at = at % runs.len();
                network.loads.push(match kind {
                    0 => resistor(at, between, 14_400.0 / watts),
                    1 => lamp(at, between, watts),
                    2 => electronic(at, between, watts.min(300.0)),
                    _ => Load { power_factor, ..resistor(at, between, 14_400.0 / watts) },
                });
            }
            network
        })
    }

    pub fn network(loads: Loads) -> impl Strategy<Value = Network> {
        let runs = (1usize..9).prop_flat_map(move |n| (0..n).map(|at| one_run(at, loads)).collect::<Vec<_>>());
        (runs, proptest::option::of(2.0f64..80.0)).prop_map(|(runs, electrode)| {
            let mut network = service("120/240", 121.0);
            network.source.volts[L2] = 119.5;
            for (at, (parent, [first, second, neutral], loads)) in runs.into_iter().enumerate() {
                run(&mut network, (at > 0).then_some(parent), [Some(first), Some(second), None, Some(neutral)]);
                network.loads.extend(loads);
            }
            network.spans[0].electrode = electrode;
            network
        })
    }
}
