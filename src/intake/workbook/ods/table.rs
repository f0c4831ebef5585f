//! A table of an OpenDocument spreadsheet: its cells with their repetitions, hidden rows and columns, spanned cells.

use super::super::bounds::{Budget, COLUMNS, ROWS};
use super::super::draft::Draft;
use super::super::serial;
use super::super::xml::{Node, Tag, Xml, local};
use super::paragraph;
use crate::intake::Refusal;
use crate::intake::grid::{Area, Sheet, Value};

/// Reads the table that was just opened; none if it is a kept copy of a table of another file.
///
/// # Errors
/// The part is broken or beyond a bound.
pub fn read(xml: &mut Xml, name: &str, hidden: bool, budget: &mut Budget) -> Result<Option<Sheet>, Refusal> {
    let mut table = Table { xml, budget, draft: Draft::new(name, hidden), row: 0, column: 0, copy: false };
    table.all()?;
    if table.copy { Ok(None) } else { table.draft.finish().map(Some) }
}

struct Table<'x, 'a> {
    xml: &'x mut Xml<'a>,
    budget: &'x mut Budget,
    draft: Draft,
    /// The next row; the next column's description.
    row: u32,
    column: u32,
    copy: bool,
}

/// A cell's tag.
#[derive(Default)]
struct Head {
    kind: String,
    value: String,
    formula: Option<String>,
    is_error: bool,
    repeated: u32,
    columns: u32,
    rows: u32,
}

impl Table<'_, '_> {
    fn all(&mut self) -> Result<(), Refusal> {
        let mut depth = 1;
        while depth > 0 {
            match self.xml.next()? {
                Node::Open(tag) => match tag.name() {
                    b"table-row" => {
                        let (repeated, hidden) = (repeated(&tag, "number-rows-repeated")?, is_hidden(&tag)?);
                        self.rows(repeated, hidden)?;
                    }
                    b"table-column" => {
                        let (repeated, hidden) = (repeated(&tag, "number-columns-repeated")?, is_hidden(&tag)?);
                        let next = self.column.saturating_add(repeated);
                        if hidden {
                            self.draft.hide_columns(self.column, next - 1)?;
                        }
                        self.column = next;
                        depth += 1;
                    }
                    b"table-source" => (self.copy, depth) = (true, depth + 1),
                    b"table-row-group"
                    | b"table-rows"
                    | b"table-header-rows"
                    | b"table-column-group"
                    | b"table-columns"
                    | b"table-header-columns" => depth += 1,
                    _ => self.xml.skip()?,
                },
                Node::Close => depth -= 1,
                Node::Text(_) => {}
                Node::End => break,
            }
        }
        Ok(())
    }

    /// One row element, which may stand for many rows: what it holds is put once and then copied, each copy against the budget.
    fn rows(&mut self, repeated: u32, hidden: bool) -> Result<(), Refusal> {
        let start = self.draft.len();
        self.cells()?;
        let first = self.row;
        self.row = first.saturating_add(repeated);
        if hidden {
            self.draft.hide_rows(first, self.row - 1)?;
        }
        if repeated == 1 || self.draft.len() == start {
            return Ok(());
        }
        let cells = self.draft.since(start).to_vec();
        for row in first + 1..self.row {
            for cell in &cells {
                self.draft.put(row, cell.col, cell.value.clone(), self.budget)?;
            }
        }
        Ok(())
    }

    fn cells(&mut self) -> Result<(), Refusal> {
        let mut col: u32 = 0;
        loop {
            match self.xml.next()? {
                Node::Open(tag) if matches!(tag.name(), b"table-cell" | b"covered-table-cell") => {
                    let head = Head::of(&tag)?;
                    let text = self.text()?;
                    self.span(col, &head)?;
                    let next = col.saturating_add(head.repeated);
                    if let Some(value) = head.into_value(text) {
                        for col in col..next {
                            self.draft.put(self.row, col, value.clone(), self.budget)?;
                        }
                    }
                    col = next;
                }
                Node::Open(_) => self.xml.skip()?,
                Node::Close | Node::End => return Ok(()),
                Node::Text(_) => {}
            }
        }
    }

    /// The paragraphs of the cell that was just opened, if it has any; nothing else in it is its text, above all no comment.
    fn text(&mut self) -> Result<Option<String>, Refusal> {
        let mut text = None;
        loop {
            match self.xml.next()? {
                Node::Open(tag) if tag.name() == b"p" => paragraph::append(self.xml, &mut text)?,
                Node::Open(_) => self.xml.skip()?,
                Node::Close | Node::End => return Ok(text),
                Node::Text(_) => {}
            }
        }
    }

    fn span(&mut self, col: u32, head: &Head) -> Result<(), Refusal> {
        let bottom = self.row.saturating_add(head.rows - 1).min(ROWS - 1);
        let right = col.saturating_add(head.columns - 1).min(COLUMNS - 1);
        if bottom < self.row || right < col {
            return Ok(());
        }
        self.draft.merge(Area { top: self.row, left: col, bottom, right }, self.budget)
    }
}

impl Head {
    fn of(tag: &Tag) -> Result<Self, Refusal> {
        let mut head = Self { repeated: 1, columns: 1, rows: 1, ..Self::default() };
        tag.each(|key, value| match local(key) {
            b"value-type" if key.starts_with(b"calcext:") => head.is_error = value == "error",
            b"value-type" => head.kind = value.into_owned(),
            b"value" | b"date-value" | b"time-value" | b"boolean-value" | b"string-value" => head.value = value.into_owned(),
            b"formula" => head.formula = Some(shown(&value)),
            b"number-columns-repeated" => head.repeated = count(&value),
            b"number-columns-spanned" => head.columns = count(&value),
            b"number-rows-spanned" => head.rows = count(&value),
            _ => {}
        })?;
        Ok(head)
    }

    /// The value, given the text shown. A formula that was never computed shows none, one whose result is no text an empty one.
    fn into_value(self, text: Option<String>) -> Option<Value> {
        if text.is_none() && matches!(self.kind.as_str(), "" | "void") {
            return self.formula.map(Value::NoResult);
        }
        let text = text.unwrap_or_default();
        if self.is_error || (self.formula.is_some() && is_error(&text)) {
            return Some(Value::Error(text));
        }
        let plain = |text: String| (!text.is_empty()).then_some(Value::Text(text));
        match self.kind.as_str() {
            // Some writers give the result of a comparison as a number that is shown as a word.
            "float" if text == "TRUE" || text == "FALSE" => Some(Value::Logical(text == "TRUE")),
            "float" | "percentage" | "currency" => match self.value.parse::<f64>() {
                Ok(number) if number.is_finite() => Some(Value::Number(number)),
                _ => plain(text),
            },
            "date" => serial::of_iso(&self.value).map(Value::DateTime).or_else(|| plain(text)),
            "time" => serial::of_duration(&self.value).map(Value::DateTime).or_else(|| plain(text)),
            "boolean" => Some(Value::Logical(self.value == "true")),
            "string" if !self.value.is_empty() => Some(Value::Text(self.value)),
            _ => plain(text),
        }
    }
}

/// A formula without the prefix that names its language: `of:=SUM([.A1:.A3])`.
fn shown(formula: &str) -> String {
    match formula.find('=') {
        Some(at) if formula[..at].ends_with(':') => formula[at..].to_owned(),
        _ => formula.to_owned(),
    }
}

/// The errors a formula shows as text.
fn is_error(text: &str) -> bool {
    matches!(text, "#DIV/0!" | "#N/A" | "#NAME?" | "#NULL!" | "#NUM!" | "#REF!" | "#VALUE!") || text.starts_with("Err:")
}

fn repeated(tag: &Tag, name: &str) -> Result<u32, Refusal> {
    Ok(tag.get(name)?.map_or(1, |text| count(&text)))
}

fn count(text: &str) -> u32 {
    text.parse().unwrap_or(1).max(1)
}

fn is_hidden(tag: &Tag) -> Result<bool, Refusal> {
    Ok(tag.get("visibility")?.is_some_and(|v| v == "collapse" || v == "filter"))
}
