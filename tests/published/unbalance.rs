//! Voltage unbalance and motor derating.

use super::{Check, check};
use midwire::electrics::unbalance::{extra_heating_percent, motor_derating, negative_sequence_percent, nema_percent};
use midwire::quantity::Volts;

/// Line voltages, NEMA deviation in per cent, negative-sequence ratio in per cent, and where the example stands. The exact figures
/// are computed twice outside the project: by the β formula and by symmetrical components of the triangle.
pub const ROWS: [([f64; 3], f64, f64, &str); 15] = [
    ([227.0, 230.0, 235.0], 1.8786, 2.0278, "computed"),
    ([460.0, 467.0, 450.0], 1.9608, 2.1465, "the usual NEMA MG 1 example: 1.96 %"),
    ([462.0, 463.0, 455.0], 1.0870, 1.0914, "eng-tips.com 481112 and US DOE motor tip sheet: 1.1 %"),
    ([203.0, 210.0, 212.0], 2.5600, 2.6064, "relay manual, manualshelf.com p. 5: 2.5 %, truncated"),
    ([480.0, 476.0, 472.0], 0.8403, 0.9704, "industrialmonitordirect.com: 0.84 %"),
    ([243.0, 236.0, 238.0], 1.6736, 1.7473, "chiller manual, manualshive.com: 1.7 %"),
    ([383.0, 386.0, 392.0], 1.2920, 1.3700, "manualslib.nl: 1.3 %"),
    ([429.0, 415.0, 419.0], 1.9002, 1.9847, "aseannow.com field readings: 1.9 %"),
    ([422.0, 409.0, 415.0], 1.6051, 1.8103, "computed; printed as 1.7 % from a rounded mean"),
    ([220.0, 216.0, 213.0], 1.6949, 1.8770, "computed; printed as 1.8 % from a rounded mean"),
    ([400.0, 395.0, 388.0], 1.6061, 1.7631, "computed; printed as 1.45 %, wrong"),
    ([208.0, 206.0, 199.0], 2.6101, 2.6572, "computed; printed as about 2.3 %, wrong"),
    ([450.0, 467.0, 440.0], 3.2424, 3.5000, "computed"),
    ([600.0, 590.0, 580.0], 1.6949, 1.9575, "computed"),
    ([402.0, 398.0, 395.0], 0.9205, 1.0187, "computed"),
];

pub fn checks() -> Vec<Check> {
    let mut all = Vec::new();
    for (volts, nema, negative, source) in ROWS {
        let volts = volts.map(Volts);
        all.push(check(source, format!("NEMA {volts:?}"), nema_percent(volts).unwrap_or(f64::NAN), nema, 5.1e-5));
        all.push(check(
            "IEC 61000-4-30 (easymanua.ls p. 210)",
            format!("u2 {volts:?}"),
            negative_sequence_percent(volts).unwrap_or(f64::NAN),
            negative,
            5.1e-5,
        ));
    }
    all.extend(motors());
    all
}

fn motors() -> Vec<Check> {
    let toolbox = "NEMA MG 1 curve as read at engineeringtoolbox.com d_648";
    let usual = "NEMA MG 1 curve, commonly quoted, from memory";
    let heat = "twice the square: stored motor pages (3 % gives 18 %, 3.5 % about 25 %)";
    let derating = |u| motor_derating(u).unwrap_or(f64::NAN);
    let mut all: Vec<Check> =
        [(0.25, 1.0), (1.5, 0.97), (2.0, 0.95), (2.5, 0.93), (3.0, 0.89), (3.5, 0.85), (4.0, 0.82), (4.5, 0.78), (5.0, 0.76)]
            .map(|(u, d)| check(toolbox, format!("derating at {u} %"), derating(u), d, 0.02))
            .into();
    all.extend(
        [(1.0, 1.0), (2.0, 0.95), (3.0, 0.88), (4.0, 0.82), (5.0, 0.75)]
            .map(|(u, d)| check(usual, format!("derating at {u} %"), derating(u), d, 0.02)),
    );
    all.push(check(heat, "heating at 3 %", extra_heating_percent(3.0), 18.0, 1e-9));
    all.push(check(heat, "heating at 3.5 %", extra_heating_percent(3.5), 25.0, 0.6));
    all
}

/// Above 5 % a motor is not to run: ecmweb.com, "Motors and voltage imbalance", part 1.
#[test]
fn above_five_per_cent_there_is_no_derating() {
    assert_eq!(motor_derating(5.01), None);
    assert_eq!(motor_derating(f64::NAN), None);
}

#[test]
fn balanced_voltages_have_none_and_no_triangle_has_no_figure() {
    for v in [120.0, 207.846, 1.0 / 3.0, 1e6] {
        assert_eq!(nema_percent([Volts(v); 3]), Some(0.0));
        assert!(negative_sequence_percent([Volts(v); 3]).unwrap() < 1e-5);
    }
    assert_eq!(negative_sequence_percent([100.0, 100.0, 250.0].map(Volts)), None);
    assert_eq!(negative_sequence_percent([0.0; 3].map(Volts)), None);
    assert_eq!(nema_percent([0.0; 3].map(Volts)), None);
}
