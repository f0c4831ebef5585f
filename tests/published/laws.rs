//! Laws that hold for every input, by property tests.

use midwire::electrics::conductor::per_metre;
use midwire::electrics::lamp::in_series;
use midwire::electrics::load_step::{State, Uncertainty, resistances};
use midwire::electrics::neutral::{at_angles, split_phase, wye};
use midwire::electrics::plane::{SixVoltages, misfit, triangle};
use midwire::electrics::unbalance::{motor_derating, negative_sequence_percent, nema_percent};
use midwire::quantity::{Amperes, Celsius, Volts};
use midwire::visit::{Metal, Wire, WireSize};
use proptest::prelude::*;

fn distance(a: (f64, f64), b: (f64, f64)) -> f64 {
    ((a.0 - b.0).powi(2) + (a.1 - b.1).powi(2)).sqrt()
}

fn six_of(points: [(f64, f64); 4]) -> SixVoltages {
    let [a, b, c, n] = points;
    SixVoltages {
        to_neutral: [a, b, c].map(|p| Volts(distance(p, n))),
        between: [Volts(distance(a, b)), Volts(distance(b, c)), Volts(distance(c, a))],
    }
}

/// A triangle of a service, its corners moved by up to a third, and a neutral anywhere about it.
fn service() -> impl Strategy<Value = [(f64, f64); 4]> {
    let offset = || -40.0..40.0f64;
    (prop::array::uniform3((offset(), offset())), (-150.0..150.0f64, -150.0..150.0f64)).prop_map(|(d, n)| {
        let at = |x: f64, y: f64, (dx, dy): (f64, f64)| (x + dx, y + dy);
        [at(120.0, 0.0, d[0]), at(-60.0, -103.9, d[1]), at(-60.0, 103.9, d[2]), n]
    })
}

proptest! {
    /// Pillay and Manyage, IEEE Power Engineering Review 2001, table 1: for a NEMA figure U the true ratio lies from U to 1.155·U,
    /// for small U.
    #[test]
    fn the_true_ratio_lies_between_nema_and_1_155_nema(v in 100.0..600.0f64, d in prop::array::uniform2(-0.03..0.03f64)) {
        let volts = [Volts(v), Volts(v * (1.0 + d[0])), Volts(v * (1.0 + d[1]))];
        let nema = nema_percent(volts).unwrap();
        prop_assume!(nema > 0.01);
        let ratio = negative_sequence_percent(volts).unwrap() / nema;
        // 2/√3 = 1.1547 to first order; the second-order term is below 2 % for U up to 4 %.
        prop_assert!((0.98..=1.155 * 1.02).contains(&ratio), "{ratio} at {nema} %");
    }

    #[test]
    fn unbalance_does_not_depend_on_scale_or_order(v in prop::array::uniform3(90.0..130.0f64), k in 0.5..5.0f64) {
        let plain = v.map(Volts);
        let turned = [v[2] * k, v[0] * k, v[1] * k].map(Volts);
        prop_assert!((nema_percent(plain).unwrap() - nema_percent(turned).unwrap()).abs() < 1e-9);
        let (a, b) = (negative_sequence_percent(plain).unwrap(), negative_sequence_percent(turned).unwrap());
        prop_assert!((a - b).abs() < 1e-5, "{a} {b}");
    }

    #[test]
    fn more_unbalance_never_derates_less(a in 0.0..5.0f64, b in 0.0..5.0f64) {
        let (low, high) = if a <= b { (a, b) } else { (b, a) };
        prop_assert!(motor_derating(low).unwrap() >= motor_derating(high).unwrap());
    }

    #[test]
    fn the_wye_formula_is_the_phasor_sum(i in prop::array::uniform3(0.0..300.0f64)) {
        let [a, b, c] = i.map(Amperes);
        let sum = at_angles(&[(a, 0.0), (b, -120.0), (c, 120.0)]);
        prop_assert!((wye(a, b, c) - sum).abs().0 < 1e-9 * 300.0);
        prop_assert!((split_phase(a, b) - at_angles(&[(a, 0.0), (b, 180.0)])).abs().0 < 1e-9 * 300.0);
    }

    #[test]
    fn a_neutral_never_carries_more_than_the_largest_line_current(i in prop::array::uniform3(0.0..300.0f64)) {
        let [a, b, c] = i.map(Amperes);
        let most = i.iter().copied().fold(0.0, f64::max);
        prop_assert!(wye(a, b, c).0 <= most + 1e-9);
    }

    #[test]
    fn points_of_a_plane_fit_and_are_found_again(points in service()) {
        let six = six_of(points);
        if let Some(m) = misfit(&six) {
            prop_assert!(m.volts.0.abs() < 1e-4, "{m:?}");
            prop_assert!((m.weights.iter().map(|w| w * w).sum::<f64>() - 1.0).abs() < 1e-9);
        }
        let t = triangle(&six).unwrap();
        let again = six_of([t.corners[0], t.corners[1], t.corners[2], t.neutral]);
        for (a, b) in six.to_neutral.iter().chain(&six.between).zip(again.to_neutral.iter().chain(&again.between)) {
            prop_assert!((a.0 - b.0).abs() < 1e-6, "{a:?} {b:?}");
        }
        prop_assert!((t.shares().iter().sum::<f64>() - 1.0).abs() < 1e-9);
    }

    /// A misread voltage shows in the misfit as its weight says, to first order; and a common gain error does not show.
    #[test]
    fn the_misfit_moves_by_its_weights(points in service(), which in 0usize..6, error in -0.01..0.01f64, gain in 0.99..1.01f64) {
        let six = six_of(points);
        let Some(exact) = misfit(&six) else { return Ok(()) };
        // Near the vanishing gradient the first order says little.
        prop_assume!(six.to_neutral.iter().all(|v| v.0 > 30.0));
        let mut off = six;
        if which < 3 { off.to_neutral[which].0 += error } else { off.between[which - 3].0 += error }
        let moved = misfit(&off).unwrap().volts.0 - exact.volts.0;
        prop_assert!((moved - exact.weights[which] * error).abs() < 0.05 * error.abs() + 1e-6);
        let scaled = SixVoltages { to_neutral: six.to_neutral.map(|v| v * gain), between: six.between.map(|v| v * gain) };
        prop_assert!(misfit(&scaled).unwrap().volts.0.abs() < 1e-4);
    }

    #[test]
    fn a_series_pair_carries_one_current_and_adds_up(a in 0.01..20.0f64, b in 0.01..20.0f64, exponent in 0.3..1.5f64) {
        let (v1, v2) = in_series(Volts(240.0), (Amperes(a), Amperes(b)), exponent).unwrap();
        prop_assert!(((v1 + v2).0 - 240.0).abs() < 1e-9);
        let current = |i: f64, v: Volts| i * (v.0 / 120.0).powf(exponent);
        prop_assert!((current(a, v1) - current(b, v2)).abs() <= 1e-6 * current(a, v1).max(1e-9) + 1e-9);
    }

    #[test]
    fn warmer_and_thinner_conductors_resist_more(n in -3i8..=16, t in -20.0..90.0f64, dt in 1.0..20.0f64, aluminium: bool) {
        let metal = if aluminium { Metal::Aluminium } else { Metal::Copper };
        let ohms = |n, t| per_metre(Wire { size: WireSize::Awg(n), metal, metal_assumed: false }, Celsius(t)).unwrap();
        prop_assert!(ohms(n, t + dt) > ohms(n, t));
        prop_assert!(ohms(n + 1, t) > ohms(n, t));
    }

    /// Any two load states of a network with alike legs give its resistances back exactly.
    #[test]
    fn a_load_step_returns_the_networks_own_resistances(
        r_leg in 0.001..0.3f64, r_n in 0.001..2.0f64, before in prop::array::uniform2(0.0..20.0f64), after in prop::array::uniform2(0.0..20.0f64),
    ) {
        let state = |[i1, i2]: [f64; 2]| {
            let v1 = 120.0 - r_leg * i1 - r_n * (i1 - i2);
            let v2 = 120.0 - r_leg * i2 + r_n * (i1 - i2);
            State { leg_1: Volts(v1), leg_2: Volts(v2), line: Volts(v1 + v2), current_1: Amperes(i1), current_2: Amperes(i2) }
        };
        let (d1, d2) = (after[0] - before[0], after[1] - before[1]);
        prop_assume!(d1.abs() > 0.5 && (d1 - d2).abs() > 0.5 && (d1 + d2).abs() > 0.5);
        let none = Uncertainty { volts: Volts(0.0), amperes: Amperes(0.0) };
        let step = resistances(state(before), state(after), none).unwrap();
        prop_assert!((step.neutral.ohms.0 - r_n).abs() < 1e-9);
        prop_assert!((step.leg.ohms.0 - r_leg).abs() < 1e-9);
    }
}
