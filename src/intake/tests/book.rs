//! A workbook for a test, written as text, and what was read of it as text.
//!
//! A sheet is its rows, cells divided by `|`: `12` is a number, `'12` a text, `@2026-09-14` and `@09:04` a date and a time,
//! `#DIV/0!` an error value, `=A1` a formula without a result, `TRUE` a logical value; anything else is text.

use crate::diag::{Output, Problem};
use crate::intake::grid::{Area, Cell, Sheet, Value, Workbook};
use crate::intake::{Beside, BesideError, Mapping, Options, Refusal, sheets};
use crate::quantity::Measured;
use crate::visit::{ReadingRow, Visit};
use crate::wording::Language;

#[derive(Default)]
pub(super) struct Book(Workbook);

/// Nothing lies beside a workbook of a test but two pictures.
pub(super) struct Folder;

impl Beside for Folder {
    fn read(&self, name: &str) -> Result<Vec<u8>, BesideError> {
        match name {
            "panel.png" => Ok(b"\x89PNG\r\n\x1a\nrest".to_vec()),
            "panel.jpg" => Ok(vec![0xff, 0xd8, 0xff, 0xe0]),
            "panel.gif" => Ok(b"GIF89a".to_vec()),
            name if name.contains("..") => Err(BesideError::Outside),
            "locked.png" => Err(BesideError::Unreadable("no permission".to_owned())),
            _ => Err(BesideError::Missing),
        }
    }
}

impl Book {
    pub fn new() -> Self {
        Self::default()
    }

    pub fn sheet(mut self, name: &str, rows: &str) -> Self {
        let cells = rows.lines().zip(0..).flat_map(|(line, row)| {
            line.split('|').zip(0..).filter_map(move |(text, col)| value(text.trim()).map(|value| Cell { row, col, value }))
        });
        self.0.sheets.push(Sheet {
            name: name.into(),
            hidden: false,
            hidden_rows: Vec::new(),
            hidden_columns: Vec::new(),
            merged: Vec::new(),
            cells: cells.collect(),
        });
        self
    }

    /// Merges areas of the last sheet: `A2:A4`.
    pub fn merged(mut self, areas: &[&str]) -> Self {
        let sheet = self.0.sheets.last_mut().expect("a sheet");
        for area in areas {
            let (from, to) = area.split_once(':').expect("an area");
            let ((top, left), (bottom, right)) = (position(from), position(to));
            sheet.merged.push(Area { top, left, bottom, right });
        }
        self
    }

    pub fn last(&mut self) -> &mut Sheet {
        self.0.sheets.last_mut().expect("a sheet")
    }

    pub fn read(self) -> Result<Output<Visit>, Refusal> {
        self.read_with(None)
    }

    pub fn read_with(self, mapping: Option<&Mapping>) -> Result<Output<Visit>, Refusal> {
        sheets::assemble(Output { value: self.0, problems: Vec::new() }, &Options { beside: &Folder, mapping })
    }

    /// What was read, of a workbook that can be.
    pub fn visit(self) -> Output<Visit> {
        self.read().expect("a table of readings")
    }
}

fn position(address: &str) -> (u32, u32) {
    let digits = address.find(|c: char| c.is_ascii_digit()).expect("a row");
    let col = address[..digits].bytes().fold(0, |n, b| n * 26 + u32::from(b - b'A') + 1) - 1;
    (address[digits..].parse::<u32>().expect("a row") - 1, col)
}

pub(super) fn value(text: &str) -> Option<Value> {
    if text.is_empty() {
        return None;
    }
    if let Some(text) = text.strip_prefix('\'') {
        return Some(Value::Text(text.to_owned()));
    }
    if let Some(moment) = text.strip_prefix('@') {
        return Some(Value::DateTime(serial(moment)));
    }
    Some(match text {
        "TRUE" => Value::Logical(true),
        "FALSE" => Value::Logical(false),
        _ if text.starts_with('#') && text.ends_with(['!', '?', 'A']) => Value::Error(text.to_owned()),
        _ if text.starts_with('=') => Value::NoResult(text.to_owned()),
        _ => text.parse().map_or_else(|_| Value::Text(text.to_owned()), Value::Number),
    })
}

fn serial(moment: &str) -> f64 {
    if let Some((hours, minutes)) = moment.split_once(':') {
        return (hours.parse::<f64>().expect("hours") * 60.0 + minutes.parse::<f64>().expect("minutes")) / 1440.0;
    }
    let date: jiff::civil::Date = moment.parse().expect("a date");
    let days = (date - jiff::civil::date(1899, 12, 30)).get_days();
    f64::from(days)
}

/// The readings, a line a row: `SVC: L1-N 120.1, L2-N 119.9`; state and stage where they are not as found.
pub(super) fn readings(visit: &Visit) -> String {
    visit.rows.iter().map(row).collect::<Vec<_>>().join("\n")
}

fn row(row: &ReadingRow) -> String {
    let mut head = row.location.value.clone();
    if row.state != "as found" {
        head.push_str(&format!(" [{}]", row.state));
    }
    if row.stage.name() != "as found" {
        head.push_str(&format!(" ({})", row.stage.name()));
    }
    let readings: Vec<String> = row.readings.iter().map(|r| format!("{} {}", r.quantity, measured(r.value))).collect();
    format!("{head}: {}", readings.join(", "))
}

pub(super) fn measured(value: Measured) -> String {
    match value {
        Measured::NotMeasured => "none".to_owned(),
        Measured::Value(v) => v.to_string(),
        Measured::OverRange(None) => ">".to_owned(),
        Measured::OverRange(Some(v)) => format!(">{v}"),
        Measured::AtMost(v) => format!("<{v}"),
    }
}

/// The circuits, a line each: name, source, legs, breaker, wire, length in metres, loads.
pub(super) fn circuits(visit: &Visit) -> String {
    let mut lines = Vec::new();
    for run in &visit.runs {
        let mut parts = vec![run.name.value.clone()];
        parts.extend(run.fed_from.as_ref().map(|f| format!("< {}", f.value)));
        parts.extend(run.legs.as_ref().map(|l| format!("[{}]", l.value)));
        parts.extend(run.breaker.as_ref().map(|b| format!("{} A", b.value.0)));
        parts.extend(run.tie.as_ref().map(|t| if t.value { "tied" } else { "not tied" }.to_owned()));
        parts.extend(run.wire.as_ref().map(|w| w.value.to_string()));
        parts.extend(run.neutral_wire.as_ref().map(|w| format!("N {}", w.value)));
        parts.extend(run.length.as_ref().map(|l| format!("{:.2} m", l.value.0)));
        parts.extend(run.loads.iter().map(|l| format!("{} {} W", l.between, l.watts.value.0)));
        parts.extend(run.load_kind.as_ref().map(|k| k.value.name().to_owned()));
        lines.push(parts.join(" "));
    }
    lines.join("\n")
}

/// The problems by place and kind, a line each: `error Readings!B2 letters`. The language file must have words for each.
pub(super) fn problems(problems: &[Problem]) -> String {
    static ENGLISH: std::sync::LazyLock<Language> = std::sync::LazyLock::new(Language::english);
    let line = |p: &Problem| {
        let words = [Some(&p.message), p.hint.as_ref()].into_iter().flatten().map(|s| ENGLISH.say(s)).collect::<String>();
        assert!(!words.is_empty() && !words.contains(['⟨', '⟩']), "{words}");
        let place = match (&p.cell, &p.sheet) {
            (Some(cell), _) => cell.to_string(),
            (None, Some(sheet)) => sheet.to_string(),
            (None, None) => "workbook".to_owned(),
        };
        format!("{} {place} {}", p.severity.name(), p.message.key.trim_start_matches("intake."))
    };
    problems.iter().map(line).collect::<Vec<_>>().join("\n")
}

/// A Visit sheet that names the system, so that a test's problems are its own.
pub(super) const VISIT: &str = "Item | Entry\nSystem | 120/240\nService rating | 200 A";
