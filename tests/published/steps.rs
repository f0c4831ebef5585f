//! Impedance by load steps.

use super::{Check, check};
use midwire::electrics::load_step::{State, Step, Uncertainty, resistances};
use midwire::quantity::{Amperes, Volts};

fn state(volts: [f64; 3], amperes: [f64; 2]) -> State {
    let [leg_1, leg_2, line] = volts.map(Volts);
    let [current_1, current_2] = amperes.map(Amperes);
    State { leg_1, leg_2, line, current_1, current_2 }
}

fn steady(volts: f64) -> Uncertainty {
    Uncertainty { volts: Volts(volts), amperes: Amperes(0.0) }
}

fn ideal() -> Option<Step> {
    resistances(state([121.0, 121.2, 242.2], [0.0, 0.0]), state([118.0, 122.6, 240.6], [12.0, 0.0]), steady(0.0))
}

/// Source 120/120 V, legs 0.05 Ω, neutral 0.5 Ω, 24 Ω on leg 2; 12 Ω switched on leg 1.
fn loaded() -> Option<Step> {
    let before = state([122.443_99, 117.311_61, 122.443_99 + 117.311_61], [0.0, 4.887_98]);
    let after = state([117.173_00, 122.084_44, 117.173_00 + 122.084_44], [9.764_42, 5.086_85]);
    resistances(before, after, steady(0.0))
}

pub fn checks() -> Vec<Check> {
    let ideal_source = "worked by hand: 12 A, 3.0 V fall, 1.4 V rise, 1.6 V between the legs";
    let solved = "network solved by numpy and ngspice; the naive quotient of rise and step gives 0.4888";
    let counts = "worked by hand: 0.2 V of counts on each reading, 12 A: some 0.02 to 0.03 Ω";
    let get = |step: Option<Step>, f: fn(Step) -> f64| step.map_or(f64::NAN, f);
    let noisy = |amperes: f64| {
        let before = state([120.0, 120.0, 240.0], [0.0, 0.0]);
        resistances(before, state([119.0, 120.0, 239.0], [amperes, 0.0]), steady(0.2 / 3f64.sqrt()))
    };
    vec![
        check(ideal_source, "around", get(ideal(), |s| s.around.ohms.0), 0.2500, 5e-5),
        check(ideal_source, "neutral", get(ideal(), |s| s.neutral.ohms.0), 0.1167, 5e-5),
        check(ideal_source, "leg", get(ideal(), |s| s.leg.ohms.0), 0.1333, 5e-5),
        check(ideal_source, "neutral and leg make the way around", get(ideal(), |s| s.neutral.ohms.0 + s.leg.ohms.0), 0.25, 1e-9),
        check(solved, "neutral, the other leg loaded", get(loaded(), |s| s.neutral.ohms.0), 0.5000, 1e-4),
        check(solved, "leg", get(loaded(), |s| s.leg.ohms.0), 0.0500, 1e-4),
        check(counts, "what 12 A resolve", get(noisy(12.0), |s| s.neutral.expanded.0), 0.0272, 0.005),
    ]
}

#[test]
fn a_small_step_resolves_nothing() {
    let before = state([120.0, 120.0, 240.0], [0.0, 0.0]);
    let after = state([119.9, 120.1, 240.0], [1.0, 0.0]);
    let step = resistances(before, after, steady(0.2 / 3f64.sqrt())).unwrap();
    assert!(!step.neutral.is_resolved());
    assert!(step.neutral.expanded.0 > 0.3);
    assert!(resistances(before, before, steady(0.1)).is_none());
}
