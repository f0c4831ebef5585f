//! Published numbers that are wrong, or in conflict with better ones: the program must not give them.

use midwire::electrics::gfci::longest_trip_time;
use midwire::electrics::grounding::electrode_conductor;
use midwire::electrics::lamp;
use midwire::electrics::neutral::wye;
use midwire::electrics::unbalance::nema_percent;
use midwire::electrics::{conductor, drop};
use midwire::quantity::{Amperes, Celsius, Metres, Volts};
use midwire::visit::{Metal, Wire, WireSize};

fn nema(volts: [f64; 3]) -> f64 {
    nema_percent(volts.map(Volts)).unwrap()
}

/// A forum post loses the brackets and prints 15.1 A.
#[test]
fn neutral_of_10_8_6_amperes_is_not_15() {
    assert!((wye(Amperes(10.0), Amperes(8.0), Amperes(6.0)).0 - 15.1).abs() > 10.0);
}

/// hemmotor.com takes 400 V as the farthest from the mean: 1.45 %. Another page says about 2.3 % of 208, 206, 199 V.
#[test]
fn the_farthest_phase_may_be_the_low_one() {
    assert!(nema([400.0, 395.0, 388.0]) > 1.5);
    assert!(nema([208.0, 206.0, 199.0]) > 2.5);
}

/// Manuals round the mean first: 1.8 and 1.7 %.
#[test]
fn the_mean_is_not_rounded_first() {
    assert!(nema([220.0, 216.0, 213.0]) < 1.75);
    assert!(nema([422.0, 409.0, 415.0]) < 1.65);
}

/// (max − min)/mean would be 1.68 %.
#[test]
fn the_span_is_not_the_nema_figure() {
    assert!(nema([480.0, 476.0, 472.0]) < 1.0);
}

/// A supplier's copy of table 250.66 starts its aluminium column at 1 AWG.
#[test]
fn one_aught_aluminium_is_in_the_first_row() {
    let service = Wire { size: WireSize::Awg(0), metal: Metal::Aluminium, metal_assumed: false };
    assert_eq!(electrode_conductor(service, Metal::Copper), Some(WireSize::Awg(8)));
}

/// A page claims 25 ms at 6 mA, the far end of the curve.
#[test]
fn a_gfci_has_seconds_at_six_milliamperes() {
    assert!(longest_trip_time(Amperes(0.006)).unwrap().0 > 5.0);
}

/// Open-neutral slides take lamps of 100 and 200 W for resistors: 160 V.
#[test]
fn lamps_share_worse_than_resistors() {
    let (large, small) = lamp::in_series(Volts(240.0), (Amperes(200.0 / 120.0), Amperes(100.0 / 120.0)), lamp::CURRENT).unwrap();
    assert!(small.0 > 185.0 && large.0 < 55.0);
}

/// Handbooks print P ~ V^1.6 beside I ~ V^0.55.
#[test]
fn power_is_voltage_times_current() {
    for v in [0.5, 0.9, 1.1, 1.4] {
        assert!((lamp::power(v) - v * lamp::current(v)).abs() < 1e-12);
    }
}

/// A widely copied line code named after 4/0 triplex has 0.41 Ω per 1000 ft, which is No. 2 or 3.
#[test]
fn four_aught_aluminium_is_not_0_41_ohms() {
    let wire = Wire { size: WireSize::Awg(-3), metal: Metal::Aluminium, metal_assumed: false };
    let ohms = conductor::per_metre(wire, Celsius(75.0)).unwrap();
    assert!(ohms.per_thousand_feet() < 0.15);
    assert!(drop::one_way(Amperes(100.0), Metres::from_feet(1000.0), ohms).0 < 15.0);
}
