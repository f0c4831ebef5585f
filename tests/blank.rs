//! The empty field workbook, filled in as a person would and read back: without one remark, every value as it was entered.
//!
//! Filled in here means: its empty cells hold the entries, and all else in the file is as the program wrote it.

use midwire::diag::Output;
use midwire::intake::{Beside, BesideError, Content, Input, Options, Refusal, read};
use midwire::pipeline;
use midwire::quantity::Volts;
use midwire::visit::{Quantity, Stage, System, Visit};
use midwire::wording::Language;
use std::collections::BTreeMap;
use std::io::{Cursor, Read, Write};

struct Nothing;

impl Beside for Nothing {
    fn read(&self, _: &str) -> Result<Vec<u8>, BesideError> {
        Err(BesideError::Missing)
    }
}

fn taken(bytes: &[u8]) -> Result<Output<Visit>, Refusal> {
    read(&Input { name: "field.xlsx", content: Content::File(bytes) }, &Options { beside: &Nothing, mapping: None })
}

fn blank(system: &System) -> Vec<u8> {
    pipeline::blank(system, &Language::english(), 20).expect("the workbook is written")
}

/// All systems there are names for, and one by its voltages.
fn systems() -> Vec<System> {
    let by_voltages = System::by_voltages(Volts(127.0), Volts(220.0)).expect("a wye");
    System::NAMED.iter().map(|s| System::named(s.0).expect("listed")).chain([by_voltages]).collect()
}

/// A workbook's parts by name.
struct Book(BTreeMap<String, String>);

impl Book {
    fn open(bytes: &[u8]) -> Self {
        let mut archive = zip::ZipArchive::new(Cursor::new(bytes)).expect("an archive");
        let mut parts = BTreeMap::new();
        for i in 0..archive.len() {
            let mut part = archive.by_index(i).expect("a part");
            let mut text = String::new();
            part.read_to_string(&mut text).expect("text");
            parts.insert(part.name().expect("a name").into_owned(), text);
        }
        Self(parts)
    }

    fn save(&self) -> Vec<u8> {
        let mut archive = zip::ZipWriter::new(Cursor::new(Vec::new()));
        for (name, text) in &self.0 {
            archive.start_file(name.as_str(), zip::write::SimpleFileOptions::default()).expect("a part");
            archive.write_all(text.as_bytes()).expect("written");
        }
        archive.finish().expect("finished").into_inner()
    }

    /// The part that holds a sheet: sheets are numbered in their order.
    fn sheet(&self, name: &str) -> String {
        let tabs = self.0["xl/workbook.xml"].split("<sheet name=\"").skip(1);
        let at = tabs.map(|t| t.split('"').next().unwrap()).position(|t| t == name).unwrap_or_else(|| panic!("no sheet {name}"));
        format!("xl/worksheets/sheet{}.xml", at + 1)
    }

    /// Text cells of a sheet by address.
    fn texts(&self, sheet: &str) -> BTreeMap<String, String> {
        let shared: Vec<&str> = self.0["xl/sharedStrings.xml"]
            .split("<si><t")
            .skip(1)
            .map(|t| t.split('>').nth(1).unwrap().split('<').next().unwrap())
            .collect();
        let cells = self.0[&self.sheet(sheet)].split("<c r=\"").skip(1);
        let text = |cell: &str| {
            let index: usize = cell.split("t=\"s\"><v>").nth(1)?.split('<').next()?.parse().ok()?;
            Some((cell.split('"').next()?.to_owned(), shared[index].to_owned()))
        };
        cells.filter_map(|cell| text(cell.split("</c>").next()?)).collect()
    }

    /// The column of a heading.
    fn column(&self, sheet: &str, heading: &str) -> String {
        let found = self.texts(sheet).into_iter().find(|(at, text)| at.trim_start_matches(char::is_alphabetic) == "1" && text == heading);
        found.unwrap_or_else(|| panic!("no column {heading} in {sheet}")).0.trim_end_matches('1').to_owned()
    }

    /// Enters something in a cell that is empty; a number as a number.
    fn enter(&mut self, sheet: &str, at: &str, entry: &str) {
        let part = self.sheet(sheet);
        let text = &self.0[&part];
        let start = text.find(&format!("<c r=\"{at}\"")).unwrap_or_else(|| panic!("{sheet}!{at} is no cell"));
        let end = start + text[start..].find('>').unwrap();
        let tag = text[start..end].strip_suffix('/').unwrap_or_else(|| panic!("{sheet}!{at} is not empty"));
        let filled = match entry.parse::<f64>() {
            Ok(_) => format!("{tag}><v>{entry}</v></c>"),
            Err(_) => format!("{tag} t=\"inlineStr\"><is><t>{entry}</t></is></c>"),
        };
        let whole = format!("{}{filled}{}", &text[..start], &text[end + 1..]);
        self.0.insert(part, whole);
    }

    /// A row of a table, from 2.
    fn row(&mut self, sheet: &str, row: usize, entries: &[(&str, &str)]) {
        for (heading, entry) in entries {
            let column = self.column(sheet, heading);
            self.enter(sheet, &format!("{column}{row}"), entry);
        }
    }

    /// Items of the Visit sheet.
    fn items(&mut self, entries: &[(&str, &str)]) {
        for (item, entry) in entries {
            let at = self.texts("Visit").into_iter().find(|(_, text)| text == item).unwrap_or_else(|| panic!("no item {item}")).0;
            self.enter("Visit", &at.replace('A', "B"), entry);
        }
    }

    /// What a spreadsheet program does with cells that reckon: their results of a row are stored.
    fn reckon(&mut self, row: usize, result: &str) {
        let part = self.sheet("Readings");
        let text = &self.0[&part];
        let start = text.find(&format!("<row r=\"{row}\"")).unwrap();
        let end = start + text[start..].find("</row>").unwrap();
        let reckoned = text[start..end].replace(" t=\"str\"><f>", "><f>").replace("<v></v>", &format!("<v>{result}</v>"));
        let whole = format!("{}{reckoned}{}", &text[..start], &text[end..]);
        self.0.insert(part, whole);
    }
}

/// Headings of a table.
fn headings(book: &Book, sheet: &str) -> Vec<String> {
    let texts = book.texts(sheet).into_iter();
    texts.filter(|(at, _)| at.trim_start_matches(char::is_alphabetic) == "1").map(|(_, text)| text).collect()
}

/// The quantities a system has, as the Readings sheet heads them (the contract of the field workbook).
fn quantities(system: &System) -> Vec<&'static str> {
    match system.legs().len() {
        1 => vec!["L1-N", "N-G", "L1-G", "I L1", "I N", "I G"],
        2 => vec!["L1-N", "L2-N", "L1-L2", "N-G", "L1-G", "L2-G", "I L1", "I L2", "I N", "I G"],
        _ => vec!["L1-N", "L2-N", "L3-N", "L1-L2", "L2-L3", "L3-L1", "N-G", "L1-G", "L2-G", "L3-G", "I L1", "I L2", "I L3", "I N", "I G"],
    }
}

/// A value that can be true of a quantity: nominal for voltages, so that no remark on the value itself can hide one on the sheet.
fn plausible(system: &System, heading: &str) -> f64 {
    let (neutral, line) = (system.line_to_neutral.0, system.line_to_line.0);
    match heading {
        "N-G" => 0.4,
        "I G" => 0.1,
        h if h.starts_with('I') => 12.5,
        "L2-N" | "L2-G" if system.name == "240/120" => 207.8,
        h if h.ends_with("-N") || h.ends_with("-G") => neutral,
        _ => line,
    }
}

fn filled(system: &System) -> Book {
    let mut book = Book::open(&blank(system));
    book.items(&[
        ("Job number", "2026-118"),
        ("Client", "Orla Penhallow"),
        ("Site address", "14 Quay Street, Alder Ferry"),
        // 46 350 days after 1899-12-30, as the 1900 date system counts, is 2026-11-24.
        ("Visit date", "46350"),
        ("Purpose", "service call"),
        ("Prepared by", "Ines Marlow"),
        ("Licence", "EL-2207"),
        ("Company", "Kestrel &amp; Rowe Electrical"),
        ("Service rating", "200 A"),
        ("Supplied by", "Ferry Valley Light &amp; Water"),
        ("Code in force", "as adopted locally"),
        ("Weather", "dry, 11 °C"),
        ("Remarks", "by appointment"),
    ]);
    let accuracy = [("Accuracy % of reading", "0.7"), ("Accuracy counts", "3"), ("Resolution", "0.1")];
    for (row, measures) in [(2, "volts"), (3, "amps")] {
        book.row(
            "Instruments",
            row,
            &[("Instrument", "Meter M1"), ("Measures", measures), ("Serial", "S 100"), ("Calibrated until", "46500")],
        );
        book.row("Instruments", row, &accuracy);
    }
    let legs = if system.legs().len() == 1 { "L1" } else { "L1 L2" };
    let all = match system.legs().len() {
        1 => "L1",
        2 => "L1 L2",
        _ => "L1 L2 L3",
    };
    book.row(
        "Circuits",
        2,
        &[("Circuit", "Main"), ("Serves", "panel"), ("Legs", all), ("Breaker A", "200"), ("Wire", "4/0 Al"), ("Length ft", "60")],
    );
    book.row(
        "Circuits",
        3,
        &[("Circuit", "5/7"), ("Fed from", "Main"), ("Serves", "kitchen"), ("Legs", legs), ("Breaker A", "20"), ("Tie", "yes")],
    );
    book.row(
        "Circuits",
        3,
        &[("Wire", "12 Cu"), ("Neutral wire", "10 Cu"), ("Length ft", "100"), ("Load W L1", "900"), ("Load kind", "resistive")],
    );
    for (row, (location, state, stage)) in (2..).zip([("Main", "as found", "as found"), ("5/7", "1500 W heater on", "as left")]) {
        book.row(
            "Readings",
            row,
            &[("Location", location), ("State", state), ("Stage", stage), ("Time", "10:05"), ("Instrument", "Meter M1")],
        );
        for heading in quantities(system) {
            book.row("Readings", row, &[(heading, &plausible(system, heading).to_string())]);
        }
    }
    book.row("Readings", 3, &[("Remarks", "cover off")]);
    book.row(
        "Tests",
        2,
        &[("Location", "5/7"), ("Test", "insulation resistance 500 V"), ("Value", "250"), ("Unit", "MΩ"), ("Stage", "as found")],
    );
    book.row(
        "Observations",
        2,
        &[("Location", "Main"), ("Observation", "lug discoloured"), ("Signal word", "WARNING"), ("Advice", "replace")],
    );
    book.row("Work", 2, &[("Date", "46350"), ("Location", "Main"), ("Work done", "lug replaced"), ("Parts", "lug")]);
    book.row("Revisions", 2, &[("Issue", "2"), ("Date", "46352"), ("Reason", "name corrected")]);
    book
}

fn said(read: &Output<Visit>) -> Vec<String> {
    let english = Language::english();
    read.problems.iter().map(|p| format!("{:?} `{}`: {}", p.cell, p.found, english.say(&p.message))).collect()
}

#[test]
fn filled_in_it_reads_back_without_a_remark_for_every_system() {
    for system in systems() {
        let mut book = filled(&system);
        let stored = book.save();
        // Once as the program stored its results, once as a spreadsheet program stores them.
        book.reckon(2, "-0.3");
        book.reckon(3, "1.2");
        for bytes in [stored, book.save()] {
            let read = taken(&bytes).unwrap_or_else(|e| panic!("{}: {e}", system.name));
            assert_eq!(said(&read), Vec::<String>::new(), "{}", system.name);
            assert_eq!(read.value.system, system);
            holds(&read.value, &system);
        }
    }
}

fn holds(visit: &Visit, system: &System) {
    let site = &visit.site;
    let item = |item: &Option<midwire::diag::Located<String>>| item.as_ref().map(|i| i.value.clone()).unwrap_or_default();
    assert_eq!(item(&site.job), "2026-118");
    assert_eq!(item(&site.client), "Orla Penhallow");
    assert_eq!(item(&site.company), "Kestrel & Rowe Electrical");
    assert_eq!(item(&site.supplied_by), "Ferry Valley Light & Water");
    assert_eq!(item(&site.purpose), "service call");
    assert_eq!(site.date.as_ref().unwrap().value.to_string(), "2026-11-24");
    assert_eq!(site.service_amperes.as_ref().unwrap().value, 200.0);
    assert_eq!(visit.instruments.len(), 2);
    let accuracy = visit.instruments[0].accuracy().unwrap();
    assert_eq!((accuracy.percent, accuracy.counts, accuracy.resolution), (0.7, 3.0, 0.1));
    assert_eq!(visit.runs.len(), 2);
    let run = &visit.runs[1];
    assert_eq!((run.name.value.as_str(), run.fed_from.as_ref().unwrap().value.as_str()), ("5/7", "Main"));
    assert_eq!(run.breaker.as_ref().unwrap().value.0, 20.0);
    assert!(run.tie.as_ref().unwrap().value);
    // A foot is 0.3048 m exactly.
    assert!((run.length.as_ref().unwrap().value.0 - 30.48).abs() < 1e-9);
    assert_eq!(run.wire.as_ref().unwrap().value.to_string(), "12 Cu");
    assert_eq!(run.loads[0].watts.value.0, 900.0);
    assert_eq!(visit.rows.len(), 2);
    for row in &visit.rows {
        let headings = quantities(system);
        assert_eq!(row.readings.len(), headings.len(), "{}", system.name);
        for heading in headings {
            let reading = row.readings.iter().find(|r: &&midwire::visit::Reading| r.quantity.to_string() == heading);
            let value = reading.unwrap_or_else(|| panic!("{}: {heading}", system.name)).value.value();
            assert_eq!(value, Some(plausible(system, heading)), "{}: {heading}", system.name);
        }
    }
    let row = &visit.rows[1];
    assert_eq!((row.state.as_str(), row.stage, row.run), ("1500 W heater on", Stage::AsLeft, Some(1)));
    assert_eq!((visit.tests.len(), visit.observations.len(), visit.work.len(), visit.revisions.len()), (1, 1, 1, 1));
}

#[test]
fn one_that_nobody_filled_in_is_refused_in_a_sentence() {
    for system in systems() {
        let refused = taken(&blank(&system)).expect_err("nothing is entered");
        assert_eq!(refused, Refusal::NotFilledIn, "{}", system.name);
        assert!(refused.to_string().contains("no readings"), "{refused}");
    }
}

#[test]
fn it_asks_for_the_legs_the_system_has() {
    for system in systems() {
        let book = Book::open(&blank(&system));
        let headings = headings(&book, "Readings");
        for heading in quantities(&system) {
            assert!(headings.iter().any(|h| h == heading), "{}: {heading}", system.name);
        }
        let legs = system.legs().len();
        assert_eq!(headings.iter().any(|h| h == "L2-N"), legs > 1, "{}", system.name);
        assert_eq!(headings.iter().any(|h| h == "I L3"), legs > 2, "{}", system.name);
        assert_eq!(headings.iter().any(|h| h == "Leg sum less L1-L2"), system.name == "120/240", "{}", system.name);
        assert!(Quantity::line_neutral(system.legs()[0]).to_string() == "L1-N");
    }
}

#[test]
fn the_same_workbook_each_time_and_nothing_in_cells_that_reckon() {
    let system = System::split_phase_120_240();
    assert_eq!(blank(&system), blank(&system));
    let book = Book::open(&blank(&system));
    let readings = &book.0[&book.sheet("Readings")];
    assert!(readings.contains("<f>"));
    assert!(!readings.contains("</f><v>0</v>"), "an empty row shows a number");
    assert!(!book.0.values().any(|part| part.contains('⟨')), "a sentence is missing");
}
