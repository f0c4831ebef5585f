//! Ampacities, breakers and the conductors they go with.

use super::conductors::{awg, kcmil};
use super::{Check, check};
use midwire::electrics::ampacity::{
    Column, Edition, ampacity, continuous_limit, dwelling_conductor, dwelling_rating, largest_breaker, next_standard_rating,
    small_conductor_limit,
};
use midwire::electrics::grounding::electrode_conductor;
use midwire::quantity::Amperes;
use midwire::visit::{Metal, Wire, WireSize};

const TABLE: &str = "NEC table 310.16, wiresizes.com/guides/nec-table-310-16 and two further copies";

/// Gauge, 60/75/90 °C.
const COPPER: [(i8, [f64; 3]); 13] = [
    (14, [15.0, 20.0, 25.0]),
    (12, [20.0, 25.0, 30.0]),
    (10, [30.0, 35.0, 40.0]),
    (8, [40.0, 50.0, 55.0]),
    (6, [55.0, 65.0, 75.0]),
    (4, [70.0, 85.0, 95.0]),
    (3, [85.0, 100.0, 115.0]),
    (2, [95.0, 115.0, 130.0]),
    (1, [110.0, 130.0, 145.0]),
    (0, [125.0, 150.0, 170.0]),
    (-1, [145.0, 175.0, 195.0]),
    (-2, [165.0, 200.0, 225.0]),
    (-3, [195.0, 230.0, 260.0]),
];
const ALUMINIUM: [(i8, [f64; 3]); 12] = [
    (12, [15.0, 20.0, 25.0]),
    (10, [25.0, 30.0, 35.0]),
    (8, [35.0, 40.0, 45.0]),
    (6, [40.0, 50.0, 55.0]),
    (4, [55.0, 65.0, 75.0]),
    (3, [65.0, 75.0, 85.0]),
    (2, [75.0, 90.0, 100.0]),
    (1, [85.0, 100.0, 115.0]),
    (0, [100.0, 120.0, 135.0]),
    (-1, [115.0, 135.0, 150.0]),
    (-2, [130.0, 155.0, 175.0]),
    (-3, [150.0, 180.0, 205.0]),
];

fn amperes(wire: Wire, column: Column, edition: Edition) -> f64 {
    ampacity(wire, column, edition).map_or(f64::NAN, |a| a.0)
}

pub fn checks() -> Vec<Check> {
    let mut all = Vec::new();
    for (rows, metal) in [(&COPPER[..], Metal::Copper), (&ALUMINIUM[..], Metal::Aluminium)] {
        for &(n, expected) in rows {
            for (column, expected) in [Column::C60, Column::C75, Column::C90].into_iter().zip(expected) {
                let program = amperes(awg(n, metal), column, Edition::From2011);
                all.push(check(TABLE, format!("{n} {metal} {column:?}"), program, expected, 0.0));
            }
        }
    }
    for (size, metal, expected) in [
        (250, Metal::Copper, [215.0, 255.0, 290.0]),
        (500, Metal::Copper, [320.0, 380.0, 430.0]),
        (250, Metal::Aluminium, [170.0, 205.0, 230.0]),
        (500, Metal::Aluminium, [260.0, 310.0, 350.0]),
    ] {
        for (column, expected) in [Column::C60, Column::C75, Column::C90].into_iter().zip(expected) {
            all.push(check(
                TABLE,
                format!("{size} {metal} {column:?}"),
                amperes(kcmil(size, metal), column, Edition::From2011),
                expected,
                0.0,
            ));
        }
    }
    all.extend(older());
    all.extend(limits());
    all
}

fn older() -> Vec<Check> {
    let source = "NEC table 310.16 before 2011, as older copies print it";
    [
        (14, Metal::Copper, Column::C60, 20.0),
        (12, Metal::Copper, Column::C60, 25.0),
        (3, Metal::Copper, Column::C90, 110.0),
        (1, Metal::Copper, Column::C90, 150.0),
        (12, Metal::Aluminium, Column::C60, 20.0),
        (8, Metal::Aluminium, Column::C60, 30.0),
        (6, Metal::Aluminium, Column::C90, 60.0),
        (4, Metal::Copper, Column::C75, 85.0),
    ]
    .map(|(n, metal, column, expected)| {
        check(source, format!("{n} {metal} {column:?}, older"), amperes(awg(n, metal), column, Edition::Before2011), expected, 0.0)
    })
    .into()
}

fn limits() -> Vec<Check> {
    let small = "NEC 240.4(D), alanwire.com";
    let small_memory = "NEC 240.4(D)(1), (2), from memory; the gauges below 14 with conditions";
    let eighty = "NEC 210.20(A): 16 A for three hours want 20 A";
    let table_2_0 = "NEC 310.12: 83 % of 200 A is 166 A, 2/0 Cu carries 175 A";
    let limit = |n, metal| small_conductor_limit(awg(n, metal)).map_or(f64::NAN, |a| a.0);
    let ratio = dwelling_rating(awg(-1, Metal::Copper)).map_or(f64::NAN, |r| r.0) * 0.83;
    vec![
        check(small, "14 Cu", limit(14, Metal::Copper), 15.0, 0.0),
        check(small, "12 Cu", limit(12, Metal::Copper), 20.0, 0.0),
        check(small, "10 Cu", limit(10, Metal::Copper), 30.0, 0.0),
        check(small, "12 Al", limit(12, Metal::Aluminium), 15.0, 0.0),
        check(small, "10 Al", limit(10, Metal::Aluminium), 25.0, 0.0),
        check(small_memory, "18 Cu", limit(18, Metal::Copper), 7.0, 0.0),
        check(small_memory, "16 Cu", limit(16, Metal::Copper), 10.0, 0.0),
        check(eighty, "20 A breaker", continuous_limit(Amperes(20.0)).0, 16.0, 1e-12),
        check(table_2_0, "2/0 Cu", ratio, 166.0, 1e-9),
    ]
}

/// NEC table 310.12(A), elliottelectric.com (2020): rating, copper, aluminium.
#[test]
fn dwelling_services_have_their_conductors() {
    use WireSize::{Awg, Kcmil};
    for (rating, copper, aluminium) in [
        (100.0, Awg(4), Awg(2)),
        (110.0, Awg(3), Awg(1)),
        (125.0, Awg(2), Awg(0)),
        (150.0, Awg(1), Awg(-1)),
        (175.0, Awg(0), Awg(-2)),
        (200.0, Awg(-1), Awg(-3)),
        (225.0, Awg(-2), Kcmil(250)),
        (250.0, Awg(-3), Kcmil(300)),
        (300.0, Kcmil(250), Kcmil(350)),
        (350.0, Kcmil(350), Kcmil(500)),
        (400.0, Kcmil(400), Kcmil(600)),
    ] {
        for (metal, size) in [(Metal::Copper, copper), (Metal::Aluminium, aluminium)] {
            assert_eq!(dwelling_conductor(Amperes(rating), metal), Some(size), "{rating} A {metal}");
            let wire = Wire { size, metal, metal_assumed: false };
            assert_eq!(dwelling_rating(wire), Some(Amperes(rating)), "{size:?} {metal}");
            // The table is 83 % of the rating against the 75 °C column.
            assert!(amperes(wire, Column::C75, Edition::From2011) >= 0.83 * rating, "{size:?} {metal}");
        }
    }
}

/// NEC table 250.66, nec.buckworks.net: service copper and aluminium, electrode conductor copper and aluminium; at most 3/0 Cu
/// (ecmweb.com quiz).
#[test]
fn electrode_conductors_follow_the_service() {
    use WireSize::{Awg, Kcmil};
    for (service, metal, copper, aluminium) in [
        (Awg(2), Metal::Copper, Awg(8), Awg(6)),
        (Awg(0), Metal::Aluminium, Awg(8), Awg(6)),
        (Awg(1), Metal::Copper, Awg(6), Awg(4)),
        (Awg(-2), Metal::Aluminium, Awg(6), Awg(4)),
        (Awg(-1), Metal::Copper, Awg(4), Awg(2)),
        (Awg(-3), Metal::Aluminium, Awg(4), Awg(2)),
        (Kcmil(350), Metal::Copper, Awg(2), Awg(0)),
        (Kcmil(500), Metal::Aluminium, Awg(2), Awg(0)),
        (Kcmil(500), Metal::Copper, Awg(0), Awg(-2)),
        (Kcmil(700), Metal::Copper, Awg(-1), Awg(-3)),
        (Kcmil(1250), Metal::Copper, Awg(-2), Kcmil(250)),
    ] {
        let wire = Wire { size: service, metal, metal_assumed: false };
        assert_eq!(electrode_conductor(wire, Metal::Copper), Some(copper), "{service:?} {metal}");
        assert_eq!(electrode_conductor(wire, Metal::Aluminium), Some(aluminium), "{service:?} {metal}");
    }
}

/// NEC 240.4(B), (D), 240.6(A) (from memory; 12 Cu on 25 A is a finding, 10 Cu on 30 A is not: alanwire.com).
#[test]
fn a_breaker_may_be_the_next_standard_size_but_not_on_small_conductors() {
    let largest = |n, metal, column| largest_breaker(awg(n, metal), column, Edition::From2011).unwrap().0;
    assert_eq!(largest(12, Metal::Copper, Column::C90), 20.0);
    assert_eq!(largest(10, Metal::Copper, Column::C60), 30.0);
    assert_eq!(largest(6, Metal::Copper, Column::C60), 60.0);
    assert_eq!(largest(4, Metal::Copper, Column::C75), 90.0);
    assert_eq!(next_standard_rating(Amperes(100.0)), Some(Amperes(100.0)));
    assert_eq!(next_standard_rating(Amperes(5000.0)), None);
}

#[test]
fn metric_sizes_have_no_place_in_the_table() {
    let wire = Wire { size: WireSize::SquareMillimetres(2.5), metal: Metal::Copper, metal_assumed: false };
    assert_eq!(ampacity(wire, Column::C60, Edition::From2011), None);
    assert_eq!(ampacity(awg(14, Metal::Aluminium), Column::C60, Edition::From2011), None);
}
