//! Whole inputs: the samples, and inputs of a size that only a careless reader would choke on.

use midwire::diag::{Output, Problem};
use midwire::intake::{Beside, BesideError, Content, Input, Options, read};
use midwire::quantity::Measured;
use midwire::visit::{Run, Visit};
use midwire::wording::Language;
use std::fmt::Write as _;
use std::time::{Duration, Instant};

/// Nothing lies beside.
struct Nothing;

impl Beside for Nothing {
    fn read(&self, _: &str) -> Result<Vec<u8>, BesideError> {
        Err(BesideError::Missing)
    }
}

fn taken(content: Content) -> Output<Visit> {
    read(&Input { name: "input", content }, &Options { beside: &Nothing, mapping: None }).expect("an input with readings")
}

fn sample(name: &str) -> Output<Visit> {
    let path = format!("{}/samples/{name}", env!("CARGO_MANIFEST_DIR"));
    taken(Content::File(&std::fs::read(path).expect("a sample")))
}

/// The problems in words, a line each, as a terminal shows them.
fn said(problems: &[Problem]) -> String {
    let english = Language::english();
    let mut out = String::new();
    for p in problems {
        let place = p.cell.as_ref().map(ToString::to_string).or(p.sheet.as_ref().map(ToString::to_string)).unwrap_or_default();
        let hint = p.hint.as_ref().map(|h| format!(" {}", english.say(h))).unwrap_or_default();
        let _ = writeln!(out, "{} {place} `{}`: {}{hint}", p.severity.name(), p.found, english.say(&p.message));
    }
    out
}

fn readings(visit: &Visit) -> String {
    let mut out = String::new();
    for row in &visit.rows {
        let value = |value: Measured| match value {
            Measured::Value(v) => v.to_string(),
            Measured::AtMost(v) => format!("<{v}"),
            other => format!("{other:?}"),
        };
        let values: Vec<String> = row.readings.iter().map(|r| format!("{} {}", r.quantity, value(r.value))).collect();
        let _ = writeln!(out, "{}: {}", row.location.value, values.join(", "));
    }
    out
}

fn circuits(visit: &Visit) -> String {
    let mut out = String::new();
    for run in &visit.runs {
        let shown = |text: Option<String>| text.unwrap_or_else(|| "?".to_owned());
        let _ = writeln!(
            out,
            "{} from {}: legs {}, breaker {}, wire {}",
            run.name.value,
            run.fed_from.as_ref().map_or("the utility", |f| &f.value),
            shown(run.legs.as_ref().map(|l| l.value.to_string())),
            shown(run.breaker.as_ref().map(|b| b.value.0.to_string())),
            shown(run.wire.as_ref().map(|w| w.value.to_string())),
        );
    }
    out
}

#[test]
fn sound_samples_give_no_problem() {
    for (name, system, runs, rows) in [
        ("sound-house.xlsx", "120/240", 12, 12),
        ("open-service-neutral.xlsx", "120/240", 12, 11),
        ("shared-neutral-open.xlsx", "120/240", 12, 9),
        ("high-resistance-hot.xlsx", "120/240", 12, 9),
        ("service-call.xlsx", "120/240", 12, 13),
        ("shop-208y.xlsx", "208Y/120", 8, 5),
        ("workshop-delta.xlsx", "240/120", 4, 3),
        ("cottage.ods", "120/240", 12, 12),
    ] {
        let Output { value: visit, problems } = sample(name);
        assert_eq!(said(&problems), "", "{name}");
        assert_eq!((visit.system.name.as_str(), visit.runs.len(), visit.rows.len()), (system, runs, rows), "{name}");
        assert!(visit.rows.iter().all(|r| r.run.is_some()) && visit.tree.faults.is_empty(), "{name}");
        assert!(
            visit.site.date.is_some() && visit.runs.iter().all(|r| r.legs.is_some() && r.wire.is_some() && r.length.is_some()),
            "{name}"
        );
    }
}

/// What tests/tools/make_samples.py plants, and nothing else.
#[test]
fn the_spoilt_sample_gives_each_planted_problem_and_no_other() {
    let out = sample("bad-cells.xlsx");
    insta::assert_snapshot!("intake-bad-cells-problems", said(&out.problems));
    insta::assert_snapshot!("intake-bad-cells-readings", readings(&out.value));
    insta::assert_snapshot!("intake-bad-cells-circuits", circuits(&out.value));
}

fn file(name: &str, head: &str, rows: impl Iterator<Item = String>) -> (String, Vec<u8>) {
    let mut text = format!("{head}\n");
    for row in rows {
        text.push_str(&row);
        text.push('\n');
    }
    (format!("{name}.csv"), text.into_bytes())
}

/// Generous for an unoptimised build on a busy machine; a look-up that goes through a list each time takes minutes.
const LONG: Duration = Duration::from_secs(30);

#[test]
fn a_chain_of_ten_thousand_runs_and_a_hundred_thousand_rows() {
    let start = Instant::now();
    let circuits = (0..10_000).map(|i| if i == 0 { "R0,,2P,12 Cu,10".to_owned() } else { format!("R{i},R{},2P,12 Cu,10", i - 1) });
    let readings = (0..100_000).map(|i| format!("R{},120.1,119.9,240", i % 10_000));
    let out = taken(Content::Folder(&[
        file("Visit", "Item,Entry", ["System,120/240".to_owned()].into_iter()),
        file("Circuits", "Circuit,Fed from,Legs,Wire,Length ft", circuits),
        file("Readings", "Location,L1-N,L2-N,L1-L2", readings),
    ]));
    assert_eq!(said(&out.problems), "");
    assert_eq!((out.value.runs.len(), out.value.rows.len(), out.value.tree.order.len()), (10_000, 100_000, 10_000));
    assert!(out.value.runs.iter().all(Run::shares_neutral));
    assert!(start.elapsed() < LONG, "{:?}", start.elapsed());
}

#[test]
fn names_nobody_knows_and_wrong_cells_stay_bounded() {
    let start = Instant::now();
    let circuits = (0..10_000).map(|i| format!("R{i},missing source {i}"));
    let readings = (0..50_000).map(|i| format!("place {i},12o.1,120"));
    let out = taken(Content::Folder(&[
        file("Visit", "Item,Entry", ["System,120/240".to_owned()].into_iter()),
        file("Circuits", "Circuit,Fed from", circuits),
        file("Readings", "Location,L1-N,L2-N", readings),
    ]));
    assert_eq!(out.problems.len(), 20_001);
    assert!(said(&out.problems).lines().last().is_some_and(|l| l.ends_with("90000 more problems were found and not listed.")));
    assert!(start.elapsed() < LONG, "{:?}", start.elapsed());
}
