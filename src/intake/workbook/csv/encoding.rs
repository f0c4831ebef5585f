//! The encoding of a csv file, which it does not state: by its byte order mark, as UTF-8 where it is that, by likelihood else.

use chardetng::{EncodingDetector, Iso2022JpDetection, Utf8Detection};
use encoding_rs::Encoding;
use std::borrow::Cow;

/// Bytes from the first that is not ASCII on that are looked at to guess.
const SAMPLE: usize = 1 << 20;

/// A file as text.
pub struct Decoded<'a> {
    /// The text, without a byte order mark.
    pub text: Cow<'a, str>,
    /// The encoding's name, where it was guessed.
    pub guess: Option<&'static str>,
    /// Some bytes mean nothing in the encoding; U+FFFD stands for them.
    pub has_gaps: bool,
}

/// Decodes a file; none if it is not text.
pub fn decode(bytes: &[u8]) -> Option<Decoded<'_>> {
    let marked = Encoding::for_bom(bytes).map(|(encoding, length)| (encoding, &bytes[length..]));
    let decoded = match (marked, std::str::from_utf8(bytes)) {
        (Some((encoding, rest)), _) => {
            let (text, has_gaps) = encoding.decode_without_bom_handling(rest);
            Decoded { text, guess: None, has_gaps }
        }
        (None, Ok(text)) => Decoded { text: text.into(), guess: None, has_gaps: false },
        (None, Err(_)) => {
            let mut detector = EncodingDetector::new(Iso2022JpDetection::Deny);
            let telling = bytes.iter().position(|b| !b.is_ascii()).map_or(0..0, |at| at..bytes.len().min(at + SAMPLE));
            detector.feed(&bytes[telling], true);
            let encoding = detector.guess(None, Utf8Detection::Deny);
            let (text, has_gaps) = encoding.decode_without_bom_handling(bytes);
            Decoded { text, guess: Some(encoding.name()), has_gaps }
        }
    };
    (!decoded.text.contains('\0')).then_some(decoded)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn encodings_are_found() {
        let utf16 = |text: &str| [vec![0xff, 0xfe], text.encode_utf16().flat_map(u16::to_le_bytes).collect()].concat();
        for (bytes, text, guess) in [
            ("Location,µΩ".as_bytes().to_vec(), "Location,µΩ", None),
            ("\u{feff}Location,µΩ".as_bytes().to_vec(), "Location,µΩ", None),
            (utf16("Location\tµΩ"), "Location\tµΩ", None),
            (b"Weather,dry 18 \xb0C \x96 caf\xe9 at the corner".to_vec(), "Weather,dry 18 °C – café at the corner", Some("windows-1252")),
        ] {
            let decoded = decode(&bytes).unwrap();
            assert_eq!((decoded.text.as_ref(), decoded.guess, decoded.has_gaps), (text, guess, false));
        }
    }

    #[test]
    fn what_is_no_text_is_told() {
        assert!(decode(b"PK\x03\x04\0\0\0").is_none());
        assert!(decode(&[0xff, 0xfe, 0x00, 0xd8, b'a', 0]).unwrap().has_gaps, "half a surrogate pair");
    }
}
