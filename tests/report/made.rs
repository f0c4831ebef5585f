//! A visit made for a test, checked by the rules, and the report of it.

use crate::site::Fixture;
use midwire::diag::{CellRef, Located, Problem, Severity};
use midwire::report::document::{Document, PageSize};
use midwire::report::drawing::Measure;
use midwire::report::{self, Options, RuleBasis, Source, TemplateError};
use midwire::results::Finding;
use midwire::rulebook::Rulebook;
use midwire::visit::{Photo, Revision, Work};
use midwire::wording::{Language, Sentence};
use std::sync::Arc;

/// A typeface whose letters are all half an em wide.
struct Even;

impl Measure for Even {
    fn width(&self, text: &str, size: f64, _bold: bool) -> f64 {
        text.chars().count() as f64 * size * 0.5
    }
}

/// A house with a fault in the neutral of 5/7, so that every part of a report has something to say.
const HOUSE: &str = r#"
date = "2026-03-14"
instruments = [{ name = "M1", measures = "volts", percent = 0.7, counts = 2, until = "2027-01-31" }]
runs = [
  { name = "SVC", legs = "L1 L2", breaker = 200, wire = "4/0 Al", m = 24 },
  { name = "5/7", from = "SVC", legs = "L1 L2", breaker = 15, wire = "14 Cu", m = 7.3, loads = { L1 = 180, L2 = 900 } },
]
readings = [
  { at = "SVC", V = { L1-N = 120.1, L2-N = 120.4, L1-L2 = 240.5 } },
  { at = "5/7", state = "heater on", V = { L1-N = 141.2, L2-N = 98.6, L1-L2 = 239.8, N-G = 21.1 } },
]
observations = [{ at = "5/7", text = "lamp flares", signal = "CAUTION", advice = "Leave it off" }]
exposure = [{ run = "5/7", legs = [{ leg = "L1", volts = 200.3, at = "5/7", watts = 180 }] }]
[diagnosis]
ranking = [
  { kind = "neutral", runs = ["5/7"], p = 0.93, ohms = [2.1, 3.4] },
  { kind = "none", p = 0.07 },
]
neutral = [{ run = "SVC", low = 0.0, amperes = 0.2 }, { run = "5/7", low = 2.1, amperes = 5.8 }]
next = [{ at = "5/7", quantity = "L1-N", load = ["L1", 1500], tells_apart = ["5/7", "SVC"] }]
"#;

/// The house after its repair: read again as left, and the fault ruled out.
const AS_LEFT: &str = r#"  { at = "5/7", state = "heater on", left = true, V = { L1-N = 119.8, L2-N = 119.9, L1-L2 = 239.7, N-G = 0.4 } },
"#;

pub struct Made {
    pub fixture: Fixture,
    pub problems: Vec<Problem>,
}

pub fn at(text: &str) -> Located<String> {
    Located::new(text.to_owned(), CellRef::new(&Arc::from("Visit"), 0, 1))
}

impl Made {
    pub fn of(fixture: &str) -> Self {
        Self { fixture: Fixture::read(fixture), problems: Vec::new() }
    }

    pub fn house() -> Self {
        Self::of(HOUSE)
    }

    pub fn repaired() -> Self {
        let fixture = HOUSE.replacen("]\nobservations", &format!("{AS_LEFT}]\nobservations"), 1) + "repair = \"proven\"\n";
        let mut made = Self::of(&fixture);
        let work = Work { date: None, location: Some(at("5/7")), done: at("Neutral splice remade"), parts: Some(at("one splice")) };
        made.fixture.visit.work.push(work);
        made
    }

    /// The house with a text wherever a workbook can hold one.
    pub fn saying(text: &str) -> Self {
        let mut made = Self::house();
        let some = || Some(at(text));
        let visit = &mut made.fixture.visit;
        let site = &mut visit.site;
        for field in [&mut site.job, &mut site.client, &mut site.address, &mut site.purpose, &mut site.prepared_by, &mut site.licence] {
            *field = some();
        }
        for field in [&mut site.company, &mut site.service_rating, &mut site.supplied_by, &mut site.code, &mut site.weather] {
            *field = some();
        }
        site.remarks = some();
        for instrument in &mut visit.instruments {
            instrument.name.value = text.to_owned();
            instrument.serial = some();
        }
        for run in &mut visit.runs {
            (run.serves, run.remarks) = (some(), some());
        }
        visit.runs[1].name.value = text.to_owned();
        for row in &mut visit.rows {
            (row.time, row.remarks, row.instrument) = (some(), some(), None);
        }
        visit.rows[1].location.value = text.to_owned();
        visit.rows[1].state = text.to_owned();
        for seen in &mut visit.observations {
            (seen.location, seen.text, seen.advice, seen.photo) = (some(), at(text), some(), some());
        }
        visit.photos.push(Photo { file: at(text), location: some(), caption: some(), bytes: Some(Arc::from(&b"png"[..])) });
        visit.work.push(Work { date: None, location: some(), done: at(text), parts: some() });
        visit.revisions.push(Revision { issue: at(text), date: None, reason: some() });
        let message = Sentence::new("observation.seen").with("text", text);
        made.problems.push(Problem::at(Severity::Error, &at("").cell, text, message));
        made
    }

    pub fn findings(&self) -> Vec<Finding> {
        let book = Rulebook::built_in();
        let book = if self.fixture.book.is_empty() { book } else { book.overlay(&self.fixture.book, "fixture").unwrap() };
        midwire::rules::check(&self.fixture.facts(), &book)
    }

    pub fn report(&self, file: &str, template: &str) -> Result<Document, TemplateError> {
        let findings = self.findings();
        let language = Language::english();
        let pages = midwire::rules::manual_pages(&Rulebook::built_in(), &language);
        let rules: Vec<RuleBasis> = pages
            .into_iter()
            .filter(|page| findings.iter().any(|f| f.rule == page.id))
            .map(|page| RuleBasis { rule: page.id.to_owned(), title: page.title, limits: String::new(), basis: page.basis })
            .collect();
        let source = Source {
            file: "field.xlsx",
            sha256: "143d98d3fb1719b3d92d046d116d4b942d2e85e6da5f18bbbbd1135636524bc6",
            program: "midwire",
            visit: &self.fixture.visit,
            problems: &self.problems,
            findings: &findings,
            passed_unlisted: 0,
            balance: self.fixture.balance.as_ref(),
            diagnosis: self.fixture.diagnosis.as_ref(),
            exposure: &self.fixture.exposure,
            rules: &rules,
        };
        report::build(
            &source,
            &Options {
                language: &language,
                page: PageSize::Letter,
                accent: [0x1f, 0x4d, 0x45],
                date: None,
                template: Some((file, template)),
                measure: &Even,
            },
        )
    }

    pub fn built_in(&self, name: &str) -> Document {
        let (_, _, text) = report::BUILT_IN_TEMPLATES.iter().find(|t| t.0 == name).unwrap();
        self.report(name, text).unwrap()
    }
}
