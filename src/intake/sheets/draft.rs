//! A first mapping of a workbook, to be changed by its user: what was recognised, what was not, and the lines that would place it.
//!
//! All of it stands behind `#`, so that as it is it changes nothing. What comes from the workbook is quoted with its control and
//! invisible characters escaped, so that it can't leave its line.

use super::unread::is_form;
use super::{Tables, visit_sheet};
use crate::intake::cell::plain_text;
use crate::intake::grid::{Sheet, Value, Workbook};
use crate::intake::header;
use crate::intake::header::heads::{Head, Probe};
use crate::intake::header::{Placed, What};
use crate::intake::mapping::{key, quoted};
use crate::intake::words::{Kind, Words};
use crate::wording::{Arg, Language, Sentence};
use std::collections::{BTreeMap, BTreeSet};
use std::fmt::Write as _;

/// Rows in which the headings of an unrecognised table are looked for.
const HEADER_ROWS: u32 = 30;
/// Headings listed of a table.
const MOST: usize = 200;
/// Longest heading shown, in characters; a longer text is no heading.
const LONGEST: usize = 80;

/// What is known of one kind of table.
#[derive(Default)]
struct Section {
    /// The program's column and the workbook's heading, where the two differ.
    known: BTreeSet<(String, String)>,
    /// Headings without a place.
    unplaced: BTreeSet<String>,
}

/// The mapping as TOML.
pub(in crate::intake) fn draft(workbook: &Workbook, words: &Words, name: &str, language: &Language) -> String {
    let tables = Tables(workbook.sheets.iter().flat_map(|sheet| header::tables(sheet, words)).collect());
    let mut sections: BTreeMap<Kind, Section> = BTreeMap::new();
    for table in &tables.0 {
        let section = sections.entry(table.kind).or_default();
        section.known.extend(table.placed.iter().filter_map(|placed| known(words, table.kind, placed)));
        section.unplaced.extend(table.unplaced.iter().map(|(_, text)| text.clone()));
    }
    let items = visit_sheet::unknown_items(&tables, words);
    if !items.is_empty() {
        sections.entry(Kind::Visit).or_default().unplaced.extend(items);
    }
    let mut lines = Lines { text: String::new(), language };
    lines.say(Sentence::new("map.head").with("file", quoted(name)));
    lines.say(Sentence::new("map.use"));
    lines.text.push_str("\n[sheets]\n");
    for sheet in &workbook.sheets {
        let read = tables.0.iter().any(|t| std::ptr::eq(t.sheet, sheet));
        if read || sheet.cells.is_empty() || words.is_prose(&sheet.name) || words.forced(&sheet.name).is_some() || is_form(sheet, words) {
            continue;
        }
        let kind = words.sheet(&sheet.name).unwrap_or(Kind::Readings);
        lines.say(Sentence::new("map.no-table").with("sheet", quoted(&sheet.name)));
        lines.line(kind.name(), &sheet.name);
        lines.line("none", &sheet.name);
        sections.entry(kind).or_default().unplaced.extend(headings(sheet));
    }
    for (kind, section) in &sections {
        lines.section(words, *kind, section);
    }
    lines.text
}

struct Lines<'a> {
    text: String,
    language: &'a Language,
}

impl Lines<'_> {
    /// A sentence as a comment.
    fn say(&mut self, sentence: Sentence) {
        let _ = writeln!(self.text, "# {}", self.language.say(&sentence));
    }

    /// A line to take the `#` from.
    fn line(&mut self, name: &str, text: &str) {
        let _ = writeln!(self.text, "# {} = {}", key(name), quoted(text));
    }

    fn section(&mut self, words: &Words, kind: Kind, section: &Section) {
        if section.known.is_empty() && section.unplaced.is_empty() {
            return;
        }
        let _ = writeln!(self.text, "\n[{}]", kind.name());
        if !section.known.is_empty() {
            self.say(Sentence::new("map.known"));
            section.known.iter().for_each(|(column, heading)| self.line(column, heading));
        }
        if !section.unplaced.is_empty() {
            let labels = if kind == Kind::Visit { words.items.all_labels() } else { words.columns(kind).all_labels() };
            let labels: Vec<Arg> = labels.into_iter().map(Arg::from).collect();
            let key = match kind {
                Kind::Visit => "map.unplaced-items",
                Kind::Readings => "map.unplaced-readings",
                Kind::Circuits => "map.unplaced-circuits",
                _ => "map.unplaced",
            };
            self.say(Sentence::new(key).with("columns", labels));
        }
        let likely = |text: &str| {
            let near = if kind == Kind::Visit { words.items.nearest(text) } else { words.columns(kind).nearest(text) };
            near.map_or_else(|| "?".to_owned(), str::to_owned)
        };
        for text in section.unplaced.iter().take(MOST) {
            self.line(&likely(text), text);
        }
    }
}

/// A column by its name and its heading, where the heading is not the name.
fn known(words: &Words, kind: Kind, placed: &Placed) -> Option<(String, String)> {
    let name = match placed.what {
        What::Named(column) => words.columns(kind).label(column).to_owned(),
        What::Head(Head::Load(between)) => format!("Load W {between}"),
        What::Head(Head::Reading { probe, .. }) => match probe {
            Probe::Exactly(quantity) => quantity.to_string(),
            Probe::HotNeutral => "H-N".to_owned(),
            Probe::HotGround => "H-G".to_owned(),
            Probe::HotHot => "L-L".to_owned(),
            Probe::HotCurrent => "I H".to_owned(),
        },
    };
    (name != placed.text).then(|| (name, placed.text.clone()))
}

/// The texts of the row that has most of them, near the top of a sheet without a recognised table.
fn headings(sheet: &Sheet) -> Vec<String> {
    let texts = |cells: &[crate::intake::grid::Cell]| -> Vec<String> {
        let text = |cell: &crate::intake::grid::Cell| matches!(cell.value, Value::Text(_)).then(|| plain_text(&cell.value));
        cells.iter().filter_map(text).filter(|t| !t.is_empty() && t.chars().count() <= LONGEST).collect()
    };
    let mut best = Vec::new();
    for (_, cells) in sheet.rows().take_while(|(row, _)| *row < HEADER_ROWS) {
        let here = texts(cells);
        if here.len() > best.len() {
            best = here;
        }
    }
    best
}

#[cfg(test)]
mod tests {
    use crate::intake::{Content, Input, Mapping, first_mapping};
    use crate::wording::Language;

    fn drafted(csv: &str) -> String {
        let files = [("Blatt 3.csv".to_owned(), csv.as_bytes().to_vec())];
        first_mapping(&Input { name: "own", content: Content::Folder(&files) }, &Language::english()).unwrap()
    }

    #[test]
    fn headings_are_listed_as_known_near_or_without_a_place() {
        let text = drafted("Test point,VAN,Staet,Glove class\nMain,120.1,x,00\n");
        for line in ["# Location = \"Test point\"", "# L1-N = \"VAN\"", "# State = \"Staet\"", "# \"?\" = \"Glove class\""] {
            assert!(text.lines().any(|l| l == line), "{line}\n{text}");
        }
    }

    #[test]
    fn whatever_stands_in_a_heading_the_draft_says_nothing_yet() {
        for heading in ["\"x\n[fixed.visit]\nSystem = \"\"230\"\n#\"", "a\u{202e}b\"\"\"", "'''", "\\u0041\u{1b}[31m"] {
            let text = drafted(&format!("Location,L1-N,{heading}\nMain,120.1,x\n"));
            let spoken = text.lines().filter(|l| !l.is_empty() && !l.starts_with('#') && !l.starts_with('['));
            assert_eq!(spoken.collect::<Vec<_>>(), Vec::<&str>::new(), "{text}");
            assert!(text.lines().filter(|l| l.starts_with('[')).all(|l| ["[sheets]", "[readings]"].contains(&l)), "{text}");
            assert!(text.chars().all(|c| c == '\n' || !c.is_control()), "{text}");
            Mapping::from_toml(&text, "own.toml").unwrap();
            // With every `#` before a line of its own taken away it is still TOML.
            let lines = text.lines().map(|l| l.strip_prefix("# ").filter(|l| l.contains(" = \"") && !l.contains('`')).unwrap_or(l));
            toml::from_str::<toml::Table>(&lines.collect::<Vec<_>>().join("\n")).unwrap();
        }
    }
}
