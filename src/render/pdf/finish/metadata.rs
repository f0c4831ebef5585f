//! Metadata: XMP, the information dictionary that says the same, the file identifier.

use super::text;
use crate::report::document::Meta;
use lopdf::{Dictionary, Object, Stream, StringFormat, dictionary};
use std::fmt::Write as _;

/// The XMP packet, uncompressed so that any tool finds it.
pub(super) fn xmp(meta: &Meta) -> Stream {
    let mut rdf = String::new();
    let _ = write!(rdf, "<pdfaid:part>2</pdfaid:part><pdfaid:conformance>A</pdfaid:conformance>");
    let _ = write!(rdf, "<dc:format>application/pdf</dc:format>");
    let _ = write!(rdf, "<dc:title><rdf:Alt><rdf:li xml:lang=\"x-default\">{}</rdf:li></rdf:Alt></dc:title>", escaped(&meta.title));
    if !meta.author.is_empty() {
        let _ = write!(rdf, "<dc:creator><rdf:Seq><rdf:li>{}</rdf:li></rdf:Seq></dc:creator>", escaped(&meta.author));
    }
    if !meta.subject.is_empty() {
        let _ = write!(
            rdf,
            "<dc:description><rdf:Alt><rdf:li xml:lang=\"x-default\">{}</rdf:li></rdf:Alt></dc:description>",
            escaped(&meta.subject)
        );
    }
    if let Some(date) = day(meta) {
        let _ = write!(rdf, "<xmp:CreateDate>{date}T00:00:00Z</xmp:CreateDate><xmp:ModifyDate>{date}T00:00:00Z</xmp:ModifyDate>");
    }
    let _ = write!(rdf, "<pdf:Producer>{}</pdf:Producer>", escaped(&meta.producer));
    let packet = format!(
        "<?xpacket begin=\"\u{feff}\" id=\"W5M0MpCehiHzreSzNTczkc9d\"?>\n<x:xmpmeta xmlns:x=\"adobe:ns:meta/\"><rdf:RDF xmlns:rdf=\"http://www.w3.org/1999/02/22-rdf-syntax-ns#\">\
         <rdf:Description rdf:about=\"\" xmlns:dc=\"http://purl.org/dc/elements/1.1/\" xmlns:xmp=\"http://ns.adobe.com/xap/1.0/\" \
         xmlns:pdf=\"http://ns.adobe.com/pdf/1.3/\" xmlns:pdfaid=\"http://www.aiim.org/pdfa/ns/id/\">{rdf}</rdf:Description></rdf:RDF></x:xmpmeta>\n<?xpacket end=\"r\"?>"
    );
    Stream::new(dictionary! { "Type" => "Metadata", "Subtype" => "XML" }, packet.into_bytes()).with_compression(false)
}

/// The information dictionary.
pub(super) fn info(meta: &Meta) -> Dictionary {
    let mut info = dictionary! { "Title" => text(&meta.title), "Producer" => text(&meta.producer) };
    for (key, value) in [("Author", &meta.author), ("Subject", &meta.subject)] {
        if !value.is_empty() {
            info.set(key, text(value));
        }
    }
    if let Some(date) = day(meta) {
        let stamp = format!("D:{}000000Z", date.replace('-', ""));
        info.set("CreationDate", Object::string_literal(stamp.as_str()));
        info.set("ModDate", Object::string_literal(stamp.as_str()));
    }
    info
}

/// The date of issue, where it is one (ISO 8601).
fn day(meta: &Meta) -> Option<&str> {
    let date = meta.date.as_deref()?;
    let digits = |s: &str| s.bytes().all(|b| b.is_ascii_digit());
    let fits = date.len() == 10
        && date.is_ascii()
        && digits(&date[..4])
        && &date[4..5] == "-"
        && digits(&date[5..7])
        && &date[7..8] == "-"
        && digits(&date[8..]);
    fits.then_some(date)
}

/// The file's identifier: the first half of the input's hash, so that the same input yields the same file.
pub(super) fn identifier(meta: &Meta) -> Object {
    let digits: Vec<u8> =
        meta.input_sha256.bytes().filter_map(|b| char::from(b).to_digit(16)).filter_map(|d| u8::try_from(d).ok()).collect();
    let mut bytes: Vec<u8> = digits.chunks_exact(2).take(16).map(|pair| pair[0] << 4 | pair[1]).collect();
    bytes.resize(16, 0);
    Object::String(bytes, StringFormat::Hexadecimal)
}

/// Text in XML; characters that XML can't hold become U+FFFD.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '&' => out.push_str("&amp;"),
            '"' => out.push_str("&quot;"),
            '\u{FFFE}' | '\u{FFFF}' => out.push('\u{FFFD}'),
            c if c.is_control() && !matches!(c, '\t' | '\n' | '\r') => out.push('\u{FFFD}'),
            c => out.push(c),
        }
    }
    out
}
