//! Conductor resistance and voltage drop.

use super::{Check, check};
use midwire::electrics::conductor::{Make, OhmsPerMetre, per_metre_made, square_millimetres};
use midwire::electrics::drop;
use midwire::electrics::reactance::{Conduit, impedance};
use midwire::quantity::{Amperes, Celsius, Metres, Volts};
use midwire::visit::{Metal, Wire, WireSize};

pub fn awg(n: i8, metal: Metal) -> Wire {
    Wire { size: WireSize::Awg(n), metal, metal_assumed: false }
}
pub fn kcmil(n: u16, metal: Metal) -> Wire {
    Wire { size: WireSize::Kcmil(n), metal, metal_assumed: false }
}

fn at(wire: Wire, make: Make, celsius: f64) -> f64 {
    per_metre_made(wire, make, Celsius(celsius)).map_or(f64::NAN, OhmsPerMetre::per_thousand_feet)
}

const TABLE_8: &str = "NEC chapter 9 table 8, as printed at sfasoft.com/look/35/Conductor_Properties";

/// Size, copper, aluminium, stranded.
#[allow(clippy::approx_constant)] // 3.14 Ω is what the table prints.
const STRANDED: [(i8, f64, f64); 14] = [
    (14, 3.14, 5.17),
    (12, 1.98, 3.25),
    (10, 1.24, 2.04),
    (8, 0.778, 1.28),
    (6, 0.491, 0.808),
    (4, 0.308, 0.508),
    (3, 0.245, 0.403),
    (2, 0.194, 0.319),
    (1, 0.154, 0.253),
    (0, 0.122, 0.201),
    (-1, 0.0967, 0.159),
    (-2, 0.0766, 0.126),
    (-3, 0.0608, 0.100),
    (18, 7.95, 13.1),
];
const SOLID: [(i8, f64, f64); 5] = [(14, 3.07, 5.06), (12, 1.93, 3.18), (10, 1.21, 2.00), (8, 0.764, 1.26), (18, 7.77, 12.8)];
const LARGE: [(u16, f64, f64); 5] =
    [(250, 0.0515, 0.0847), (300, 0.0429, 0.0707), (350, 0.0367, 0.0605), (400, 0.0321, 0.0529), (500, 0.0258, 0.0424)];

/// Circular mils of table 8.
const CIRCULAR_MILS: [(i8, f64); 13] = [
    (18, 1620.0),
    (16, 2580.0),
    (14, 4110.0),
    (12, 6530.0),
    (10, 10380.0),
    (8, 16510.0),
    (6, 26240.0),
    (4, 41740.0),
    (2, 66360.0),
    (1, 83690.0),
    (0, 105_600.0),
    (-1, 133_100.0),
    (-3, 211_600.0),
];

pub fn checks() -> Vec<Check> {
    let mut all = Vec::new();
    for (rows, make) in [(&STRANDED[..], Make::Stranded), (&SOLID[..], Make::Solid)] {
        for &(n, copper, aluminium) in rows {
            all.push(check(TABLE_8, format!("{n} Cu {make:?}"), at(awg(n, Metal::Copper), make, 75.0), copper, 1e-9));
            all.push(check(TABLE_8, format!("{n} Al {make:?}"), at(awg(n, Metal::Aluminium), make, 75.0), aluminium, 1e-9));
        }
    }
    for (n, copper, aluminium) in LARGE {
        all.push(check(TABLE_8, format!("{n} kcmil Cu"), at(kcmil(n, Metal::Copper), Make::AsUsual, 75.0), copper, 1e-9));
        all.push(check(TABLE_8, format!("{n} kcmil Al"), at(kcmil(n, Metal::Aluminium), Make::AsUsual, 75.0), aluminium, 1e-9));
    }
    for (n, mils) in CIRCULAR_MILS {
        let area = square_millimetres(WireSize::Awg(n)).unwrap_or(f64::NAN) / 0.000_506_707_479;
        all.push(check(TABLE_8, format!("circular mils of {n}"), area, mils, mils * 0.003));
    }
    all.extend(temperature());
    all.extend(drops());
    all.extend(table_9());
    all
}

fn temperature() -> Vec<Check> {
    let computed = "computed from table 8 by its note 2: α 0.00323 Cu, 0.00330 Al";
    let metric = "IEC 60228 class 1, maximum at 20 °C, from memory: nominal copper lies up to 8 % below";
    let mm2 = |a| Wire { size: WireSize::SquareMillimetres(a), metal: Metal::Copper, metal_assumed: false };
    let per_km = |a| per_metre_made(mm2(a), Make::AsUsual, Celsius(20.0)).map_or(f64::NAN, |r| r.0 * 1000.0);
    vec![
        check(computed, "12 solid at 20 °C", at(awg(12, Metal::Copper), Make::Solid, 20.0), 1.5871, 5e-5),
        check(computed, "12 stranded at 20 °C", at(awg(12, Metal::Copper), Make::Stranded, 20.0), 1.6283, 5e-5),
        check(computed, "14 solid at 20 °C", at(awg(14, Metal::Copper), Make::Solid, 20.0), 2.5246, 5e-5),
        check(computed, "4/0 Al at 20 °C", at(awg(-3, Metal::Aluminium), Make::AsUsual, 20.0), 0.08185, 5e-6),
        check(computed, "10 stranded at 60 °C", at(awg(10, Metal::Copper), Make::Stranded, 60.0), 1.1799, 5e-5),
        check(metric, "2.5 mm² Cu, Ω/km", per_km(2.5), 7.41 * 0.96, 7.41 * 0.04),
        check(metric, "1.5 mm² Cu, Ω/km", per_km(1.5), 12.1 * 0.96, 12.1 * 0.04),
        check(metric, "16 mm² Cu, Ω/km", per_km(16.0), 1.15 * 0.96, 1.15 * 0.04),
    ]
}

fn drops() -> Vec<Check> {
    let page = "worked example of a stored trade page on table 8 (2·I·L·R, 12 AWG solid, 20 A, 100 ft)";
    let computed = "computed from table 8";
    let k = "K-factor: 12.9 Cu, 21.2 Al at 75 °C; 10.371 Cu at 20 °C (electrical-contractor.net 99497)";
    let ohms = |n, make| per_metre_made(awg(n, Metal::Copper), make, Celsius(75.0)).unwrap_or(OhmsPerMetre(f64::NAN));
    let feet = Metres::from_feet;
    let k_of = |metal, celsius: f64, cmil: f64, n| at(awg(n, metal), Make::Stranded, celsius) * cmil / 1000.0;
    vec![
        check(page, "12 solid, 20 A, 100 ft", drop::two_wire(Amperes(20.0), feet(100.0), ohms(12, Make::Solid)).0, 7.72, 1e-9),
        check(computed, "12 stranded, 20 A, 100 ft", drop::two_wire(Amperes(20.0), feet(100.0), ohms(12, Make::Stranded)).0, 7.92, 1e-9),
        check(computed, "14 solid, 15 A, 50 ft", drop::two_wire(Amperes(15.0), feet(50.0), ohms(14, Make::Solid)).0, 4.605, 1e-9),
        check(computed, "the same in per cent of 120", drop::percent(Volts(4.605), Volts(120.0)), 3.84, 0.005),
        check(computed, "N-G at 75 ft of 12 solid, 16 A", drop::one_way(Amperes(16.0), feet(75.0), ohms(12, Make::Solid)).0, 2.316, 1e-9),
        check(k, "K of copper at 75 °C", k_of(Metal::Copper, 75.0, 66_360.0, 2), 12.9, 0.05),
        check(k, "K of aluminium at 75 °C", k_of(Metal::Aluminium, 75.0, 66_360.0, 2), 21.2, 0.1),
        check(k, "K of copper at 20 °C", at(awg(12, Metal::Copper), Make::Solid, 20.0) * 6.53, 10.371, 0.05),
    ]
}

fn table_9() -> Vec<Check> {
    let source = "NEC chapter 9 table 9, as printed at brunsengineering.com/nec-table-9";
    let note_2 = "NEC chapter 9 table 9 with its note 2: R cos + X sin, computed by hand";
    let r = |n, metal, conduit| impedance(awg(n, metal), conduit).map_or(f64::NAN, |z| z.resistance.per_thousand_feet());
    let x = |n, conduit| impedance(awg(n, Metal::Copper), conduit).map_or(f64::NAN, |z| z.reactance.per_thousand_feet());
    let z = |n, conduit, pf| impedance(awg(n, Metal::Copper), conduit).map_or(f64::NAN, |z| z.effective(pf).per_thousand_feet());
    vec![
        check(source, "R 14 Cu steel", r(14, Metal::Copper, Conduit::Steel), 3.1, 1e-9),
        check(source, "R 2 Cu PVC", r(2, Metal::Copper, Conduit::Pvc), 0.19, 1e-9),
        check(source, "R 3/0 Cu Al", r(-2, Metal::Copper, Conduit::Aluminium), 0.082, 1e-9),
        check(source, "R 4/0 Al Al", r(-3, Metal::Aluminium, Conduit::Aluminium), 0.11, 1e-9),
        check(source, "R 12 Al steel", r(12, Metal::Aluminium, Conduit::Steel), 3.2, 1e-9),
        check(source, "X 12 PVC", x(12, Conduit::Pvc), 0.054, 1e-9),
        check(source, "X 4/0 steel", x(-3, Conduit::Steel), 0.051, 1e-9),
        check(note_2, "Z 4/0 Cu PVC at 0.85", z(-3, Conduit::Pvc, 0.85), 0.0743, 5e-5),
        check(note_2, "Z 12 Cu steel at 1", z(12, Conduit::Steel, 1.0), 2.0, 1e-9),
    ]
}

#[test]
fn sizes_that_are_none_have_no_resistance() {
    let bad =
        [WireSize::Kcmil(0), WireSize::Awg(41), WireSize::Awg(-4), WireSize::SquareMillimetres(0.0), WireSize::SquareMillimetres(f64::NAN)];
    for size in bad {
        let wire = Wire { size, metal: Metal::Copper, metal_assumed: false };
        assert!(per_metre_made(wire, Make::AsUsual, Celsius(20.0)).is_none(), "{size:?}");
    }
}

/// Resistivity and table 8 are independent of each other; building wire differs from the ideal by stranding and tolerance.
#[test]
fn resistivity_confirms_the_table() {
    for (n, copper, aluminium) in STRANDED {
        for (metal, table) in [(Metal::Copper, copper), (Metal::Aluminium, aluminium)] {
            let size = WireSize::SquareMillimetres(square_millimetres(WireSize::Awg(n)).unwrap());
            let by_area = at(Wire { size, metal, metal_assumed: false }, Make::AsUsual, 75.0);
            assert!((by_area / table - 1.0).abs() < 0.035, "{n} {metal}: {by_area} against {table}");
        }
    }
}
