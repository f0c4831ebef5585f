//! Neutral current.

use super::{Check, check};
use midwire::electrics::{drop, neutral};
use midwire::quantity::{Amperes, Ohms};

/// Line currents and neutral current of a wye, each with its source.
const WYE: [([f64; 3], f64, &str); 10] = [
    ([10.0, 15.0, 20.0], 8.6603, "bit1024.com (8.66)"),
    ([10.0, 10.0, 5.0], 5.0, "iee-business.com"),
    ([5.0, 8.0, 0.0], 7.0, "forums.mikeholt.com/threads/multiwire-circuit.44780"),
    ([20.0, 20.0, 0.0], 20.0, "NEC 310.15(E)(2): about the line current (forums.mikeholt.com 124484)"),
    ([10.0, 8.0, 6.0], 3.4641, "computed; a forum's 15.1 is wrong"),
    ([40.0, 0.0, 25.0], 35.0, "computed"),
    ([30.0, 20.0, 10.0], 17.3205, "computed"),
    ([200.0, 150.0, 100.0], 86.6025, "computed"),
    ([50.0, 50.0, 50.0], 0.0, "balanced currents cancel"),
    ([20.0, 15.0, 0.0], 18.0278, "computed"),
];

/// Split phase.
const SPLIT: [(f64, f64, f64, &str); 4] = [
    (15.0, 5.0, 10.0, "receptacle102.rssing.com"),
    (15.0, 15.0, 0.0, "receptacle102.rssing.com"),
    (2.0, 1.0, 1.0, "allafragor.com"),
    (10.0, 5.0, 5.0, "Mullin, Electrical Wiring Residential, 18th ed., chapter 17, question 4"),
];

pub fn checks() -> Vec<Check> {
    let mut all = Vec::new();
    for ([a, b, c], expected, source) in WYE {
        let program = neutral::wye(Amperes(a), Amperes(b), Amperes(c)).0;
        all.push(check(source, format!("wye {a}, {b}, {c}"), program, expected, 6e-5));
        let general = neutral::at_angles(&[(Amperes(a), 0.0), (Amperes(b), -120.0), (Amperes(c), 120.0)]).0;
        all.push(check("phasor sum, forums.mikeholt.com 1772", format!("phasors {a}, {b}, {c}"), general, expected, 6e-5));
    }
    for (a, b, expected, source) in SPLIT {
        all.push(check(source, format!("split phase {a}, {b}"), neutral::split_phase(Amperes(a), Amperes(b)).0, expected, 1e-12));
    }
    let both = neutral::same_leg(Amperes(15.0), Amperes(15.0)).0;
    all.push(check("receptacle102.rssing.com: both hots on one leg add", "15 and 15 on one leg", both, 30.0, 1e-12));
    let feeder = neutral::feeder_load(Amperes(260.0)).0;
    all.push(check("NEC 220.61(B): 200 + 0.7·60", "feeder neutral of 260 A", feeder, 242.0, 1e-9));
    let below = neutral::feeder_load(Amperes(180.0)).0;
    all.push(check("NEC 220.61(B): no reduction to 200 A", "feeder neutral of 180 A", below, 180.0, 1e-9));
    all.extend(loaded_neutral());
    all
}

/// A neutral that is whole but has its resistance: three wires of the stated ohms each.
fn loaded_neutral() -> Vec<Check> {
    let h17 = "Japan, second-class electrician examination H17 question 6 (jikkyo.co.jp)";
    let r7 = "Japan, second-class electrician examination R7 second half, question 7";
    let page = "tenisyoku.com: 105 V, 0.1 Ω, 10 A and 10 A";
    let leg = |source: f64, i: f64, other: f64, r: f64| source - drop::multiwire(Amperes(i), Amperes(other), Ohms(r), Ohms(r)).0;
    vec![
        check(h17, "the leg of 20 A", leg(104.0, 20.0, 10.0, 0.1), 101.0, 1e-9),
        check(h17, "the leg of 10 A, which drops nothing", leg(104.0, 10.0, 20.0, 0.1), 104.0, 1e-9),
        check(r7, "10 A and 10 A through 0.2 Ω", leg(104.0, 10.0, 10.0, 0.2), 102.0, 1e-9),
        check(page, "10 A and 10 A through 0.1 Ω", leg(105.0, 10.0, 10.0, 0.1), 104.0, 1e-9),
    ]
}

#[test]
fn rounding_never_makes_a_number_that_is_none() {
    for i in [50.0, 0.1, 1e-9, 1e9, 1.0 / 3.0] {
        assert_eq!(neutral::wye(Amperes(i), Amperes(i), Amperes(i)), Amperes(0.0));
    }
}
