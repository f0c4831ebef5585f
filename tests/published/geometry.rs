//! How the voltages of a service lie to each other.

use super::{Check, check};
use midwire::electrics::legs::{high_leg, split_phase_line, wye_line};
use midwire::electrics::plane::{SixVoltages, misfit, triangle};
use midwire::quantity::Volts;
use midwire::visit::System;

fn six(to_neutral: [f64; 3], between: [f64; 3]) -> SixVoltages {
    SixVoltages { to_neutral: to_neutral.map(Volts), between: between.map(Volts) }
}

/// Open neutral of a wye with resistive loads: nominal volts, neutral's shift, legs to neutral. Millman's theorem, computed.
const OPEN_WYE: [(f64, f64, [f64; 3]); 5] = [
    (120.0, 39.333, [82.362, 136.255, 149.975]),
    (120.0, 45.356, [78.558, 136.067, 157.117]),
    (230.0, 86.932, [150.570, 260.795, 301.141]),
    (277.0, 104.696, [181.339, 314.088, 362.678]),
    (347.0, 131.154, [227.165, 393.461, 454.330]),
];

pub fn checks() -> Vec<Check> {
    let constant = "geometry, exact: √3 relations";
    let forum = "terrylove.com forum: 219 V high leg on 126/252";
    let computed = "law of cosines, computed";
    let millman = "Millman's theorem, computed by numpy and OpenDSS";
    let high = |line, half| high_leg(Volts(line), Volts(half)).map_or(f64::NAN, |v| v.0);
    let mut all = vec![
        check(constant, "208/√3", 208.0 / wye_line(Volts(1.0), Volts(1.0)).0, 120.09, 0.005),
        check(constant, "120·√3", wye_line(Volts(120.0), Volts(120.0)).0, 207.85, 0.005),
        check(constant, "480/√3", 480.0 / wye_line(Volts(1.0), Volts(1.0)).0, 277.13, 0.005),
        check(constant, "600/√3", 600.0 / wye_line(Volts(1.0), Volts(1.0)).0, 346.41, 0.005),
        check(constant, "400/√3", 400.0 / wye_line(Volts(1.0), Volts(1.0)).0, 230.94, 0.005),
        check(constant, "high leg of 240/120", high(240.0, 120.0), 207.85, 0.005),
        check(forum, "high leg of 252/126", high(252.0, 126.0), 219.0, 1.0),
        check(forum, "high leg of 252/126, exact", high(252.0, 126.0), 218.2, 0.05),
        check(forum, "high leg of 277/138.5", high(277.0, 138.5), 239.9, 0.05),
        check(computed, "118 and 122 V, 120° apart", wye_line(Volts(118.0), Volts(122.0)).0, 207.86, 0.005),
        check(computed, "120 and 120 V in opposition", split_phase_line(Volts(120.0), Volts(120.0)).0, 240.0, 1e-12),
    ];
    for (nominal, shift, legs) in OPEN_WYE {
        let line = nominal * 3f64.sqrt();
        let place = triangle(&six(legs, [line; 3]));
        let shift_found = place.map_or(f64::NAN, |t| t.shift().0);
        all.push(check(millman, format!("shift of the neutral at {nominal} V, legs {legs:?}"), shift_found, shift, 0.003));
        let misfit = misfit(&six(legs, [line; 3])).map_or(f64::NAN, |m| m.volts.0);
        all.push(check(millman, format!("{legs:?} fit a plane"), misfit, 0.0, 0.002));
    }
    all
}

#[test]
fn a_sound_wye_has_its_neutral_at_the_centroid_in_the_systems_own_orientation() {
    for name in ["208Y/120", "480Y/277", "230/400", "600Y/347"] {
        let system = System::named(name).unwrap();
        let v = system.line_to_neutral.0;
        let t = triangle(&six([v; 3], [v * 3f64.sqrt(); 3])).unwrap();
        assert!(t.shift().0 < 1e-9 && t.is_inside());
        for (corner, leg) in t.corners.iter().zip(system.legs()) {
            let (x, y) = system.phasor(*leg);
            assert!((corner.0 - x).abs() < 1e-9 && (corner.1 - y).abs() < 1e-9, "{name} {leg}: {corner:?} against {x}, {y}");
        }
        assert!(t.shares().iter().all(|s| (s - 1.0 / 3.0).abs() < 1e-12));
    }
}

#[test]
fn the_high_leg_fits_a_plane_and_a_misread_half_does_not() {
    let sound = six([120.0, 207.846_097, 120.0], [240.0; 3]);
    assert!(misfit(&sound).unwrap().volts.0.abs() < 1e-4);
    // 10 V on a half of the tapped winding shows by its weight of 1/√3; 10 V on the high leg hardly: a neutral 10 V aside of the line
    // L1-L3 lengthens the halves by 0.4 V only.
    let half = six([130.0, 207.846_097, 120.0], [240.0; 3]);
    assert!(misfit(&half).unwrap().volts.0.abs() > 3.0);
    let high = six([120.0, 217.846_097, 120.0], [240.0; 3]);
    assert!(misfit(&high).unwrap().volts.0.abs() < 1.0);
}

#[test]
fn a_neutral_outside_the_triangle_is_said_to_be() {
    // 20 V beyond L1 on the first axis of a 208Y/120 triangle.
    let x = 140.0;
    let far = ((x + 60.0f64).powi(2) + 103.923f64.powi(2)).sqrt();
    assert!(!triangle(&six([20.0, far, far], [207.846; 3])).unwrap().is_inside());
}

#[test]
fn points_without_a_triangle_have_no_place() {
    assert!(triangle(&six([120.0; 3], [0.0; 3])).is_none());
    assert!(triangle(&six([120.0; 3], [100.0, 100.0, 300.0])).is_none());
    assert!(misfit(&six([0.0; 3], [0.0; 3])).is_none());
}
