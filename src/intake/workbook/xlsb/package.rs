//! A package of our own making: records written one after the other into parts that are stored as they are.
//!
//! What a library reads of a stranger's workbook stands in here, so that every length and count it meets is one that was counted.

use super::super::bounds::{MOST_KEPT, megabytes};
use crate::intake::Refusal;
use flate2::Crc;

/// Length of the header before a part, without its name.
const HEADER: usize = 30;

/// A package in the making.
#[derive(Default)]
pub struct Package {
    bytes: Vec<u8>,
    directory: Vec<u8>,
    parts: u16,
}

impl Package {
    /// Writes a part, by a function that puts records or bytes into it.
    ///
    /// # Errors
    /// The package is beyond its bound, or what the function refuses.
    pub fn part<T>(&mut self, name: &str, write: impl FnOnce(&mut Self) -> Result<T, Refusal>) -> Result<T, Refusal> {
        let header = self.bytes.len();
        self.bytes.resize(header + HEADER, 0);
        self.put(&[name.as_bytes()])?;
        let start = self.bytes.len();
        let written = write(self)?;
        let content = self.bytes.get(start..).unwrap_or_default();
        let mut crc = Crc::new();
        crc.update(content);
        let [length, name_length, offset] = [content.len(), name.len(), header].map(small);
        // Version, flags, method (stored), time and date; checksum, both lengths, the name's; nothing behind the name.
        let mut fields = vec![20, 0, 0, 0, 0, 0, 0, 0, 0, 0];
        [crc.sum(), length, length, name_length].iter().for_each(|number| fields.extend(number.to_le_bytes()));
        self.patch(header, &[b"PK\x03\x04", fields.as_slice()].concat());
        self.directory.extend([b"PK\x01\x02\x14\0", fields.as_slice(), &[0; 10], &offset.to_le_bytes(), name.as_bytes()].concat());
        self.parts = self.parts.saturating_add(1);
        Ok(written)
    }

    /// Puts a record into the part that is being written, and gives the place of its data.
    ///
    /// # Errors
    /// The package is beyond its bound.
    pub fn record(&mut self, kind: u32, data: &[&[u8]]) -> Result<usize, Refusal> {
        let length = small(data.iter().map(|piece| piece.len()).sum());
        for mut number in [kind, length] {
            while number > 0x7f {
                self.bytes.push((number & 0x7f) as u8 | 0x80);
                number >>= 7;
            }
            self.bytes.push((number & 0x7f) as u8);
        }
        let place = self.bytes.len();
        self.put(data)?;
        Ok(place)
    }

    /// Puts bytes into the part that is being written.
    ///
    /// # Errors
    /// The package is beyond its bound.
    pub fn put(&mut self, pieces: &[&[u8]]) -> Result<(), Refusal> {
        pieces.iter().for_each(|piece| self.bytes.extend(*piece));
        if self.bytes.len() > MOST_KEPT { Err(megabytes("its cells and texts take more than", MOST_KEPT, "")) } else { Ok(()) }
    }

    /// Writes over bytes of the part that is being written, such as a count that is known at its end.
    pub fn patch(&mut self, place: usize, new: &[u8]) {
        if let Some(old) = self.bytes.get_mut(place..place + new.len()) {
            old.copy_from_slice(new);
        }
    }

    /// The package, its directory at the end.
    pub fn finish(mut self) -> Vec<u8> {
        let [length, offset] = [self.directory.len(), self.bytes.len()].map(|n| small(n).to_le_bytes());
        let parts = self.parts.to_le_bytes();
        self.bytes.append(&mut self.directory);
        self.bytes.extend([b"PK\x05\x06\0\0\0\0".as_slice(), &parts, &parts, &length, &offset, &[0, 0]].concat());
        self.bytes
    }
}

/// A length within the package, whose bound is far below what four bytes hold.
fn small(length: usize) -> u32 {
    u32::try_from(length).unwrap_or(u32::MAX)
}
