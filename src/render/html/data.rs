//! Pictures as data within the file.

use super::markup::Markup;
use crate::report::document::Image;

/// An image. One that is neither PNG nor JPEG is told by its alternative text.
pub(super) fn image(page: &mut Markup, image: &Image, class: &str) {
    match media_type(&image.bytes) {
        Some(kind) => {
            let source = format!("data:{kind};base64,{}", base64(&image.bytes));
            page.void("img", &[("class", class), ("src", &source), ("alt", &image.alt)]);
        }
        None => page.element("p", &[("class", class)], |page| page.text(&image.alt)),
    }
}

fn media_type(bytes: &[u8]) -> Option<&'static str> {
    if bytes.starts_with(b"\x89PNG\r\n\x1a\n") {
        Some("image/png")
    } else if bytes.starts_with(b"\xff\xd8\xff") {
        Some("image/jpeg")
    } else {
        None
    }
}

/// Base 64 with padding (RFC 4648, section 4).
pub(super) fn base64(bytes: &[u8]) -> String {
    const DIGITS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut text = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for group in bytes.chunks(3) {
        let byte = |i: usize| u32::from(group.get(i).copied().unwrap_or(0));
        let bits = byte(0) << 16 | byte(1) << 8 | byte(2);
        for digit in 0..4 {
            let index = bits >> (18 - 6 * digit) & 63;
            text.push(if digit <= group.len() { char::from(DIGITS[index as usize]) } else { '=' });
        }
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    // RFC 4648, section 10.
    #[test]
    fn base64_gives_the_published_vectors() {
        for (bytes, text) in
            [("", ""), ("f", "Zg=="), ("fo", "Zm8="), ("foo", "Zm9v"), ("foob", "Zm9vYg=="), ("fooba", "Zm9vYmE="), ("foobar", "Zm9vYmFy")]
        {
            assert_eq!(base64(bytes.as_bytes()), text);
        }
    }
}
