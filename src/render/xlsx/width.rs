//! Column widths from what stands in the columns, in characters of the workbook's font.

use super::cell;
use super::grid::{self, Place};
use super::page::{Page, Part};
use crate::report::document::{Cell, Column, ColumnKind, Number, Table};
use unicode_width::UnicodeWidthStr;

/// The widest a worksheet gets before its running text is set narrower, so that its print can still be read.
const WIDEST: f64 = 150.0;
/// The narrowest running text is set.
const NARROWEST_TEXT: u8 = 28;
/// The widest it is set.
const WIDEST_TEXT: u8 = 65;
/// Running text is narrower than as many digits, by which widths are counted.
const TEXT_TO_DIGITS: f64 = 1.06;
/// The widest heading that is kept on one line with its unit.
const SHORT_HEADING: usize = 12;

/// The widths of a worksheet's columns.
pub(super) fn columns(page: &Page) -> Vec<f64> {
    let mut columns: Vec<Width> = Vec::new();
    for part in &page.parts {
        let grid = grid::of(part.table);
        columns.resize(columns.len().max(grid.width.into()), Width::default());
        for place in &grid.places {
            columns[usize::from(place.at)].fit(content(part, place), place.column.kind == ColumnKind::Text);
            if let Some(at) = place.uncertainty {
                columns[usize::from(at)].fit(uncertainties(part.table, place), false);
            }
        }
    }
    if page.first && !page.sheet.facts.is_empty() {
        columns.resize(columns.len().max(2), Width { wide: WIDEST_TEXT.into(), elastic: true });
        let label = page.sheet.facts.iter().map(|(label, _)| widest_line(label)).max().unwrap_or(0);
        columns[0].fit(characters(label.min(24)), false);
    }
    squeezed(&columns)
}

/// Width of the widest line of a text.
pub(super) fn widest_line(text: &str) -> usize {
    text.lines().map(UnicodeWidthStr::width).max().unwrap_or(0)
}

/// How many lines a text takes in a column or merged cell of that width.
pub(super) fn lines(text: &str, wide: f64) -> u32 {
    let room = ((wide - 2.0) * TEXT_TO_DIGITS).max(4.0);
    text.lines().map(|line| wrapped(line, room)).sum::<u32>().max(1)
}

/// Lines of a paragraph, broken at blanks and within words longer than a line.
fn wrapped(line: &str, room: f64) -> u32 {
    let (mut lines, mut used) = (1, 0.0);
    for word in line.split(' ') {
        let word = f64::from(u32::try_from(word.width()).unwrap_or(u32::MAX));
        if used > 0.0 && used + 1.0 + word > room {
            lines += 1;
            used = 0.0;
        }
        used += word + if used > 0.0 { 1.0 } else { 0.0 };
        while used > room {
            lines += 1;
            used -= room;
        }
    }
    lines
}

#[derive(Clone, Copy, Default)]
struct Width {
    wide: f64,
    elastic: bool,
}

impl Width {
    fn fit(&mut self, wide: f64, elastic: bool) {
        self.elastic = if self.wide > 0.0 { self.elastic || elastic } else { elastic };
        self.wide = self.wide.max(wide);
    }
}

/// The columns, their widest running text set narrower by as much as the worksheet is too wide.
fn squeezed(columns: &[Width]) -> Vec<f64> {
    let at_most = |most: f64| columns.iter().map(move |c| if c.elastic { c.wide.min(most) } else { c.wide });
    let most = (NARROWEST_TEXT..=WIDEST_TEXT).rev().map(f64::from).find(|most| at_most(*most).sum::<f64>() <= WIDEST);
    at_most(most.unwrap_or(NARROWEST_TEXT.into())).collect()
}

/// Width of a column: its widest cell within what its kind allows, and its heading's longest word.
fn content(part: &Part, place: &Place) -> f64 {
    let cells = part.table.rows.iter().filter(|r| !r.group).filter_map(|r| r.cells.get(place.index));
    let widest = cells.map(cell_width).max().unwrap_or(0);
    let (least, most) = match place.column.kind {
        ColumnKind::Name => (6, 28),
        ColumnKind::Text => (8, 58),
        ColumnKind::Number => (6, 20),
        ColumnKind::Signal | ColumnKind::Verdict => (10, 20),
    };
    let heading = heading(place.column);
    let whole = heading.width();
    let word = if whole <= SHORT_HEADING { whole } else { heading.split_whitespace().map(UnicodeWidthStr::width).max().unwrap_or(0) };
    characters(widest.clamp(least, most).max((word.max(whole.div_ceil(2)) + 1).min(most)))
}

/// A column's heading with its unit.
pub(super) fn heading(column: &Column) -> String {
    match column.unit.map_or("", |u| u.symbol()) {
        "" => column.heading.clone(),
        symbol => format!("{} ({symbol})", column.heading),
    }
}

fn uncertainties(table: &Table, place: &Place) -> f64 {
    let cells = table.rows.iter().filter_map(|r| r.cells.get(place.index));
    let shown = cells.filter_map(|c| match c {
        Cell::Number(n) => n.uncertainty.map(|u| digits(u, n.decimals) + 2),
        _ => None,
    });
    characters(shown.max().unwrap_or(0).clamp(6, 20))
}

fn cell_width(cell: &Cell) -> usize {
    match cell {
        Cell::Empty => 0,
        Cell::Text(text) => widest_line(text),
        Cell::Rich(text) => widest_line(&cell::plain(text)),
        Cell::Number(Number { value, decimals, .. }) => digits(*value, *decimals),
        Cell::Signal(signal) => signal.word().len() + 1,
        Cell::Verdict(verdict) => verdict.name().len(),
    }
}

fn digits(value: f64, decimals: u8) -> usize {
    format!("{value:.0$}", usize::from(decimals.min(30))).len()
}

/// A width that shows so many characters with room at both sides; the format allows 255.
pub(super) fn characters(n: usize) -> f64 {
    f64::from(u8::try_from(n).unwrap_or(200).min(200)) * 1.05 + 2.6
}
