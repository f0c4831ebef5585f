//! XML as the workbook formats use it, read as a stream: no document type, no entities but the five of XML, bounded depth, and
//! no tag or run of text beyond a bound.

use super::archive::{Allowance, Part, damage};
use super::bounds::{DEEPEST, MOST_NAME, MOST_TOKEN};
use crate::intake::Refusal;
use quick_xml::events::{BytesStart, Event};
use quick_xml::{Reader, XmlVersion, escape};
use std::borrow::Cow;
use std::io::{self, BufRead, BufReader, Read};

/// A part read as XML.
pub struct Xml<'a> {
    reader: Reader<Metered<'a>>,
    buffer: Vec<u8>,
    part: &'a str,
    allowance: &'a Allowance,
    depth: usize,
}

/// One step through the XML.
pub enum Node<'b> {
    /// A start tag; an empty element is a start tag and an end tag.
    Open(Tag<'b>),
    /// An end tag.
    Close,
    /// Text, references resolved; empty for comments and the like. One run of text may come in several pieces.
    Text(Cow<'b, str>),
    /// No more.
    End,
}

/// A start tag.
pub struct Tag<'b> {
    start: BytesStart<'b>,
    part: &'b str,
    allowance: &'b Allowance,
}

impl<'a> Xml<'a> {
    /// Begins with a part; `name` is for messages.
    pub fn new(name: &'a str, part: Part<'a>) -> Self {
        let allowance = part.allowance();
        let mut reader = Reader::from_reader(Metered { inner: BufReader::with_capacity(1 << 16, part), token: 0 });
        reader.config_mut().expand_empty_elements = true;
        Self { reader, buffer: Vec::new(), part: name, allowance, depth: 0 }
    }

    /// The next step. Before [`Node::End`] comes, the part has been read to its end and its checksum has been compared.
    ///
    /// # Errors
    /// The XML is broken, ends early, or is of a kind no workbook holds.
    pub fn next(&mut self) -> Result<Node<'_>, Refusal> {
        let (part, allowance) = (self.part, self.allowance);
        allowance.step()?;
        self.buffer.clear();
        self.reader.get_mut().token = 0;
        match self.reader.read_event_into(&mut self.buffer).map_err(|e| refusal(part, &e))? {
            Event::Start(start) => {
                self.depth += 1;
                if self.depth > DEEPEST {
                    return Err(Refusal::TooLarge(format!("{part} nests elements more than {DEEPEST} deep")));
                }
                Ok(Node::Open(Tag { start, part, allowance }))
            }
            Event::End(_) => {
                self.depth -= 1;
                Ok(Node::Close)
            }
            Event::Text(text) => Ok(Node::Text(text.xml10_content().map_err(|_| not_utf8(part))?)),
            Event::CData(text) => Ok(Node::Text(text.xml10_content().map_err(|_| not_utf8(part))?)),
            Event::GeneralRef(reference) => {
                let name = reference.decode().map_err(|_| not_utf8(part))?;
                let text = match reference.resolve_char_ref().map_err(|e| refusal(part, &e))? {
                    Some(c) => c.to_string(),
                    None => escape::resolve_xml_entity(&name).ok_or_else(|| entity(part, &name))?.to_owned(),
                };
                Ok(Node::Text(text.into()))
            }
            Event::DocType(_) => Err(Refusal::Damaged(format!("{part} declares a document type of its own, which no workbook does"))),
            Event::Comment(_) | Event::Decl(_) | Event::PI(_) | Event::Empty(_) => Ok(Node::Text("".into())),
            Event::Eof if self.depth > 0 => Err(Refusal::Damaged(format!("{part} ends in the middle"))),
            Event::Eof => Ok(Node::End),
        }
    }

    /// Goes past the end of the element that was just opened.
    ///
    /// # Errors
    /// As [`Xml::next`].
    pub fn skip(&mut self) -> Result<(), Refusal> {
        let outside = self.depth - 1;
        while self.depth > outside {
            self.next()?;
        }
        Ok(())
    }
}

impl Tag<'_> {
    /// Its name without a prefix. The formats use no two elements that differ in the prefix alone where it matters.
    pub fn name(&self) -> &[u8] {
        self.start.local_name().into_inner()
    }

    /// Gives each attribute, by its name as written, to a function.
    ///
    /// # Errors
    /// An attribute is malformed or holds an entity.
    pub fn each(&self, mut take: impl FnMut(&[u8], Cow<str>)) -> Result<(), Refusal> {
        for attribute in self.start.attributes().with_checks(false) {
            self.allowance.step()?;
            let attribute = attribute.map_err(|e| Refusal::Damaged(format!("{}: {e}", self.part)))?;
            let value = attribute.normalized_value(XmlVersion::Implicit1_0).map_err(|e| refusal(self.part, &e))?;
            take(attribute.key.into_inner(), value);
        }
        Ok(())
    }

    /// The value of an attribute that names or numbers something, by its name without a prefix.
    ///
    /// # Errors
    /// As [`Tag::each`], or it is too long for a name.
    pub fn get(&self, name: &str) -> Result<Option<String>, Refusal> {
        let mut found = None;
        self.each(|key, value| {
            if found.is_none() && local(key) == name.as_bytes() {
                found = Some(value.into_owned());
            }
        })?;
        match found {
            Some(value) if value.len() > MOST_NAME => {
                Err(Refusal::TooLarge(format!("{} holds a name of more than {MOST_NAME} bytes", self.part)))
            }
            found => Ok(found),
        }
    }
}

/// A name without its prefix.
pub fn local(name: &[u8]) -> &[u8] {
    name.iter().position(|b| *b == b':').map_or(name, |colon| &name[colon + 1..])
}

/// A reader that lets only so many bytes through for one token.
struct Metered<'a> {
    inner: BufReader<Part<'a>>,
    token: usize,
}

impl Read for Metered<'_> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        self.inner.read(buffer)
    }
}

impl BufRead for Metered<'_> {
    fn fill_buf(&mut self) -> io::Result<&[u8]> {
        if self.token > MOST_TOKEN { Err(io::ErrorKind::OutOfMemory.into()) } else { self.inner.fill_buf() }
    }

    fn consume(&mut self, n: usize) {
        self.token += n;
        self.inner.consume(n);
    }
}

fn refusal(part: &str, error: &quick_xml::Error) -> Refusal {
    match error {
        quick_xml::Error::Io(e) => damage(part, e),
        quick_xml::Error::Escape(escape::EscapeError::UnrecognizedEntity(_, name)) => entity(part, name),
        other => Refusal::Damaged(format!("{part}: {other}")),
    }
}

fn entity(part: &str, name: &str) -> Refusal {
    Refusal::Damaged(format!("{part} uses an entity of its own (&{name};), which no workbook does"))
}

fn not_utf8(part: &str) -> Refusal {
    Refusal::Damaged(format!("{part} is not UTF-8 text"))
}
