//! Incandescent lamps off their rated voltage, alone and in series across an open neutral.

use super::{Check, check};
use midwire::electrics::element::{cold_ohms, working_ohms};
use midwire::electrics::lamp;
use midwire::quantity::{Amperes, Volts, Watts};

/// V/Vd, then I, R, P (1.55), lumens (3.4), life (−13, −12, −16).
const LAWS: [(f64, [f64; 7]); 6] = [
    (80.0 / 120.0, [0.8001, 0.8332, 0.5334, 0.2519, 194.6, 129.7, 656.8]),
    (0.90, [0.9437, 0.9537, 0.8493, 0.6989, 3.934, 3.541, 5.397]),
    (0.95, [0.9722, 0.9772, 0.9236, 0.8400, 1.948, 1.851, 2.272]),
    (1.05, [1.0272, 1.0222, 1.0786, 1.1804, 0.5303, 0.5568, 0.4581]),
    (1.10, [1.0538, 1.0438, 1.1592, 1.3827, 0.2897, 0.3186, 0.2176]),
    (160.0 / 120.0, [1.1714, 1.1382, 1.5619, 2.6594, 0.0238, 0.0317, 0.0100]),
];

pub fn checks() -> Vec<Check> {
    let laws = "exponents of Fink and Beaty, Standard Handbook for Electrical Engineers, 11th ed., p. 22-8 (en.wikipedia.org/wiki/Lamp_rerating), computed";
    let mut all = Vec::new();
    for (v, expected) in LAWS {
        let program = [
            lamp::current(v),
            lamp::resistance(v),
            lamp::power(v),
            lamp::light(v),
            lamp::life(v, 13.0),
            lamp::life(v, 12.0),
            lamp::life(v, 16.0),
        ];
        for (k, (program, published)) in program.into_iter().zip(expected).enumerate() {
            all.push(check(laws, format!("law {k} at {v}"), program, published, 1e-4f64.max(published * 6e-4)));
        }
    }
    all.extend(series());
    all
}

fn series() -> Vec<Check> {
    let exam_1 = "Japan, second-class electrician examination H28 question 7 (denkou2.info/h28-k07)";
    let exam_2 = "Japan, second-class electrician examination 2023 second half, afternoon, question 7 (kenshoku-bank.com)";
    let nec = "commentary to NEC 408.41: 24 Ω and 12 Ω across 240 V (mikeholt.com, pageid 2113)";
    let mullin = "Mullin, Electrical Wiring Residential, 18th ed., chapter 17, question 4 (loads); divider computed";
    let nilsson = "Nilsson and Riedel, residential wiring problem: 40 Ω and 400 Ω across 250 V";
    let forum = "kontrolkalemi.com 12005: 55 Ω and 110 Ω between two phases of 380 V";
    let computed = "V₁/V₂ = (I₀₂/I₀₁)^(1/0.55), computed";
    let rating = "P = V²/R: 100 W at 120 V is 144 Ω";
    // Resistors: current at any common voltage is 1/R.
    let resistors = |across: f64, a: f64, b: f64| {
        lamp::in_series(Volts(across), (Amperes(1.0 / a), Amperes(1.0 / b)), 1.0).map_or((f64::NAN, f64::NAN), |(x, y)| (x.0, y.0))
    };
    let lamps = |a: f64, b: f64| {
        let rated = (Amperes(a / 120.0), Amperes(b / 120.0));
        lamp::in_series(Volts(240.0), rated, lamp::CURRENT).map_or((f64::NAN, f64::NAN), |(x, y)| (x.0, y.0))
    };
    vec![
        check(nec, "the 24 Ω load", resistors(240.0, 24.0, 12.0).0, 160.0, 1e-9),
        check(exam_1, "1000 W of 10 Ω with 50 Ω on 200 V", resistors(200.0, 10.0, 50.0).0, 33.0, 0.4),
        check(exam_2, "20 Ω with 10 Ω on 210 V", resistors(210.0, 20.0, 10.0).0, 140.0, 1e-9),
        check(mullin, "12 Ω with 24 Ω on 240 V", resistors(240.0, 12.0, 24.0).0, 80.0, 1e-9),
        check(nilsson, "40 Ω", resistors(250.0, 40.0, 400.0).0, 22.7, 0.05),
        check(nilsson, "400 Ω", resistors(250.0, 40.0, 400.0).1, 227.3, 0.05),
        check(forum, "55 Ω", resistors(380.0, 55.0, 110.0).0, 126.5, 0.2),
        check(forum, "36.66 Ω with 110 Ω", resistors(380.0, 36.66, 110.0).1, 285.0, 0.1),
        check(computed, "100 W lamp with 60 W lamp", lamps(100.0, 60.0).0, 67.96, 0.005),
        check(computed, "60 W lamp with 100 W lamp", lamps(100.0, 60.0).1, 172.04, 0.005),
        check(computed, "200 W lamp with 100 W lamp", lamps(200.0, 100.0).0, 53.02, 0.005),
        check(computed, "100 W lamp with 200 W lamp", lamps(200.0, 100.0).1, 186.98, 0.005),
        check(rating, "100 W lamp at work", working_ohms(Watts(100.0), Volts(120.0)).map_or(f64::NAN, |r| r.0), 144.0, 1e-9),
    ]
}

/// Tungsten's resistivity gives a ratio of about 15 (handbook, from memory): a 100 W lamp is 9.5 to 10 Ω cold; a consumer page's 60 W
/// lamp of 24 Ω cold, 240 Ω hot has a ratio of 10. Both lie in the range of a cold filament; the working ohms do not.
#[test]
fn a_cold_filament_is_far_below_its_working_ohms() {
    for (watts, cold) in [(100.0, 9.5), (100.0, 10.0), (60.0, 24.0)] {
        let (low, high) = cold_ohms(Watts(watts), Volts(120.0), true).unwrap();
        assert!(low.0 <= cold && cold <= high.0, "{watts} W: {low:?} to {high:?}");
        assert!(working_ohms(Watts(watts), Volts(120.0)).unwrap() > high);
    }
    let (low, high) = cold_ohms(Watts(1500.0), Volts(120.0), false).unwrap();
    assert!(low.0 < 9.6 && 9.6 < high.0);
}

#[test]
fn loads_of_constant_current_or_power_have_no_divider() {
    assert_eq!(lamp::in_series(Volts(240.0), (Amperes(1.0), Amperes(2.0)), 0.0), None);
    assert_eq!(lamp::in_series(Volts(240.0), (Amperes(1.0), Amperes(2.0)), -1.0), None);
}
