//! What stands in a cell, shaped at the base size.

use super::super::super::super::text::visible;
use super::super::super::shape::{self, Shaped, Span};
use super::super::Flow;
use super::columns::BASE;
use crate::report::document::{Cell, Column, ColumnKind, Number, Row, Table};
use crate::report::drawing::Colour;
use crate::results::Verdict;

/// A heading's word is given at most this much, in points.
const MOST_HEAD: f32 = 90.0;

/// A cell.
pub(super) struct Entry {
    /// Its text in spans.
    pub spans: Vec<Span>,
    /// Shaped.
    pub content: Content,
    /// Narrowest and widest it can be set, at the base size.
    pub widths: (f32, f32),
}

/// How a cell is set.
pub(super) enum Content {
    /// Nothing.
    Empty,
    /// Text from the left.
    Text(Shaped),
    /// Text against the right.
    Right(Shaped),
    /// A number on its decimal mark; width of what stands before the mark.
    Number { shaped: Shaped, whole: f32 },
}

impl Entry {
    fn text(spans: Vec<Span>, right: bool) -> Self {
        let shaped = shape::shape(&spans, BASE);
        let widths = shaped.widths();
        Self { spans, widths, content: if right { Content::Right(shaped) } else { Content::Text(shaped) } }
    }

    /// Width behind the decimal mark, the mark included.
    pub fn behind(&self) -> f32 {
        if let Content::Number { whole, .. } = self.content { (self.widths.1 - whole).max(0.0) } else { 0.0 }
    }
}

impl Flow<'_> {
    /// Heading of a column with its unit.
    pub(super) fn head(&self, column: &Column) -> Entry {
        let mut spans = vec![Span::bold(&visible(&column.heading).replace('-', "-\u{2060}"), self.ink())];
        if let Some(unit) = column.unit.map(crate::quantity::Unit::symbol).filter(|u| !u.is_empty()) {
            spans.push(Span::new(&format!(" ({unit})"), self.colour(Colour::Quiet)));
        }
        let words = spans.iter().flat_map(|s| s.text.split_whitespace().map(|w| shape::width(w, BASE, s.bold)));
        let longest = words.fold(0.0, f32::max);
        let mut entry = Entry::text(spans, column.kind == ColumnKind::Number);
        // A heading is broken at blanks alone: `L1-N` stays whole.
        entry.widths.0 = entry.widths.0.max(longest).min(MOST_HEAD);
        entry
    }

    /// The cells of a row.
    pub(super) fn entries(&self, table: &Table, row: &Row) -> Vec<Entry> {
        let shown = if row.group { 1 } else { table.columns.len() };
        row.cells.iter().zip(&table.columns).take(shown).map(|(cell, column)| self.entry(cell, row.group, column.kind)).collect()
    }

    fn entry(&self, cell: &Cell, group: bool, kind: ColumnKind) -> Entry {
        let ink = self.ink();
        match cell {
            Cell::Empty => Entry { spans: Vec::new(), content: Content::Empty, widths: (0.0, 0.0) },
            Cell::Text(text) => {
                Entry::text(vec![Span { bold: group, ..Span::new(&visible(text), ink) }], kind == ColumnKind::Number && !group)
            }
            Cell::Rich(inlines) => Entry::text(self.spans(inlines, ink), false),
            Cell::Signal(signal) => Entry::text(self.signal(*signal).to_vec(), false),
            Cell::Verdict(verdict) => Entry::text(vec![Span { bold: *verdict == Verdict::Fail, ..Span::new(verdict.name(), ink) }], false),
            Cell::Number(number) => self.number(number),
        }
    }

    /// A number; bold where it failed, italic where it is undecided.
    fn number(&self, number: &Number) -> Entry {
        let show = |value: f64| self.digits(value, number.decimals);
        let mut text = show(number.value);
        let whole = text.find(self.document.meta.decimal_mark).unwrap_or(text.len());
        let whole = text[..whole].to_owned();
        if let Some(uncertainty) = number.uncertainty {
            text = format!("{text} ± {}", show(uncertainty));
        }
        let bold = number.verdict == Some(Verdict::Fail);
        let span = Span { bold, italic: number.verdict == Some(Verdict::Undecided), ..Span::new(&text, self.ink()) };
        let whole = shape::width(&whole, BASE, bold);
        let shaped = shape::shape(std::slice::from_ref(&span), BASE);
        let width = shaped.widths().1;
        Entry { spans: vec![span], widths: (width, width), content: Content::Number { shaped, whole } }
    }

    /// A number with the document's decimal mark and a true minus; what is not finite is a dash.
    fn digits(&self, value: f64, decimals: u8) -> String {
        if !value.is_finite() {
            return "–".to_owned();
        }
        let plain = format!("{:.*}", usize::from(decimals.min(9)), value);
        let zero = !plain.bytes().any(|b| (b'1'..=b'9').contains(&b));
        let mark = self.document.meta.decimal_mark;
        let mark = if mark == '\0' { '.' } else { mark };
        let shown = plain.replace('.', &mark.to_string());
        if zero { shown.trim_start_matches('-').to_owned() } else { shown.replace('-', "\u{2212}") }
    }
}
