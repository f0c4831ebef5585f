//! Text in Excel binary workbooks: 8-bit in a code page before BIFF8, UTF-16 or its low bytes since.

use super::super::bytes::{Data, Short};
use super::super::texts::Texts;
use super::record::Records;
use crate::intake::Refusal;
use encoding_rs::{UTF_16LE, WINDOWS_1252};

/// How text is encoded.
pub struct Encoding {
    is_wide: bool,
    page: &'static encoding_rs::Encoding,
}

impl Encoding {
    /// Of BIFF8 (wide), or of BIFF5 with the code page of western Windows until another is named.
    pub fn new(is_wide: bool) -> Self {
        Self { is_wide, page: WINDOWS_1252 }
    }

    /// Whether this is BIFF8.
    pub fn is_wide(&self) -> bool {
        self.is_wide
    }

    /// Takes the code page's number; one that is not known leaves the code page as it is.
    pub fn set_code_page(&mut self, number: u16) {
        let label = match number {
            10_000 => "macintosh".to_owned(),
            932 => "shift_jis".to_owned(),
            936 => "gbk".to_owned(),
            949 => "euc-kr".to_owned(),
            950 => "big5".to_owned(),
            number => format!("windows-{number}"),
        };
        self.page = encoding_rs::Encoding::for_label(label.as_bytes()).unwrap_or(self.page);
    }

    /// Text after a count of one byte.
    pub fn short(&self, data: Data) -> Result<String, Short> {
        self.text(data.after(1)?, usize::from(data.u8(0)?))
    }

    /// Text after a count of two bytes.
    pub fn long(&self, data: Data) -> Result<String, Short> {
        self.text(data.after(2)?, usize::from(data.u16(0)?))
    }

    fn text(&self, data: Data, count: usize) -> Result<String, Short> {
        if !self.is_wide {
            return Ok(self.page.decode_without_bom_handling(data.part(0, count)?).0.into_owned());
        }
        let mut text = String::new();
        let head = Head::of(data)?;
        decode(data.part(head.length, count * head.width)?, head.width, &mut text);
        Ok(text)
    }
}

/// What stands before the characters of a text in BIFF8 (MS-XLS 2.5.293): flags, and lengths of what follows the characters.
struct Head {
    length: usize,
    width: usize,
    trailing: usize,
}

impl Head {
    fn of(data: Data) -> Result<Self, Short> {
        let flags = data.u8(0)?;
        let mut head = Self { length: 1, width: width(flags), trailing: 0 };
        if flags & 8 != 0 {
            head.trailing += 4 * usize::from(data.u16(head.length)?);
            head.length += 2;
        }
        if flags & 4 != 0 {
            head.trailing = head.trailing.saturating_add(data.u32(head.length)? as usize);
            head.length += 4;
        }
        Ok(head)
    }
}

/// Bytes of a character, by the flags before it.
fn width(flags: u8) -> usize {
    if flags & 1 != 0 { 2 } else { 1 }
}

fn decode(data: &[u8], width: usize, text: &mut String) {
    if width == 2 {
        text.push_str(&UTF_16LE.decode_without_bom_handling(data).0);
    } else {
        text.extend(data.iter().map(|b| char::from(*b)));
    }
}

/// Reads the table of shared texts, which goes on through as many records as it needs (MS-XLS 2.4.265).
///
/// # Errors
/// It is cut short or beyond a bound.
pub fn shared<'a>(data: Data<'a>, records: &mut Records<'a>) -> Result<Texts, Refusal> {
    let mut segments = Segments { data: data.after(8)?, records };
    let mut texts = Texts::default();
    for _ in 0..data.u32(4)? {
        texts.push(&segments.text()?)?;
    }
    Ok(texts)
}

/// The table's data over its records. A text that goes on in the next record says anew there how wide its characters are.
struct Segments<'a, 'r> {
    data: Data<'a>,
    records: &'r mut Records<'a>,
}

impl Segments<'_, '_> {
    fn text(&mut self) -> Result<String, Short> {
        if self.data.0.is_empty() {
            self.turn()?;
        }
        let mut left = usize::from(self.data.u16(0)?);
        let head = Head::of(self.data.after(2)?)?;
        self.data = self.data.after(2 + head.length)?;
        let mut text = String::new();
        let mut wide = head.width;
        loop {
            let here = left.min(self.data.0.len() / wide);
            decode(self.data.part(0, here * wide)?, wide, &mut text);
            self.data = self.data.after(here * wide)?;
            left -= here;
            if left == 0 {
                break;
            }
            self.turn()?;
            wide = width(self.data.u8(0)?);
            self.data = self.data.after(1)?;
        }
        self.skip(head.trailing)?;
        Ok(text)
    }

    fn turn(&mut self) -> Result<(), Short> {
        self.data = self.records.continuation().map(Data).ok_or(Short)?;
        Ok(())
    }

    fn skip(&mut self, mut count: usize) -> Result<(), Short> {
        while count > self.data.0.len() {
            count -= self.data.0.len();
            self.turn()?;
        }
        self.data = self.data.after(count)?;
        Ok(())
    }
}
