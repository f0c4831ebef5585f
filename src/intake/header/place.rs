//! Giving each column of a header its meaning, and telling which table a header belongs to.

use super::heads::{Head, Probe, head};
use crate::intake::words::{Column, Kind, Words};
use crate::quantity::parse::{Scale, unit_word};
use crate::visit::Stage;
use std::collections::BTreeMap;

/// The meaning of a column.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) enum What {
    /// A named column.
    Named(Column),
    /// A quantity or a load.
    Head(Head),
}

/// A column that was placed.
#[derive(Clone, Debug)]
pub(crate) struct Placed {
    pub col: u32,
    pub what: What,
    /// The unit its header states.
    pub unit: Option<Scale>,
    /// Its header says that sizes are in square millimetres.
    pub square_millimetres: bool,
    /// Its header says that it was read before or after the work (`As left L1-N`).
    pub stage: Option<Stage>,
    /// The header's text.
    pub text: String,
}

impl Placed {
    fn new(col: u32, what: What, unit: Option<Scale>, text: &str) -> Self {
        let square_millimetres = without_size_unit(text).is_some_and(|(_, metric)| metric);
        Self { col, what, unit, square_millimetres, stage: None, text: text.to_owned() }
    }
}

/// A header as the columns of one kind of table.
#[derive(Clone, Debug)]
pub(crate) struct Layout {
    pub kind: Kind,
    pub placed: Vec<Placed>,
    /// Columns no table of this header has a place for, by position, with their text.
    pub unplaced: Vec<(u32, String)>,
    /// Columns that name what an earlier one is.
    pub second: Vec<(u32, String)>,
    /// Columns placed by another table under the same header.
    pub elsewhere: Vec<u32>,
}

impl Layout {
    pub fn score(&self) -> usize {
        self.placed.len()
    }

    fn has(&self, column: Column) -> bool {
        self.placed.iter().any(|p| p.what == What::Named(column))
    }

    fn readings(&self) -> usize {
        self.placed.iter().filter(|p| matches!(p.what, What::Head(Head::Reading { .. }))).count()
    }

    fn loads(&self) -> usize {
        self.placed.iter().filter(|p| matches!(p.what, What::Head(Head::Load(_)))).count()
    }

    /// The columns without which a table is not of its kind.
    fn qualifies(&self, words: &Words) -> bool {
        use Column as C;
        let has = |column: Column| self.has(column) || words.fixed.column(self.kind, column).is_some();
        let any = |columns: &[Column]| columns.iter().any(|c| self.has(*c));
        match self.kind {
            Kind::Visit => has(C::Item) && has(C::Entry),
            Kind::Instruments => {
                has(C::Instrument) && any(&[C::Measures, C::Serial, C::CalibratedUntil, C::AccuracyPercent, C::Accuracy, C::Resolution])
            }
            Kind::Circuits => {
                let own = [C::FedFrom, C::Serves, C::Legs, C::Breaker, C::Wire, C::Length, C::Load];
                has(C::Circuit) && own.iter().filter(|c| has(**c)).count() + self.loads() >= 1
            }
            Kind::Readings => has(C::Location) && (self.readings() > 0 || (has(C::Quantity) && has(C::Value))),
            Kind::Tests => has(C::Test) && has(C::Value),
            Kind::Observations => has(C::Observation) && any(&[C::Location, C::SignalWord, C::Advice, C::Photo]),
            Kind::Photos => has(C::File) && any(&[C::Location, C::Caption]),
            Kind::Work => has(C::WorkDone) && any(&[C::Date, C::Location, C::Parts]),
            Kind::Revisions => has(C::Issue) && any(&[C::Date, C::Reason]),
        }
    }
}

/// The layouts of a header: the kind that places most of its columns (the sheet's name deciding between equals), and where a
/// circuit list carries readings as well, both.
pub(super) fn layouts(words: &Words, texts: &BTreeMap<u32, String>, sheet: &str) -> Vec<Layout> {
    let (forced, spoken) = (words.forced(sheet), words.sheet(sheet));
    let kinds = Kind::ALL.iter().filter(|kind| forced.is_none_or(|f| f == Some(**kind)));
    let all: Vec<Layout> = kinds.map(|&kind| layout(words, kind, texts)).filter(|l| l.qualifies(words)).collect();
    let rank = |l: &Layout| (l.score(), Some(l.kind) == spoken, std::cmp::Reverse(l.kind));
    let Some(best) = all.iter().max_by_key(|l| rank(l)).cloned() else { return Vec::new() };
    let other = match best.kind {
        Kind::Circuits => all.iter().find(|l| l.kind == Kind::Readings && l.readings() > 0),
        Kind::Readings => all.iter().find(|l| l.kind == Kind::Circuits && circuit_columns(l) >= 2),
        _ => None,
    };
    let mut layouts = vec![best];
    layouts.extend(other.cloned());
    share(&mut layouts);
    layouts
}

/// Columns that only a circuit list has.
fn circuit_columns(layout: &Layout) -> usize {
    use Column as C;
    [C::FedFrom, C::Breaker, C::Wire, C::Length, C::Legs].iter().filter(|c| layout.has(**c)).count() + layout.loads()
}

/// What one of two tables under the same header has a place for is not unplaced in the other.
fn share(layouts: &mut [Layout]) {
    if let [a, b] = layouts {
        let placed = |l: &Layout| l.placed.iter().map(|p| p.col).collect::<Vec<_>>();
        let (of_a, of_b) = (placed(a), placed(b));
        a.unplaced.retain(|(col, _)| !of_b.contains(col));
        b.unplaced.clear();
        b.second.retain(|(col, _)| !of_a.contains(col));
        a.elsewhere = of_b;
        b.elsewhere = of_a.into_iter().chain(a.unplaced.iter().chain(&a.second).map(|u| u.0)).collect();
    }
}

fn layout(words: &Words, kind: Kind, texts: &BTreeMap<u32, String>) -> Layout {
    let mut layout = Layout { kind, placed: Vec::new(), unplaced: Vec::new(), second: Vec::new(), elsewhere: Vec::new() };
    for (&col, text) in texts {
        let Some((what, unit, stage)) = staged(words, kind, text) else {
            layout.unplaced.push((col, text.clone()));
            continue;
        };
        let rank = |text: &str| words.columns(kind).rank(text);
        let earlier = match what {
            What::Named(column) if !both(column, unit, &layout) => layout.placed.iter_mut().find(|p| p.what == what),
            _ => None,
        };
        let placed = Placed { stage, ..Placed::new(col, what, unit, text) };
        match earlier {
            None => layout.placed.push(placed),
            Some(earlier) if rank(text) < rank(&earlier.text) => {
                let less = std::mem::replace(earlier, placed);
                layout.second.push((less.col, less.text));
            }
            Some(_) => layout.second.push((col, text.clone())),
        }
    }
    layout
}

/// A length may stand in feet and in metres beside each other, and a sheet may reckon as much as it likes.
fn both(column: Column, unit: Option<Scale>, layout: &Layout) -> bool {
    column == Column::Reckoned || column == Column::Length && layout.placed.iter().all(|p| p.what != What::Named(column) || p.unit != unit)
}

/// As [`place`], also of a reading whose header begins or ends with its stage.
pub(super) fn staged(words: &Words, kind: Kind, text: &str) -> Option<(What, Option<Scale>, Option<Stage>)> {
    if let Some((what, unit)) = place(words, kind, text) {
        return Some((what, unit, None));
    }
    if kind != Kind::Readings {
        return None;
    }
    let blanks: Vec<usize> = text.match_indices(char::is_whitespace).map(|(at, _)| at).collect();
    blanks.iter().find_map(|&at| {
        let (head, tail) = (text.get(..at)?, text.get(at..)?);
        let (stage, base) = match (words.choice("stage", head), words.choice("stage", tail)) {
            (Some(stage), _) => (stage, tail),
            (None, Some(stage)) => (stage, head),
            (None, None) => return None,
        };
        let (what, unit) = place(words, kind, base.trim().trim_start_matches(['-', ':', ',']).trim())?;
        let stage = if stage == "as-left" { Stage::AsLeft } else { Stage::AsFound };
        matches!(what, What::Head(_)).then_some((what, unit, Some(stage)))
    })
}

/// The meaning of one header text in a kind of table, with the unit it states or a mapping gives it.
pub(crate) fn place(words: &Words, kind: Kind, text: &str) -> Option<(What, Option<Scale>)> {
    let own = || {
        let without = without_unit(text);
        let by_base = without.and_then(|(base, unit)| words.own(kind, &base).map(|what| (what, Some(unit))));
        words.own(kind, text).map(|what| (what, None)).or(by_base)
    };
    let (what, unit) = own().or_else(|| built_in(words, kind, text))?;
    Some((what, unit.or_else(|| words.unit(what))))
}

fn built_in(words: &Words, kind: Kind, text: &str) -> Option<(What, Option<Scale>)> {
    let columns = words.columns(kind);
    let by_head = |text: &str, unit: Option<Scale>| {
        let fits = |h: &Head| match kind {
            Kind::Readings => matches!(h, Head::Reading { .. }),
            Kind::Circuits => matches!(h, Head::Load(_)),
            _ => false,
        };
        head(words, text, unit).filter(fits).map(What::Head)
    };
    if let Some(column) = columns.get(text) {
        return Some((What::Named(column), unit_word(text)));
    }
    if let Some((base, unit)) = without_unit_word(text)
        && let Some(what) = columns.get(&base).map(What::Named).or_else(|| by_head(&base, Some(unit)))
    {
        return Some((what, Some(unit)));
    }
    if let Some(what) = by_head(text, None) {
        return Some((what, None));
    }
    if let Some((base, _)) = without_size_unit(text)
        && let Some(column @ (Column::Wire | Column::NeutralWire)) = columns.get(&base)
    {
        return Some((What::Named(column), None));
    }
    let (base, unit) = without_unit(text)?;
    let named = columns.get(&base);
    // A capital M beside a length is the metre.
    let unit = if named == Some(Column::Length) && Some(unit) == unit_word("M") { unit_word("m").unwrap_or(unit) } else { unit };
    named.map(What::Named).or_else(|| by_head(&base, Some(unit))).map(|what| (what, Some(unit)))
}

/// The header without a unit of conductor sizes, and whether that is the square millimetre.
fn without_size_unit(text: &str) -> Option<(String, bool)> {
    let lower = text.to_lowercase();
    let units =
        [("mm\u{b2}", true), ("mm2", true), ("mm^2", true), ("sq mm", true), ("sq. mm", true), ("awg/kcmil", false), ("awg", false)];
    units.iter().find(|(unit, _)| lower.contains(unit)).map(|(unit, metric)| (lower.replace(unit, " "), *metric))
}

/// The header without a word of it that is a unit and can't be anything else: `Load kW L1`, `L1-N volts`.
fn without_unit_word(text: &str) -> Option<(String, Scale)> {
    let plain = |word: &str| word.trim_matches(['(', ')', '[', ']', ',', ':']).to_owned();
    let is_unit = |word: &str| {
        let word = plain(word);
        let letter = word.len() == 1 && !matches!(word.as_str(), "V" | "v" | "W" | "w" | "%");
        if letter || word.eq_ignore_ascii_case("in") { None } else { unit_word(&word) }
    };
    let words: Vec<&str> = text.split_whitespace().collect();
    let (at, unit) = words.iter().enumerate().find_map(|(i, word)| is_unit(word).map(|unit| (i, unit)))?;
    let base: Vec<&str> = words.iter().enumerate().filter(|(i, _)| *i != at).map(|(_, word)| *word).collect();
    (!base.is_empty()).then(|| (base.join(" "), unit))
}

/// The header without the unit beside it: in brackets anywhere, behind a comma, or its last word.
fn without_unit(text: &str) -> Option<(String, Scale)> {
    for (open, close) in [('(', ')'), ('[', ']')] {
        let inner = text.split_once(open).and_then(|(head, rest)| rest.split_once(close).map(|(unit, tail)| (head, unit, tail)));
        if let Some((head, unit, tail)) = inner
            && let Some(unit) = unit_word(unit.trim_start_matches("in "))
        {
            return Some((format!("{} {}", head.trim(), tail.trim()).trim().to_owned(), unit));
        }
    }
    let cut = text.rfind([',', ' ', '_', '\n'])?;
    let (base, last) = (text.get(..cut)?, text.get(cut..)?.trim_start_matches([',', ' ', '_', '\n']));
    let base = base.trim().trim_end_matches([',', '-']).trim_end_matches(" in").trim();
    (!base.is_empty()).then_some(()).and_then(|()| unit_word(last.trim_end_matches(['.', ':']))).map(|unit| (base.to_owned(), unit))
}

impl Placed {
    /// The quantity this column holds.
    pub fn probe(&self) -> Option<(Probe, bool)> {
        match self.what {
            What::Head(Head::Reading { probe, implied }) => Some((probe, implied)),
            _ => None,
        }
    }
}
