//! Typed tables: numbers aligned on their decimal mark, a row header where the first column names the row.

use super::markup::Markup;
use super::{inline, mark};
use crate::render::text::not_finite;
use crate::report::document::{Cell, Column, ColumnKind, Number, Row, Table};
use crate::results::Verdict;

/// From so many columns on, a table is printed in smaller type.
const WIDE: usize = 8;
/// The longest name that is kept on one line.
const LONGEST_NAME: usize = 34;

/// The longest text of a column whose cells are kept on one line.
const LONGEST_WORD: usize = 10;
/// The longest text of a column that needs no room of its own.
const LONGEST_SHORT: usize = 18;

/// Writes a table; one without rows says so.
pub(super) fn write(page: &mut Markup, table: &Table, decimal_mark: char) {
    // A document without a language has no decimal mark.
    let decimal_mark = if decimal_mark == '\0' { '.' } else { decimal_mark };
    if table.rows.is_empty() || table.columns.is_empty() {
        return page.element("div", &[("class", "table empty")], |page| {
            page.element("p", &[("class", "caption")], |page| page.text(&table.caption));
            page.element("p", &[], |page| page.text(&table.when_empty));
        });
    }
    let shapes: Vec<Shape> = table.columns.iter().enumerate().map(|(i, column)| Shape::of(table, i, column)).collect();
    let class = if shapes.iter().map(Shape::span).sum::<usize>() >= WIDE { "table wide" } else { "table" };
    let region = [("class", class), ("role", "region"), ("tabindex", "0"), ("aria-label", table.caption.as_str())];
    page.element("div", &region, |page| {
        page.element("table", &[], |page| {
            page.element("caption", &[], |page| page.text(&table.caption));
            page.element("thead", &[], |page| page.element("tr", &[], |page| shapes.iter().for_each(|s| s.heading(page))));
            for rows in table.rows.chunk_by(|_, next| !next.group) {
                page.line();
                page.element("tbody", &[], |page| rows.iter().for_each(|row| write_row(page, row, &shapes, decimal_mark)));
            }
        });
    });
}

/// How a column is shown.
struct Shape<'a> {
    column: &'a Column,
    first: bool,
    /// Most decimals of its numbers.
    decimals: u8,
    /// Characters of its longest text.
    longest: usize,
    /// Whether any of its numbers has an uncertainty, which then stands in a column of its own.
    uncertain: bool,
}

impl<'a> Shape<'a> {
    fn of(table: &Table, index: usize, column: &'a Column) -> Self {
        let numbers = || {
            table.rows.iter().filter_map(|row| match row.cells.get(index) {
                Some(Cell::Number(number)) => Some(number),
                _ => None,
            })
        };
        let decimals = numbers().map(|n| n.decimals).max().unwrap_or(0);
        let length = |cell: &Cell| match cell {
            Cell::Text(text) => text.chars().count(),
            Cell::Rich(_) => usize::MAX,
            _ => 0,
        };
        let cells = table.rows.iter().filter(|row| !row.group).filter_map(|row| row.cells.get(index));
        let longest = cells.map(length).max().unwrap_or(0);
        Self { column, first: index == 0, decimals, longest, uncertain: numbers().any(|n| n.uncertainty.is_some()) }
    }

    fn span(&self) -> usize {
        1 + usize::from(self.uncertain)
    }

    fn class(&self) -> &'static str {
        match self.column.kind {
            ColumnKind::Name => "name",
            ColumnKind::Text if self.longest <= LONGEST_WORD => "name",
            ColumnKind::Text if self.longest <= LONGEST_SHORT => "short",
            ColumnKind::Text => "text",
            ColumnKind::Number => "number",
            ColumnKind::Signal | ColumnKind::Verdict => "word",
        }
    }

    fn heading(&self, page: &mut Markup) {
        let span = self.span().to_string();
        let attributes = [("scope", "col"), ("class", self.class()), ("colspan", span.as_str())];
        page.element("th", &attributes[..if self.uncertain { 3 } else { 2 }], |page| {
            inline::words(page, &self.column.heading);
            if let Some(symbol) = self.column.unit.map(|u| u.symbol()).filter(|s| !s.is_empty()) {
                page.text(" ");
                page.element("span", &[("class", "unit")], |page| page.text(symbol));
            }
        });
    }
}

fn write_row(page: &mut Markup, row: &Row, shapes: &[Shape], decimal_mark: char) {
    if row.group {
        let span = shapes.iter().map(Shape::span).sum::<usize>().to_string();
        let heading = [("scope", "rowgroup"), ("colspan", span.as_str())];
        return page.element("tr", &[("class", "group")], |page| {
            page.element("th", &heading, |page| {
                let filled = row.cells.iter().filter(|cell| **cell != Cell::Empty);
                for (n, cell) in filled.enumerate() {
                    page.text(if n > 0 { " " } else { "" });
                    content(page, cell, decimal_mark);
                }
            });
        });
    }
    page.element("tr", &[], |page| {
        for (index, shape) in shapes.iter().enumerate() {
            match row.cells.get(index).unwrap_or(&Cell::Empty) {
                Cell::Number(number) => write_number(page, number, shape, decimal_mark),
                other => write_cell(page, other, shape, decimal_mark),
            }
        }
    });
}

fn write_cell(page: &mut Markup, cell: &Cell, shape: &Shape, decimal_mark: char) {
    let long = matches!(cell, Cell::Text(text) if text.chars().count() > LONGEST_NAME);
    let class = if long && shape.column.kind == ColumnKind::Name { "text" } else { shape.class() };
    let span = shape.span().to_string();
    let attributes = [("class", class), ("colspan", span.as_str())];
    let attributes = &attributes[..if shape.uncertain { 2 } else { 1 }];
    if shape.first && shape.column.kind == ColumnKind::Name {
        let attributes = [&[("scope", "row")], attributes].concat();
        page.element("th", &attributes, |page| content(page, cell, decimal_mark));
    } else {
        page.element("td", attributes, |page| content(page, cell, decimal_mark));
    }
}

fn content(page: &mut Markup, cell: &Cell, decimal_mark: char) {
    match cell {
        Cell::Empty => {}
        Cell::Text(text) => inline::words(page, text),
        Cell::Rich(text) => inline::write(page, text),
        Cell::Number(number) => page.text(&digits(number.value, number.decimals, decimal_mark)),
        Cell::Signal(signal) => mark::signal(page, *signal),
        Cell::Verdict(verdict) => page.element("span", &[("class", verdict.name())], |page| page.text(verdict.name())),
    }
}

/// The number with blanks for the decimals it lacks, its uncertainty in a cell of its own, its verdict as hidden text.
fn write_number(page: &mut Markup, number: &Number, shape: &Shape, decimal_mark: char) {
    let lacks = usize::from(shape.decimals - number.decimals.min(shape.decimals));
    let mark = if number.decimals == 0 && lacks > 0 { "\u{2008}" } else { "" };
    let pad = format!("{mark}{}", "\u{2007}".repeat(lacks));
    let class = match number.verdict {
        Some(Verdict::Fail) => "number fail",
        Some(Verdict::Undecided) => "number undecided",
        Some(Verdict::Pass) | None => "number",
    };
    let source = number.cell.as_ref().map(ToString::to_string).unwrap_or_default();
    let mut attributes = vec![("class", class)];
    attributes.extend((!pad.is_empty()).then_some(("data-pad", pad.as_str())));
    attributes.extend((!source.is_empty()).then_some(("title", source.as_str())));
    page.element("td", &attributes, |page| {
        let exact = number.value.to_string();
        page.element("data", &[("value", &exact)], |page| page.text(&digits(number.value, number.decimals, decimal_mark)));
        if let Some(verdict) = number.verdict.filter(|v| *v != Verdict::Pass) {
            page.element("span", &[("class", "spoken")], |page| page.text(&format!(" {}", verdict.name())));
        }
    });
    if shape.uncertain {
        page.element("td", &[("class", "uncertainty")], |page| {
            if let Some(uncertainty) = number.uncertainty {
                page.text(&format!("± {}", digits(uncertainty, number.decimals, decimal_mark)));
            }
        });
    }
}

/// A number as printed: so many decimals, the language's decimal mark, a true minus sign.
fn digits(value: f64, decimals: u8, decimal_mark: char) -> String {
    if !value.is_finite() {
        return not_finite(value).to_owned();
    }
    let printed = format!("{value:.0$}", usize::from(decimals));
    let magnitude = printed.trim_start_matches('-').replace('.', &decimal_mark.to_string());
    let negative = printed.starts_with('-') && magnitude.chars().any(|c| c.is_ascii_digit() && c != '0');
    if negative { format!("−{magnitude}") } else { magnitude }
}
