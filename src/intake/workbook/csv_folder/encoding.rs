//! The encoding of csv files, which they do not state: by the byte order mark, as UTF-8 where it is that, by likelihood else.

use chardetng::{EncodingDetector, Iso2022JpDetection, Utf8Detection};
use encoding_rs::Encoding;
use std::borrow::Cow;

/// Bytes of a file that are looked at to guess, and how many of them before the first that is not ASCII: letters beside it tell most.
const SAMPLE: usize = 1 << 18;
const BEFORE: usize = 1 << 10;
/// Where two encodings fit alike, the one usual where services of 120/240 V are: by the domain of the United States.
const REGION: &[u8] = b"us";

/// A file as text.
pub struct Decoded<'a> {
    /// The text, without a byte order mark.
    pub text: Cow<'a, str>,
    /// The encoding's name, where it was guessed.
    pub guess: Option<&'static str>,
    /// Some bytes mean nothing in the encoding; U+FFFD stands for them.
    pub has_gaps: bool,
}

/// The likeliest encoding of the files that don't show theirs, all together: a unit sign or two in one file alone tell little, and the
/// files of a folder come from one program.
pub fn guess<'a>(files: impl Iterator<Item = &'a [u8]>) -> &'static Encoding {
    let mut detector = EncodingDetector::new(Iso2022JpDetection::Deny);
    for bytes in files.filter(|bytes| Encoding::for_bom(bytes).is_none()) {
        if let Some(first) = std::str::from_utf8(bytes).err().and_then(|_| bytes.iter().position(|b| !b.is_ascii())) {
            let start = first.saturating_sub(BEFORE);
            detector.feed(&bytes[start..bytes.len().min(start + SAMPLE)], false);
            detector.feed(b"\n", false);
        }
    }
    detector.feed(b"", true);
    detector.guess(Some(REGION), Utf8Detection::Deny)
}

/// Decodes a file, by the guess where it does not show its encoding; none if it is not text.
pub fn decode<'a>(bytes: &'a [u8], guess: &'static Encoding) -> Option<Decoded<'a>> {
    let decoded = match (Encoding::for_bom(bytes), std::str::from_utf8(bytes)) {
        (Some((encoding, length)), _) => {
            let (text, has_gaps) = encoding.decode_without_bom_handling(&bytes[length..]);
            Decoded { text, guess: None, has_gaps }
        }
        (None, Ok(text)) => Decoded { text: text.into(), guess: None, has_gaps: false },
        (None, Err(_)) => {
            let (text, has_gaps) = guess.decode_without_bom_handling(bytes);
            Decoded { text, guess: Some(guess.name()), has_gaps }
        }
    };
    (!decoded.text.contains('\0')).then_some(decoded)
}

#[cfg(test)]
mod tests {
    use super::*;
    use encoding_rs::{WINDOWS_1251, WINDOWS_1252};

    fn check(bytes: &[u8], text: &str, name: Option<&str>) {
        let decoded = decode(bytes, guess([bytes].into_iter())).unwrap();
        assert_eq!((decoded.text.as_ref(), decoded.guess, decoded.has_gaps), (text, name, false));
    }

    #[test]
    fn encodings_that_show_are_taken() {
        check("Location,µΩ".as_bytes(), "Location,µΩ", None);
        check("\u{feff}Location,µΩ".as_bytes(), "Location,µΩ", None);
        let little: Vec<u8> = "\u{feff}Location\tµΩ".encode_utf16().flat_map(u16::to_le_bytes).collect();
        check(&little, "Location\tµΩ", None);
        let big: Vec<u8> = "\u{feff}Location\tµΩ".encode_utf16().flat_map(u16::to_be_bytes).collect();
        check(&big, "Location\tµΩ", None);
    }

    #[test]
    fn encodings_that_don_t_show_are_guessed_from_little() {
        for text in
            ["dry, 18 °C", "SVC,torque,48,N·m", "18 kµ ± 5 %", "5/7 – kitchen", "2.5 mm² Cu", "Küche über dem Café", "3½ in", "Baño"]
        {
            check(&WINDOWS_1252.encode(text).0, text, Some("windows-1252"));
        }
        let text = "Щит на кухне, розетка слева";
        check(&WINDOWS_1251.encode(text).0, text, Some("windows-1251"));
    }

    #[test]
    fn files_of_a_folder_help_each_other() {
        let files = ["Щ1", "розетка на кухне слева"].map(|text| WINDOWS_1251.encode(text).0.into_owned());
        assert_eq!(guess(files.iter().map(Vec::as_slice)), WINDOWS_1251);
    }

    #[test]
    fn what_is_no_text_is_told() {
        assert!(decode(b"PK\x03\x04\0\0\0", WINDOWS_1252).is_none());
        assert!(decode(&[0xff, 0xfe, 0x00, 0xd8, b'a', 0], WINDOWS_1252).unwrap().has_gaps, "half a surrogate pair");
    }
}
