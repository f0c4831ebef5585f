//! Visits written as JSON: runs, rows of readings and the accuracy of two instruments.

use midwire::diag::{CellRef, Located};
use midwire::quantity::{Amperes, Measured, Metres, Watts};
use midwire::visit::{
    Between, Instrument, Leg, Legs, Load, LoadKind, Measures, Metal, Quantity, Reading, ReadingRow, Run, Site, Stage, System, Tree, Visit,
    Wire, WireSize,
};
use serde_json::Value;
use std::sync::Arc;

/// The visit of a fixture.
pub fn visit(site: &Value) -> Visit {
    let runs: Vec<Run> = list(site, "runs").iter().enumerate().map(|(k, r)| run(k, r)).collect();
    let tree = Tree::new(&runs);
    let rows = list(site, "rows").iter().enumerate().map(|(k, r)| row(k, r, &runs)).collect();
    let system = site["system"].as_str().map_or_else(System::split_phase_120_240, |s| System::named(s).unwrap());
    Visit {
        site: Site::default(),
        system,
        instruments: vec![instrument("M1", Measures::Volts, &site["volts"]), instrument("C1", Measures::Amperes, &site["amperes"])],
        runs,
        tree,
        rows,
        tests: Vec::new(),
        observations: Vec::new(),
        photos: Vec::new(),
        work: Vec::new(),
        revisions: Vec::new(),
    }
}

fn list<'a>(site: &'a Value, key: &str) -> &'a [Value] {
    site[key].as_array().unwrap()
}

fn cell(sheet: &str, row: usize, col: usize) -> CellRef {
    CellRef::new(&Arc::from(sheet), u32::try_from(row + 1).unwrap(), u32::try_from(col).unwrap())
}

fn instrument(name: &str, measures: Measures, accuracy: &Value) -> Instrument {
    let at = cell("Instruments", 0, 0);
    let number = |k: usize| accuracy[k].as_f64().map(|x| Located::new(x, at.clone()));
    Instrument {
        name: Located::new(name.to_owned(), at.clone()),
        measures: Located::new(measures, at.clone()),
        serial: None,
        calibrated_until: None,
        accuracy_percent: number(0),
        accuracy_counts: number(1),
        resolution: number(2),
        cell: at,
    }
}

fn run(k: usize, r: &Value) -> Run {
    let at = cell("Circuits", k, 0);
    let text = |key: &str| r[key].as_str().map(|s| Located::new(s.to_owned(), at.clone()));
    let between = [("L1-N", Leg::L1), ("L2-N", Leg::L2), ("L3-N", Leg::L3)].map(|(key, leg)| (key, Between::LineNeutral(leg)));
    let pairs = between.into_iter().chain([("L1-L2", Between::LINE_LINE[0])]);
    let load = |(key, between): (&str, Between)| r[key].as_f64().map(|w| Load { between, watts: Located::new(Watts(w), at.clone()) });
    Run {
        name: text("name").unwrap(),
        fed_from: text("from"),
        serves: None,
        legs: r["legs"].as_str().map(|l| Located::new(legs(l), at.clone())),
        breaker: r["breaker"].as_f64().map(|a| Located::new(Amperes(a), at.clone())),
        tie: None,
        wire: r["wire"].as_str().map(|w| Located::new(wire(w), at.clone())),
        neutral_wire: None,
        length: r["feet"].as_f64().map(|f| Located::new(Metres::from_feet(f), at.clone())),
        loads: pairs.filter_map(load).collect(),
        load_kind: r["kind"].as_str().map(|k| Located::new(kind(k), at.clone())),
        remarks: None,
        cell: at.clone(),
    }
}

fn legs(text: &str) -> Legs {
    let lines: Vec<Leg> = Leg::ALL.into_iter().filter(|l| text.contains(l.name())).collect();
    Legs::new(&lines, !text.contains('-'))
}

fn kind(text: &str) -> LoadKind {
    *[LoadKind::Resistive, LoadKind::Filament, LoadKind::Electronic, LoadKind::Motor].iter().find(|k| k.name() == text).unwrap()
}

fn wire(text: &str) -> Wire {
    let (gauge, metal) = text.split_once(' ').unwrap();
    let size = match gauge.strip_suffix("/0") {
        Some(n) => WireSize::Awg(1 - n.parse::<i8>().unwrap()),
        None => WireSize::Awg(gauge.parse().unwrap()),
    };
    Wire { size, metal: if metal == "Al" { Metal::Aluminium } else { Metal::Copper }, metal_assumed: false }
}

/// The columns of the Readings sheet the cells are counted in.
pub const COLUMNS: [&str; 9] = ["Location", "State", "L1-N", "L2-N", "L1-L2", "N-G", "I L1", "I L2", "I N"];

fn row(k: usize, r: &Value, runs: &[Run]) -> ReadingRow {
    let name = r["at"].as_str().unwrap();
    let reading = |quantity: Quantity| {
        let heading = quantity.to_string();
        let col = COLUMNS.iter().position(|c| *c == heading).unwrap_or(COLUMNS.len() + quantity_index(quantity));
        Some(Reading { quantity, value: Measured::Value(r[&heading].as_f64()?), cell: cell("Readings", k, col) })
    };
    ReadingRow {
        location: Located::new(name.to_owned(), cell("Readings", k, 0)),
        run: runs.iter().position(|x| x.name.value == name),
        state: r["state"].as_str().unwrap_or("as found").to_owned(),
        stage: if r["stage"] == "as left" { Stage::AsLeft } else { Stage::AsFound },
        time: None,
        instrument: None,
        readings: Quantity::ALL.into_iter().filter_map(reading).collect(),
        remarks: None,
        cell: cell("Readings", k, 0),
    }
}

fn quantity_index(quantity: Quantity) -> usize {
    Quantity::ALL.iter().position(|q| *q == quantity).unwrap()
}
