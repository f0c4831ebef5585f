//! What the two binary workbook formats write alike.

use crate::intake::grid::Value;

/// A number packed into four bytes: the high bits of a floating-point number or a whole number, and whether it is in hundredths
/// (RkNumber, MS-XLS 2.5.217).
pub fn small_number(packed: u32) -> f64 {
    let number = if packed & 2 != 0 { f64::from(packed.cast_signed() >> 2) } else { f64::from_bits(u64::from(packed & !3) << 32) };
    if packed & 1 != 0 { number / 100.0 } else { number }
}

/// An error value as it is shown (MS-XLS 2.5.10).
pub fn error(code: u8) -> Value {
    Value::Error(
        match code {
            0x00 => "#NULL!",
            0x07 => "#DIV/0!",
            0x0f => "#VALUE!",
            0x17 => "#REF!",
            0x1d => "#NAME?",
            0x24 => "#NUM!",
            0x2a => "#N/A",
            0x2b => "#GETTING_DATA",
            _ => "#ERROR",
        }
        .to_owned(),
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Each of the four forms, packed by hand: 1 and 12/100 by the high bits of their floating-point forms, whole numbers shifted by two.
    #[test]
    fn packed_numbers() {
        assert_eq!(small_number(0x3ff0_0000), 1.0);
        assert_eq!(small_number(0x4028_0000 | 1), 0.12);
        assert_eq!(small_number((1196 << 2) | 3), 11.96);
        assert_eq!(small_number((-5i32 << 2).cast_unsigned() | 2), -5.0);
    }
}
