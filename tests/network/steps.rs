//! Impedances from two load states, from visits.

use super::exposure::{row, visit};
use super::support::near;
use midwire::diag::{CellRef, Located};
use midwire::network::load_steps;
use midwire::quantity::{Measured, Metres};
use midwire::results::LoadStep;
use midwire::visit::{Instrument, Leg, LoadKind, Measures, Metal, Quantity, Reading, ReadingRow, Run, Stage, Visit, Wire, WireSize};
use std::sync::Arc;

const READ: [Quantity; 5] = [
    Quantity::line_neutral(Leg::L1),
    Quantity::line_neutral(Leg::L2),
    Quantity::L1_L2,
    Quantity::LineCurrent(Leg::L1),
    Quantity::LineCurrent(Leg::L2),
];

fn cell(row: u32) -> CellRef {
    let sheet: Arc<str> = "Readings".into();
    CellRef::new(&sheet, row, 0)
}

fn reading(at: u32, state: &str, values: [f64; 5]) -> ReadingRow {
    let one = |(quantity, value)| Reading { quantity, value: Measured::Value(value), cell: cell(at) };
    ReadingRow {
        location: Located::new("SVC".to_owned(), cell(at)),
        run: Some(0),
        state: state.to_owned(),
        stage: Stage::AsFound,
        time: None,
        instrument: None,
        readings: READ.into_iter().zip(values).map(one).collect(),
        remarks: None,
        cell: cell(at),
    }
}

fn instrument(measures: Measures, counts: f64, resolution: f64) -> Instrument {
    let at = |value| Some(Located::new(value, cell(0)));
    Instrument {
        name: Located::new("M1".to_owned(), cell(0)),
        measures: Located::new(measures, cell(0)),
        serial: None,
        calibrated_until: None,
        accuracy_percent: at(0.0),
        accuracy_counts: at(counts),
        resolution: at(resolution),
        cell: cell(0),
    }
}

/// A service drop of 152.4 m of 4/0 aluminium: 500 ft at 0.100 Ω a thousand feet (NEC chapter 9 table 8) is 0.05 Ω.
fn service() -> Run {
    let mut run = row("SVC", "", &[Leg::L1, Leg::L2], &[], LoadKind::Resistive);
    let wire = Wire { size: WireSize::Awg(-3), metal: Metal::Aluminium, metal_assumed: false };
    run.wire = Some(Located::new(wire, cell(0)));
    run.length = Some(Located::new(Metres(152.4), cell(0)));
    run
}

/// The steps of a service read twice.
fn steps(before: [f64; 5], after: [f64; 5], resolution: f64) -> Vec<LoadStep> {
    let rows = vec![reading(1, "as found", before), reading(2, "heater on", after)];
    let instruments = vec![instrument(Measures::Volts, 2.0, resolution), instrument(Measures::Amperes, 0.0, 0.01)];
    load_steps(&Visit { rows, instruments, ..visit("120/240", vec![service()]) })
}

/// Worked by hand: 12 A, 3.0 V fall, 1.4 V rise, 1.6 V between the legs.
#[test]
fn a_step_of_twelve_amperes() {
    let found = steps([121.0, 121.2, 242.2, 0.0, 0.0], [118.0, 122.6, 240.6, 12.0, 0.0], 0.01);
    let [step] = found.as_slice() else { panic!("{found:?}") };
    near(step.neutral.unwrap().0.0, 0.1167, 5e-5);
    near(step.line.unwrap().0.0, 0.1333, 5e-5);
    near(step.amperes, 12.0, 1e-9);
    assert_eq!((step.leg, step.cells.len()), (Leg::L1, 10));
    assert_eq!(step.states, ("as found".to_owned(), "heater on".to_owned()));
}

/// The same on the other leg.
#[test]
fn the_switched_leg_is_found() {
    let found = steps([121.2, 121.0, 242.2, 0.0, 0.0], [122.6, 118.0, 240.6, 0.0, 12.0], 0.01);
    assert_eq!(found[0].leg, Leg::L2);
    near(found[0].neutral.unwrap().0.0, 0.1167, 5e-5);
}

/// Source 120/120 V, legs 0.05 Ω, neutral 0.5 Ω, 24 Ω on leg 2, 12 Ω switched on leg 1: numpy and ngspice. The quotient of rise
/// and step would be 0.4888.
#[test]
fn the_other_leg_s_current_is_taken_into_account() {
    let before = [122.443_99, 117.311_61, 239.755_60, 0.0, 4.887_98];
    let after = [117.173_00, 122.084_44, 239.257_44, 9.764_42, 5.086_85];
    let found = steps(before, after, 0.001);
    near(found[0].neutral.unwrap().0.0, 0.5, 1e-3);
}

/// One ampere diagnoses nothing with a meter of two counts of 0.1 V; the ohms it could have resolved are said instead: by hand,
/// 2·√(4·(0.2/√3)² + 0.05²)/2 Ω from counts and the leg's 0.05 Ω off by half.
#[test]
fn a_small_step_says_what_it_could_have_resolved() {
    let found = steps([121.0, 121.2, 242.2, 0.0, 0.0], [120.9, 121.2, 242.1, 1.0, 0.0], 0.1);
    assert_eq!(found[0].neutral, None);
    near(found[0].resolves.0, (4.0 * 0.04 / 3.0 + 0.025f64.powi(2)).sqrt(), 1e-3);
}

/// What the supply does between the rows cancels: here it rises by 0.5 V a leg.
#[test]
fn drift_of_the_supply_cancels() {
    let before = [122.443_99, 117.311_61, 239.755_60, 0.0, 4.887_98];
    let after = [117.673_00, 122.584_44, 240.257_44, 9.764_42, 5.086_85];
    near(steps(before, after, 0.001)[0].neutral.unwrap().0.0, 0.5, 2e-3);
}

/// A location whose current merely follows what is switched elsewhere gives no step.
#[test]
fn only_locations_on_the_way_count() {
    let at = |mut row: ReadingRow, run: usize| {
        row.run = Some(run);
        row
    };
    let rows = vec![
        reading(1, "as found", [121.0, 121.2, 242.2, 5.0, 5.0]),
        at(reading(2, "as found", [120.8, 121.1, 241.9, 2.0, 5.0]), 1),
        reading(3, "heater on", [118.0, 122.6, 240.6, 17.0, 5.0]),
        at(reading(4, "heater on", [117.8, 122.5, 240.3, 1.8, 5.1]), 1),
    ];
    let instruments = vec![instrument(Measures::Volts, 2.0, 0.01), instrument(Measures::Amperes, 0.0, 0.01)];
    let panel = Run { name: Located::new("SP1".to_owned(), cell(0)), fed_from: Some(Located::new("SVC".to_owned(), cell(0))), ..service() };
    let found = load_steps(&Visit { rows, instruments, ..visit("120/240", vec![service(), panel]) });
    assert_eq!(found.iter().map(|s| s.run).collect::<Vec<_>>(), [0]);
}

/// Legs that do not add up to the line hold a misread value, and nothing follows from it.
#[test]
fn a_misread_row_gives_no_step() {
    assert!(steps([121.0, 121.2, 242.2, 0.0, 0.0], [118.0, 132.6, 240.6, 12.0, 0.0], 0.1).is_empty());
}

#[test]
fn no_step_where_no_current_changed() {
    assert!(steps([121.0, 121.2, 242.2, 5.0, 5.0], [121.0, 121.2, 242.2, 5.0, 5.0], 0.1).is_empty());
}
