//! The one builder of test visits: a compact TOML text → a visit, with the results of the other phases where a fixture gives them.
//!
//! ```toml
//! system = "120/240"                  # by name, or [120, 240]
//! date = "2026-03-14"
//! instruments = [{ name = "M1", measures = "volts", percent = 0.7, counts = 2, until = "2027-01-31" }]
//! runs = [{ name = "SVC", legs = "L1 L2", breaker = 200, wire = "4/0 Al", m = 24 }, { name = "5/7", from = "SVC", legs = "L1 L2" }]
//! readings = [{ at = "SVC", V = { L1-N = 120.1, L2-N = 120.4, L1-L2 = 240.5 } }]
//! expect = [{ verdict = "fail", signal = "CAUTION", at = "5/7", says = "part of the sentence", cells = ["Readings!F3"] }]
//! ```
//!
//! Cells: the first reading of the list stands in row 2 of Readings, columns A Location, B State, C Stage, D Time, E Instrument,
//! then the fifteen quantities from F on in the order of the contract; runs, instruments, tests and observations likewise by row.

use midwire::diag::{CellRef, Located};
use midwire::quantity::{Amperes, Measured, Metres, Ohms, Unit, VoltAmperes, Volts, Watts};
use midwire::results::{
    AddedOhms, Balance, Cause, CauseKind, Diagnosis, ExposedLeg, Exposure, LegLoad, NeutralInterval, NextReading, RepairEvidence,
    RepairOutcome, Signal, SupplyDirection,
};
use midwire::rules::Facts;
use midwire::visit::{
    Between, Date, Instrument, Leg, Legs, Load, LoadKind, Measures, Metal, Observation, Quantity, Reading, ReadingRow, Run, Site, Stage,
    System, Test, TestKind, Tree, Visit, Wire, WireSize,
};
use serde::Deserialize;
use std::collections::BTreeMap;
use std::sync::Arc;

/// A fixture: the visit, the other phases' results, and what is expected of the rule.
pub struct Fixture {
    pub visit: Visit,
    pub balance: Option<Balance>,
    pub diagnosis: Option<Diagnosis>,
    pub exposure: Vec<Exposure>,
    pub book: String,
    pub expect: Vec<Expected>,
}

impl Fixture {
    /// Reads a fixture; a mistake in it is a failed test that names it.
    pub fn read(text: &str) -> Self {
        let raw: Raw = toml::from_str(text).unwrap_or_else(|e| panic!("{e}"));
        raw.build()
    }

    pub fn facts(&self) -> Facts<'_> {
        Facts { visit: &self.visit, balance: self.balance.as_ref(), diagnosis: self.diagnosis.as_ref(), exposure: &self.exposure }
    }
}

/// What a finding must look like; what is left out may be anything.
#[derive(Deserialize, Debug, Default)]
#[serde(deny_unknown_fields)]
pub struct Expected {
    pub verdict: Option<String>,
    pub signal: Option<String>,
    pub at: Option<String>,
    pub says: Option<String>,
    pub advice: Option<String>,
    pub value: Option<f64>,
    pub low: Option<f64>,
    pub high: Option<f64>,
    #[serde(default)]
    pub cells: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Raw {
    system: Option<RawSystem>,
    date: Option<String>,
    rating: Option<f64>,
    #[serde(default)]
    instruments: Vec<RawInstrument>,
    #[serde(default)]
    runs: Vec<RawRun>,
    #[serde(default)]
    readings: Vec<RawReadings>,
    #[serde(default)]
    tests: Vec<RawTest>,
    #[serde(default)]
    observations: Vec<RawObservation>,
    balance: Option<RawBalance>,
    diagnosis: Option<RawDiagnosis>,
    #[serde(default)]
    exposure: Vec<RawExposure>,
    /// A rule book laid over the built-in one for this fixture.
    #[serde(default)]
    book: String,
    #[serde(default)]
    expect: Vec<Expected>,
}

#[derive(Deserialize)]
#[serde(untagged)]
enum RawSystem {
    Named(String),
    Volts([f64; 2]),
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawInstrument {
    name: String,
    measures: Option<String>,
    until: Option<String>,
    percent: Option<f64>,
    counts: Option<f64>,
    resolution: Option<f64>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawRun {
    name: String,
    from: Option<String>,
    serves: Option<String>,
    legs: Option<String>,
    breaker: Option<f64>,
    tie: Option<bool>,
    wire: Option<String>,
    neutral: Option<String>,
    m: Option<f64>,
    #[serde(default)]
    loads: BTreeMap<String, f64>,
    kind: Option<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawReadings {
    at: String,
    state: Option<String>,
    left: Option<bool>,
    time: Option<String>,
    with: Option<String>,
    #[serde(rename = "V", default)]
    values: BTreeMap<String, RawValue>,
}

#[derive(Deserialize)]
#[serde(untagged)]
enum RawValue {
    Number(f64),
    Text(String),
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawTest {
    at: Option<String>,
    kind: RawKind,
    value: RawValue,
    unit: String,
    left: Option<bool>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields, rename_all = "kebab-case")]
enum RawKind {
    InsulationResistance { test_volts: Option<f64> },
    GroundElectrode {},
    LoopImpedance {},
    GfciTripTime { test_milliamperes: Option<f64> },
    GfciTripCurrent {},
    Torque { specified: Option<f64> },
    TemperatureRise { over_ambient: bool },
    ElementResistance { rated_watts: Option<f64>, rated_volts: Option<f64>, filament: bool },
    Other {},
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawObservation {
    at: Option<String>,
    text: String,
    signal: Option<String>,
    advice: Option<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawBalance {
    va: Vec<f64>,
    neutral: f64,
    imbalance: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawDiagnosis {
    ranking: Vec<RawCause>,
    #[serde(default)]
    neutral: Vec<RawInterval>,
    #[serde(default)]
    next: Vec<RawNext>,
    repair: Option<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawCause {
    kind: String,
    leg: Option<String>,
    #[serde(default)]
    runs: Vec<String>,
    cell: Option<String>,
    p: f64,
    ohms: Option<[f64; 2]>,
    high: Option<f64>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawInterval {
    run: String,
    low: f64,
    high: Option<f64>,
    amperes: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawNext {
    at: String,
    quantity: String,
    load: Option<(String, f64)>,
    tells_apart: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawExposure {
    run: String,
    legs: Vec<RawExposed>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawExposed {
    leg: String,
    volts: f64,
    low: Option<f64>,
    at: String,
    watts: f64,
}

/// A cell of a sheet, row and column from 0.
fn cell(sheet: &str, row: usize, col: usize) -> CellRef {
    CellRef::new(&Arc::from(sheet), row as u32, col as u32)
}

fn leg(name: &str) -> Leg {
    Leg::ALL.into_iter().find(|l| l.name() == name).unwrap_or_else(|| panic!("no leg {name}"))
}

pub fn quantity(name: &str) -> Quantity {
    Quantity::ALL.into_iter().find(|q| q.to_string() == name).unwrap_or_else(|| panic!("no quantity {name}"))
}

fn date(text: &str) -> Date {
    let parts: Vec<i16> = text.split('-').map(|p| p.parse().unwrap()).collect();
    Date { year: parts[0], month: parts[1] as i8, day: parts[2] as i8 }
}

pub fn legs(text: &str) -> Legs {
    let neutral = !text.contains('-');
    let names: Vec<Leg> = text.split([' ', '-']).map(leg).collect();
    Legs::new(&names, neutral)
}

fn wire(text: &str) -> Wire {
    let (size, metal) = text.rsplit_once(' ').unwrap();
    let metal = if metal == "Al" { Metal::Aluminium } else { Metal::Copper };
    let size = if let Some(n) = size.strip_suffix("/0") {
        WireSize::Awg(1 - n.parse::<i8>().unwrap())
    } else if let Some(n) = size.strip_suffix(" kcmil") {
        WireSize::Kcmil(n.parse().unwrap())
    } else if let Some(n) = size.strip_suffix(" mm2") {
        WireSize::SquareMillimetres(n.parse().unwrap())
    } else {
        WireSize::Awg(size.parse().unwrap())
    };
    Wire { size, metal, metal_assumed: false }
}

fn measured(value: &RawValue) -> Measured {
    match value {
        RawValue::Number(v) => Measured::Value(*v),
        RawValue::Text(t) if t == "OL" => Measured::OverRange(None),
        RawValue::Text(t) => match (t.strip_prefix('<'), t.strip_prefix('>')) {
            (Some(bound), _) => Measured::AtMost(bound.parse().unwrap()),
            (_, Some(range)) => Measured::OverRange(Some(range.parse().unwrap())),
            _ => panic!("no reading {t}"),
        },
    }
}

fn unit(symbol: &str) -> Unit {
    use Unit::*;
    [Volt, Ampere, Milliampere, Ohm, Megohm, Watt, VoltAmpere, Metre, Second, Millisecond, Celsius, NewtonMetre, Percent, One]
        .into_iter()
        .find(|u| u.symbol() == symbol)
        .unwrap_or_else(|| panic!("no unit {symbol}"))
}

fn stage(left: Option<bool>) -> Stage {
    if left == Some(true) { Stage::AsLeft } else { Stage::AsFound }
}

fn signal(word: &str) -> Signal {
    Signal::ALL.into_iter().find(|s| s.word() == word).unwrap_or_else(|| panic!("no signal word {word}"))
}

impl Raw {
    fn build(self) -> Fixture {
        let runs: Vec<Run> = self.runs.iter().enumerate().map(|(i, r)| r.build(i + 1)).collect();
        let system = match &self.system {
            None => System::split_phase_120_240(),
            Some(RawSystem::Named(name)) => System::named(name).unwrap_or_else(|| panic!("no system {name}")),
            Some(RawSystem::Volts([ln, ll])) => System::by_voltages(Volts(*ln), Volts(*ll)).expect("a known arrangement"),
        };
        let site = Site {
            date: self.date.as_deref().map(|d| Located::new(date(d), cell("Visit", 4, 1))),
            service_amperes: self.rating.map(|a| Located::new(a, cell("Visit", 8, 1))),
            ..Site::default()
        };
        let mut visit = Visit {
            site,
            system,
            instruments: self.instruments.iter().enumerate().map(|(i, r)| r.build(i + 1)).collect(),
            tree: Tree::new(&runs),
            runs,
            rows: Vec::new(),
            tests: self.tests.iter().enumerate().map(|(i, r)| r.build(i + 1)).collect(),
            observations: self.observations.iter().enumerate().map(|(i, r)| r.build(i + 1)).collect(),
            photos: Vec::new(),
            work: Vec::new(),
            revisions: Vec::new(),
        };
        visit.rows = self.readings.iter().enumerate().map(|(i, r)| r.build(i + 1, &visit)).collect();
        let run = |name: &str| visit.run_named(name).unwrap_or_else(|| panic!("no run {name}"));
        let diagnosis = self.diagnosis.map(|d| d.build(&run));
        let exposure = self.exposure.iter().map(|e| e.build(&run)).collect();
        let balance = self.balance.map(|b| b.build());
        Fixture { balance, diagnosis, exposure, visit, book: self.book, expect: self.expect }
    }
}

impl RawInstrument {
    fn build(&self, row: usize) -> Instrument {
        let at = |col| cell("Instruments", row, col);
        let number = |v: Option<f64>, col| v.map(|v| Located::new(v, at(col)));
        let measures = match self.measures.as_deref() {
            None | Some("volts") => Measures::Volts,
            Some("amps") => Measures::Amperes,
            Some("ohms") => Measures::Ohms,
            Some("temperature") => Measures::Temperature,
            Some(other) => panic!("nothing measures {other}"),
        };
        Instrument {
            name: Located::new(self.name.clone(), at(0)),
            measures: Located::new(measures, at(1)),
            serial: None,
            calibrated_until: self.until.as_deref().map(|d| Located::new(date(d), at(3))),
            accuracy_percent: number(self.percent, 4),
            accuracy_counts: number(self.counts, 5),
            resolution: number(self.resolution, 6),
            cell: at(0),
        }
    }
}

impl RawRun {
    fn build(&self, row: usize) -> Run {
        let at = |col| cell("Circuits", row, col);
        let between = |name: &str| match name.split_once('-') {
            Some((a, b)) => Between::LineLine(leg(a), leg(b)),
            None => Between::LineNeutral(leg(name)),
        };
        let loads =
            self.loads.iter().map(|(name, watts)| Load { between: between(name), watts: Located::new(Watts(*watts), at(9)) }).collect();
        let kind = self.kind.as_deref().map(|k| {
            use LoadKind::*;
            [Resistive, Filament, Electronic, Motor].into_iter().find(|n| n.name() == k).unwrap_or_else(|| panic!("no load kind {k}"))
        });
        Run {
            name: Located::new(self.name.clone(), at(0)),
            fed_from: self.from.clone().map(|f| Located::new(f, at(1))),
            serves: self.serves.clone().map(|s| Located::new(s, at(2))),
            legs: self.legs.as_deref().map(|l| Located::new(legs(l), at(3))),
            breaker: self.breaker.map(|b| Located::new(Amperes(b), at(4))),
            tie: self.tie.map(|t| Located::new(t, at(5))),
            wire: self.wire.as_deref().map(|w| Located::new(wire(w), at(6))),
            neutral_wire: self.neutral.as_deref().map(|w| Located::new(wire(w), at(7))),
            length: self.m.map(|m| Located::new(Metres(m), at(8))),
            loads,
            load_kind: kind.map(|k| Located::new(k, at(12))),
            remarks: None,
            cell: at(0),
        }
    }
}

impl RawReadings {
    fn build(&self, row: usize, visit: &Visit) -> ReadingRow {
        let column = |q: Quantity| 5 + Quantity::ALL.iter().position(|a| *a == q).unwrap();
        let mut readings: Vec<Reading> = self
            .values
            .iter()
            .map(|(name, value)| {
                let q = quantity(name);
                Reading { quantity: q, value: measured(value), cell: cell("Readings", row, column(q)) }
            })
            .collect();
        readings.sort_by_key(|r| r.cell.col);
        ReadingRow {
            location: Located::new(self.at.clone(), cell("Readings", row, 0)),
            run: visit.run_named(&self.at),
            state: self.state.clone().unwrap_or_else(|| "as found".to_owned()),
            stage: stage(self.left),
            time: self.time.clone().map(|t| Located::new(t, cell("Readings", row, 3))),
            instrument: self.with.clone().map(|w| Located::new(w, cell("Readings", row, 4))),
            readings,
            remarks: None,
            cell: cell("Readings", row, 0),
        }
    }
}

impl RawTest {
    fn build(&self, row: usize) -> Test {
        let at = |col| cell("Tests", row, col);
        let kind = match self.kind {
            RawKind::InsulationResistance { test_volts } => TestKind::InsulationResistance { test_volts },
            RawKind::GroundElectrode {} => TestKind::GroundElectrode,
            RawKind::LoopImpedance {} => TestKind::LoopImpedance,
            RawKind::GfciTripTime { test_milliamperes } => TestKind::GfciTripTime { test_milliamperes },
            RawKind::GfciTripCurrent {} => TestKind::GfciTripCurrent,
            RawKind::Torque { specified } => TestKind::Torque { specified },
            RawKind::TemperatureRise { over_ambient } => TestKind::TemperatureRise { over_ambient },
            RawKind::ElementResistance { rated_watts, rated_volts, filament } => {
                TestKind::ElementResistance { rated_watts, rated_volts, filament }
            }
            RawKind::Other {} => TestKind::Other,
        };
        Test {
            location: self.at.clone().map(|l| Located::new(l, at(0))),
            kind,
            name: Located::new("test".to_owned(), at(1)),
            value: Located::new(measured(&self.value), at(2)),
            unit: unit(&self.unit),
            stage: stage(self.left),
            remarks: None,
        }
    }
}

impl RawObservation {
    fn build(&self, row: usize) -> Observation {
        let at = |col| cell("Observations", row, col);
        Observation {
            location: self.at.clone().map(|l| Located::new(l, at(0))),
            text: Located::new(self.text.clone(), at(1)),
            signal: self.signal.as_deref().map(|s| Located::new(signal(s), at(2))),
            advice: self.advice.clone().map(|a| Located::new(a, at(3))),
            photo: None,
        }
    }
}

impl RawBalance {
    fn build(&self) -> Balance {
        let legs: Vec<LegLoad> =
            self.va.iter().zip(Leg::ALL).map(|(va, leg)| LegLoad { leg, va: VoltAmperes(*va), circuits: Vec::new() }).collect();
        Balance {
            after: legs.clone(),
            legs,
            neutral: Amperes(self.neutral),
            imbalance_percent: self.imbalance,
            moves: Vec::new(),
            neutral_after: Amperes(self.neutral),
            imbalance_after_percent: self.imbalance,
        }
    }
}

impl RawDiagnosis {
    fn build(&self, run: &dyn Fn(&str) -> usize) -> Diagnosis {
        let ranking: Vec<Cause> = self.ranking.iter().map(|c| c.build(run)).collect();
        let repair = self.repair.as_deref().map(|outcome| RepairEvidence {
            found: ranking[0].clone(),
            left: Cause { kind: CauseKind::None, runs: Vec::new(), probability: 0.9, ohms: None },
            outcome: match outcome {
                "proven" => RepairOutcome::Proven,
                "not-repaired" => RepairOutcome::NotRepaired,
                "not-shown" => RepairOutcome::NotShown,
                other => panic!("no outcome {other}"),
            },
            cells: vec![cell("Readings", 1, 5), cell("Readings", 2, 5)],
        });
        Diagnosis {
            ranking,
            neutral: self
                .neutral
                .iter()
                .map(|n| NeutralInterval { run: run(&n.run), low: Ohms(n.low), high: n.high.map(Ohms), amperes: n.amperes })
                .collect(),
            next: self
                .next
                .iter()
                .map(|n| NextReading {
                    run: run(&n.at),
                    quantity: quantity(&n.quantity),
                    load: n.load.as_ref().map(|(l, w)| (leg(l), Watts(*w))),
                    tells_apart: n.tells_apart.iter().map(|r| run(r)).collect(),
                    worth: 1.0,
                })
                .collect(),
            load_steps: Vec::new(),
            repair,
            left_out: Vec::new(),
        }
    }
}

impl RawCause {
    fn build(&self, run: &dyn Fn(&str) -> usize) -> Cause {
        let kind = match self.kind.as_str() {
            "none" => CauseKind::None,
            "neutral" => CauseKind::Neutral,
            "hot" => CauseKind::Hot(leg(self.leg.as_deref().unwrap())),
            "supply" if self.leg.as_deref() == Some("low") => CauseKind::Supply(SupplyDirection::Low),
            "supply" => CauseKind::Supply(SupplyDirection::High),
            "reading" => {
                // `F3` of the Readings sheet.
                let address = self.cell.as_deref().unwrap();
                let col = address.as_bytes()[0] - b'A';
                CauseKind::Reading(cell("Readings", address[1..].parse::<usize>().unwrap() - 1, usize::from(col)))
            }
            other => panic!("no cause {other}"),
        };
        let ohms = self.ohms.map(|[low, best]| AddedOhms { best: Some(Ohms(best)), low: Ohms(low), high: self.high.map(Ohms) });
        Cause { kind, runs: self.runs.iter().map(|r| run(r)).collect(), probability: self.p, ohms }
    }
}

impl RawExposure {
    fn build(&self, run: &dyn Fn(&str) -> usize) -> Exposure {
        let legs = self.legs.iter().map(|l| ExposedLeg {
            leg: leg(&l.leg),
            volts: Volts(l.volts),
            low: l.low.map(Volts),
            at: run(&l.at),
            loads: Watts(l.watts),
        });
        Exposure { run: run(&self.run), legs: legs.collect() }
    }
}
