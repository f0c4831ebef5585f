//! Computed sentences: a key and its values, put into words by a language file.
//!
//! Phases never format prose. They make a [`Sentence`]: a key into the language file and named values. `templates/en.toml`
//! (and one such file for each further language) holds the wording, so that a language is one file and the wording of every
//! finding can be read in one place. Text from a workbook enters only as [`Arg::Text`] and is never looked at again for
//! placeholders.
//!
//! In the language file a sentence is a string with `{name}` for a value and `{name?one|many}` for a choice by count, in which
//! `#` stands for the count.

use crate::quantity::Unit;
use std::collections::BTreeMap;
use std::fmt::Write as _;

/// A sentence not yet in words: key and named values.
#[derive(Clone, Debug, PartialEq)]
pub struct Sentence {
    /// Key in the language file: `section.entry`.
    pub key: &'static str,
    /// Named values.
    pub args: Vec<(&'static str, Arg)>,
}

impl Sentence {
    /// A sentence without values.
    #[must_use]
    pub fn new(key: &'static str) -> Self {
        Self { key, args: Vec::new() }
    }

    /// The same sentence with a named value.
    #[must_use]
    pub fn with(mut self, name: &'static str, value: impl Into<Arg>) -> Self {
        self.args.push((name, value.into()));
        self
    }

    /// The same sentence with a named number, shown with so many decimals and its unit.
    #[must_use]
    pub fn number(self, name: &'static str, value: f64, decimals: u8, unit: Unit) -> Self {
        self.with(name, Arg::Number { value, decimals, unit })
    }
}

/// A value in a sentence.
#[derive(Clone, Debug, PartialEq)]
pub enum Arg {
    /// Text as it stands: a run's name, a cell, a state.
    Text(String),
    /// A number with its decimals and unit.
    Number {
        /// In `unit`.
        value: f64,
        /// Digits after the decimal mark.
        decimals: u8,
        /// Shown behind the number; nothing for [`Unit::One`].
        unit: Unit,
    },
    /// A whole number, which can also choose between singular and plural.
    Count(u64),
    /// A sentence or phrase of the language file.
    Phrase(Box<Sentence>),
    /// Several values, joined as the language joins a list.
    List(Vec<Arg>),
}

impl From<&str> for Arg {
    fn from(s: &str) -> Self {
        Self::Text(s.to_owned())
    }
}
impl From<String> for Arg {
    fn from(s: String) -> Self {
        Self::Text(s)
    }
}
impl From<usize> for Arg {
    fn from(n: usize) -> Self {
        Self::Count(n as u64)
    }
}
impl From<u64> for Arg {
    fn from(n: u64) -> Self {
        Self::Count(n)
    }
}
impl From<Sentence> for Arg {
    fn from(s: Sentence) -> Self {
        Self::Phrase(Box::new(s))
    }
}
impl From<Vec<Arg>> for Arg {
    fn from(v: Vec<Arg>) -> Self {
        Self::List(v)
    }
}

/// Why a language file could not be used.
#[derive(Debug, thiserror::Error)]
pub enum LanguageError {
    /// Not TOML, or not of the form section → entry → text.
    #[error("the language file is not of the form [section] entry = \"text\": {0}")]
    Form(String),
}

/// The wording of one language.
#[derive(Clone, Debug)]
pub struct Language {
    /// BCP 47 tag: `en`, `es`.
    pub tag: String,
    decimal_mark: char,
    entries: BTreeMap<String, String>,
}

const ENGLISH: &str = include_str!("../templates/en.toml");

impl Language {
    /// The built-in English wording.
    ///
    /// # Panics
    /// Never on a tested build: the file is part of the program and a test reads it.
    #[must_use]
    pub fn english() -> Self {
        Self::from_toml("en", ENGLISH).expect("the built-in language file is tested")
    }

    /// Reads a language file.
    ///
    /// # Errors
    /// The text is not TOML or not of the right form.
    pub fn from_toml(tag: &str, text: &str) -> Result<Self, LanguageError> {
        let table: toml::Table = text.parse().map_err(|e: toml::de::Error| LanguageError::Form(e.to_string()))?;
        let mut entries = BTreeMap::new();
        for (section, inner) in &table {
            let Some(inner) = inner.as_table() else {
                return Err(LanguageError::Form(format!("`{section}` is not a section")));
            };
            for (entry, text) in inner {
                let Some(text) = text.as_str() else {
                    return Err(LanguageError::Form(format!("`{section}.{entry}` is not a text")));
                };
                entries.insert(format!("{section}.{entry}"), text.to_owned());
            }
        }
        let decimal_mark = entries.get("number.decimal-mark").and_then(|m| m.chars().next()).unwrap_or('.');
        Ok(Self { tag: tag.to_owned(), decimal_mark, entries })
    }

    /// The raw text of a key, for the tests that hold files and code together.
    #[must_use]
    pub fn entry(&self, key: &str) -> Option<&str> {
        self.entries.get(key).map(String::as_str)
    }

    /// All keys, sorted.
    pub fn keys(&self) -> impl Iterator<Item = &str> {
        self.entries.keys().map(String::as_str)
    }

    /// The entry's text for a key, or the key itself in angle brackets where the file lacks it: visible, never a panic.
    #[must_use]
    pub fn text(&self, key: &str) -> String {
        self.entry(key).map_or_else(|| format!("⟨{key}⟩"), str::to_owned)
    }

    /// A sentence in words.
    #[must_use]
    pub fn say(&self, sentence: &Sentence) -> String {
        let Some(pattern) = self.entry(sentence.key) else {
            return format!("⟨{}⟩", sentence.key);
        };
        let mut out = String::with_capacity(pattern.len() + 32);
        let mut rest = pattern;
        while let Some(open) = rest.find('{') {
            out.push_str(&rest[..open]);
            let Some(close) = rest[open..].find('}') else {
                out.push_str(&rest[open..]);
                return out;
            };
            self.place(&mut out, &rest[open + 1..open + close], sentence);
            rest = &rest[open + close + 1..];
        }
        out.push_str(rest);
        out
    }

    fn place(&self, out: &mut String, slot: &str, sentence: &Sentence) {
        let (name, choice) = slot.split_once('?').map_or((slot, None), |(n, c)| (n, Some(c)));
        let Some((_, arg)) = sentence.args.iter().find(|(n, _)| *n == name) else {
            let _ = write!(out, "⟨{name}⟩");
            return;
        };
        match (choice.and_then(|c| c.split_once('|')), arg) {
            (Some((one, many)), Arg::Count(n)) => {
                out.push_str(&if *n == 1 { one } else { many }.replace('#', &n.to_string()));
            }
            _ => out.push_str(&self.arg(arg)),
        }
    }

    /// A value in words.
    #[must_use]
    pub fn arg(&self, arg: &Arg) -> String {
        match arg {
            Arg::Text(t) => t.clone(),
            Arg::Count(n) => n.to_string(),
            Arg::Number { value, decimals, unit } => self.quantity(*value, *decimals, *unit),
            Arg::Phrase(s) => self.say(s),
            Arg::List(items) => self.list(items),
        }
    }

    fn list(&self, items: &[Arg]) -> String {
        let words: Vec<String> = items.iter().map(|i| self.arg(i)).collect();
        match words.as_slice() {
            [] => String::new(),
            [one] => one.clone(),
            [head @ .., last] => format!("{} {} {last}", head.join(", "), self.text("number.and")),
        }
    }

    /// A number in this language, without a unit: `119.6`; a minus is U+2212, negative zero is zero.
    #[must_use]
    pub fn number(&self, value: f64, decimals: u8) -> String {
        let plain = format!("{:.*}", usize::from(decimals), value);
        let plain = match plain.strip_prefix('-') {
            Some(digits) if digits.bytes().any(|b| (b'1'..=b'9').contains(&b)) => format!("\u{2212}{digits}"),
            Some(zero) => zero.to_owned(),
            None => plain,
        };
        if self.decimal_mark == '.' { plain } else { plain.replace('.', &self.decimal_mark.to_string()) }
    }

    /// A number with its unit: `119.6 V`, `18 %`.
    #[must_use]
    pub fn quantity(&self, value: f64, decimals: u8, unit: Unit) -> String {
        let number = self.number(value, decimals);
        if unit == Unit::One { number } else { format!("{number} {unit}") }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tiny() -> Language {
        Language::from_toml("xx", "[number]\ndecimal-mark = \",\"\nand = \"y\"\n[a]\nb = \"{v} at {where}, {n?# row|# rows}, {runs}\"\n")
            .unwrap()
    }

    #[test]
    fn values_are_placed_and_counted() {
        let s = Sentence::new("a.b")
            .number("v", -1.25, 1, Unit::Volt)
            .with("where", "{v}")
            .with("n", 1usize)
            .with("runs", vec![Arg::from("5"), Arg::from("7"), Arg::from("9")]);
        assert_eq!(tiny().say(&s), "\u{2212}1,2 V at {v}, 1 row, 5, 7 y 9");
    }

    #[test]
    fn a_missing_entry_or_value_shows_instead_of_failing() {
        assert_eq!(tiny().say(&Sentence::new("a.c")), "⟨a.c⟩");
        assert!(tiny().say(&Sentence::new("a.b")).contains("⟨v⟩"));
    }

    #[test]
    fn negative_zero_is_zero() {
        assert_eq!(tiny().number(-0.04, 1), "0,0");
    }
}
