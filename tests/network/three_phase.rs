//! Wye systems against Millman's theorem and OpenDSS.

use super::support::any::wye;
use super::support::{L1, L2, L3, N, amperes, near, resistor, run, service, solved, volts};
use midwire::network::{Network, Phasor, SolveSettings, Workspace};
use proptest::prelude::*;

fn four_wires(volts: f64, line: f64, neutral: f64, ohms: [Option<f64>; 3]) -> Network {
    let mut network = service("208Y/120", volts);
    run(&mut network, None, [Some(line), Some(line), Some(line), Some(neutral)]);
    for (leg, ohms) in [L1, L2, L3].into_iter().zip(ohms) {
        network.loads.extend(ohms.map(|o| resistor(0, (leg, N), o)));
    }
    network
}

/// Vn = Σ(V/R)/Σ(1/R), worked with numpy. The last two are two legs of a wye: the pair shares 208 V, not 240.
#[test]
fn open_neutral_of_a_wye() {
    let rows = [
        (120.0, [Some(10.0), Some(20.0), Some(30.0)], [39.333, 82.362, 136.255, 149.975]),
        (120.0, [Some(12.0), Some(24.0), Some(48.0)], [45.356, 78.558, 136.067, 157.117]),
        (230.0, [Some(10.0), Some(20.0), Some(40.0)], [86.932, 150.570, 260.795, 301.141]),
        (277.0, [Some(10.0), Some(20.0), Some(40.0)], [104.696, 181.339, 314.088, 362.678]),
        (347.0, [Some(10.0), Some(20.0), Some(40.0)], [131.154, 227.165, 393.461, 454.330]),
        (120.0, [Some(12.0), Some(24.0), None], [69.282, 69.282, 138.564, 183.303]),
        (120.0, [Some(12.0), Some(12.0), None], [60.0, 103.923, 103.923, 180.0]),
    ];
    for (source, ohms, [vn, va, vb, vc]) in rows {
        let solution = solved(&four_wires(source, 1e-7, f64::INFINITY, ohms));
        near(solution.volts[0][N].unwrap().magnitude(), vn, 1e-3);
        for (leg, expected) in [(L1, va), (L2, vb), (L3, vc)] {
            near(volts(&solution, 0, leg, N), expected, 1e-3);
        }
    }
}

/// 230.94/400 V with 0.1 Ω lines and 10, 20, 40 Ω, solved with OpenDSS.
#[test]
fn four_wire_230_400() {
    let rows = [
        (0.1, [227.268, 230.072, 231.486, 1.482]),
        (1.0, [216.681, 232.524, 240.214, 12.849]),
        (10.0, [178.044, 246.020, 274.339, 55.101]),
        (f64::INFINITY, [150.167, 260.189, 301.296, 86.822]),
    ];
    for (neutral, expected) in rows {
        let solution = solved(&four_wires(400.0 / 3f64.sqrt(), 0.1, neutral, [Some(10.0), Some(20.0), Some(40.0)]));
        for (leg, volts_expected) in [L1, L2, L3].into_iter().zip(expected) {
            near(volts(&solution, 0, leg, N), volts_expected, 1.5e-3);
        }
        near(solution.volts[0][N].unwrap().magnitude(), expected[3], 1.5e-3);
    }
    near(amperes(&solved(&four_wires(400.0 / 3f64.sqrt(), 0.1, 0.1, [Some(10.0), Some(20.0), Some(40.0)])), 0, N), 14.82, 6e-3);
}

/// √(A² + B² + C² − AB − BC − CA) for 10, 15 and 20 A, as commonly published: 8.66 A.
#[test]
fn neutral_current_of_a_wye() {
    let ohms = [10.0, 15.0, 20.0].map(|amperes| Some(120.0 / amperes));
    near(amperes(&solved(&four_wires(120.0, 0.0, 0.0, ohms)), 0, N), 8.6603, 1e-4);
}

/// A four-wire delta: the high leg stands at 208 V to the neutral, 240 V to the others (NEC 110.15).
#[test]
fn high_leg_of_a_delta() {
    let mut network = service("240/120", 120.0);
    run(&mut network, None, [Some(0.0), Some(0.0), Some(0.0), Some(0.0)]);
    network.loads = vec![resistor(0, (L1, N), 12.0), resistor(0, (L1, L2), 24.0), resistor(0, (L2, L3), 24.0)];
    let solution = solved(&network);
    near(volts(&solution, 0, L2, N), 207.846, 1e-3);
    for pair in [(L1, L2), (L2, L3), (L3, L1)] {
        near(volts(&solution, 0, pair.0, pair.1), 240.0, 1e-3);
    }
}

fn product(a: Phasor, b: Phasor) -> Phasor {
    Phasor { re: a.re * b.re - a.im * b.im, im: a.re * b.im + a.im * b.re }
}

fn conjugate(a: Phasor) -> Phasor {
    Phasor { im: -a.im, ..a }
}

fn sum(phasors: impl Iterator<Item = Phasor>) -> Phasor {
    phasors.fold(Phasor::default(), |a, b| a + b)
}

proptest! {
    /// Ohm's and Kirchhoff's laws and the balance of complex power, whatever the loads.
    #[test]
    fn complex_laws(network in wye()) {
        let mut workspace = Workspace::new(&network).unwrap();
        workspace.follow(&network, &SolveSettings { tolerance: 1e-8, iterations: 60 }).unwrap();
        let solution = workspace.solution(&network);
        let emf = |slot: usize| {
            let d = network.source.direction.get(slot).copied().unwrap_or_default();
            let volts = network.source.volts.get(slot).copied().unwrap_or_default();
            Phasor { re: volts * d.re, im: volts * d.im }
        };
        let mut lost = Phasor::default();
        for (at, span) in network.spans.iter().enumerate() {
            for slot in [L1, L2, L3, N] {
                let (v, i) = (solution.volts[at][slot].unwrap(), solution.amperes[at][slot].unwrap());
                let from = span.fed_from.map_or(emf(slot), |parent| solution.volts[parent][slot].unwrap());
                let z = Phasor { re: span.ohms[slot].unwrap(), im: span.reactance[slot] };
                let scale = z.magnitude().max(1.0);
                let residue = (from - v - product(z, i)).magnitude() / scale;
                prop_assert!(residue < 1e-6, "{residue} V left over along run {at}");
                lost = lost + product(from - v, conjugate(i));
                let children = network.spans.iter().enumerate().filter(|(_, s)| s.fed_from == Some(at));
                let on = sum(children.map(|(child, _)| solution.amperes[child][slot].unwrap()));
                let of_loads = network.loads.iter().zip(&solution.loads).filter(|(l, _)| l.at == at);
                let drawn = sum(of_loads.map(|(l, i)| match l.between {
                    (a, _) if a == slot => *i,
                    (_, b) if b == slot => Phasor::default() - *i,
                    _ => Phasor::default(),
                }));
                prop_assert!((i - on - drawn).magnitude() < 1e-9);
            }
        }
        let loads = sum(solution.loads.iter().zip(&solution.load_volts).map(|(i, v)| product(*v, conjugate(*i))));
        let source = sum([L1, L2, L3].into_iter().map(|s| product(emf(s), conjugate(solution.amperes[0][s].unwrap()))));
        prop_assert!((source - loads - lost).magnitude() < 1e-5 * source.magnitude().max(1.0));
    }
}
