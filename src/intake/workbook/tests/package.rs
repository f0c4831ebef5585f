//! A small writer of zip packages, for workbooks that no honest writer makes.

use flate2::Crc;
use flate2::write::DeflateEncoder;
use std::io::Write;

/// A package of parts, deflated.
pub fn zip(parts: &[(&str, &[u8])]) -> Vec<u8> {
    zip_repeated(&parts.iter().map(|(name, content)| (*name, *content, 1)).collect::<Vec<_>>())
}

/// A package of parts, each so many times its content.
pub fn zip_repeated(parts: &[(&str, &[u8], usize)]) -> Vec<u8> {
    let mut bytes = Vec::new();
    let mut directory = Vec::new();
    for (name, content, times) in parts {
        let mut encoder = DeflateEncoder::new(Vec::new(), flate2::Compression::fast());
        let mut crc = Crc::new();
        for _ in 0..*times {
            encoder.write_all(content).unwrap();
            crc.update(content);
        }
        let packed = encoder.finish().unwrap();
        let [packed_length, length, name_length] = [packed.len(), content.len() * times, name.len()].map(|n| u32::try_from(n).unwrap());
        let mut head = vec![20, 0, 0, 0, 8, 0, 0, 0, 0, 0];
        for number in [crc.sum(), packed_length, length, name_length] {
            head.extend(number.to_le_bytes());
        }
        let offset = u32::try_from(bytes.len()).unwrap();
        bytes.extend(b"PK\x03\x04");
        bytes.extend(&head);
        bytes.extend(name.as_bytes());
        bytes.extend(packed);
        directory.extend(b"PK\x01\x02\x14\0");
        directory.extend(&head);
        directory.extend([0; 10]);
        directory.extend(offset.to_le_bytes());
        directory.extend(name.as_bytes());
    }
    let count = u16::try_from(parts.len()).unwrap().to_le_bytes();
    let end: Vec<u8> = [directory.len(), bytes.len()].iter().flat_map(|n| u32::try_from(*n).unwrap().to_le_bytes()).collect();
    bytes.extend(directory);
    bytes.extend(b"PK\x05\x06\0\0\0\0");
    bytes.extend(count);
    bytes.extend(count);
    bytes.extend(end);
    bytes.extend([0, 0]);
    bytes
}

/// An xlsx workbook with one sheet of this content, and further parts in place of the usual ones.
pub fn xlsx(sheet: &str, others: &[(&str, &str)]) -> Vec<u8> {
    let usual = [
        ("xl/workbook.xml", r#"<workbook><sheets><sheet name="Readings" r:id="rId1"/></sheets></workbook>"#),
        (
            "xl/_rels/workbook.xml.rels",
            r#"<Relationships><Relationship Id="rId1" Type="a/worksheet" Target="worksheets/sheet1.xml"/>
               <Relationship Id="rId2" Type="a/sharedStrings" Target="sharedStrings.xml"/></Relationships>"#,
        ),
        ("xl/sharedStrings.xml", "<sst><si><t>L1-N</t></si></sst>"),
        ("xl/worksheets/sheet1.xml", sheet),
    ];
    let kept = usual.iter().filter(|(name, _)| !others.iter().any(|(other, _)| other == name));
    let parts: Vec<(&str, &[u8])> = kept.chain(others).map(|(name, text)| (*name, text.as_bytes())).collect();
    zip(&parts)
}

/// An ods workbook with this content between the tags of its one table.
pub fn ods(table: &str) -> Vec<u8> {
    let content = format!(r#"<office:spreadsheet><table:table table:name="Readings">{table}</table:table></office:spreadsheet>"#);
    zip(&[("mimetype", b"application/vnd.oasis.opendocument.spreadsheet"), ("content.xml", content.as_bytes())])
}

/// The names of a package's parts, as its directory lists them.
pub fn names(package: &[u8]) -> Vec<String> {
    let starts = (0..package.len()).filter(|at| package[*at..].starts_with(b"PK\x01\x02"));
    let length = |at: usize| usize::from(package[at + 28]) + 256 * usize::from(package[at + 29]);
    starts.map(|at| String::from_utf8(package[at + 46..at + 46 + length(at)].to_vec()).unwrap()).collect()
}
