//! The trade's words (`synonyms.toml`): which text names which table, column, item or entry.

mod fixed;
mod kinds;

pub(super) use kinds::{Column, Item, Kind};

use super::header::heads::HeadWord;
use super::header::{self, What};
use crate::quantity::parse::Scale;
use fixed::Fixed;
use serde::Deserialize;
use std::collections::{BTreeMap, HashMap, HashSet};

#[derive(Deserialize)]
struct Section {
    sheet: Vec<String>,
    columns: BTreeMap<Column, Vec<String>>,
}

#[derive(Deserialize)]
struct LeaveOut {
    sheets: Vec<String>,
}

#[derive(Deserialize)]
#[serde(rename_all = "kebab-case")]
struct File {
    leave_out: LeaveOut,
    items: BTreeMap<Item, Vec<String>>,
    heads: BTreeMap<HeadWord, Vec<String>>,
    entries: BTreeMap<String, BTreeMap<String, Vec<String>>>,
    #[serde(flatten)]
    kinds: BTreeMap<Kind, Section>,
}

/// Words for one kind of thing: normalised spelling → thing, and the name each thing goes by.
#[derive(Clone, Debug)]
pub(super) struct Names<T> {
    spellings: HashMap<String, (T, usize)>,
    labels: BTreeMap<T, String>,
}

impl<T: Copy + Ord> Names<T> {
    fn new(lists: BTreeMap<T, Vec<String>>) -> Self {
        let mut names = Self { spellings: HashMap::new(), labels: BTreeMap::new() };
        for (thing, words) in lists {
            for (rank, word) in words.iter().enumerate() {
                names.spellings.entry(normal(word)).or_insert((thing, rank));
            }
            names.labels.extend(words.into_iter().next().map(|label| (thing, label)));
        }
        names
    }

    /// The thing a text names.
    pub fn get(&self, text: &str) -> Option<T> {
        self.spellings.get(&normal(text)).map(|(thing, _)| *thing)
    }

    /// How far down its list a spelling stands: of two columns that can be the same, the one named more to the point is.
    pub fn rank(&self, text: &str) -> usize {
        self.spellings.get(&normal(text)).map_or(usize::MAX, |(_, rank)| *rank)
    }

    /// The name a thing goes by.
    pub fn label(&self, thing: T) -> &str {
        self.labels.get(&thing).map_or("", String::as_str)
    }

    /// The name of the thing whose spelling is nearest to a text, where one is near.
    pub fn nearest(&self, text: &str) -> Option<&str> {
        let text = normal(text);
        let spellings = self.spellings.keys().map(String::as_str);
        nearest(&text, spellings).and_then(|near| self.get(near)).map(|thing| self.label(thing))
    }

    /// Another spelling; it takes the place of what it meant before.
    pub fn add(&mut self, text: &str, thing: T) {
        self.spellings.insert(normal(text), (thing, 0));
    }

    /// The names all things go by.
    pub fn all_labels(&self) -> Vec<String> {
        self.labels.values().cloned().collect()
    }
}

/// All words in force.
#[derive(Clone, Debug)]
pub(super) struct Words {
    columns: BTreeMap<Kind, Names<Column>>,
    sheets: HashMap<String, Kind>,
    pub items: Names<Item>,
    heads: HashMap<String, HeadWord>,
    entries: BTreeMap<String, BTreeMap<String, Vec<String>>>,
    choices: HashMap<String, HashMap<String, String>>,
    any_column: HashSet<String>,
    own: HashMap<(Kind, String), What>,
    units: HashMap<What, Scale>,
    forced: HashMap<String, Option<Kind>>,
    prose: HashSet<String>,
    /// Entries of a mapping.
    pub fixed: Fixed,
}

const BUILT_IN: &str = include_str!("synonyms.toml");

impl Words {
    /// The built-in words.
    ///
    /// # Panics
    /// Never on a tested build: the file is part of the program and a test reads it.
    pub fn built_in() -> &'static Self {
        static WORDS: std::sync::OnceLock<Words> = std::sync::OnceLock::new();
        WORDS.get_or_init(|| Self::from_toml(BUILT_IN).expect("the built-in word list is tested"))
    }

    fn from_toml(text: &str) -> Result<Self, toml::de::Error> {
        let file: File = toml::from_str(text)?;
        let mut sheets = HashMap::new();
        let mut columns = BTreeMap::new();
        for (kind, section) in file.kinds {
            for name in section.sheet {
                sheets.entry(normal(&name)).or_insert(kind);
            }
            columns.insert(kind, Names::new(section.columns));
        }
        let heads = file.heads.into_iter().flat_map(|(word, list)| list.into_iter().map(move |text| (text, word))).collect();
        let choices = file.entries.iter().map(|(list, keys)| (list.clone(), spellings(keys))).collect();
        let any_column = columns.values().flat_map(|names: &Names<Column>| names.spellings.keys().cloned()).collect();
        Ok(Self {
            columns,
            sheets,
            items: Names::new(file.items),
            heads,
            entries: file.entries,
            choices,
            any_column,
            own: HashMap::new(),
            units: HashMap::new(),
            forced: HashMap::new(),
            prose: file.leave_out.sheets.iter().map(|name| normal(name)).collect(),
            fixed: Fixed::none(),
        })
    }

    /// The columns of a table.
    pub fn columns(&self, kind: Kind) -> &Names<Column> {
        &self.columns[&kind]
    }

    /// The table a sheet's name speaks of.
    pub fn sheet(&self, name: &str) -> Option<Kind> {
        self.sheets.get(&normal(name)).copied()
    }

    /// The meaning a header text has in a table, its unit aside.
    pub fn place(&self, kind: Kind, text: &str) -> Option<What> {
        header::place(self, kind, text).map(|(what, _)| what)
    }

    /// What a mapping says a header means.
    pub fn own(&self, kind: Kind, text: &str) -> Option<What> {
        if self.own.is_empty() { None } else { self.own.get(&(kind, normal(text))).copied() }
    }

    /// The unit a mapping gives a column whose header states none.
    pub fn unit(&self, what: What) -> Option<Scale> {
        self.units.get(&what).copied()
    }

    /// What a mapping says a sheet is: a table, or nothing to be read.
    pub fn forced(&self, sheet: &str) -> Option<Option<Kind>> {
        self.forced.get(&normal(sheet)).copied()
    }

    /// A sheet that is read by people alone, where it holds no table.
    pub fn is_prose(&self, sheet: &str) -> bool {
        self.prose.contains(&normal(sheet))
    }

    pub fn set_column(&mut self, kind: Kind, text: &str, what: What) {
        self.own.insert((kind, normal(text)), what);
        self.any_column.insert(normal(text));
    }

    pub fn set_unit(&mut self, what: What, unit: Scale) {
        self.units.insert(what, unit);
    }

    pub fn set_sheet(&mut self, sheet: &str, kind: Kind) {
        self.forced.insert(normal(sheet), Some(kind));
    }

    pub fn leave_out(&mut self, sheet: &str) {
        self.forced.insert(normal(sheet), None);
    }

    /// A word of the grammar of quantities.
    pub fn head(&self, word: &str) -> Option<HeadWord> {
        self.heads.get(word).copied()
    }

    /// A text that names a column of some table.
    pub fn is_column(&self, text: &str) -> bool {
        self.any_column.contains(&normal(text))
    }

    /// The key an entry stands for in one of the lists under `[entries]`.
    pub fn choice(&self, list: &str, text: &str) -> Option<&str> {
        self.choices.get(list)?.get(&normal(text)).map(String::as_str)
    }

    /// The entry of a list whose spelling is nearest to a text, as it is written.
    pub fn nearest_choice(&self, list: &str, text: &str) -> Option<&str> {
        let choices = self.choices.get(list)?;
        let near = nearest(&normal(text), choices.keys().map(String::as_str))?;
        self.entries.get(list)?.get(choices.get(near)?)?.first().map(String::as_str)
    }

    /// The entries of a list as they are written.
    pub fn written(&self, list: &str) -> Vec<&str> {
        self.entries.get(list).into_iter().flat_map(|keys| keys.values()).filter_map(|words| words.first()).map(String::as_str).collect()
    }
}

fn spellings(keys: &BTreeMap<String, Vec<String>>) -> HashMap<String, String> {
    keys.iter().flat_map(|(key, words)| words.iter().map(move |word| (normal(word), key.clone()))).collect()
}

/// The form in which words are compared: lower case, letters, digits and `%` only, single blanks; `#` is the word `no`.
pub(super) fn normal(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut gap = false;
    let mut push = |c: char, gap: &mut bool| {
        if *gap && !out.is_empty() {
            out.push(' ');
        }
        *gap = false;
        out.push(c);
    };
    for c in text.chars() {
        match c {
            '\'' | '\u{2019}' | '\u{ad}' | '\u{200b}' => {}
            '#' => {
                gap = true;
                "no".chars().for_each(|c| push(c, &mut gap));
                gap = true;
            }
            '\u{2080}'..='\u{2089}' => push(char::from_digit(c as u32 - 0x2080, 10).unwrap_or(c), &mut gap),
            _ if c.is_alphanumeric() => c.to_lowercase().for_each(|c| push(c, &mut gap)),
            '%' | '\u{b0}' | '\u{2713}' | '\u{2714}' => push(c, &mut gap),
            _ => gap = true,
        }
    }
    out
}

/// Names nearer than this are worth suggesting (Jaro-Winkler).
const ALIKE: f64 = 0.86;
const ALIKE_NAMES: f64 = 0.8;
/// A longer text is no misspelt name.
const LONGEST: usize = 64;

/// The candidate nearest to a text, where one is near; the first of several that are as near.
pub(super) fn nearest<'a>(text: &str, candidates: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    nearest_beyond(ALIKE, text, candidates)
}

/// As [`nearest`], for names of circuits and instruments, which are short and differ in a digit.
pub(super) fn nearest_name<'a>(text: &str, candidates: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    nearest_beyond(ALIKE_NAMES, text, candidates)
}

fn nearest_beyond<'a>(alike_from: f64, text: &str, candidates: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    if text.is_empty() || text.len() > LONGEST {
        return None;
    }
    let mut best: Option<(f64, &str)> = None;
    for candidate in candidates {
        let alike = strsim::jaro_winkler(text, candidate);
        let better = best.is_none_or(|(b, name)| alike > b || (alike == b && candidate < name));
        if alike >= alike_from && better {
            best = Some((alike, candidate));
        }
    }
    best.map(|(_, name)| name)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_table_and_item_has_words_and_no_word_two_meanings_in_a_table() {
        let file: File = toml::from_str(BUILT_IN).unwrap();
        for kind in Kind::ALL {
            let section = &file.kinds[&kind];
            let mut seen = HashMap::new();
            for (column, words) in &section.columns {
                for word in words {
                    assert_eq!(seen.insert(normal(word), column), None, "{kind:?}: {word}");
                }
            }
        }
        assert_eq!(file.items.len(), 16);
    }

    #[test]
    fn words_are_compared_without_case_punctuation_and_surplus_blanks() {
        assert_eq!(normal("  Ckt.  #\n"), "ckt no");
        assert_eq!(normal("Accuracy (% of Reading)"), "accuracy % of reading");
        assert_eq!(normal("Owner's name:"), "owners name");
        assert_eq!(normal("V\u{2081}"), "v1");
    }

    #[test]
    fn near_words_are_suggested_and_far_ones_not() {
        let words = Words::built_in();
        assert_eq!(words.columns(Kind::Readings).nearest("Locaton"), Some("Location"));
        assert_eq!(words.items.nearest("Clinet"), Some("Client"));
        assert_eq!(words.columns(Kind::Readings).nearest("Glove class"), None);
        assert_eq!(words.nearest_choice("load-kind", "resistve"), Some("resistive"));
    }
}
