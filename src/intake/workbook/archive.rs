//! The zip package a workbook is kept in: its directory, and its parts as streams.
//!
//! Read here rather than by a library because a package from a stranger can lie in ways that libraries follow at a cost: hundreds
//! of false directories tried one after the other, counts that room is made for, parts that overlap or inflate without end. Here one
//! directory is believed, its entries are looked at and nothing is copied; a part is inflated as it is read, never held, and all
//! that was inflated is counted against one bound. Sizes and checksums are held against what really came.

use super::bounds::{MOST_INFLATED, MOST_PARTS, MOST_STEPS, at_most};
use super::bytes::{u16_at, u32_at};
use crate::intake::Refusal;
use flate2::Crc;
use flate2::bufread::DeflateDecoder;
use std::cell::Cell;
use std::collections::BTreeMap;
use std::io::{self, Read};

/// Signatures of the format's records (PKWARE APPNOTE 4.3.7, 4.3.12, 4.3.16).
const LOCAL: u32 = 0x0403_4b50;
const CENTRAL: u32 = 0x0201_4b50;
const END: u32 = 0x0605_4b50;
/// Length of the end record without its comment.
const END_LENGTH: usize = 22;

/// A zip package.
#[derive(Debug)]
pub struct Archive<'a> {
    bytes: &'a [u8],
    entries: BTreeMap<String, Entry>,
    allowance: Allowance,
}

/// What may still be read of a package, over all its parts.
#[derive(Debug)]
pub struct Allowance {
    bytes: Cell<u64>,
    steps: Cell<u32>,
}

impl Allowance {
    /// Takes one step through a part.
    ///
    /// # Errors
    /// There were too many.
    pub fn step(&self) -> Result<(), Refusal> {
        let left = self.steps.get().checked_sub(1);
        self.steps.set(left.ok_or_else(|| Refusal::TooLarge(format!("its parts hold more than {MOST_STEPS} pieces")))?);
        Ok(())
    }
}

#[derive(Clone, Copy, Debug)]
struct Entry {
    offset: u32,
    packed: u32,
    size: u32,
    crc: u32,
    method: u16,
    locked: bool,
}

impl<'a> Archive<'a> {
    /// Opens a package by the directory at its end.
    ///
    /// # Errors
    /// The directory is missing, broken, or lists too much.
    pub fn open(bytes: &'a [u8]) -> Result<Self, Refusal> {
        let end = end_record(bytes).ok_or_else(|| damaged("its end is missing; the file may not have been saved or copied completely"))?;
        let count = u16_at(bytes, end + 10).map_or(0, usize::from);
        at_most(count, MOST_PARTS, "parts")?;
        let mut at = u32_at(bytes, end + 16).map_or(0, |o| o as usize);
        let mut entries = BTreeMap::new();
        for _ in 0..count {
            let (name, entry, next) = entry(bytes, at).ok_or_else(|| damaged("its directory is broken"))?;
            entries.insert(name, entry);
            at = next;
        }
        Ok(Self { bytes, entries, allowance: Allowance { bytes: Cell::new(MOST_INFLATED), steps: Cell::new(MOST_STEPS) } })
    }

    /// Whether there is such a part. Names are compared as the formats ask: without regard to case.
    pub fn has(&self, name: &str) -> bool {
        self.entries.contains_key(&key(name))
    }

    /// A part as a stream, if there is one of that name.
    ///
    /// # Errors
    /// It is protected, not where the directory says, or compressed in a way the formats don't use.
    pub fn part(&self, name: &str) -> Result<Option<Part<'_>>, Refusal> {
        let Some(entry) = self.entries.get(&key(name)) else { return Ok(None) };
        if entry.locked {
            return Err(Refusal::Encrypted);
        }
        let packed = packed(self.bytes, entry).ok_or_else(|| damaged(&format!("{name} is not where its directory says")))?;
        let source = match entry.method {
            0 => Source::Stored(packed),
            8 => Source::Deflated(Box::new(DeflateDecoder::new(packed))),
            other => return Err(damaged(&format!("{name} is compressed by method {other}, which no workbook uses"))),
        };
        Ok(Some(Part { source, crc: Crc::new(), entry: *entry, came: 0, allowance: &self.allowance }))
    }

    /// A small part as a whole.
    ///
    /// # Errors
    /// As [`Archive::part`], or it is longer than `most`.
    pub fn whole(&self, name: &str, most: usize) -> Result<Option<Vec<u8>>, Refusal> {
        let Some(part) = self.part(name)? else { return Ok(None) };
        let mut bytes = Vec::new();
        part.take(most as u64 + 1).read_to_end(&mut bytes).map_err(|e| damage(name, &e))?;
        at_most(bytes.len(), most, &format!("bytes in {name}"))?;
        Ok(Some(bytes))
    }
}

/// A part of a package while it is read.
pub struct Part<'a> {
    source: Source<'a>,
    crc: Crc,
    entry: Entry,
    came: u64,
    allowance: &'a Allowance,
}

impl<'a> Part<'a> {
    /// What may still be read.
    pub fn allowance(&self) -> &'a Allowance {
        self.allowance
    }
}

enum Source<'a> {
    Stored(&'a [u8]),
    Deflated(Box<DeflateDecoder<&'a [u8]>>),
}

impl Read for Part<'_> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let n = match &mut self.source {
            Source::Stored(rest) => rest.read(buffer)?,
            Source::Deflated(decoder) => decoder.read(buffer)?,
        };
        self.came += n as u64;
        self.crc.update(&buffer[..n]);
        let left = self.allowance.bytes.get().checked_sub(n as u64);
        self.allowance.bytes.set(left.ok_or(io::ErrorKind::QuotaExceeded)?);
        let size = u64::from(self.entry.size);
        if self.came > size || (n == 0 && !buffer.is_empty() && self.came < size) {
            return Err(io::Error::new(io::ErrorKind::InvalidData, "its length is not the one stated"));
        }
        if n == 0 && !buffer.is_empty() && self.crc.sum() != self.entry.crc {
            return Err(io::Error::new(io::ErrorKind::InvalidData, "its checksum does not match"));
        }
        Ok(n)
    }
}

/// What an error while reading a part means.
pub fn damage(part: &str, error: &io::Error) -> Refusal {
    match error.kind() {
        io::ErrorKind::QuotaExceeded => Refusal::TooLarge(format!("it unpacks to more than {} MB", MOST_INFLATED >> 20)),
        io::ErrorKind::OutOfMemory => Refusal::TooLarge(format!("{part} holds a single piece of more than 1 MB")),
        _ => damaged(&format!("{part}: {error}")),
    }
}

fn damaged(what: &str) -> Refusal {
    Refusal::Damaged(what.to_owned())
}

/// A part's name as it is looked up: parts are named with `/`, without regard to case; some writers use `\`.
fn key(name: &str) -> String {
    name.trim_start_matches(['/', '\\']).replace('\\', "/").to_lowercase()
}

/// Where the end record begins: the last whose comment fits in the file. Bytes after it do no harm; mail and storage pad files.
fn end_record(bytes: &[u8]) -> Option<usize> {
    let last = bytes.len().checked_sub(END_LENGTH)?;
    let first = last.saturating_sub(usize::from(u16::MAX));
    let fits = |at: &usize| u16_at(bytes, at + 20).is_some_and(|comment| at + END_LENGTH + usize::from(comment) <= bytes.len());
    (first..=last).rev().filter(|at| u32_at(bytes, *at) == Some(END)).find(fits)
}

/// The entry of the directory at an offset, and where the next one begins.
fn entry(bytes: &[u8], at: usize) -> Option<(String, Entry, usize)> {
    if u32_at(bytes, at)? != CENTRAL {
        return None;
    }
    let [name, extra, comment] = [28, 30, 32].map(|field| u16_at(bytes, at + field).map(usize::from));
    let start = at + 46;
    let text = bytes.get(start..start + name?)?;
    let mut entry = Entry {
        locked: u16_at(bytes, at + 8)? & 1 != 0,
        method: u16_at(bytes, at + 10)?,
        crc: u32_at(bytes, at + 16)?,
        packed: u32_at(bytes, at + 20)?,
        size: u32_at(bytes, at + 24)?,
        offset: u32_at(bytes, at + 42)?,
    };
    entry.widen(bytes.get(start + name?..start + name? + extra?)?);
    Some((key(&String::from_utf8_lossy(text)), entry, start + name? + extra? + comment?))
}

impl Entry {
    /// Takes the fields that some writers keep in eight bytes behind the name, which then hold all ones (APPNOTE 4.5.3). No part that
    /// is read needs more than four of them.
    fn widen(&mut self, mut extra: &[u8]) {
        while let (Some(kind), Some(length)) = (u16_at(extra, 0), u16_at(extra, 2)) {
            let mut at = 4;
            for field in [&mut self.size, &mut self.packed, &mut self.offset].into_iter().filter(|f| kind == 1 && **f == u32::MAX) {
                *field = u32_at(extra, at).unwrap_or(u32::MAX);
                at += 8;
            }
            extra = extra.get(4 + usize::from(length)..).unwrap_or_default();
        }
    }
}

/// The packed bytes of an entry. The lengths before them are those of the local header, which may differ from the directory's.
fn packed<'a>(bytes: &'a [u8], entry: &Entry) -> Option<&'a [u8]> {
    let at = entry.offset as usize;
    if u32_at(bytes, at)? != LOCAL {
        return None;
    }
    let start = at + 30 + usize::from(u16_at(bytes, at + 26)?) + usize::from(u16_at(bytes, at + 28)?);
    bytes.get(start..start.checked_add(entry.packed as usize)?)
}
