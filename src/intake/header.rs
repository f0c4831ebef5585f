//! Finding the tables of a sheet by their headers.
//!
//! A header may stand in any row, over one row or two, in any order of columns; a table is known by the columns it has, and a
//! sheet may hold several, side by side or one below another. The sheet's name only decides between equals.

pub(super) mod heads;
mod place;
mod table;

pub(super) use place::{Placed, What, place};
pub(super) use table::{Field, Row, Table};

use super::grid::{Area, Sheet, Value};
use super::words::{Kind, Words};
use place::Layout;
use std::collections::{BTreeMap, BTreeSet};

/// Rows in which a header over two rows is looked for; one over a single row is found anywhere.
const HEADER_ROWS: u32 = 30;
/// Columns of a header that are looked at.
const MOST_COLUMNS: usize = 400;
/// Headers looked for in one sheet; a real sheet has a few.
const MOST_HEADERS: usize = 200;

/// A header found: its tables share rows and columns.
struct Found {
    /// First and last row of the header.
    rows: (u32, u32),
    /// First and last column.
    columns: (u32, u32),
    layouts: Vec<Layout>,
}

impl Found {
    /// The same header again, as on the next page of a long list.
    fn repeats(&self, other: &Self) -> bool {
        let texts = |found: &Self| -> Vec<(u32, String)> {
            found.layouts.iter().flat_map(|l| &l.placed).map(|p| (p.col, p.text.clone())).collect()
        };
        self.columns == other.columns && texts(self) == texts(other)
    }
}

/// The tables of a sheet, downwards.
pub(super) fn tables<'a>(sheet: &'a Sheet, words: &'a Words) -> Vec<Table<'a>> {
    let mut found: Vec<Found> = Vec::new();
    let filled: Vec<u32> = sheet.rows().map(|(row, _)| row).collect();
    let mut last_header = None;
    for (i, &row) in filled.iter().enumerate() {
        if last_header.is_some_and(|last| row <= last) || found.len() >= MOST_HEADERS || !may_head(sheet, row, words) {
            continue;
        }
        let below = filled.get(i + 1).copied().filter(|&b| b == row + 1 && row < HEADER_ROWS);
        let mut here = headers(sheet, row, below, words);
        here.retain(|header| found.last().is_none_or(|last| !header.repeats(last)));
        last_header = here.iter().map(|f| f.rows.1).max().or(last_header);
        found.extend(here);
    }
    let end = filled.last().map_or(0, |r| r + 1);
    let starts: Vec<((u32, u32), (u32, u32))> = found.iter().map(|f| (f.rows, f.columns)).collect();
    let mut tables = Vec::new();
    for (i, header) in found.into_iter().enumerate() {
        let overlaps = |c: (u32, u32)| c.0 <= header.columns.1 && header.columns.0 <= c.1;
        let next = starts.iter().skip(i + 1).find(|(rows, columns)| rows.0 > header.rows.1 && overlaps(*columns));
        let rows = (header.rows.1 + 1, next.map_or(end, |(rows, _)| rows.0));
        tables.extend(header.layouts.into_iter().map(|layout| Table::new(sheet, words, layout, header.rows, header.columns, rows)));
    }
    tables
}

/// A row that can be a header: texts, and hardly a number. Far down the sheet, where rows are many, also one that begins with
/// the name of a column.
fn may_head(sheet: &Sheet, row: u32, words: &Words) -> bool {
    let cells = sheet.row(row);
    let mut texts = cells.iter().filter_map(|c| text_of(&c.value));
    let Some(first) = texts.next() else { return false };
    let others = texts.count();
    let numbers = cells.iter().filter(|c| matches!(c.value, Value::Number(_) | Value::DateTime(_))).count();
    numbers <= others / 3 && (row < HEADER_ROWS || (others > 0 && words.is_column(first)))
}

fn text_of(value: &Value) -> Option<&str> {
    match value {
        Value::Text(text) if !text.trim().is_empty() => Some(text.trim()),
        _ => None,
    }
}

/// The headers that begin in a row: over that row alone, or that row and the one below where that places more.
fn headers(sheet: &Sheet, row: u32, below: Option<u32>, words: &Words) -> Vec<Found> {
    let single = texts(sheet, row);
    let one = split(sheet, words, &single, (row, row));
    let Some(below) = below.filter(|&below| may_head(sheet, below, words)) else { return one };
    // Columns with a place, each counted once though two tables share a header.
    let score = |found: &[Found]| -> usize {
        let columns = |f: &Found| f.layouts.iter().flat_map(|l| &l.placed).map(|p| p.col).collect::<BTreeSet<_>>().len();
        found.iter().map(columns).sum()
    };
    let [alone, grouped] = [false, true].map(|grouped| split(sheet, words, &joined(sheet, row, below, words, grouped), (row, below)));
    // Of equals, the one that takes the header for fewer tables.
    let rank = |found: &[Found]| (score(found), std::cmp::Reverse(found.iter().map(|f| f.layouts.len()).sum::<usize>()));
    let two = if rank(&grouped) >= rank(&alone) { grouped } else { alone };
    let units_alone = texts(sheet, below).values().all(|text| unit_text(text));
    let lower = split(sheet, words, &texts(sheet, below), (below, below));
    let (a, b, c) = (score(&one), score(&two), score(&lower));
    if b > 0 && c <= b && (b > a.max(c) || (b == a && units_alone)) {
        two
    } else if c > a {
        // The row below is the better header, and is met next.
        Vec::new()
    } else {
        one
    }
}

/// The texts of a row by column.
fn texts(sheet: &Sheet, row: u32) -> BTreeMap<u32, String> {
    let cells = sheet.row(row).iter().take(MOST_COLUMNS);
    cells.filter_map(|c| text_of(&c.value).map(|t| (c.col, t.to_owned()))).collect()
}

/// The texts of two rows read as one header. A group's head stands over its columns by a merged area or by blanks to its right;
/// over blanks it is taken for a name that could stand alone only where `grouped`.
fn joined(sheet: &Sheet, upper: u32, lower: u32, words: &Words, grouped: bool) -> BTreeMap<u32, String> {
    let (above, below) = (texts(sheet, upper), texts(sheet, lower));
    let wide: Vec<Area> = sheet.merged.iter().filter(|a| a.right > a.left && (a.top..=a.bottom).contains(&upper)).copied().collect();
    let area = |col: u32| wide.iter().find(|a| (a.left..=a.right).contains(&col));
    let mut out = above.clone();
    for (&col, text) in &below {
        let own = above.get(&col).or_else(|| above.get(&area(col)?.left));
        let left = || above.range(..col).next_back().filter(|_| area(col).is_none());
        let placed = |text: &str| Kind::ALL.iter().any(|&kind| place::staged(words, kind, text).is_some());
        let text = match (own, own.is_none().then(left).flatten()) {
            (Some(head), _) if unit_text(text) => format!("{head} ({})", text.trim_matches(['(', ')', '[', ']'])),
            (Some(head), _) => format!("{head} {text}"),
            (None, Some((at, head))) => {
                let whole = format!("{head} {text}");
                // What stands under `Highest` is no plain reading, though its own name would be.
                let heads_a_group = below.contains_key(at) && !placed(head);
                if heads_a_group || ((grouped || !placed(text)) && placed(&whole)) { whole } else { text.clone() }
            }
            (None, None) => text.clone(),
        };
        out.insert(col, text);
    }
    out
}

fn unit_text(text: &str) -> bool {
    crate::quantity::parse::unit_word(text.trim_matches(['(', ')', '[', ']', ' '])).is_some()
}

/// The tables under a header's texts: those of its parts where blank columns divide it into parts that are tables each, else
/// those of the whole.
fn split(sheet: &Sheet, words: &Words, texts: &BTreeMap<u32, String>, rows: (u32, u32)) -> Vec<Found> {
    let mut parts: Vec<BTreeMap<u32, String>> = Vec::new();
    let mut last = None;
    for (&col, text) in texts {
        if last.is_none_or(|l| col > l + 1) {
            parts.push(BTreeMap::new());
        }
        if let Some(part) = parts.last_mut() {
            part.insert(col, text.clone());
        }
        last = Some(col);
    }
    let found = |part: &BTreeMap<u32, String>| {
        let layouts = place::layouts(words, part, &sheet.name);
        let columns = (*part.first_key_value()?.0, *part.last_key_value()?.0);
        (!layouts.is_empty()).then_some(Found { rows, columns, layouts })
    };
    if parts.len() > 1 {
        let each: Vec<Found> = parts.iter().filter_map(found).collect();
        if each.len() == parts.len() {
            return each;
        }
    }
    let whole = found(texts);
    halves(texts, whole.as_ref())
        .and_then(|[left, right]| Some(vec![found(&left)?, found(&right)?]))
        .unwrap_or_else(|| whole.into_iter().collect())
}

/// The two halves of a header that names its columns twice, as panel schedules do for the two sides of a panel.
fn halves(texts: &BTreeMap<u32, String>, whole: Option<&Found>) -> Option<[BTreeMap<u32, String>; 2]> {
    let cut = whole?.layouts.iter().flat_map(|l| &l.second).map(|(col, _)| *col).min()?;
    let part = |keep: &dyn Fn(u32) -> bool| texts.iter().filter(|(col, _)| keep(**col)).map(|(c, t)| (*c, t.clone())).collect();
    Some([part(&|col| col < cut), part(&|col| col >= cut)])
}
