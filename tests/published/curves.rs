//! Time curves: GFCI trip time, tolerance of information technology equipment.

use super::{Check, check};
use midwire::electrics::gfci::longest_trip_time;
use midwire::electrics::tolerance::{Region, itic};
use midwire::quantity::{Amperes, Seconds};

pub fn checks() -> Vec<Check> {
    let ul_943 = "UL 943 class A, T = (20/I)^1.43: Schneider Electric FAQ FA105578; forums.mikeholt.com 42382";
    [(6.0, 5.594), (7.4, 4.144), (10.0, 2.694), (20.0, 1.000), (30.0, 0.5600), (100.0, 0.1001), (264.0, 0.02498)]
        .map(|(milliamperes, seconds)| {
            let program = longest_trip_time(Amperes(milliamperes / 1000.0)).map_or(f64::NAN, |t| t.0);
            check(ul_943, format!("trip time at {milliamperes} mA"), program, seconds, seconds * 2e-3)
        })
        .into()
}

#[test]
fn a_gfci_need_not_trip_below_six_milliamperes_and_the_curve_ends_at_264() {
    assert_eq!(longest_trip_time(Amperes(0.0059)), None);
    assert_eq!(longest_trip_time(Amperes(f64::NAN)), None);
    assert_eq!(longest_trip_time(Amperes(0.5)), longest_trip_time(Amperes(0.264)));
}

/// ITIC curve, revised 2000: *Power Quality in Electrical Systems*, p. 112 (axis marks); spgsamerica.com (120 % for 3 ms to 0.5 s,
/// 110 % beyond). 120 V equipment.
#[test]
fn itic_plateaus_divide_the_regions() {
    use Region::{NoDamage, Prohibited, Tolerated};
    let steady = 3600.0;
    for (volts, seconds, region) in [
        (131.0, steady, Tolerated),
        (133.0, 1.0, Prohibited),
        (140.0, 0.1, Tolerated),
        (160.0, 0.01, Prohibited),
        (160.0, steady, Prohibited),
        (160.0, 0.002, Tolerated),
        (169.0, 0.002, Prohibited),
        (107.0, 60.0, NoDamage),
        (107.0, 5.0, Tolerated),
        (90.0, 0.3, Tolerated),
        (90.0, 2.0, NoDamage),
        (80.0, 0.1, NoDamage),
        (0.0, 0.02, Tolerated),
        (0.0, 0.03, NoDamage),
    ] {
        assert_eq!(itic(volts / 120.0, Seconds(seconds)), Some(region), "{volts} V for {seconds} s");
    }
    assert_eq!(itic(1.0, Seconds(1e-5)), None);
}
