//! The rules: the folder and the list hold together, every rule fires and is quiet where its fixtures say, none panics on any
//! fixture, and what they decide agrees with published values.

#[path = "rules/site.rs"]
mod site;

#[path = "rules/folder.rs"]
mod folder;
#[path = "rules/published.rs"]
mod published;
#[path = "rules/rulebooks.rs"]
mod rulebooks;

use midwire::results::{Finding, Verdict};
use midwire::rulebook::Rulebook;
use midwire::wording::Language;
use site::{Expected, Fixture};
use std::path::{Path, PathBuf};

fn fixture_folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/rules")
}

/// The fixtures of a rule: file name and text, sorted by name.
fn fixtures(rule: &str) -> Vec<(String, String)> {
    let folder = fixture_folder().join(rule);
    let Ok(entries) = std::fs::read_dir(&folder) else { return Vec::new() };
    let mut files: Vec<(String, String)> = entries
        .filter_map(|entry| {
            let path = entry.ok()?.path();
            let name = path.file_stem()?.to_str()?.to_owned();
            (path.extension()? == "toml").then(|| (name, std::fs::read_to_string(&path).unwrap()))
        })
        .collect();
    files.sort();
    files
}

/// The findings of a fixture, by its own rule book.
fn findings(fixture: &Fixture) -> Vec<Finding> {
    let book = Rulebook::built_in();
    let book = if fixture.book.is_empty() { book } else { book.overlay(&fixture.book, "fixture").unwrap() };
    midwire::rules::check(&fixture.facts(), &book)
}

/// Failed or undecided: what a reader is shown by default.
fn is_shown(finding: &Finding) -> bool {
    finding.verdict != Verdict::Pass
}

fn matches(finding: &Finding, expected: &Expected) -> bool {
    let language = Language::english();
    let is = |wanted: &Option<String>, got: &str| wanted.as_deref().is_none_or(|w| w == got);
    let near = |wanted: Option<f64>, got: Option<f64>| wanted.is_none_or(|w| got.is_some_and(|g| (w - g).abs() < 0.005 + w.abs() * 1e-4));
    let contains = |wanted: &Option<String>, got: String| wanted.as_deref().is_none_or(|w| got.contains(w));
    let cells: Vec<String> = finding.cells.iter().map(ToString::to_string).collect();
    is(&expected.verdict, finding.verdict.name())
        && is(&expected.signal, finding.signal.word())
        && is(&expected.at, finding.location.as_deref().unwrap_or_default())
        && contains(&expected.says, language.say(&finding.says))
        && contains(&expected.advice, language.say(&finding.advice))
        && near(expected.value, finding.measured.map(|m| m.value))
        && near(expected.low, finding.limit.and_then(|l| l.low))
        && near(expected.high, finding.limit.and_then(|l| l.high))
        && expected.cells.iter().all(|c| cells.contains(c))
}

/// A finding in one line, for the messages of failed tests.
fn line(finding: &Finding) -> String {
    let language = Language::english();
    let cells: Vec<String> = finding.cells.iter().map(ToString::to_string).collect();
    format!(
        "{} {} {} at {:?} {:?} {:?} [{}] {} / {}",
        finding.rule,
        finding.verdict.name(),
        finding.signal,
        finding.location,
        finding.measured,
        finding.limit,
        cells.join(" "),
        language.say(&finding.says),
        language.say(&finding.advice)
    )
}
