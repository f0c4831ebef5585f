//! Impedances from two load states, from visits.

use super::exposure::{row, visit};
use super::support::near;
use midwire::diag::{CellRef, Located};
use midwire::network::load_steps;
use midwire::quantity::Measured;
use midwire::results::LoadStep;
use midwire::visit::{Instrument, Leg, LoadKind, Measures, Quantity, Reading, ReadingRow, Stage, Visit};
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

/// The steps of a service read twice.
fn steps(before: [f64; 5], after: [f64; 5], resolution: f64) -> Vec<LoadStep> {
    let legs = [Leg::L1, Leg::L2];
    let rows = vec![reading(1, "as found", before), reading(2, "heater on", after)];
    let instruments = vec![instrument(Measures::Volts, 2.0, resolution), instrument(Measures::Amperes, 0.0, 0.01)];
    load_steps(&Visit { rows, instruments, ..visit("120/240", vec![row("SVC", "", &legs, &[], LoadKind::Resistive)]) })
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

/// One ampere diagnoses nothing with a meter of two counts of 0.1 V; the ohms it could have resolved are said instead.
#[test]
fn a_small_step_says_what_it_could_have_resolved() {
    let found = steps([121.0, 121.2, 242.2, 0.0, 0.0], [120.8, 121.3, 242.1, 1.0, 0.0], 0.1);
    assert_eq!(found[0].neutral, None);
    // 2·√2·(0.2/√3) V over 1 A by counts alone; what the supply drifts comes on top.
    assert!(found[0].resolves.0 > 0.32 && found[0].resolves.0 < 0.7, "{:?}", found[0].resolves);
}

#[test]
fn no_step_where_no_current_changed() {
    assert!(steps([121.0, 121.2, 242.2, 5.0, 5.0], [121.0, 121.2, 242.2, 5.0, 5.0], 0.1).is_empty());
}
