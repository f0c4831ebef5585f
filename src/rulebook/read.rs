//! Reading a rule book file: TOML with its lines → a validated change, and everything that is wrong with it.

use super::{Bounds, LimitQuantity, LimitRow, Place, RuleSpec, Rulebook, RulebookProblem};
use crate::results::{Limit, Signal};
use crate::wording::{Arg, Sentence};
use std::collections::BTreeMap;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

/// What a file asks for, validated.
#[derive(Default)]
pub(super) struct Change {
    pub coverage: Option<f64>,
    pub profile: Option<String>,
    pub rules: BTreeMap<&'static str, Edit>,
    pub limits: Vec<LimitRow>,
}

/// Changes to one rule.
#[derive(Default)]
pub(super) struct Edit {
    pub enabled: Option<bool>,
    pub signal: Option<Signal>,
    pub basis: Option<String>,
    pub values: BTreeMap<&'static str, f64>,
    pub profiles: Vec<String>,
}

/// Longest text of a value shown in a problem, in characters.
const SHOWN: usize = 60;
/// A book of more rows than this is a mistake or an attack; every reading is held against every row.
const MOST_LIMITS: usize = 2_000;
/// Coverage factors accepted: below 1 an interval covers less than its own standard deviation.
const COVERAGE: (f64, f64) = (1.0, 4.0);
/// Voltages and percentages accepted in a limit.
const BOUND: (f64, f64) = (-1_000.0, 100_000.0);
/// A name is near another when it is at least this alike (Jaro-Winkler).
const ALIKE: f64 = 0.75;

type Value<'a> = Spanned<DeValue<'a>>;

pub(super) fn read(book: &Rulebook, text: &str, file: &str) -> (Change, Vec<RulebookProblem>) {
    let mut reader = Reader { book, text, file, problems: Vec::new() };
    let mut change = Change::default();
    let (document, errors) = DeTable::parse_recoverable(text);
    for error in &errors {
        let at = error.span().map_or(0, |s| s.start);
        let expected = Sentence::new("rulebook.expected-toml").with("message", error.message());
        reader.problem(at, "", reader.line_text(at), expected, None);
    }
    // After a syntax error the rest is guesswork: reporting that as well would bury the one thing to mend.
    if errors.is_empty() {
        reader.document(document.get_ref(), &mut change);
    }
    let mut problems = reader.problems;
    problems.sort_by_key(|p| p.line);
    (change, problems)
}

struct Reader<'a> {
    book: &'a Rulebook,
    text: &'a str,
    file: &'a str,
    problems: Vec<RulebookProblem>,
}

impl Reader<'_> {
    fn document(&mut self, table: &DeTable<'_>, change: &mut Change) {
        // Limits first: a profile they define may be chosen elsewhere in the file.
        if let Some(value) = table.get("limits") {
            self.limits(value, change);
        }
        for (key, value) in table {
            match key.get_ref().as_ref() {
                "coverage-factor" => change.coverage = self.number("coverage-factor", value, COVERAGE),
                "profile" => change.profile = self.profile("profile", value, &change.limits, None),
                "rules" => self.rules(value, change),
                "limits" => {}
                name => self.unknown(key.span().start, name, name, &["coverage-factor", "profile", "rules", "limits"]),
            }
        }
    }

    fn rules(&mut self, value: &Value<'_>, change: &mut Change) {
        let Some(table) = self.table("rules", value) else { return };
        for (key, value) in table {
            let name = key.get_ref().as_ref();
            let path = format!("rules.{name}");
            let Some(entry) = self.book.rule(name) else {
                let known: Vec<&str> = self.book.rules().iter().map(|e| e.spec.id).collect();
                self.unknown(key.span().start, &path, name, &known);
                continue;
            };
            if let Some(table) = self.table(&path, value) {
                let edit = self.rule(entry.spec, table, &path, &change.limits);
                change.rules.insert(entry.spec.id, edit);
            }
        }
    }

    fn rule(&mut self, spec: &'static RuleSpec, table: &DeTable<'_>, path: &str, rows: &[LimitRow]) -> Edit {
        let mut edit = Edit::default();
        for (key, value) in table {
            let name = key.get_ref().as_ref();
            let path = format!("{path}.{name}");
            match name {
                "enabled" => edit.enabled = self.flag(&path, value),
                "signal" => edit.signal = self.signal(&path, value),
                "basis" => edit.basis = self.string(&path, value),
                "profile" => {
                    let several = value.get_ref().as_array().map(|a| a.iter().collect::<Vec<_>>());
                    for one in several.unwrap_or_else(|| vec![value]) {
                        edit.profiles.extend(self.profile(&path, one, rows, Some(spec.id)));
                    }
                }
                _ => match spec.settings.iter().find(|s| s.key == name) {
                    Some(setting) => {
                        if let Some(number) = self.number(&path, value, (setting.least, setting.most)) {
                            edit.values.insert(setting.key, number);
                        }
                    }
                    None => {
                        let own = ["enabled", "signal", "basis", "profile"].into_iter();
                        let known: Vec<&str> = spec.settings.iter().map(|s| s.key).chain(own).collect();
                        self.unknown(key.span().start, &path, name, &known);
                    }
                },
            }
        }
        edit
    }

    fn limits(&mut self, value: &Value<'_>, change: &mut Change) {
        let Some(rows) = value.get_ref().as_array() else {
            self.wrong("limits", value, Sentence::new("rulebook.expected-rows"));
            return;
        };
        if rows.len() > MOST_LIMITS {
            self.wrong("limits", value, Sentence::new("rulebook.expected-fewer").with("most", MOST_LIMITS));
            return;
        }
        for (i, row) in rows.iter().enumerate() {
            let path = format!("limits[{i}]");
            if let Some(table) = self.table(&path, row) {
                let row = self.limit(row.span().start, table, &path);
                change.limits.extend(row);
            }
        }
    }

    fn limit(&mut self, at: usize, table: &DeTable<'_>, path: &str) -> Option<LimitRow> {
        let before = self.problems.len();
        let mut raw = RawLimit::default();
        for (key, value) in table {
            let name = key.get_ref().as_ref();
            let path = format!("{path}.{name}");
            match name {
                "rule" => raw.rule = self.limit_rule(&path, value),
                "profile" => raw.profile = self.string(&path, value),
                "system" => raw.systems = self.strings(&path, value),
                "nominal" => raw.nominal = self.number(&path, value, (1.0, BOUND.1)),
                "quantity" => raw.quantity = self.choice(&path, value, &LimitQuantity::NAMED),
                "place" => raw.place = self.choice(&path, value, &Place::NAMED),
                "range" => raw.range = self.string(&path, value),
                "low" => raw.volts.low = self.number(&path, value, (0.0, BOUND.1)),
                "high" => raw.volts.high = self.number(&path, value, (0.0, BOUND.1)),
                "low-percent" => raw.percent.low = self.number(&path, value, BOUND),
                "high-percent" => raw.percent.high = self.number(&path, value, BOUND),
                "signal" => raw.signal = self.signal(&path, value),
                "basis" => raw.basis = self.string(&path, value),
                _ => self.unknown(key.span().start, &path, name, &RawLimit::KEYS),
            }
        }
        let clean = self.problems.len() == before;
        let row = raw.validated(self.file);
        match row {
            Ok(row) if clean => Some(row),
            Err(expected) if clean => {
                self.problem(at, path, self.line_text(at), expected, None);
                None
            }
            _ => None,
        }
    }

    /// The rule of a limit row: one that is made of limit rows.
    fn limit_rule(&mut self, path: &str, value: &Value<'_>) -> Option<&'static str> {
        let name = self.string(path, value)?;
        let entry = self.book.rule(&name).filter(|e| super::LIMIT_RULES.contains(&e.spec.id));
        if entry.is_none() {
            self.unknown(value.span().start, path, &name, &super::LIMIT_RULES);
        }
        entry.map(|e| e.spec.id)
    }

    /// A profile that has limit rows, in the book or in this file; of one rule, where it is asked for.
    fn profile(&mut self, path: &str, value: &Value<'_>, rows: &[LimitRow], rule: Option<&str>) -> Option<String> {
        let name = self.string(path, value)?;
        let book = self.book;
        let mut known: Vec<&str> =
            book.limits.iter().chain(rows).filter(|r| rule.is_none_or(|id| r.rule == id)).map(|r| r.profile.as_str()).collect();
        known.sort_unstable();
        known.dedup();
        if known.contains(&name.as_str()) {
            return Some(name);
        }
        self.unknown(value.span().start, path, &name, &known);
        None
    }

    fn table<'t, 'i>(&mut self, path: &str, value: &'t Value<'i>) -> Option<&'t DeTable<'i>> {
        let table = value.get_ref().as_table();
        if table.is_none() {
            self.wrong(path, value, Sentence::new("rulebook.expected-table"));
        }
        table
    }

    fn flag(&mut self, path: &str, value: &Value<'_>) -> Option<bool> {
        let flag = value.get_ref().as_bool();
        if flag.is_none() {
            self.wrong(path, value, Sentence::new("rulebook.expected-flag"));
        }
        flag
    }

    fn string(&mut self, path: &str, value: &Value<'_>) -> Option<String> {
        let text = value.get_ref().as_str().map(str::trim).filter(|t| !t.is_empty());
        if text.is_none() {
            self.wrong(path, value, Sentence::new("rulebook.expected-text"));
        }
        text.map(str::to_owned)
    }

    fn strings(&mut self, path: &str, value: &Value<'_>) -> Vec<String> {
        match value.get_ref().as_array() {
            Some(list) => list.iter().filter_map(|one| self.string(path, one)).collect(),
            None => self.string(path, value).into_iter().collect(),
        }
    }

    fn number(&mut self, path: &str, value: &Value<'_>, (least, most): (f64, f64)) -> Option<f64> {
        let text = match value.get_ref() {
            DeValue::Integer(n) if n.radix() == 10 => Some(n.as_str().to_owned()),
            DeValue::Float(n) => Some(n.as_str().to_owned()),
            _ => None,
        };
        // NaN lies in no range.
        let number = text.and_then(|t| t.parse::<f64>().ok()).filter(|n| (least..=most).contains(n));
        if number.is_none() {
            let expected = Sentence::new("rulebook.expected-number").with("least", format!("{least}")).with("most", format!("{most}"));
            self.wrong(path, value, expected);
        }
        number
    }

    fn signal(&mut self, path: &str, value: &Value<'_>) -> Option<Signal> {
        self.choice(path, value, &Signal::ALL.map(|s| (s.word(), s)))
    }

    fn choice<T: Copy>(&mut self, path: &str, value: &Value<'_>, named: &[(&str, T)]) -> Option<T> {
        let name = self.string(path, value)?;
        let found = named.iter().find(|n| n.0.eq_ignore_ascii_case(&name)).map(|n| n.1);
        if found.is_none() {
            let known: Vec<&str> = named.iter().map(|n| n.0).collect();
            self.unknown(value.span().start, path, &name, &known);
        }
        found
    }

    fn unknown(&mut self, at: usize, path: &str, found: &str, known: &[&str]) {
        let wanted = found.to_lowercase();
        let likeness = |name: &&&str| strsim::jaro_winkler(&wanted, &name.to_lowercase());
        let nearest = known.iter().max_by(|a, b| likeness(a).total_cmp(&likeness(b))).filter(|n| likeness(n) >= ALIKE);
        let expected = Sentence::new("rulebook.expected-one-of").with("known", known.iter().map(|k| Arg::from(*k)).collect::<Vec<_>>());
        self.problem(at, path, found.to_owned(), expected, nearest.map(|n| (*n).to_owned()));
    }

    fn wrong(&mut self, path: &str, value: &Value<'_>, expected: Sentence) {
        let found = self.text.get(value.span()).unwrap_or_default().to_owned();
        self.problem(value.span().start, path, found, expected, None);
    }

    fn problem(&mut self, at: usize, path: &str, found: String, expected: Sentence, nearest: Option<String>) {
        let line = self.text.as_bytes().iter().take(at).filter(|b| **b == b'\n').count() + 1;
        let shown = |text: &str| text.chars().take(SHOWN).collect::<String>();
        self.problems.push(RulebookProblem {
            file: self.file.to_owned(),
            line,
            key: shown(path),
            found: shown(found.lines().next().unwrap_or_default()),
            expected,
            nearest,
        });
    }

    fn line_text(&self, at: usize) -> String {
        let start = self.text.get(..at).and_then(|t| t.rfind('\n')).map_or(0, |n| n + 1);
        self.text.get(start..).and_then(|t| t.lines().next()).unwrap_or_default().to_owned()
    }
}

/// A limit row as written.
#[derive(Default)]
struct RawLimit {
    rule: Option<&'static str>,
    profile: Option<String>,
    systems: Vec<String>,
    nominal: Option<f64>,
    quantity: Option<LimitQuantity>,
    place: Option<Place>,
    range: Option<String>,
    volts: Limit,
    percent: Limit,
    signal: Option<Signal>,
    basis: Option<String>,
}

impl RawLimit {
    const KEYS: [&'static str; 13] = [
        "rule",
        "profile",
        "system",
        "nominal",
        "quantity",
        "place",
        "range",
        "low",
        "high",
        "low-percent",
        "high-percent",
        "signal",
        "basis",
    ];

    fn validated(self, file: &str) -> Result<LimitRow, Sentence> {
        let expected = |entry| Err(Sentence::new(entry));
        let Some(rule) = self.rule else { return expected("rulebook.expected-rule") };
        let given = |limit: Limit| limit.low.is_some() || limit.high.is_some();
        let (bounds, limit) = match (given(self.volts), given(self.percent)) {
            (true, false) => (Bounds::Volts(self.volts), self.volts),
            (false, true) => (Bounds::Percent(self.percent), self.percent),
            _ => return expected("rulebook.expected-bounds"),
        };
        if limit.low.zip(limit.high).is_some_and(|(low, high)| low > high) {
            return expected("rulebook.expected-order");
        }
        // Volts without a nominal voltage, or without system and kind, would judge 120 V and 240 V alike.
        let kind = self.quantity.unwrap_or(LimitQuantity::Any);
        if matches!(bounds, Bounds::Volts(_)) && self.nominal.is_none() && (self.systems.is_empty() || kind == LimitQuantity::Any) {
            return expected("rulebook.expected-system");
        }
        let profile = self.profile.unwrap_or_else(|| file.to_owned());
        Ok(LimitRow {
            rule,
            systems: self.systems,
            nominal: self.nominal,
            quantity: kind,
            place: self.place.unwrap_or(Place::Any),
            range: self.range.unwrap_or_default(),
            bounds,
            signal: self.signal,
            basis: self.basis.unwrap_or_else(|| profile.clone()),
            profile,
        })
    }
}
