//! Gradients against central differences of the solver itself, which other tests hold to outside values.

use super::support::any::{Loads, network};
use super::support::{L1, L2, N, impedance, lamp, resistor, run, service};
use midwire::network::{Gradient, Law, Network, Observed, Phasor, SolveSettings, Workspace};
use midwire::visit::{Leg, Quantity};
use proptest::prelude::*;

const TIGHT: SolveSettings = SolveSettings { tolerance: 1e-8, iterations: 60 };
const STEP: f64 = 3e-4;

struct Bench<'a> {
    network: &'a Network,
    workspace: Workspace,
    observed: Observed,
}

impl Bench<'_> {
    fn slope(&mut self, change: impl Fn(&mut Network, f64)) -> f64 {
        let mut at = |step: f64| {
            let mut moved = self.network.clone();
            change(&mut moved, step);
            self.workspace.follow(&moved, &TIGHT).unwrap();
            self.workspace.value(self.observed).unwrap()
        };
        (at(STEP) - at(-STEP)) / (2.0 * STEP)
    }

    #[track_caller]
    fn agree(&mut self, name: &str, gradient: f64, change: impl Fn(&mut Network, f64)) {
        let slope = self.slope(change);
        assert!((gradient - slope).abs() < 1e-4 * (1.0 + slope.abs()), "{name}: {gradient}, by differences {slope}");
    }
}

fn check(network: &Network, run: usize, quantity: Quantity) {
    let Some(observed) = network.observed(run, quantity) else { return };
    let mut workspace = Workspace::new(network).unwrap();
    workspace.follow(network, &TIGHT).unwrap();
    let mut gradient = Gradient::of(network);
    workspace.gradient(network, observed, &mut gradient).unwrap();
    let mut bench = Bench { network, workspace, observed };
    for at in 0..network.spans.len() {
        for slot in [L1, L2, N] {
            bench.agree("ohms", gradient.ohms[at][slot], |n, h| {
                n.spans[at].ohms[slot] = n.spans[at].ohms[slot].map(|o| o * h.exp());
            });
        }
    }
    for at in 0..network.loads.len() {
        bench.agree("watts", gradient.watts[at], |n, h| n.loads[at].watts *= h.exp());
        bench.agree("exponent", gradient.exponent[at], |n, h| {
            if let Law::Power { exponent } = &mut n.loads[at].law {
                *exponent += h;
            }
        });
    }
    for leg in [L1, L2] {
        bench.agree("source", gradient.source[leg], |n, h| n.source.volts[leg] += h);
    }
    bench.agree("electrode", gradient.electrode, |n, h| n.spans[0].electrode = n.spans[0].electrode.map(|o| o * h.exp()));
}

const QUANTITIES: [Quantity; 7] = [
    Quantity::line_neutral(Leg::L1),
    Quantity::line_neutral(Leg::L2),
    Quantity::L1_L2,
    Quantity::NeutralGround,
    Quantity::LineGround(Leg::L2),
    Quantity::LineCurrent(Leg::L1),
    Quantity::NeutralCurrent,
];

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]
    #[test]
    fn in_phase(network in network(Loads::Resistive), quantity in 0..QUANTITIES.len(), lamps in any::<bool>()) {
        let mut network = network;
        if lamps {
            for load in network.loads.iter_mut().step_by(2) {
                load.law = Law::Power { exponent: 0.55 };
            }
        }
        check(&network, network.spans.len() - 1, QUANTITIES[quantity]);
    }
}

/// A service with reactance, a motor, a lamp and a transformer.
#[test]
fn with_reactance() {
    let mut network = service("120/240", 120.0);
    network.source.own = Phasor { re: 0.003, im: 0.002 };
    network.source.shared = Phasor { re: 0.002, im: 0.004 };
    run(&mut network, None, [Some(0.02), Some(0.02), None, Some(0.03)]);
    run(&mut network, Some(0), [Some(0.2), Some(0.15), None, Some(2.5)]);
    network.spans[0].electrode = Some(18.0);
    network.spans[1].reactance = [0.03, 0.03, 0.0, 1.2];
    network.loads = vec![impedance(1, (L1, N), 14.0, 9.0), lamp(1, (L2, N), 200.0), resistor(0, (L1, L2), 30.0), lamp(0, (L1, N), 60.0)];
    for quantity in QUANTITIES {
        check(&network, 1, quantity);
    }
}

/// Three legs 120° apart.
#[test]
fn of_a_wye() {
    let mut network = service("208Y/120", 120.0);
    run(&mut network, None, [Some(0.05), Some(0.05), Some(0.05), Some(1.5)]);
    network.spans[0].electrode = Some(25.0);
    network.loads = vec![resistor(0, (0, N), 10.0), lamp(0, (1, N), 300.0), impedance(0, (2, N), 20.0, 12.0), resistor(0, (0, 1), 40.0)];
    for quantity in QUANTITIES {
        check(&network, 0, quantity);
    }
}
