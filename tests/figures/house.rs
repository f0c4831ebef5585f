//! Builds visits for figures, and what the phases before the report found in them.

use midwire::balance::{self, BalanceSettings};
use midwire::diag::{CellRef, Located};
use midwire::quantity::{Amperes, Measured, Metres, Volts, Watts};
use midwire::report::Source;
use midwire::report::drawing::{Measure, Shape};
use midwire::report::figures::{self, Figure};
use midwire::results::{Cause, CauseKind, Diagnosis, ExposedLeg, Exposure};
use midwire::rulebook::Rulebook;
use midwire::rules::{self, Facts};
use midwire::visit::{
    Between, Instrument, Leg, Legs, Load, Measures, Metal, Quantity, Reading, ReadingRow, Run, Site, Stage, System, Tree, Visit, Wire,
    WireSize,
};
use midwire::wording::Language;
use std::sync::Arc;

/// The text column of a report on Letter paper, in points.
pub const WIDTH: f64 = 504.0;

/// A typeface whose letters are all alike: half an em, bold a little more.
pub struct Fixed;

impl Measure for Fixed {
    fn width(&self, text: &str, size: f64, bold: bool) -> f64 {
        text.chars().count() as f64 * size * if bold { 0.56 } else { 0.52 }
    }
}

pub struct House {
    pub visit: Visit,
    pub diagnosis: Option<Diagnosis>,
    pub exposure: Vec<Exposure>,
    pub width: f64,
}

pub fn leg(name: &str) -> Leg {
    Leg::ALL.into_iter().find(|l| l.name() == name).unwrap()
}

fn cell(sheet: &str, row: usize, col: usize) -> CellRef {
    CellRef::new(&Arc::from(sheet), u32::try_from(row).unwrap(), u32::try_from(col).unwrap())
}

fn legs(text: &str) -> Legs {
    let names: Vec<Leg> = text.split([' ', '-']).map(leg).collect();
    Legs::new(&names, !text.contains('-'))
}

impl House {
    pub fn new(system: &str) -> Self {
        let visit = Visit {
            site: Site::default(),
            system: System::named(system).unwrap(),
            instruments: Vec::new(),
            runs: Vec::new(),
            tree: Tree::default(),
            rows: Vec::new(),
            tests: Vec::new(),
            observations: Vec::new(),
            photos: Vec::new(),
            work: Vec::new(),
            revisions: Vec::new(),
        };
        Self { visit, diagnosis: None, exposure: Vec::new(), width: WIDTH }
    }

    /// A run; `from` is empty for the utility.
    pub fn run(mut self, name: &str, from: &str, wires: &str, serves: &str) -> Self {
        let row = self.visit.runs.len() + 1;
        let at = |col| cell("Circuits", row, col);
        self.visit.runs.push(Run {
            name: Located::new(name.to_owned(), at(0)),
            fed_from: (!from.is_empty()).then(|| Located::new(from.to_owned(), at(1))),
            serves: (!serves.is_empty()).then(|| Located::new(serves.to_owned(), at(2))),
            legs: Some(Located::new(legs(wires), at(3))),
            breaker: None,
            tie: None,
            wire: None,
            neutral_wire: None,
            length: None,
            loads: Vec::new(),
            load_kind: None,
            remarks: None,
            cell: at(0),
        });
        self.visit.tree = Tree::new(&self.visit.runs);
        self
    }

    /// The voltmeter all readings were taken with: ±(0.5 % + so many counts of 0.1 V).
    pub fn meter(mut self, counts: f64) -> Self {
        let at = |col| cell("Instruments", 1, col);
        self.visit.instruments.push(Instrument {
            name: Located::new("M1".to_owned(), at(0)),
            measures: Located::new(Measures::Volts, at(1)),
            serial: None,
            calibrated_until: None,
            accuracy_percent: Some(Located::new(0.5, at(4))),
            accuracy_counts: Some(Located::new(counts, at(5))),
            resolution: Some(Located::new(0.1, at(6))),
            cell: at(0),
        });
        self
    }

    /// How the last run is built.
    pub fn built(mut self, awg: i8, metres: f64, breaker: f64) -> Self {
        let run = self.visit.runs.last_mut().unwrap();
        let at = run.cell.clone();
        run.wire = Some(Located::new(Wire { size: WireSize::Awg(awg), metal: Metal::Copper, metal_assumed: false }, at.clone()));
        run.length = Some(Located::new(Metres(metres), at.clone()));
        if breaker > 0.0 {
            run.breaker = Some(Located::new(Amperes(breaker), at));
        }
        self
    }

    /// A load at the end of the last run.
    pub fn load(mut self, between: &str, watts: f64) -> Self {
        let between = match between.split_once('-') {
            Some((a, b)) => Between::LineLine(leg(a), leg(b)),
            None => Between::LineNeutral(leg(between)),
        };
        let run = self.visit.runs.last_mut().unwrap();
        run.loads.push(Load { between, watts: Located::new(Watts(watts), run.cell.clone()) });
        self
    }

    pub fn read(self, at: &str, values: &[(&str, f64)]) -> Self {
        self.read_in(at, "as found", Stage::AsFound, values)
    }

    pub fn read_in(mut self, at: &str, state: &str, stage: Stage, values: &[(&str, f64)]) -> Self {
        let row = self.visit.rows.len() + 1;
        let reading = |(name, value): &(&str, f64)| {
            let col = Quantity::ALL.iter().position(|q| q.to_string() == *name).unwrap();
            Reading { quantity: Quantity::ALL[col], value: Measured::Value(*value), cell: cell("Readings", row, 5 + col) }
        };
        self.visit.rows.push(ReadingRow {
            location: Located::new(at.to_owned(), cell("Readings", row, 0)),
            run: self.visit.run_named(at),
            state: state.to_owned(),
            stage,
            time: None,
            instrument: None,
            readings: values.iter().map(reading).collect(),
            remarks: None,
            cell: cell("Readings", row, 0),
        });
        self
    }

    /// A cause of the ranking; the first is the answer.
    pub fn cause(mut self, kind: CauseKind, runs: &[&str], probability: f64) -> Self {
        let runs = runs.iter().map(|r| self.visit.run_named(r).unwrap()).collect();
        let empty = Diagnosis {
            ranking: Vec::new(),
            neutral: Vec::new(),
            next: Vec::new(),
            load_steps: Vec::new(),
            repair: None,
            left_out: Vec::new(),
        };
        self.diagnosis.get_or_insert(empty).ranking.push(Cause { kind, runs, probability, ohms: None });
        self
    }

    /// Volts under an open neutral: leg, lower end, upper end, place, watts.
    pub fn exposed(mut self, run: &str, legs: &[(&str, Option<f64>, f64, &str, f64)]) -> Self {
        let run_of = |name: &str| self.visit.run_named(name).unwrap();
        let exposed = legs.iter().map(|(l, low, high, at, watts)| ExposedLeg {
            leg: leg(l),
            volts: Volts(*high),
            low: low.map(Volts),
            at: run_of(at),
            loads: Watts(*watts),
        });
        let exposure = Exposure { run: run_of(run), legs: exposed.collect() };
        self.exposure.push(exposure);
        self
    }

    /// The figures, with findings and balance as the rules and the balance make them.
    pub fn figures(&self, measure: &dyn Measure) -> Vec<Figure> {
        let balance = balance::balance(&self.visit, &BalanceSettings::default());
        let facts = Facts { visit: &self.visit, balance: balance.as_ref(), diagnosis: self.diagnosis.as_ref(), exposure: &self.exposure };
        let findings = rules::check(&facts, &Rulebook::built_in());
        let source = Source {
            file: "visit.xlsx",
            sha256: "",
            program: "midwire",
            visit: &self.visit,
            problems: &[],
            findings: &findings,
            passed_unlisted: 0,
            balance: balance.as_ref(),
            diagnosis: self.diagnosis.as_ref(),
            exposure: &self.exposure,
            rules: &[],
        };
        figures::build(&source, &Language::english(), measure, self.width)
    }

    /// The figures of one name.
    pub fn figure(&self, name: &str) -> Vec<Figure> {
        self.figures(&Fixed).into_iter().filter(|f| f.name == name).collect()
    }
}

/// A shape's outermost points: left, top, right, bottom. Letters rise 0.78 and hang 0.22 of their size about the baseline.
pub fn bounds(shape: &Shape, measure: &dyn Measure) -> [f64; 4] {
    use midwire::report::drawing::Anchor;
    let around = |points: &[(f64, f64)], pad: f64| {
        let least = |f: fn(&(f64, f64)) -> f64| points.iter().map(f).fold(f64::INFINITY, f64::min) - pad;
        let most = |f: fn(&(f64, f64)) -> f64| points.iter().map(f).fold(f64::NEG_INFINITY, f64::max) + pad;
        [least(|p| p.0), least(|p| p.1), most(|p| p.0), most(|p| p.1)]
    };
    match shape {
        Shape::Line { points, width, .. } => around(points, width / 2.0),
        Shape::Rect { x, y, width, height, .. } => [*x, *y, x + width, y + height],
        Shape::Polygon { points, stroke, .. } => around(points, stroke.map_or(0.0, |s| s.0 / 2.0)),
        Shape::Circle { centre, radius, stroke, .. } => around(&[*centre], radius + stroke.map_or(0.0, |s| s.0 / 2.0)),
        Shape::Text { at, text, size, bold, anchor, .. } => {
            let width = measure.width(text, *size, *bold);
            let left = match anchor {
                Anchor::Start => at.0,
                Anchor::Middle => at.0 - width / 2.0,
                Anchor::End => at.0 - width,
            };
            [left, at.1 - 0.78 * size, left + width, at.1 + 0.22 * size]
        }
    }
}
