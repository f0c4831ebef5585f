//! A worksheet part: its cells, hidden rows and columns, merged areas.

use super::super::archive::Archive;
use super::super::bounds::{Budget, MOST_ENTRIES, add, at_most};
use super::super::draft::Draft;
use super::super::relations::Entry;
use super::super::serial::{self, Kind};
use super::super::texts::Texts;
use super::super::xml::{Node, Tag, Xml};
use super::is_true;
use super::strings::{rich, unescape};
use crate::intake::Refusal;
use crate::intake::grid::{Area, Sheet, Value};
use std::collections::BTreeMap;

/// What cells refer to.
pub struct Context<'a> {
    /// Kind of number of each cell format.
    pub kinds: &'a [Kind],
    /// Shared texts.
    pub texts: &'a Texts,
    /// The workbook counts days from 1904.
    pub from_1904: bool,
}

/// Reads one worksheet.
///
/// # Errors
/// The part is broken, refers to what is not there, or is beyond a bound.
pub fn read(archive: &Archive, part: &str, entry: &Entry, context: &Context, budget: &mut Budget) -> Result<Sheet, Refusal> {
    let xml = super::open(archive, part)?;
    let draft = Draft::new(&entry.name, entry.hidden);
    let mut reading = Reading { xml, draft, context, budget, part, row: 0, col: 0, masters: BTreeMap::new() };
    reading.all()?;
    reading.draft.finish()
}

struct Reading<'a> {
    xml: Xml<'a>,
    draft: Draft,
    context: &'a Context<'a>,
    budget: &'a mut Budget,
    part: &'a str,
    /// Where the next row and cell are that don't say it themselves.
    row: u32,
    col: u32,
    /// Shared formulas, by index: the text stands at the first of their cells only.
    masters: BTreeMap<u32, String>,
}

/// A cell's tag.
#[derive(Default)]
struct Head {
    style: usize,
    kind: Type,
}

/// A cell's declared type.
#[derive(Clone, Copy, Default)]
enum Type {
    #[default]
    Number,
    Shared,
    Text,
    Logical,
    Error,
    Date,
}

/// A cell's formula.
struct Formula {
    shared: Option<u32>,
    text: String,
}

impl Reading<'_> {
    fn all(&mut self) -> Result<(), Refusal> {
        loop {
            match self.xml.next()? {
                Node::Open(tag) => match tag.name() {
                    b"col" => {
                        let [first, last] = ["min", "max"].map(|name| tag.get(name));
                        let [first, last] = [first?, last?].map(|n| n.and_then(|n| n.parse::<u32>().ok()?.checked_sub(1)));
                        if let (true, Some(first), Some(last)) = (is_hidden(&tag)?, first, last) {
                            self.draft.hide_columns(first, last)?;
                        }
                    }
                    b"sheetData" => self.rows()?,
                    b"mergeCell" => {
                        if let Some(area) = tag.get("ref")?.as_deref().and_then(area) {
                            self.draft.merge(area, self.budget)?;
                        }
                    }
                    // Extensions hold parts of cells' names without being cells.
                    b"extLst" => self.xml.skip()?,
                    _ => {}
                },
                Node::End => return Ok(()),
                _ => {}
            }
        }
    }

    fn rows(&mut self) -> Result<(), Refusal> {
        loop {
            match self.xml.next()? {
                Node::Open(tag) if tag.name() == b"row" => {
                    if let Some(number) = tag.get("r")? {
                        let row = number.parse::<u32>().ok().and_then(|n| n.checked_sub(1));
                        self.row = row.ok_or_else(|| damaged(self.part, "a row numbered", &number))?;
                    }
                    if is_hidden(&tag)? {
                        self.draft.hide_rows(self.row, self.row)?;
                    }
                    self.cells()?;
                    self.row = self.row.saturating_add(1);
                }
                Node::Open(_) => self.xml.skip()?,
                Node::Close | Node::End => return Ok(()),
                Node::Text(_) => {}
            }
        }
    }

    fn cells(&mut self) -> Result<(), Refusal> {
        self.col = 0;
        loop {
            match self.xml.next()? {
                Node::Open(tag) if tag.name() == b"c" => {
                    let mut head = Head::default();
                    let mut place = Ok(None);
                    tag.each(|key, value| match key {
                        b"r" => place = reference(&value).map(Some).ok_or_else(|| damaged(self.part, "a cell named", &value)),
                        b"s" => head.style = value.parse().unwrap_or(0),
                        b"t" => head.kind = Type::of(&value),
                        _ => {}
                    })?;
                    if let Some((row, col)) = place? {
                        (self.row, self.col) = (row, col);
                    }
                    self.cell(&head)?;
                    self.col = self.col.saturating_add(1);
                }
                Node::Open(_) => self.xml.skip()?,
                Node::Close | Node::End => return Ok(()),
                Node::Text(_) => {}
            }
        }
    }

    fn cell(&mut self, head: &Head) -> Result<(), Refusal> {
        let mut stored = None;
        let mut inline = None;
        let mut formula = None;
        loop {
            match self.xml.next()? {
                Node::Open(tag) => match tag.name() {
                    b"v" => stored = Some(text(&mut self.xml)?),
                    b"is" => inline = Some(rich(&mut self.xml)?),
                    b"f" => {
                        let shared = tag.get("si")?.and_then(|index| index.parse().ok());
                        formula = Some(Formula { shared, text: text(&mut self.xml)? });
                    }
                    _ => self.xml.skip()?,
                },
                Node::Close | Node::End => break,
                Node::Text(_) => {}
            }
        }
        let stored = stored.filter(|text| !text.is_empty() || matches!(head.kind, Type::Text));
        let formula = formula.map(|f| self.whole(f)).transpose()?;
        let value = match (stored, inline, formula) {
            (_, Some(text), _) => Value::Text(text),
            (Some(text), None, _) => self.value(head, text)?,
            (None, None, Some(formula)) => Value::NoResult(formula),
            (None, None, None) => return Ok(()),
        };
        self.draft.put(self.row, self.col, value, self.budget)
    }

    /// A formula as it is shown, with the text of the one it shares.
    fn whole(&mut self, formula: Formula) -> Result<String, Refusal> {
        let Formula { shared, text } = formula;
        match shared {
            Some(index) if !text.is_empty() => {
                self.budget.text(text.len())?;
                self.masters.insert(index, text.clone());
            }
            Some(index) if text.is_empty() => {
                return Ok(format!("={}", self.masters.get(&index).map_or("", String::as_str)));
            }
            _ => {}
        }
        at_most(self.masters.len(), MOST_ENTRIES, "shared formulas on one sheet")?;
        Ok(format!("={text}"))
    }

    fn value(&self, head: &Head, mut text: String) -> Result<Value, Refusal> {
        Ok(match head.kind {
            Type::Shared => {
                let number = text.trim().parse().map_err(|_| damaged(self.part, "a cell with the shared text", &text))?;
                Value::Text(self.context.texts.get(number)?.to_owned())
            }
            Type::Text => {
                unescape(&mut text);
                Value::Text(text)
            }
            Type::Logical => Value::Logical(is_true(text.trim())),
            Type::Error => Value::Error(text),
            Type::Date => serial::of_iso(&text).map_or(Value::Text(text), Value::DateTime),
            Type::Number => match text.trim().parse::<f64>() {
                Ok(number) if number.is_finite() => {
                    self.context.kinds.get(head.style).copied().unwrap_or(Kind::Plain).value(number, self.context.from_1904)
                }
                _ => Value::Text(text),
            },
        })
    }
}

impl Type {
    fn of(name: &str) -> Self {
        match name {
            "s" => Self::Shared,
            "str" | "inlineStr" => Self::Text,
            "b" => Self::Logical,
            "e" => Self::Error,
            "d" => Self::Date,
            _ => Self::Number,
        }
    }
}

fn is_hidden(tag: &Tag) -> Result<bool, Refusal> {
    Ok(tag.get("hidden")?.is_some_and(|hidden| is_true(&hidden)))
}

/// The text of the element that was just opened.
fn text(xml: &mut Xml) -> Result<String, Refusal> {
    let mut text = String::new();
    loop {
        match xml.next()? {
            Node::Text(piece) => add(&mut text, &piece)?,
            Node::Open(_) => xml.skip()?,
            Node::Close | Node::End => return Ok(text),
        }
    }
}

/// `B3` as row and column from 0. What lies outside every sheet is told when the cell is put.
fn reference(text: &str) -> Option<(u32, u32)> {
    let digits = text.find(|c: char| c.is_ascii_digit())?;
    let (letters, digits) = text.split_at(digits);
    let col = letters.bytes().try_fold(0u32, |n, b| {
        let digit = b.is_ascii_alphabetic().then(|| u32::from(b.to_ascii_uppercase() - b'A') + 1)?;
        n.checked_mul(26)?.checked_add(digit)
    })?;
    let row: u32 = digits.parse().ok()?;
    Some((row.checked_sub(1)?, col.checked_sub(1)?))
}

/// `A1:C3`.
fn area(text: &str) -> Option<Area> {
    let (first, last) = text.split_once(':')?;
    let ((top, left), (bottom, right)) = (reference(first)?, reference(last)?);
    (top <= bottom && left <= right).then_some(Area { top, left, bottom, right })
}

fn damaged(part: &str, what: &str, found: &str) -> Refusal {
    let found: String = found.chars().take(20).collect();
    Refusal::Damaged(format!("{part} holds {what} {found}, which there can't be"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn references_are_read() {
        assert_eq!(reference("A1"), Some((0, 0)));
        assert_eq!(reference("XFD1048576"), Some((1_048_575, 16_383)));
        for bad in ["", "A", "1", "A0", "1A", "$A$1", "A1B", "ZZZZZZZZZZ1", "A99999999999", "é1"] {
            assert_eq!(reference(bad), None, "{bad}");
        }
    }
}
