//! The rule book: which rules are on, their settings and signal words, and the limits in force, each with its basis.
//!
//! The built-in book is laid down by the rules themselves (their [`RuleSpec`]s) and by the limit rows embedded from
//! `src/rules/limits/*.toml`; a user's file of the same form is laid over it with [`Rulebook::overlay`]. What comes out is
//! validated: every number finite and in its range, every low end at or below its high end, every name known.

mod limit;
mod read;

pub use limit::{Bounds, LimitQuantity, LimitRow, Place};
/// One thing wrong with a rule book file.
pub type RulebookProblem = crate::diag::SettingsProblem;

use crate::quantity::Unit;
use crate::results::Signal;
use std::collections::BTreeMap;

/// A number a rule can be set by.
#[derive(Debug, PartialEq)]
pub struct Setting {
    /// Its key in the rule's table: `limit-percent`.
    pub key: &'static str,
    /// Default, in `unit`.
    pub default: f64,
    /// Its unit.
    pub unit: Unit,
    /// The least value accepted.
    pub least: f64,
    /// The greatest value accepted.
    pub most: f64,
}

impl Setting {
    /// A setting with its default, unit and accepted range.
    #[must_use]
    pub const fn new(key: &'static str, default: f64, unit: Unit, range: (f64, f64)) -> Self {
        Self { key, default, unit, least: range.0, most: range.1 }
    }
}

/// What the book must know of a rule before anybody changes it.
#[derive(Debug, PartialEq)]
pub struct RuleSpec {
    /// The rule's name.
    pub id: &'static str,
    /// Its default signal word, for the findings that do not ask for another.
    pub signal: Signal,
    /// Standard, edition and clause, or "common practice".
    pub basis: &'static str,
    /// Its settings.
    pub settings: &'static [Setting],
}

/// A rule as it is in force.
#[derive(Clone, Debug)]
pub struct RuleEntry {
    /// Its own defaults.
    pub spec: &'static RuleSpec,
    /// Switched on.
    pub enabled: bool,
    /// The user's signal word: it takes the place of every one the rule would use.
    pub signal: Option<Signal>,
    /// The user's basis.
    pub basis: Option<String>,
    /// The user's values, by setting.
    pub values: BTreeMap<&'static str, f64>,
    /// Limit profiles in order of preference: a reading is judged by the first that has a row for it.
    pub profiles: Vec<String>,
    /// The file that changed it last.
    pub changed_in: Option<String>,
}

impl RuleEntry {
    /// A setting's value in force.
    #[must_use]
    pub fn get(&self, setting: &Setting) -> f64 {
        self.values.get(setting.key).copied().unwrap_or(setting.default)
    }

    /// The basis in force.
    #[must_use]
    pub fn basis(&self) -> &str {
        self.basis.as_deref().unwrap_or(self.spec.basis)
    }
}

/// The rule book in force.
#[derive(Clone, Debug)]
pub struct Rulebook {
    coverage: f64,
    files: Vec<String>,
    rules: Vec<RuleEntry>,
    limits: Vec<LimitRow>,
}

/// The rules that consist of limit rows.
pub const LIMIT_RULES: [&str; 3] = ["nominal-band", "service-range", "utilization-range"];

/// Coverage factor for an interval of about 95 % (JCGM 100:2008, 6.3).
const COVERAGE: f64 = 2.0;

impl Rulebook {
    /// A book of these rules and limit files (name and TOML text).
    ///
    /// # Errors
    /// Everything wrong with the files.
    pub fn of(specs: impl IntoIterator<Item = &'static RuleSpec>, files: &[(&str, &str)]) -> Result<Self, Vec<RulebookProblem>> {
        let rules = specs.into_iter().map(|spec| RuleEntry {
            spec,
            enabled: true,
            signal: None,
            basis: None,
            values: BTreeMap::new(),
            profiles: Vec::new(),
            changed_in: None,
        });
        let mut book = Self { coverage: COVERAGE, files: Vec::new(), rules: rules.collect(), limits: Vec::new() };
        let mut problems = Vec::new();
        for (name, text) in files {
            let (change, found) = read::read(&book, text, name);
            problems.extend(found);
            // Built-in files stand behind each other in order of preference; a user's file goes in front.
            for row in &change.limits {
                if let Some(entry) = book.rules.iter_mut().find(|e| e.spec.id == row.rule)
                    && !entry.profiles.contains(&row.profile)
                {
                    entry.profiles.push(row.profile.clone());
                }
            }
            book.limits.extend(change.limits);
        }
        if problems.is_empty() { Ok(book) } else { Err(problems) }
    }

    /// This book with a user's TOML laid over it. The text can set the coverage factor, choose a limit profile, switch rules off,
    /// change their signal words, bases and settings, and add limits, which go before those that are there.
    ///
    /// # Errors
    /// Everything wrong with the text, each with its line and key; nothing is then changed.
    pub fn overlay(&self, toml_text: &str, file_name: &str) -> Result<Self, Vec<RulebookProblem>> {
        let (change, problems) = read::read(self, toml_text, file_name);
        if !problems.is_empty() {
            return Err(problems);
        }
        let mut book = self.clone();
        book.files.push(file_name.to_owned());
        book.apply(change, file_name);
        Ok(book)
    }

    fn apply(&mut self, change: read::Change, file: &str) {
        self.coverage = change.coverage.unwrap_or(self.coverage);
        for entry in &mut self.rules {
            let own = |row: &&LimitRow| row.rule == entry.spec.id;
            // Whoever writes down limits wants them used: their profiles go in front, but behind one chosen by name.
            let mut chosen: Vec<String> = change.limits.iter().filter(own).map(|row| row.profile.clone()).collect();
            if let Some(profile) = &change.profile
                && (entry.profiles.contains(profile) || chosen.contains(profile))
            {
                chosen.insert(0, profile.clone());
            }
            let edit = change.rules.get(entry.spec.id);
            if let Some(edit) = edit {
                entry.enabled = edit.enabled.unwrap_or(entry.enabled);
                entry.signal = edit.signal.or(entry.signal);
                entry.basis = edit.basis.clone().or(entry.basis.take());
                entry.values.extend(edit.values.iter());
                chosen.splice(0..0, edit.profiles.iter().cloned());
            }
            if edit.is_some() || !chosen.is_empty() {
                entry.changed_in = Some(file.to_owned());
            }
            chosen.append(&mut entry.profiles);
            for profile in chosen {
                if !entry.profiles.contains(&profile) {
                    entry.profiles.push(profile);
                }
            }
        }
        self.limits.splice(0..0, change.limits);
    }

    /// The coverage factor of every expanded uncertainty.
    #[must_use]
    pub fn coverage(&self) -> f64 {
        self.coverage
    }

    /// The files laid over the built-in book, in order.
    #[must_use]
    pub fn files(&self) -> &[String] {
        &self.files
    }

    /// The rules, in their order.
    #[must_use]
    pub fn rules(&self) -> &[RuleEntry] {
        &self.rules
    }

    /// A rule by name.
    #[must_use]
    pub fn rule(&self, id: &str) -> Option<&RuleEntry> {
        self.rules.iter().find(|entry| entry.spec.id == id)
    }

    /// The limit rows of a rule, the user's first.
    pub fn limits_of(&self, id: &str) -> impl Iterator<Item = &LimitRow> {
        self.limits.iter().filter(move |row| row.rule == id)
    }
}
