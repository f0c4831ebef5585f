//! Compound files (MS-CFB): the file system in a file that xls workbooks are kept in, and workbooks under a password.

use super::bytes::{u16_at, u32_at};
use crate::intake::Refusal;
use std::collections::BTreeMap;

/// Sector numbers from here on are marks, not sectors.
const MARKS: u32 = 0xffff_fffa;
/// Of a stream below this length the sectors are the small ones.
const SMALL: u32 = 4096;
const SMALL_SECTOR: usize = 64;
const ENTRY: usize = 128;

/// A compound file.
pub struct Compound<'a> {
    bytes: &'a [u8],
    sector: usize,
    fat: Vec<u32>,
    small_fat: Vec<u32>,
    small: Vec<u8>,
    streams: BTreeMap<String, Stream>,
}

#[derive(Clone, Copy)]
struct Stream {
    start: u32,
    length: u32,
}

impl<'a> Compound<'a> {
    /// Opens a compound file.
    ///
    /// # Errors
    /// Its tables are broken.
    pub fn open(bytes: &'a [u8]) -> Result<Self, Refusal> {
        Self::tables(bytes).ok_or_else(|| Refusal::Damaged("its table of contents is broken; the file may be incomplete".to_owned()))
    }

    fn tables(bytes: &'a [u8]) -> Option<Self> {
        let sector = match u16_at(bytes, 30)? {
            9 => 512,
            12 => 4096,
            _ => return None,
        };
        let mut file = Self { bytes, sector, fat: Vec::new(), small_fat: Vec::new(), small: Vec::new(), streams: BTreeMap::new() };
        file.fat = file.allocation()?;
        let directory = file.chain(u32_at(bytes, 48)?, usize::MAX)?;
        let entries: Vec<&[u8]> = directory.chunks_exact(ENTRY).collect();
        let root = entries.first()?;
        file.streams = streams(&entries, u32_at(root, 76)?);
        if u32_at(bytes, 64)? > 0 {
            let table = file.chain(u32_at(bytes, 60)?, usize::MAX)?;
            file.small_fat = table.chunks_exact(4).filter_map(|id| u32_at(id, 0)).collect();
            file.small = file.chain(u32_at(root, 116)?, u32_at(root, 120)? as usize)?;
        }
        Some(file)
    }

    /// Whether there is a stream of that name at the top.
    pub fn has(&self, name: &str) -> bool {
        self.streams.contains_key(&name.to_lowercase())
    }

    /// A stream at the top, if there is one of that name.
    ///
    /// # Errors
    /// The file ends before it.
    pub fn stream(&self, name: &str) -> Result<Option<Vec<u8>>, Refusal> {
        let Some(stream) = self.streams.get(&name.to_lowercase()) else { return Ok(None) };
        let length = stream.length as usize;
        let bytes = if stream.length < SMALL { self.small_chain(stream.start, length) } else { self.chain(stream.start, length) };
        match bytes {
            Some(bytes) if bytes.len() == length => Ok(Some(bytes)),
            _ => Err(Refusal::Damaged(format!("the file ends in the middle of its stream {name}"))),
        }
    }

    /// The allocation table: for each sector the next one. Its own sectors are listed in the header and in a chain of further lists.
    fn allocation(&self) -> Option<Vec<u32>> {
        let mut lists: Vec<u32> = (0..109).map_while(|i| u32_at(self.bytes, 76 + 4 * i)).collect();
        let mut next = u32_at(self.bytes, 68)?;
        let per_list = self.sector / 4 - 1;
        for _ in 0..self.sectors() {
            if next >= MARKS {
                break;
            }
            let list = self.sector(next)?;
            lists.extend((0..per_list).map_while(|i| u32_at(list, 4 * i)));
            next = u32_at(list, 4 * per_list)?;
        }
        let mut fat = Vec::new();
        // A sector listed over and over would make a table longer than the file has sectors.
        for id in lists.into_iter().filter(|id| *id < MARKS).take(self.sectors() * 4 / self.sector + 1) {
            fat.extend(self.sector(id)?.chunks_exact(4).filter_map(|id| u32_at(id, 0)));
        }
        Some(fat)
    }

    /// At most so many bytes of a chain of sectors. A chain that comes back to itself ends when it is as long as the file.
    fn chain(&self, start: u32, length: usize) -> Option<Vec<u8>> {
        let mut bytes = Vec::new();
        let mut id = start;
        while id < MARKS && bytes.len() < length {
            if bytes.len() > self.bytes.len() {
                return None;
            }
            bytes.extend_from_slice(self.sector(id)?);
            id = *self.fat.get(id as usize)?;
        }
        bytes.truncate(length);
        Some(bytes)
    }

    fn small_chain(&self, start: u32, length: usize) -> Option<Vec<u8>> {
        let mut bytes = Vec::new();
        let mut id = start;
        while id < MARKS && bytes.len() < length {
            let at = (id as usize).checked_mul(SMALL_SECTOR)?;
            bytes.extend_from_slice(cut(&self.small, at, SMALL_SECTOR)?);
            id = *self.small_fat.get(id as usize)?;
        }
        bytes.truncate(length);
        Some(bytes)
    }

    fn sector(&self, id: u32) -> Option<&'a [u8]> {
        cut(self.bytes, (id as usize).checked_add(1)?.checked_mul(self.sector)?, self.sector)
    }

    fn sectors(&self) -> usize {
        self.bytes.len() / self.sector
    }
}

/// A sector, never empty; the last one of a file may be cut short.
fn cut(bytes: &[u8], at: usize, length: usize) -> Option<&[u8]> {
    bytes.get(at..at.saturating_add(length).min(bytes.len())).filter(|sector| !sector.is_empty())
}

/// The streams at the top: the directory is a tree of names from the root's child on, and what lies deeper is of embedded objects.
fn streams(entries: &[&[u8]], first: u32) -> BTreeMap<String, Stream> {
    let mut streams = BTreeMap::new();
    let mut seen = vec![false; entries.len()];
    let mut open = vec![first];
    while let Some(id) = open.pop() {
        let Some((entry, seen)) = entries.get(id as usize).zip(seen.get_mut(id as usize)) else { continue };
        if std::mem::replace(seen, true) {
            continue;
        }
        open.extend([68, 72].iter().filter_map(|at| u32_at(entry, *at)));
        if let (Some(2), Some(start), Some(length)) = (entry.get(66), u32_at(entry, 116), u32_at(entry, 120)) {
            streams.insert(name(entry).to_lowercase(), Stream { start, length });
        }
    }
    streams
}

fn name(entry: &[u8]) -> String {
    let units: Vec<u16> = (0..32).filter_map(|i| u16_at(entry, 2 * i)).take_while(|unit| *unit != 0).collect();
    String::from_utf16_lossy(&units)
}
