//! Text in Office Open XML: the table of shared texts, runs of rich text, and characters written as `_x000D_`.

use super::super::archive::Archive;
use super::super::bounds::add;
use super::super::texts::Texts;
use super::super::xml::{Node, Xml};
use crate::intake::Refusal;

/// Reads the table.
///
/// # Errors
/// The part is broken or beyond a bound.
pub fn read(archive: &Archive, name: &str) -> Result<Texts, Refusal> {
    let mut xml = super::open(archive, name)?;
    let mut texts = Texts::default();
    loop {
        match xml.next()? {
            Node::Open(tag) if tag.name() == b"si" => {
                texts.push(&rich(&mut xml)?)?;
            }
            Node::End => return Ok(texts),
            _ => {}
        }
    }
}

/// The text of the `si` or `is` element that was just opened: its `t`, or those of its runs; never the phonetic ones.
///
/// # Errors
/// The part is broken.
pub fn rich(xml: &mut Xml) -> Result<String, Refusal> {
    let mut text = String::new();
    let mut depth = 1;
    let mut in_text = false;
    while depth > 0 {
        match xml.next()? {
            Node::Open(tag) => match tag.name() {
                b"t" => (in_text, depth) = (true, depth + 1),
                b"rPh" => xml.skip()?,
                _ => depth += 1,
            },
            Node::Close => (in_text, depth) = (false, depth - 1),
            Node::Text(piece) if in_text => add(&mut text, &piece)?,
            Node::Text(_) => {}
            Node::End => break,
        }
    }
    unescape(&mut text);
    Ok(text)
}

/// Puts the character for each `_xHHHH_` (ECMA-376 part 1, 22.9.2.19); an underscore is itself written `_x005F_` before such a piece.
pub fn unescape(text: &mut String) {
    if !text.contains("_x") {
        return;
    }
    let mut units: Vec<u16> = Vec::with_capacity(text.len());
    let mut rest = text.as_str();
    while let Some(at) = rest.find("_x") {
        units.extend(rest[..at].encode_utf16());
        let code = rest.get(at + 2..at + 6).filter(|_| rest.as_bytes().get(at + 6) == Some(&b'_'));
        let code = code.filter(|hex| hex.bytes().all(|b| b.is_ascii_hexdigit())).and_then(|hex| u16::from_str_radix(hex, 16).ok());
        let (unit, length) = code.map_or((u16::from(b'_'), 1), |code| (code, 7));
        units.push(unit);
        rest = &rest[at + length..];
    }
    units.extend(rest.encode_utf16());
    *text = String::from_utf16_lossy(&units);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn written_out_characters_are_put_back() {
        for (written, meant) in [
            ("a_x000D_b", "a\rb"),
            ("_x005F_x000D_", "_x000D_"),
            ("_xD83D__xDE00_", "😀"),
            ("L1_x_N", "L1_x_N"),
            ("_x00", "_x00"),
            ("ä_xé_x000A_", "ä_xé\n"),
        ] {
            let mut text = written.to_owned();
            unescape(&mut text);
            assert_eq!(text, meant);
        }
    }
}
