//! Volts under an open neutral, from visits.

use super::support::near;
use midwire::diag::{CellRef, Located};
use midwire::network::{NetworkSettings, exposure};
use midwire::quantity::{Metres, Ohms, Watts};
use midwire::results::{ExposedLeg, Exposure};
use midwire::visit::{Between, Leg, Legs, Load, LoadKind, Run, Site, System, Tree, Visit};
use std::sync::Arc;

/// A run of no length: name, source, legs with a neutral, watts of each leg to the neutral, kind.
pub fn row(name: &str, fed_from: &str, legs: &[Leg], watts: &[(Leg, f64)], kind: LoadKind) -> Run {
    let sheet: Arc<str> = "Circuits".into();
    let cell = CellRef::new(&sheet, 1, 0);
    let at = |text: &str| Located::new(text.to_owned(), cell.clone());
    let load = |&(leg, w): &(Leg, f64)| Load { between: Between::LineNeutral(leg), watts: Located::new(Watts(w), cell.clone()) };
    Run {
        name: at(name),
        fed_from: (!fed_from.is_empty()).then(|| at(fed_from)),
        serves: None,
        legs: Some(Located::new(Legs::new(legs, true), cell.clone())),
        breaker: None,
        tie: None,
        wire: None,
        neutral_wire: None,
        length: Some(Located::new(Metres(0.0), cell.clone())),
        loads: watts.iter().map(load).collect(),
        load_kind: Some(Located::new(kind, cell.clone())),
        remarks: None,
        cell,
    }
}

pub fn visit(system: &str, runs: Vec<Run>) -> Visit {
    Visit {
        site: Site::default(),
        system: System::named(system).unwrap(),
        instruments: Vec::new(),
        tree: Tree::new(&runs),
        runs,
        rows: Vec::new(),
        tests: Vec::new(),
        observations: Vec::new(),
        photos: Vec::new(),
        work: Vec::new(),
        revisions: Vec::new(),
    }
}

/// A service without loads and a multiwire run that opens.
fn multiwire(system: &str, legs: &[Leg], watts: &[(Leg, f64)], kind: LoadKind) -> Visit {
    visit(system, vec![row("SVC", "", &Leg::ALL[..2], &[], kind), row("5/7", "SVC", legs, watts, kind)])
}

fn of(visit: &Visit, run: usize) -> Exposure {
    let settings = NetworkSettings { least: Ohms(1e-9), ..NetworkSettings::default() };
    exposure(visit, &settings).into_iter().find(|e| e.run == run).unwrap()
}

fn leg(exposure: &Exposure, leg: Leg) -> &ExposedLeg {
    exposure.legs.iter().find(|l| l.leg == leg).unwrap()
}

const PAIR: [Leg; 2] = [Leg::L1, Leg::L2];

/// 24 Ω and 12 Ω in series across 240 V: 160 V and 80 V (trade lesson on NEC 408.21).
#[test]
fn resistors() {
    let visit = multiwire("120/240", &PAIR, &[(Leg::L1, 600.0), (Leg::L2, 1200.0)], LoadKind::Resistive);
    let exposure = of(&visit, 1);
    near(leg(&exposure, Leg::L1).volts.0, 160.0, 1e-3);
    near(leg(&exposure, Leg::L2).volts.0, 80.0, 1e-3);
    assert_eq!(leg(&exposure, Leg::L1).low, None);
    assert_eq!((leg(&exposure, Leg::L1).at, leg(&exposure, Leg::L1).loads), (1, Watts(600.0)));
}

/// 100 W and 60 W lamps: 67.96 V and 172.04 V, by (I₀₂/I₀₁)^(1/0.55).
#[test]
fn lamps() {
    let visit = multiwire("120/240", &PAIR, &[(Leg::L1, 100.0), (Leg::L2, 60.0)], LoadKind::Filament);
    let exposure = of(&visit, 1);
    near(leg(&exposure, Leg::L1).volts.0, 67.96, 6e-3);
    near(leg(&exposure, Leg::L2).volts.0, 172.04, 6e-3);
}

/// Like electronic loads: anything from 3.81 V to 236.19 V, by hand from V₁·V₂ = 900.
#[test]
fn electronic_loads_as_a_range() {
    let visit = multiwire("120/240", &PAIR, &[(Leg::L1, 100.0), (Leg::L2, 100.0)], LoadKind::Electronic);
    let exposure = of(&visit, 1);
    for l in PAIR {
        near(leg(&exposure, l).volts.0, 236.19, 0.01);
        near(leg(&exposure, l).low.unwrap().0, 3.81, 0.01);
    }
}

/// Two legs of a wye share 208 V: 12 Ω and 24 Ω give 69.28 V and 138.56 V (Millman).
#[test]
fn two_legs_of_a_wye() {
    let visit = multiwire("120/208", &PAIR, &[(Leg::L1, 1200.0), (Leg::L2, 600.0)], LoadKind::Resistive);
    let exposure = of(&visit, 1);
    near(leg(&exposure, Leg::L1).volts.0, 69.282, 2e-3);
    near(leg(&exposure, Leg::L2).volts.0, 138.564, 2e-3);
}

/// An open service neutral is left with the earth: 0.05 Ω legs, 12 Ω, 24 Ω and 25 Ω of earth path against numpy and ngspice
/// would need the third load; without it, and without leg ohms, Millman gives V₁ = 120 − Vn with Vn = 120·(1/12 − 1/24)/(1/12 +
/// 1/24 + 1/25) = 30.303 V.
#[test]
fn a_service_neutral_falls_back_on_the_earth() {
    let runs = vec![row("SVC", "", &PAIR, &[(Leg::L1, 1200.0), (Leg::L2, 600.0)], LoadKind::Resistive)];
    let exposure = of(&visit("120/240", runs), 0);
    near(leg(&exposure, Leg::L1).volts.0, 120.0 - 30.303, 1e-3);
    near(leg(&exposure, Leg::L2).volts.0, 120.0 + 30.303, 1e-3);
}

/// A load on one leg alone goes dead; what is plugged into the other sees the whole line.
#[test]
fn one_loaded_leg() {
    let visit = multiwire("120/240", &PAIR, &[(Leg::L1, 1200.0)], LoadKind::Resistive);
    let exposure = of(&visit, 1);
    near(leg(&exposure, Leg::L1).volts.0, 0.0, 1e-3);
    near(leg(&exposure, Leg::L2).volts.0, 240.0, 1e-3);
    assert_eq!(leg(&exposure, Leg::L2).loads, Watts(0.0));
}

/// A run's name changes nothing, nor does a loose run at the list's end.
#[test]
fn names_change_nothing() {
    let named = |name: &str| {
        let load = [(Leg::L1, 300.0), (Leg::L2, 900.0)];
        visit("120/240", vec![row("SVC", "", &PAIR, &[], LoadKind::Resistive), row(name, "SVC", &PAIR, &load, LoadKind::Filament)])
    };
    assert_eq!(of(&named("5/7"), 1), of(&named("Kitchen, left"), 1));
    let mut loose = named("5/7");
    loose.runs.push(row("lost", "nowhere", &PAIR, &[(Leg::L1, 500.0)], LoadKind::Resistive));
    loose.tree = Tree::new(&loose.runs);
    assert_eq!(of(&named("5/7"), 1), of(&loose, 1));
}
