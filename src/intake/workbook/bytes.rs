//! Little-endian numbers at a place in a file; nothing where the file is too short.

/// Two bytes.
pub fn u16_at(bytes: &[u8], at: usize) -> Option<u16> {
    array(bytes, at).map(u16::from_le_bytes)
}

/// Four bytes.
pub fn u32_at(bytes: &[u8], at: usize) -> Option<u32> {
    array(bytes, at).map(u32::from_le_bytes)
}

/// Eight bytes as a number.
pub fn f64_at(bytes: &[u8], at: usize) -> Option<f64> {
    array(bytes, at).map(f64::from_le_bytes)
}

fn array<const N: usize>(bytes: &[u8], at: usize) -> Option<[u8; N]> {
    bytes.get(at..at.checked_add(N)?)?.try_into().ok()
}
