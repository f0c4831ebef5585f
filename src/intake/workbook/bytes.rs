//! Little-endian numbers at a place in a file; nothing where the file is too short.

use crate::intake::Refusal;

/// Two bytes.
pub fn u16_at(bytes: &[u8], at: usize) -> Option<u16> {
    array(bytes, at).map(u16::from_le_bytes)
}

/// Four bytes.
pub fn u32_at(bytes: &[u8], at: usize) -> Option<u32> {
    array(bytes, at).map(u32::from_le_bytes)
}

fn array<const N: usize>(bytes: &[u8], at: usize) -> Option<[u8; N]> {
    bytes.get(at..at.checked_add(N)?)?.try_into().ok()
}

/// The data of a record, whose fields are read at their places.
#[derive(Clone, Copy)]
pub struct Data<'a>(pub &'a [u8]);

/// A record is shorter than what it should hold.
#[derive(Debug)]
pub struct Short;

impl<'a> Data<'a> {
    /// One byte.
    pub fn u8(self, at: usize) -> Result<u8, Short> {
        self.0.get(at).copied().ok_or(Short)
    }

    /// Two bytes.
    pub fn u16(self, at: usize) -> Result<u16, Short> {
        u16_at(self.0, at).ok_or(Short)
    }

    /// Four bytes.
    pub fn u32(self, at: usize) -> Result<u32, Short> {
        u32_at(self.0, at).ok_or(Short)
    }

    /// Eight bytes as a floating-point number.
    pub fn f64(self, at: usize) -> Result<f64, Short> {
        array(self.0, at).map(f64::from_le_bytes).ok_or(Short)
    }

    /// Everything from a place on.
    pub fn after(self, at: usize) -> Result<Self, Short> {
        self.0.get(at..).map(Self).ok_or(Short)
    }

    /// So many bytes from a place on.
    pub fn part(self, at: usize, length: usize) -> Result<&'a [u8], Short> {
        self.0.get(at..at.saturating_add(length)).ok_or(Short)
    }
}

impl From<Short> for Refusal {
    fn from(_: Short) -> Self {
        Self::Damaged("it holds a record that is cut short".to_owned())
    }
}
