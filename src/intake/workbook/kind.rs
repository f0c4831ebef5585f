//! What a file is, by what it holds; its name does not matter.

/// Kinds of files that are read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// A zip package: Office Open XML, OpenDocument, or something else.
    Package,
    /// A compound file (MS-CFB): xls, or a workbook under a password.
    Compound,
}

/// First bytes of files that people take for workbooks, and what to call them.
const OTHERS: [(&[u8], &str); 19] = [
    (b"%PDF", "a PDF document"),
    (b"\xff\xd8\xff", "a JPEG picture"),
    (b"\x89PNG", "a PNG picture"),
    (b"GIF8", "a GIF picture"),
    (b"II*\0", "a TIFF picture"),
    (b"MM\0*", "a TIFF picture"),
    (b"RIFF", "a picture, sound or film"),
    (b"{\\rtf", "an RTF document"),
    (b"\x1f\x8b", "a gzip archive"),
    (b"7z\xbc\xaf\x27\x1c", "a 7z archive"),
    (b"Rar!", "a RAR archive"),
    (b"\x7fELF", "a program"),
    (b"MZ\x90", "a program"),
    (b"SQLite format 3", "a database"),
    (b"\x09\x00\x04\x00", "a sheet of a spreadsheet program from before 1993"),
    (b"\x09\x02\x06\x00", "a sheet of a spreadsheet program from before 1993"),
    (b"\x09\x04\x06\x00", "a sheet of a spreadsheet program from before 1993"),
    (b"\x09\x08", "a sheet of a spreadsheet program from before 1996"),
    (b"\0\0\0", "a film, a picture or an empty disk image"),
];

/// Tells what a file is.
///
/// # Errors
/// It is nothing that is read: what it looks like.
pub fn of(bytes: &[u8]) -> Result<Kind, &'static str> {
    if bytes.starts_with(b"PK\x03\x04") || bytes.starts_with(b"PK\x05\x06") {
        return Ok(Kind::Package);
    }
    if bytes.starts_with(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1") {
        return Ok(Kind::Compound);
    }
    let known = OTHERS.iter().find(|(start, _)| bytes.starts_with(start)).map(|(_, name)| *name);
    Err(known.unwrap_or_else(|| of_text(&bytes[..bytes.len().min(1024)])))
}

/// What a file looks like that begins like nothing else.
fn of_text(start: &[u8]) -> &'static str {
    let text = start.strip_prefix(b"\xef\xbb\xbf").unwrap_or(start).trim_ascii_start().to_ascii_lowercase();
    if text.starts_with(b"<!doctype html") || text.starts_with(b"<html") {
        return "a web page";
    }
    if text.starts_with(b"<?xml") || text.starts_with(b"<workbook") {
        return "an XML document";
    }
    let wide = start.starts_with(b"\xff\xfe") || start.starts_with(b"\xfe\xff");
    let control = |b: &u8| *b < b' ' && !b"\t\n\r\x0c".contains(b);
    if wide || !text.iter().any(control) { "a text file; csv files are read from a folder" } else { "a file of an unknown kind" }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn files_are_told_by_what_they_hold() {
        assert_eq!(of(b"PK\x03\x04..."), Ok(Kind::Package));
        assert_eq!(of(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"), Ok(Kind::Compound));
        assert_eq!(of(b"%PDF-1.7"), Err("a PDF document"));
        assert_eq!(of(b"\xff\xd8\xff\xe0"), Err("a JPEG picture"));
        assert_eq!(of(b"\n <!DOCTYPE html>"), Err("a web page"));
        assert_eq!(of(b"\xef\xbb\xbf<?xml version=\"1.0\"?>"), Err("an XML document"));
        assert_eq!(of("Location,L1-N\n5/7a,119,6 Ω".as_bytes()), Err("a text file; csv files are read from a folder"));
        assert_eq!(of(b"\xff\xfeL\0"), Err("a text file; csv files are read from a folder"));
        assert_eq!(of(b"\x01\x02\x03"), Err("a file of an unknown kind"));
    }
}
