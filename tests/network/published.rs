//! Worked examples: lost and intact neutrals, a three-wire grid, lamps in series, Kersting's service.

use super::support::{L1, L2, N, amperes, impedance, lamp, load, near, resistor, run, service, solved, three_wire, volts};
use midwire::network::{Law, Network, Phasor};

/// Ohms that nobody would notice.
const WIRE: f64 = 1e-7;

/// Two resistors in series across a line of so many volts, their neutral open; the volts on each.
fn lost_neutral(line: f64, first: f64, second: f64) -> (f64, f64) {
    let mut network = three_wire(line / 2.0, WIRE, f64::INFINITY);
    network.loads = vec![resistor(0, (L1, N), first), resistor(0, (L2, N), second)];
    let solution = solved(&network);
    (volts(&solution, 0, L1, N), volts(&solution, 0, L2, N))
}

#[test]
fn lost_neutrals_as_published() {
    let examples = [
        ("trade lesson on NEC 408.21", 240.0, 24.0, 12.0, 160.0, 80.0),
        ("slides on the lost neutral, 100 W and 200 W", 240.0, 144.0, 72.0, 160.0, 80.0),
        ("Japan, 2nd-class electrician examination 2016, question 7", 200.0, 10.0, 50.0, 33.333, 166.667),
        ("the same examination 2023, second half", 210.0, 20.0, 10.0, 140.0, 70.0),
        ("200 V across 20 and 30 ohms: 4 A", 200.0, 20.0, 30.0, 80.0, 120.0),
        ("Mullin, Electrical Wiring Residential, chapter 17: 10 A and 5 A", 240.0, 12.0, 24.0, 80.0, 160.0),
        ("hair dryer and television, NEC 300.13(B), from memory", 240.0, 11.29, 24.0, 76.78, 163.22),
        ("380 V between two phases, 55 and 110 ohms", 380.0, 55.0, 110.0, 126.667, 253.333),
        ("the same, 36.66 and 110 ohms", 380.0, 36.66, 110.0, 95.0, 285.0),
        ("hot filament legs across 52 V; common practice, no source", 52.0, 38.0, 97.0, 14.6, 37.4),
    ];
    for (name, line, first, second, on_first, on_second) in examples {
        let (a, b) = lost_neutral(line, first, second);
        assert!((a - on_first).abs() < 0.05 && (b - on_second).abs() < 0.05, "{name}: {a} and {b}");
    }
}

/// Japan, 1st-class electrician examination 2022: 50 Ω and 25 Ω, and 20 Ω between the lines, which does not matter.
#[test]
fn a_load_between_the_lines_does_not_matter() {
    let mut network = three_wire(105.0, WIRE, f64::INFINITY);
    network.loads = vec![resistor(0, (L1, N), 50.0), resistor(0, (L2, N), 25.0), resistor(0, (L1, L2), 20.0)];
    let solution = solved(&network);
    near(volts(&solution, 0, L1, N), 140.0, 1e-3);
    near(volts(&solution, 0, L2, N), 70.0, 1e-3);
}

/// Nilsson and Riedel, *Electric Circuits*, residential wiring: 40 Ω and 400 Ω on 125 V, 8 Ω on 250 V.
#[test]
fn residential_wiring_problem() {
    let mut network = three_wire(125.0, WIRE, WIRE);
    network.loads = vec![resistor(0, (L1, N), 40.0), resistor(0, (L2, N), 400.0), resistor(0, (L1, L2), 8.0)];
    near(amperes(&solved(&network), 0, N), 2.8125, 1e-4);
    near(solved(&network).loads[2].magnitude(), 31.25, 1e-4);
    network.spans[0].ohms[N] = Some(f64::INFINITY);
    let open = solved(&network);
    near(volts(&open, 0, L1, N), 22.727, 1e-3);
    near(volts(&open, 0, L2, N), 227.273, 1e-3);
}

/// Intact neutrals with wire resistance and loads of given current; Japan, 2nd-class electrician examinations 2005 and 2025.
#[test]
fn intact_neutrals_as_published() {
    for (source, ohms, currents, expected) in
        [(104.0, 0.1, (20.0, 10.0), (101.0, 104.0)), (104.0, 0.2, (10.0, 10.0), (102.0, 102.0)), (105.0, 0.1, (10.0, 10.0), (104.0, 104.0))]
    {
        let mut network = three_wire(source, ohms, ohms);
        let constant = |between, amperes: f64| load(0, between, 100.0, 100.0 * amperes, Law::Power { exponent: 0.0 });
        network.loads = vec![constant((L1, N), currents.0), constant((L2, N), currents.1)];
        let solution = solved(&network);
        near(volts(&solution, 0, L1, N), expected.0, 1e-3);
        near(volts(&solution, 0, L2, N), expected.1, 1e-3);
        near(amperes(&solution, 0, N), currents.0 - currents.1, 1e-3);
    }
}

/// 120/120 V, 0.05 Ω legs, 12 Ω, 24 Ω and 30 Ω between the lines; numpy and ngspice agree to the digits given.
#[test]
fn three_wire_grid() {
    let open = f64::INFINITY;
    let grid: [(f64, Option<f64>, [f64; 4]); 10] = [
        (0.05, None, [118.8612, 119.5995, 238.4607, 0.2461]),
        (0.2, None, [118.1439, 120.3183, 238.4622, 0.9664]),
        (0.5, None, [116.7849, 121.6801, 238.4650, 2.3310]),
        (1.0, None, [114.7207, 123.7486, 238.4693, 4.4039]),
        (5.0, None, [103.9110, 134.5807, 238.4917, 15.2586]),
        (1.0, Some(25.0), [114.8713, 123.5977, 238.4690, 4.2526]),
        (open, Some(5.0), [103.9110, 134.5807, 238.4917, 15.2586]),
        (open, Some(25.0), [89.1374, 149.3849, 238.5223, 30.0937]),
        (open, Some(50.0), [84.9914, 153.5395, 238.5309, 34.2569]),
        (open, None, [79.5141, 159.0282, 238.5422, 39.7570]),
    ];
    for (neutral, earth, expected) in grid {
        let mut network = three_wire(120.0, 0.05, neutral);
        network.spans[0].electrode = earth;
        network.loads = vec![resistor(0, (L1, N), 12.0), resistor(0, (L2, N), 24.0), resistor(0, (L1, L2), 30.0)];
        let s = solved(&network);
        let got = [volts(&s, 0, L1, N), volts(&s, 0, L2, N), volts(&s, 0, L1, L2), s.volts[0][N].unwrap().magnitude()];
        for (got, expected) in got.into_iter().zip(expected) {
            near(got, expected, 6e-5);
        }
        if let Some(ohms) = earth {
            near(s.earth[0].magnitude(), expected[3] / ohms, 6e-5);
        }
    }
}

/// V₁/V₂ = (I₀₂/I₀₁)^(1/0.55), worked by hand; constant resistance would give 90/150 and 80/160.
#[test]
fn lamps_in_series() {
    for (watts, expected) in [((100.0, 60.0), (67.96, 172.04)), ((200.0, 100.0), (53.02, 186.98))] {
        let mut network = three_wire(120.0, WIRE, f64::INFINITY);
        network.loads = vec![lamp(0, (L1, N), watts.0), lamp(0, (L2, N), watts.1)];
        let solution = solved(&network);
        near(volts(&solution, 0, L1, N), expected.0, 6e-3);
        near(volts(&solution, 0, L2, N), expected.1, 6e-3);
    }
    let mut network = three_wire(120.0, WIRE, f64::INFINITY);
    network.loads = vec![lamp(0, (L1, N), 100.0), lamp(0, (L2, N), 60.0)];
    near(solved(&network).loads[0].magnitude(), 0.6096, 6e-5);
}

/// By symmetry, no source: like loads hold an open neutral in the middle.
#[test]
fn a_balanced_load_hides_an_open_neutral() {
    let mut network = three_wire(120.0, 0.05, f64::INFINITY);
    for leg in [L1, L2] {
        network.loads.extend([resistor(0, (leg, N), 24.0), lamp(0, (leg, N), 200.0)]);
    }
    let solution = solved(&network);
    near(solution.volts[0][N].unwrap().magnitude(), 0.0, 1e-9);
    near(volts(&solution, 0, L1, N), volts(&solution, 0, L2, N), 1e-9);
}

/// 50 kVA, 7200-240/120 V: halves 0.011 Ω and 0.0072 Ω per unit of 0.288 Ω, primary 5.7024 + j14.9299 Ω through a ratio of 60.
fn kersting() -> Network {
    let mut network = service("120/240", 120.0);
    network.source.own = Phasor { re: 0.003_168, im: 0.002_073_6 };
    network.source.shared = Phasor { re: 5.7024 / 3600.0, im: 14.9299 / 3600.0 };
    run(&mut network, None, [Some(0.0), Some(0.0), None, Some(0.0)]);
    network.loads = vec![impedance(0, (L1, N), 1.4, 0.5), impedance(0, (N, L2), 0.9, 0.4), impedance(0, (L1, L2), 2.0, 1.2)];
    network
}

/// Kersting, *Distribution System Modeling and Analysis*, 3rd edition, example 11.1: as published, and as numpy and OpenDSS solve
/// it to more digits.
#[test]
fn kersting_example_11_1() {
    let solution = solved(&kersting());
    for (a, b, published, solved) in [(L1, N, 118.0, 118.0082), (N, L2, 117.9, 117.8532), (L1, L2, 235.9, 235.8614)] {
        near(volts(&solution, 0, a, b), published, 0.06);
        near(volts(&solution, 0, a, b), solved, 6e-4);
    }
    for (slot, published, solved) in [(L1, 179.6, 179.6398), (L2, 220.4, 220.3775), (N, 40.94, 40.9423)] {
        near(amperes(&solution, 0, slot), published, 0.05);
        near(amperes(&solution, 0, slot), solved, 6e-4);
    }
    let degrees = |p: Phasor| p.angle().to_degrees();
    near(degrees(solution.amperes[0][L1].unwrap()), -26.606, 2e-3);
    near(degrees(solution.amperes[0][L2].unwrap()), 152.217, 2e-3);
    near(degrees(solution.volts[0][L1].unwrap()), -0.613, 2e-3);
}
