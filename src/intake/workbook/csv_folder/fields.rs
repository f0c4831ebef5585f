//! The fields of a csv file (RFC 4180), with the liberties that spreadsheets take: comma, semicolon or tab; any line ending; quotation
//! marks inside a field that did not begin with one.

use std::borrow::Cow;
use std::collections::BTreeMap;

/// Lines looked at to find the delimiter.
const SAMPLE: usize = 50;

/// The fields of a text, in order.
pub struct Fields<'a> {
    rest: &'a str,
    delimiter: char,
    is_done: bool,
}

/// One field.
pub struct Field<'a> {
    /// Its text, outer quotation marks taken off.
    pub text: Cow<'a, str>,
    /// It began with a quotation mark that nothing closes; the mark was taken as part of the text.
    pub is_unclosed: bool,
    /// What follows.
    pub ending: Ending,
}

/// What follows a field.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ending {
    /// Another field of the row.
    Field,
    /// The next row, or nothing.
    Record,
}

impl<'a> Fields<'a> {
    /// Of a text.
    pub fn new(text: &'a str, delimiter: char) -> Self {
        Self { rest: text, delimiter, is_done: text.is_empty() }
    }

    /// The quoted text at the start of the rest, and the length it takes; none if it is never closed. A mark that would close it on
    /// another line but is followed by more text belongs to that line: two inch marks at the starts of fields are no quotation.
    fn quoted(&self) -> Option<(Cow<'a, str>, usize)> {
        let mut rest = self.rest.strip_prefix('"')?;
        let mut text = Cow::Borrowed("");
        loop {
            let (before, after) = rest.split_once('"')?;
            text += before;
            if let Some(more) = after.strip_prefix('"') {
                text += "\"";
                rest = more;
                continue;
            }
            let is_end = after[..self.end(after)].trim().is_empty();
            return (is_end || !text.contains(['\n', '\r'])).then(|| (text, self.rest.len() - after.len()));
        }
    }

    /// Where an unquoted text ends.
    fn end(&self, text: &str) -> usize {
        text.find([self.delimiter, '\n', '\r']).unwrap_or(text.len())
    }
}

impl<'a> Iterator for Fields<'a> {
    type Item = Field<'a>;

    fn next(&mut self) -> Option<Field<'a>> {
        if self.is_done {
            return None;
        }
        let quoted = self.quoted();
        let is_unclosed = quoted.is_none() && self.rest.starts_with('"');
        let (mut text, length) = quoted.unwrap_or_default();
        let after = &self.rest[length..];
        let end = self.end(after);
        text += &after[..end];
        let (ending, mark) = match after[end..].chars().next() {
            Some(c) if c == self.delimiter => (Ending::Field, c.len_utf8()),
            Some('\r') if after[end..].starts_with("\r\n") => (Ending::Record, 2),
            Some(_) => (Ending::Record, 1),
            None => (Ending::Record, 0),
        };
        self.rest = &after[end + mark..];
        self.is_done = mark == 0 || (ending == Ending::Record && self.rest.is_empty());
        Some(Field { text, is_unclosed, ending })
    }
}

/// The delimiter of a text, and the text it holds for: without the line `sep=;` that some spreadsheets begin with.
///
/// The best is the one by which most rows have more than one field, then most rows the same number of them, then the most fields: so a
/// decimal comma in every row does not beat the semicolon, which stands in the header too.
pub fn delimiter(text: &str) -> (char, &str) {
    if let Some(stated) = text.strip_prefix("sep=").and_then(|rest| rest.chars().next()) {
        let rest = text.split_once('\n').map_or("", |(_, rest)| rest);
        return (stated, rest);
    }
    let best = [',', ';', '\t'].into_iter().rev().max_by_key(|delimiter| fit(text, *delimiter));
    (best.unwrap_or(','), text)
}

/// How well a delimiter fits: rows of more than one field, rows of the commonest number of fields, that number.
fn fit(text: &str, delimiter: char) -> (usize, usize, usize) {
    let mut lengths = BTreeMap::new();
    let mut length = 0;
    let mut rows = 0;
    for field in Fields::new(text, delimiter) {
        length += 1;
        if field.ending == Ending::Record {
            *lengths.entry(length).or_insert(0) += usize::from(length > 1);
            (length, rows) = (0, rows + 1);
        }
        if rows == SAMPLE {
            break;
        }
    }
    let commonest = lengths.iter().map(|(length, rows)| (*rows, *length)).max().unwrap_or_default();
    (lengths.values().sum(), commonest.0, commonest.1)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn split(text: &str, delimiter: char) -> Vec<Vec<String>> {
        let mut rows = vec![vec![]];
        for field in Fields::new(text, delimiter) {
            rows.last_mut().unwrap().push(field.text.into_owned());
            if field.ending == Ending::Record {
                rows.push(vec![]);
            }
        }
        rows.pop();
        rows
    }

    #[test]
    fn fields_are_split_and_unquoted() {
        assert_eq!(split("a,b\nc,d\n", ','), [["a", "b"], ["c", "d"]]);
        assert_eq!(split("a,\r\n\r\n,d", ','), [vec!["a", ""], vec![""], vec!["", "d"]]);
        assert_eq!(split("\"a,\"\"b\"\"\",\"c\nd\"\r", ','), [["a,\"b\"", "c\nd"]]);
        assert_eq!(split("2\" conduit,\"2\"x\" box\", \"q\"", ','), [["2\" conduit", "2x\" box\"", " \"q\""]]);
        assert!(split("", ',').is_empty());
    }

    #[test]
    fn a_quotation_mark_that_nothing_closes_is_text() {
        let fields: Vec<_> = Fields::new("a,\"b\nc,d", ',').map(|f| (f.text.into_owned(), f.is_unclosed)).collect();
        assert_eq!(fields, [("a".into(), false), ("\"b".into(), true), ("c".into(), false), ("d".into(), false)]);
        assert_eq!(split("\"2 inch,a\n\"3 inch,b", ','), [["\"2 inch", "a"], ["\"3 inch", "b"]]);
    }

    #[test]
    fn the_delimiter_is_found() {
        for (text, found) in [
            ("Location,L1-N,L2-N\n5/7a,119.6,120.2\n", ','),
            ("Location;L1-N;L2-N\n5/7a;119,6;120,2\n5/7b;119,4;120,3\n", ';'),
            ("Location\tL1-N\n5/7a\t119,6\n", '\t'),
            ("Item,Entry\nSite address,\"4 Quarry Lane; Alder Ferry\"\nRemarks,dry; calm\n", ','),
            ("Location\n5/7a\n", ','),
            ("sep=|\r\na|b,c\r\n", '|'),
        ] {
            assert_eq!(delimiter(text).0, found, "{text}");
        }
    }
}
