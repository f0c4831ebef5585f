//! Electronic loads in series, and numbers that are no network.

use super::support::{L1, L2, N, electronic, near, resistor, run, service, three_wire};
use midwire::network::{Fault, Network, Phasor, SolveOutcome, SolveSettings, solve};

/// Two like loads I = P·V/(V² + k²) across 240 V: V₁ = V₂, or V₁·V₂ = k², so 3.81 V and 236.19 V; by hand.
#[test]
fn electronic_loads_in_series_have_three_solutions() {
    let mut network = three_wire(120.0, 1e-6, f64::INFINITY);
    network.loads = vec![electronic(0, (L1, N), 100.0), electronic(0, (L2, N), 100.0)];
    let Err(SolveOutcome::Several(all)) = solve(&network, &SolveSettings::default()) else { panic!("one solution") };
    let low = 120.0 - (120.0f64 * 120.0 - 900.0).sqrt();
    let first: Vec<f64> = all.iter().map(|s| s.load_volts[0].magnitude()).collect();
    near(first[0], low, 1e-3);
    near(*first.last().unwrap(), 240.0 - low, 1e-3);
}

/// With its neutral the same pair has one.
#[test]
fn a_neutral_makes_them_one() {
    let mut network = three_wire(120.0, 0.05, 0.05);
    network.loads = vec![electronic(0, (L1, N), 100.0), electronic(0, (L2, N), 300.0)];
    assert!(solve(&network, &SolveSettings::default()).is_ok());
}

/// A hot leg that is open leaves its electronic load dead, not at some overvoltage.
#[test]
fn a_dead_leg_is_dead() {
    let mut network = service("120/240", 120.0);
    run(&mut network, None, [Some(0.05), Some(f64::INFINITY), None, Some(0.05)]);
    network.loads = vec![electronic(0, (L2, N), 200.0), resistor(0, (L1, N), 12.0)];
    let solution = solve(&network, &SolveSettings::default()).unwrap();
    near(solution.load_volts[0].magnitude(), 0.0, 1e-6);
}

#[test]
fn numbers_that_are_none_are_named() {
    let sound = || {
        let mut network = three_wire(120.0, 0.05, 0.05);
        run(&mut network, Some(0), [Some(0.1), None, None, Some(0.1)]);
        network.loads = vec![resistor(1, (L1, N), 12.0)];
        network
    };
    let fault = |change: fn(&mut Network)| {
        let mut network = sound();
        change(&mut network);
        match solve(&network, &SolveSettings::default()) {
            Err(SolveOutcome::Malformed(fault)) => Some(fault),
            _ => None,
        }
    };
    assert_eq!(fault(|_| ()), None);
    assert_eq!(fault(|n| n.spans[1].fed_from = Some(1)), Some(Fault::Feed { run: 1 }));
    assert_eq!(fault(|n| n.spans[1].fed_from = Some(7)), Some(Fault::Feed { run: 1 }));
    assert_eq!(fault(|n| n.spans[0].ohms[L1] = None), Some(Fault::Conductor { run: 1, slot: L1 }));
    assert_eq!(fault(|n| n.spans[1].ohms[L1] = Some(-0.1)), Some(Fault::Run { run: 1 }));
    assert_eq!(fault(|n| n.spans[1].ohms[N] = Some(f64::NAN)), Some(Fault::Run { run: 1 }));
    assert_eq!(fault(|n| n.loads[0].between = (L2, N)), Some(Fault::Load { load: 0 }));
    assert_eq!(fault(|n| n.loads[0].watts = f64::NAN), Some(Fault::Load { load: 0 }));
    assert_eq!(fault(|n| n.loads[0].at = 9), Some(Fault::Load { load: 0 }));
    assert_eq!(fault(|n| n.source.own = Phasor { re: f64::NAN, im: 0.0 }), Some(Fault::Source));
}
