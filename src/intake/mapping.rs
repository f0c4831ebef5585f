//! A user's own layout: a TOML file laid over the built-in words.
//!
//! ```toml
//! [sheets]                       # what a sheet is, by its name; `none` leaves it out
//! readings = "Blatt 3"
//! none = ["Sketch", "Prices"]
//!
//! [readings]                     # this program's column = what the user's sheet calls it, one or several
//! Location = "Messpunkt"
//! L1-N = ["Phase gegen N", "U1"]
//!
//! [visit]                        # the same for the items of the Visit sheet
//! Client = "Auftraggeber"
//!
//! [fixed.visit]                  # entries that hold where the workbook has no such item or column
//! System = "230/400"
//! [fixed.readings]
//! Instrument = "Meter M1"
//!
//! [units]                        # units of columns whose header states none
//! Length = "m"
//! N-G = "mV"
//! ```

use super::header::What;
use super::words::{Kind, Words};
use crate::diag::SettingsProblem;
use crate::quantity::parse::unit_word;
use crate::wording::{Arg, Sentence};
use std::fmt::Write as _;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

/// One thing wrong with a mapping file.
pub type MappingProblem = SettingsProblem;

/// A user's words and entries, laid over the built-in ones.
#[derive(Clone, Debug)]
pub struct Mapping {
    pub(super) words: Words,
}

/// Longest text of a value shown in a problem, in characters.
const SHOWN: usize = 60;

type Value<'a> = Spanned<DeValue<'a>>;

impl Mapping {
    /// Reads a mapping; `file` is its name for messages and for the places of fixed entries.
    ///
    /// # Errors
    /// Everything wrong with the file, each with its line.
    pub fn from_toml(text: &str, file: &str) -> Result<Self, Vec<MappingProblem>> {
        let mut reader = Reader { text, file, words: Words::built_in().clone(), problems: Vec::new() };
        reader.words.fixed.sheet.name = file.into();
        let (document, errors) = DeTable::parse_recoverable(text);
        for error in &errors {
            let at = error.span().map_or(0, |span| span.start);
            let expected = Sentence::new("mapping.expected-toml").with("message", error.message());
            reader.problem(at, "", reader.line_text(at), expected, None);
        }
        // After a syntax error the rest is guesswork.
        if errors.is_empty() {
            reader.document(document.get_ref());
        }
        let Reader { mut words, mut problems, .. } = reader;
        problems.sort_by_key(|p| p.line);
        words.fixed.sheet.cells.sort_by_key(|c| c.row);
        if problems.is_empty() { Ok(Self { words }) } else { Err(problems) }
    }
}

struct Reader<'a> {
    text: &'a str,
    file: &'a str,
    words: Words,
    problems: Vec<MappingProblem>,
}

impl Reader<'_> {
    fn document(&mut self, document: &DeTable<'_>) {
        for (key, value) in document {
            let (name, at) = (key.get_ref().as_ref(), key.span().start);
            let Some(table) = self.table(name, value) else { continue };
            match (name, kind(name)) {
                ("sheets", _) => self.sheets(table),
                ("fixed", _) => self.fixed(table),
                ("units", _) => self.units(table),
                (_, Some(Kind::Visit)) => self.items(table),
                (_, Some(kind)) => self.columns(kind, table),
                (_, None) => self.unknown(at, name, name, &sections()),
            }
        }
    }

    fn sheets(&mut self, table: &DeTable<'_>) {
        for (key, value) in table {
            let (name, at) = (key.get_ref().as_ref(), key.span().start);
            let path = format!("sheets.{name}");
            match (name, kind(name)) {
                ("none", _) => self.strings(&path, value).into_iter().for_each(|sheet| self.words.leave_out(&sheet)),
                (_, Some(kind)) => self.strings(&path, value).into_iter().for_each(|sheet| self.words.set_sheet(&sheet, kind)),
                (_, None) => {
                    let known: Vec<&str> = Kind::ALL.iter().map(|k| k.name()).chain(["none"]).collect();
                    self.unknown(at, &path, name, &known);
                }
            }
        }
    }

    fn columns(&mut self, kind: Kind, table: &DeTable<'_>) {
        for (key, value) in table {
            let path = format!("{}.{}", kind.name(), key.get_ref());
            if let Some(what) = self.column(kind, key, &path) {
                self.strings(&path, value).into_iter().for_each(|text| self.words.set_column(kind, &text, what));
            }
        }
    }

    fn items(&mut self, table: &DeTable<'_>) {
        for (key, value) in table {
            let path = format!("visit.{}", key.get_ref());
            match self.words.items.get(key.get_ref()) {
                Some(item) => self.strings(&path, value).into_iter().for_each(|text| self.words.items.add(&text, item)),
                None => self.unknown_name(key, &path, Kind::Visit),
            }
        }
    }

    fn fixed(&mut self, table: &DeTable<'_>) {
        for (key, value) in table {
            let (name, at) = (key.get_ref().as_ref(), key.span().start);
            let path = format!("fixed.{name}");
            let Some(kind) = kind(name) else {
                self.unknown(at, &path, name, &Kind::ALL.map(Kind::name));
                continue;
            };
            let Some(table) = self.table(&path, value) else { continue };
            for (key, value) in table {
                let path = format!("{path}.{}", key.get_ref());
                let Some(text) = self.text(&path, value) else { continue };
                let line = self.line(key.span().start);
                match (kind, self.words.items.get(key.get_ref())) {
                    (Kind::Visit, Some(item)) => self.words.fixed.set_item(item, &text, line),
                    (Kind::Visit, None) => self.unknown_name(key, &path, kind),
                    _ => match self.column(kind, key, &path) {
                        Some(What::Named(column)) => self.words.fixed.set_column(kind, column, &text, line),
                        Some(What::Head(_)) => self.wrong(&path, value, Sentence::new("mapping.expected-no-reading")),
                        None => {}
                    },
                }
            }
        }
    }

    fn units(&mut self, table: &DeTable<'_>) {
        for (key, value) in table {
            let name = key.get_ref().as_ref();
            let path = format!("units.{name}");
            let whats: Vec<What> = Kind::ALL.iter().filter_map(|&kind| self.words.place(kind, name)).collect();
            if whats.is_empty() {
                self.unknown_name(key, &path, Kind::Readings);
                continue;
            }
            let Some(text) = self.text(&path, value) else { continue };
            match unit_word(&text) {
                Some(unit) => whats.into_iter().for_each(|what| self.words.set_unit(what, unit)),
                None => self.wrong(&path, value, Sentence::new("mapping.expected-unit")),
            }
        }
    }

    fn column(&mut self, kind: Kind, key: &Spanned<std::borrow::Cow<'_, str>>, path: &str) -> Option<What> {
        let what = self.words.place(kind, key.get_ref());
        if what.is_none() {
            self.unknown_name(key, path, kind);
        }
        what
    }

    fn unknown_name(&mut self, key: &Spanned<std::borrow::Cow<'_, str>>, path: &str, kind: Kind) {
        let name = key.get_ref().to_string();
        let labels = if kind == Kind::Visit { self.words.items.all_labels() } else { self.words.columns(kind).all_labels() };
        let known: Vec<&str> = labels.iter().map(String::as_str).collect();
        self.unknown(key.span().start, path, &name, &known);
    }

    fn table<'t, 'i>(&mut self, path: &str, value: &'t Value<'i>) -> Option<&'t DeTable<'i>> {
        let table = value.get_ref().as_table();
        if table.is_none() {
            self.wrong(path, value, Sentence::new("mapping.expected-table"));
        }
        table
    }

    /// A text, or a number as it is written.
    fn text(&mut self, path: &str, value: &Value<'_>) -> Option<String> {
        let text = match value.get_ref() {
            DeValue::String(text) => Some(text.trim().to_owned()),
            DeValue::Integer(number) => Some(number.as_str().to_owned()),
            DeValue::Float(number) => Some(number.as_str().to_owned()),
            DeValue::Boolean(flag) => Some(if *flag { "yes" } else { "no" }.to_owned()),
            DeValue::Datetime(date) => Some(date.to_string()),
            _ => None,
        };
        let text = text.filter(|t| !t.is_empty());
        if text.is_none() {
            self.wrong(path, value, Sentence::new("mapping.expected-text"));
        }
        text
    }

    fn strings(&mut self, path: &str, value: &Value<'_>) -> Vec<String> {
        match value.get_ref().as_array() {
            Some(list) => list.iter().filter_map(|one| self.text(path, one)).collect(),
            None => self.text(path, value).into_iter().collect(),
        }
    }

    fn unknown(&mut self, at: usize, path: &str, found: &str, known: &[&str]) {
        let lower: Vec<String> = known.iter().map(|k| k.to_lowercase()).collect();
        let near = super::words::nearest(&found.to_lowercase(), lower.iter().map(String::as_str));
        let near = near.and_then(|n| lower.iter().position(|l| l == n)).and_then(|i| known.get(i)).map(|n| (*n).to_owned());
        let expected = Sentence::new("mapping.expected-one-of").with("known", known.iter().map(|k| Arg::from(*k)).collect::<Vec<_>>());
        self.problem(at, path, found.to_owned(), expected, near);
    }

    fn wrong(&mut self, path: &str, value: &Value<'_>, expected: Sentence) {
        let found = self.text.get(value.span()).unwrap_or_default().to_owned();
        self.problem(value.span().start, path, found, expected, None);
    }

    fn problem(&mut self, at: usize, path: &str, found: String, expected: Sentence, nearest: Option<String>) {
        let shown = |text: &str| text.chars().take(SHOWN).collect::<String>();
        let found = shown(found.lines().next().unwrap_or_default());
        self.problems.push(MappingProblem { file: self.file.to_owned(), line: self.line(at), key: shown(path), found, expected, nearest });
    }

    /// The line of a position, from 1.
    fn line(&self, at: usize) -> usize {
        self.text.as_bytes().iter().take(at).filter(|b| **b == b'\n').count() + 1
    }

    fn line_text(&self, at: usize) -> String {
        let start = self.text.get(..at).and_then(|t| t.rfind('\n')).map_or(0, |n| n + 1);
        self.text.get(start..).and_then(|t| t.lines().next()).unwrap_or_default().to_owned()
    }
}

fn kind(name: &str) -> Option<Kind> {
    Kind::ALL.into_iter().find(|k| k.name() == name)
}

fn sections() -> Vec<&'static str> {
    Kind::ALL.iter().map(|k| k.name()).chain(["sheets", "fixed", "units"]).collect()
}

/// A key of a table: bare where it may be.
pub(super) fn key(name: &str) -> String {
    let bare = !name.is_empty() && name.chars().all(|c| c.is_ascii_alphanumeric() || c == '-' || c == '_');
    if bare { name.to_owned() } else { quoted(name) }
}

/// A TOML basic string on one line, with nothing in it that can't be seen.
pub(super) fn quoted(text: &str) -> String {
    let mut out = String::from("\"");
    for c in text.chars() {
        let unseen = c.is_control()
            || matches!(c, '\u{61c}' | '\u{200b}'..='\u{200f}' | '\u{2028}'..='\u{202e}' | '\u{2060}'..='\u{206f}' | '\u{feff}');
        match c {
            '"' | '\\' => out.extend(['\\', c]),
            _ if unseen => {
                let _ = write!(out, "\\u{:04X}", u32::from(c));
            }
            _ => out.push(c),
        }
    }
    out.push('"');
    out
}
