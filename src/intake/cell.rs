//! From what stands in a cell to a typed value, one function a kind of value.
//!
//! A cell that can't be read is named with what was expected, and costs its own value alone.

mod date;
mod legs;
mod name;
mod number;
mod wire;

pub(super) use legs::{LegsText, legs};
pub(super) use name::{larger_first, poles_as_date, written_time};
pub(super) use number::Expected;

use super::grid::Value;
use super::header::{Field, Row};
use super::words::{Column, Words};
use crate::diag::{CellRef, Located, Problem, Severity};
use crate::wording::{Arg, Sentence};

/// Reads cells and collects what is wrong with them.
pub(super) struct Reader<'a> {
    pub words: &'a Words,
    pub problems: Vec<Problem>,
    /// Problems beyond [`MOST_PROBLEMS`], counted but not kept.
    pub more: usize,
    last: Problem,
    suggestions: usize,
}

/// Problems kept; an input with more has one cause behind them, and must not fill the memory.
const MOST_PROBLEMS: usize = 20_000;
/// Entries for which the nearest known word is looked up; it costs a comparison with each.
const SUGGESTIONS: usize = 2_000;

/// Longest text of a cell shown in a problem, in characters.
const SHOWN: usize = 60;

impl<'a> Reader<'a> {
    pub fn new(words: &'a Words) -> Self {
        let last = Problem::in_workbook(Severity::Error, "", Sentence::new("intake.more-problems"));
        Self { words, problems: Vec::new(), more: 0, last, suggestions: SUGGESTIONS }
    }

    /// A value that could not be used.
    pub fn error(&mut self, field: Field<'_>, message: Sentence) -> &mut Problem {
        self.say(Severity::Error, field, message)
    }

    /// A value used with a remark.
    pub fn warning(&mut self, field: Field<'_>, message: Sentence) -> &mut Problem {
        self.say(Severity::Warning, field, message)
    }

    fn say(&mut self, severity: Severity, field: Field<'_>, message: Sentence) -> &mut Problem {
        self.at(severity, &field.cell(), shown(field.value), message)
    }

    /// A problem at a cell whose text is known.
    pub fn at(&mut self, severity: Severity, cell: &CellRef, found: impl Into<String>, message: Sentence) -> &mut Problem {
        let found = bounded(&found.into());
        self.push(Problem::at(severity, cell, found, message))
    }

    /// A problem of any kind, to which a hint can be given.
    pub fn push(&mut self, problem: Problem) -> &mut Problem {
        if self.problems.len() >= MOST_PROBLEMS {
            self.more += 1;
            self.last = problem;
            return &mut self.last;
        }
        self.problems.push(problem);
        self.problems.last_mut().unwrap_or(&mut self.last)
    }

    /// The hint that names the nearest known word, while it is worth looking for.
    pub fn suggestion(&mut self, nearest: impl FnOnce(&'a Words) -> Option<&'a str>) -> Option<Sentence> {
        self.nearest(nearest).map(did_you_mean)
    }

    /// The nearest known word, while it is worth looking for.
    pub fn nearest(&mut self, nearest: impl FnOnce(&'a Words) -> Option<&'a str>) -> Option<&'a str> {
        self.suggestions = self.suggestions.checked_sub(1)?;
        nearest(self.words)
    }

    /// The text of a cell: trimmed, inner blanks single; a number or date as it is written. Error values are named.
    pub fn text(&mut self, field: Field<'_>) -> Option<Located<String>> {
        if self.broken(field) {
            return None;
        }
        let text = plain_text(field.value);
        (!text.is_empty()).then(|| Located::new(text, field.cell()))
    }

    /// As [`Self::text`], but for the ways of writing that there is nothing to say: `n/a`, `-`.
    pub fn entry(&mut self, field: Field<'_>) -> Option<Located<String>> {
        self.text(field).filter(|text| !crate::quantity::parse::not_measured(&text.value))
    }

    /// A row that lacks what makes it one of its table: said, unless it is a note.
    pub fn row_without(&mut self, row: &Row<'_>, column: Column) {
        if !row.is_note() {
            let label = self.words.columns(row.table.kind).label(column);
            self.at(Severity::Error, &row.cell(column), "", Sentence::new("intake.row-without").with("column", label));
        }
    }

    /// An error value or a formula without a result: named; nothing else can be read from it.
    pub fn broken(&mut self, field: Field<'_>) -> bool {
        match field.value {
            Value::Error(_) => {
                self.error(field, Sentence::new("intake.error-value")).hint = Some(Sentence::new("intake.error-value-hint"));
                true
            }
            Value::NoResult(_) => {
                self.error(field, Sentence::new("intake.no-result")).hint = Some(Sentence::new("intake.no-result-hint"));
                true
            }
            _ => false,
        }
    }

    /// The key of a list under `[entries]` that an entry stands for; `expected` names what the column holds.
    pub fn choice(&mut self, field: Field<'_>, list: &str) -> Option<&'a str> {
        if self.broken(field) {
            return None;
        }
        let text = plain_text(field.value);
        if crate::quantity::parse::not_measured(&text) && self.words.choice(list, &text).is_none() {
            return None;
        }
        let words = self.words;
        let key = words.choice(list, &text);
        if key.is_none() {
            let known: Vec<Arg> = words.written(list).into_iter().map(Arg::from).collect();
            let hint = self.suggestion(|words| words.nearest_choice(list, &text));
            self.error(field, Sentence::new("intake.choice").with("known", known)).hint = hint;
        }
        key
    }

    /// Yes or no.
    pub fn yes_no(&mut self, field: Field<'_>) -> Option<Located<bool>> {
        if let Value::Logical(b) = field.value {
            return Some(Located::new(*b, field.cell()));
        }
        self.choice(field, "yes-no").map(|key| Located::new(key == "yes", field.cell()))
    }
}

/// The hint that names what was likely meant.
pub(super) fn did_you_mean(likely: &str) -> Sentence {
    Sentence::new("intake.did-you-mean").with("likely", bounded(likely))
}

/// What stands in a cell, on one line and bounded, for a problem.
pub(super) fn shown(value: &Value) -> String {
    match value {
        Value::NoResult(formula) if formula.starts_with('=') => bounded(formula),
        Value::NoResult(formula) => bounded(&format!("={formula}")),
        value => bounded(&plain_text(value)),
    }
}

/// At most [`SHOWN`] characters.
pub(super) fn bounded(text: &str) -> String {
    match text.char_indices().nth(SHOWN) {
        Some((cut, _)) => format!("{}…", &text[..cut]),
        None => text.to_owned(),
    }
}

/// A value as text: trimmed, inner blanks single; numbers shortest, dates as ISO 8601 writes them.
pub(super) fn plain_text(value: &Value) -> String {
    match value {
        Value::Text(text) | Value::Error(text) | Value::NoResult(text) => single_blanks(text),
        Value::Number(number) => number.to_string(),
        Value::DateTime(serial) => date::written(*serial),
        Value::Logical(true) => "TRUE".to_owned(),
        Value::Logical(false) => "FALSE".to_owned(),
    }
}

fn single_blanks(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for word in text.split_whitespace() {
        if !out.is_empty() {
            out.push(' ');
        }
        out.push_str(word);
    }
    out
}
