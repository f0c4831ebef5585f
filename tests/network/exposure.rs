//! Volts under an open neutral, from visits.

use super::support::{N, near, solved, volts};
use midwire::diag::{CellRef, Located};
use midwire::network::{NetworkSettings, Workspace, build, exposure};
use midwire::quantity::{Metres, Ohms, Watts};
use midwire::results::{ExposedLeg, Exposure};
use midwire::visit::{Between, Leg, Legs, Load, LoadKind, Run, Site, System, Tree, Visit};
use proptest::prelude::*;
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

/// A branch taken out of its network sees what it sees within it, where other loads and long wires share the way from the source.
#[test]
fn a_branch_agrees_with_the_whole() {
    let long = |mut r: Run, metres: f64| {
        r.length = r.length.map(|l| l.map(|_| Metres(metres)));
        r
    };
    let lamp = LoadKind::Filament;
    let runs = vec![
        long(row("SVC", "", &PAIR, &[(Leg::L1, 2500.0), (Leg::L2, 900.0)], LoadKind::Resistive), 40.0),
        long(row("SP1", "SVC", &PAIR, &[(Leg::L2, 1500.0)], LoadKind::Resistive), 50.0),
        long(row("5/7", "SP1", &PAIR, &[(Leg::L1, 800.0)], LoadKind::Resistive), 30.0),
        long(row("5/7a", "5/7", &PAIR, &[(Leg::L1, 60.0), (Leg::L2, 200.0)], lamp), 10.0),
        long(row("9", "SP1", &PAIR[..1], &[(Leg::L1, 1000.0)], LoadKind::Resistive), 20.0),
    ];
    let visit = visit("120/240", runs);
    let settings = NetworkSettings::default();
    for exposure in exposure(&visit, &settings) {
        let mut whole = build(&visit, &settings).network;
        whole.spans[exposure.run].ohms[N] = Some(f64::INFINITY);
        let solution = solved(&whole);
        for leg in &exposure.legs {
            near(leg.volts.0, volts(&solution, leg.at, leg.leg.index(), N), 0.02);
        }
    }
}

/// A run of a list in any state: fed from anything, itself and nothing included, with any legs and loads.
fn any_row(at: usize) -> impl Strategy<Value = Run> {
    let legs = proptest::collection::vec(0usize..3, 0..4);
    let loads = proptest::collection::vec((0usize..3, prop_oneof![Just(0.0), 1.0f64..3000.0, Just(f64::INFINITY), Just(-5.0)]), 0..4);
    let kind = prop_oneof![Just(LoadKind::Resistive), Just(LoadKind::Filament), Just(LoadKind::Electronic), Just(LoadKind::Motor)];
    let length = prop_oneof![0.0f64..80.0, Just(-1.0), Just(1e300)];
    (0usize..9, legs, loads, kind, length, any::<[bool; 3]>()).prop_map(
        move |(from, legs, loads, kind, length, [neutral, stated, lined])| {
            let fed_from = if from == 0 { String::new() } else { format!("r{}", from - 1) };
            let legs: Vec<Leg> = legs.into_iter().map(|l| Leg::ALL[l]).collect();
            let loads: Vec<(Leg, f64)> = loads.into_iter().map(|(l, w)| (Leg::ALL[l], w)).collect();
            let mut r = row(&format!("r{at}"), &fed_from, &legs, &loads, kind);
            r.length = r.length.map(|l| l.map(|_| Metres(length)));
            r.legs = r.legs.filter(|_| stated).map(|l| l.map(|l| Legs { neutral, ..l }));
            if let Some(load) = r.loads.first_mut().filter(|_| lined) {
                load.between = Between::LineLine(Leg::L1, Leg::L2);
            }
            r
        },
    )
}

proptest! {
    /// Whatever a circuit list says, a sound network is built of it, and volts that are numbers come of that.
    #[test]
    fn any_list_makes_a_network(
        rows in (1usize..8).prop_flat_map(|n| (0..n).map(any_row).collect::<Vec<_>>()),
        system in prop_oneof![Just("120/240"), Just("120/208"), Just("208Y/120"), Just("240/120"), Just("230")],
    ) {
        let visit = visit(system, rows);
        let network = build(&visit, &NetworkSettings::default()).network;
        prop_assert_eq!(network.spans.len(), visit.runs.len());
        prop_assert!(Workspace::new(&network).is_ok());
        for exposure in exposure(&visit, &NetworkSettings::default()) {
            prop_assert!(!exposure.legs.is_empty());
            for leg in exposure.legs {
                let low = leg.low.unwrap_or(leg.volts);
                prop_assert!(low.0 >= 0.0 && low.0 <= leg.volts.0 && leg.volts.0.is_finite() && leg.loads.0.is_finite());
            }
        }
    }
}
