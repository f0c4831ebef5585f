//! The PDF, read back by lopdf: structure, text, fonts, pages; and documents made to break it.

use super::specimen::{self, column, row, table, text, words};
use lopdf::{Dictionary, Object, ObjectId};
use midwire::quantity::Unit;
use midwire::render::pdf;
use midwire::report::document::*;
use midwire::report::drawing::{Anchor, Colour, Drawing, Shape};
use midwire::results::Signal;
use proptest::prelude::*;
use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

fn read(bytes: &[u8]) -> lopdf::Document {
    lopdf::Document::load_mem(bytes).expect("a PDF")
}

fn with(blocks: Vec<Block>) -> Document {
    Document { meta: specimen::meta(), blocks, sheets: Vec::new() }
}

fn heading(level: u8, words: &str) -> Block {
    Block::Heading { level, text: text(words), anchor: words.to_lowercase().replace(' ', "-") }
}

fn paragraph(words: &str) -> Block {
    Block::Paragraph(text(words))
}

fn numbers(rows: usize) -> Table {
    let columns = vec![
        column("location", "Location", None, ColumnKind::Name),
        column("l1_n", "L1-N", Some(Unit::Volt), ColumnKind::Number),
        column("remarks", "Remarks", None, ColumnKind::Text),
    ];
    let line = |i: usize| row(vec![words(&format!("row {i}")), Cell::Number(Number::new(110.0 + i as f64 / 10.0, 1)), words("as read")]);
    table("readings", "Readings", columns, (0..rows).map(line).collect())
}

/// Text of each page, lines and blanks as one blank.
fn pages(pdf: &lopdf::Document) -> Vec<String> {
    let numbers: Vec<u32> = pdf.get_pages().keys().copied().collect();
    numbers.iter().map(|n| pdf.extract_text(&[*n]).expect("text").split_whitespace().collect::<Vec<_>>().join(" ")).collect()
}

fn dictionary(pdf: &lopdf::Document, object: &Object) -> Dictionary {
    pdf.dereference(object).and_then(|(_, o)| o.as_dict().cloned()).expect("a dictionary")
}

/// All structure elements under the root, each with its type, in reading order.
fn elements(pdf: &lopdf::Document) -> Vec<(ObjectId, Dictionary)> {
    let root = dictionary(pdf, pdf.catalog().unwrap().get(b"StructTreeRoot").unwrap());
    let mut found = Vec::new();
    let mut open = vec![root.get(b"K").unwrap().as_reference().unwrap()];
    while let Some(id) = open.pop() {
        let element = pdf.get_dictionary(id).unwrap().clone();
        let kids = element.get(b"K").and_then(Object::as_array).cloned().unwrap_or_default();
        open.extend(kids.iter().rev().filter_map(|k| k.as_reference().ok()));
        found.push((id, element));
    }
    found
}

fn tag(element: &Dictionary) -> String {
    String::from_utf8(element.get(b"S").unwrap().as_name().unwrap().to_vec()).unwrap()
}

#[test]
fn the_catalogue_says_what_the_file_is() {
    let bytes = pdf::write(&specimen::document()).unwrap();
    let pdf = read(&bytes);
    let catalog = pdf.catalog().unwrap();
    assert_eq!(catalog.get(b"Lang").unwrap().as_str().unwrap(), b"en");
    assert!(dictionary(&pdf, catalog.get(b"MarkInfo").unwrap()).get(b"Marked").unwrap().as_bool().unwrap());
    let xmp = pdf.get_object(catalog.get(b"Metadata").unwrap().as_reference().unwrap()).unwrap().as_stream().unwrap();
    let xmp = String::from_utf8(xmp.content.clone()).unwrap();
    for part in ["<pdfaid:part>2</pdfaid:part>", "<pdfaid:conformance>A</pdfaid:conformance>", "Ines Marlow", "2026-11-24T00:00:00Z"] {
        assert!(xmp.contains(part), "{part}");
    }
    let info = dictionary(&pdf, pdf.trailer.get(b"Info").unwrap());
    assert_eq!(info.get(b"CreationDate").unwrap().as_str().unwrap(), b"D:20261124000000Z");
    let id = pdf.trailer.get(b"ID").unwrap().as_array().unwrap();
    assert_eq!(id[0].as_str().unwrap(), [0x9f, 0x2c, 0x1b, 0x7e, 0x0a, 0x4d, 0x5c, 0x86, 0xe1, 0xf3, 0xb2, 0xa4, 0x95, 0x8c, 0x7d, 0x6e]);
    assert!(catalog.get(b"OutputIntents").is_ok());
}

#[test]
fn fonts_are_embedded_and_subset() {
    let pdf = read(&pdf::write(&specimen::document()).unwrap());
    let mut fonts = 0;
    for object in pdf.objects.values().filter_map(|o| o.as_dict().ok()) {
        if object.get(b"Type").and_then(Object::as_name).is_ok_and(|t| t == b"FontDescriptor") {
            fonts += 1;
            let name = String::from_utf8(object.get(b"FontName").unwrap().as_name().unwrap().to_vec()).unwrap();
            let (tag, _) = name.split_once('+').unwrap_or_else(|| panic!("{name} is no subset"));
            assert!(tag.len() == 6 && tag.bytes().all(|b| b.is_ascii_uppercase()), "{name}");
            assert!(object.get(b"FontFile2").is_ok() || object.get(b"FontFile3").is_ok(), "{name} is not embedded");
        }
    }
    assert!(fonts >= 2, "{fonts} fonts");
}

#[test]
fn every_marked_content_has_its_element_and_is_found_from_it() {
    let pdf = read(&pdf::write(&specimen::document()).unwrap());
    let root = dictionary(&pdf, pdf.catalog().unwrap().get(b"StructTreeRoot").unwrap());
    let tree = dictionary(&pdf, root.get(b"ParentTree").unwrap());
    let nums = tree.get(b"Nums").unwrap().as_array().unwrap();
    let owners: BTreeMap<i64, Object> = nums.chunks(2).map(|pair| (pair[0].as_i64().unwrap(), pair[1].clone())).collect();
    let mut claimed: BTreeSet<(ObjectId, i64)> = BTreeSet::new();
    for (_, element) in elements(&pdf) {
        let page = element.get(b"Pg").and_then(Object::as_reference).ok();
        for kid in element.get(b"K").and_then(Object::as_array).into_iter().flatten() {
            if let (Ok(number), Some(page)) = (kid.as_i64(), page) {
                assert!(claimed.insert((page, number)), "content {number} has two elements");
            } else if let Ok(content) = kid.as_dict()
                && let Ok(number) = content.get(b"MCID").and_then(Object::as_i64)
            {
                assert!(claimed.insert((content.get(b"Pg").unwrap().as_reference().unwrap(), number)));
            }
        }
    }
    let mut count = 0;
    for page in pdf.page_iter() {
        let key = pdf.get_dictionary(page).unwrap().get(b"StructParents").unwrap().as_i64().unwrap();
        let (_, list) = pdf.dereference(&owners[&key]).unwrap();
        let marked = list.as_array().unwrap().len();
        count += marked;
        for number in 0..marked {
            assert!(claimed.contains(&(page, i64::try_from(number).unwrap())), "content {number} of a page has no element");
        }
        let content = lopdf::content::Content::decode(&pdf.get_page_content(page)).unwrap();
        let begun = content.operations.iter().filter(|o| o.operator == "BDC").count();
        assert_eq!(begun, marked);
    }
    assert_eq!(claimed.len(), count);
}

#[test]
fn elements_stand_in_reading_order() {
    let link = Inline::Link { href: "#after".into(), text: text("a link") };
    let blocks = vec![
        heading(1, "Title"),
        Block::Paragraph(vec![Inline::Text("before ".into()), link, Inline::Text(" behind".into())]),
        Block::List { start: Some(3), items: vec![vec![paragraph("third")], vec![paragraph("fourth")]] },
        heading(2, "After"),
        Block::Table(Arc::new(numbers(2))),
    ];
    let pdf = read(&pdf::write(&with(blocks)).unwrap());
    let tags: Vec<String> = elements(&pdf).iter().map(|(_, e)| tag(e)).collect();
    let expected =
        "Document Figure H1 P Link L LI Lbl LBody P LI Lbl LBody P H2 Table Caption THead TR TH TH TH TBody TR TD TD TD TR TD TD TD";
    assert_eq!(tags.join(" "), expected);
    let (_, paragraph) = elements(&pdf).into_iter().find(|(_, e)| tag(e) == "P").unwrap();
    let kids = paragraph.get(b"K").unwrap().as_array().unwrap();
    assert_eq!(
        kids.iter().map(|k| k.as_reference().is_ok()).collect::<Vec<_>>(),
        [false, true, false],
        "the link stands between its neighbours"
    );
    let annotations: Vec<Dictionary> = pdf
        .objects
        .values()
        .filter_map(|o| o.as_dict().ok())
        .filter(|d| d.get(b"Subtype").and_then(Object::as_name).is_ok_and(|n| n == b"Link"))
        .cloned()
        .collect();
    assert_eq!(annotations.len(), 1);
    assert!(annotations[0].get(b"Dest").is_ok() && annotations[0].get(b"StructParent").is_ok());
}

#[test]
fn a_long_table_repeats_its_header_and_every_page_has_its_number() {
    let pdf = read(&pdf::write(&with(vec![heading(1, "Long"), Block::Table(Arc::new(numbers(200)))])).unwrap());
    let pages = pages(&pdf);
    assert!(pages.len() >= 4, "{} pages", pages.len());
    for (i, page) in pages.iter().enumerate() {
        assert!(page.contains("Location") && page.contains("Remarks"), "page {} has no header: {page}", i + 1);
        assert!(page.contains(&format!("Page {} of {}", i + 1, pages.len())), "{page}");
        assert!(page.contains("Kestrel & Rowe Electrical"));
    }
    let all = pages.join(" ");
    for i in 0..200 {
        assert!(all.contains(&format!("row {i} ")), "row {i}");
    }
    assert_eq!(elements(&pdf).iter().filter(|(_, e)| tag(e) == "TH").count(), 3, "repeated headers are artifacts");
}

#[test]
fn nothing_is_painted_off_the_page() {
    for page in [PageSize::Letter, PageSize::A4] {
        let mut document = specimen::document();
        document.meta.page = page;
        let (width, height) = page.points();
        let pdf = read(&pdf::write(&document).unwrap());
        for id in pdf.page_iter() {
            let content = lopdf::content::Content::decode(&pdf.get_page_content(id)).unwrap();
            for operation in content.operations.iter().filter(|o| ["m", "l", "Tm"].contains(&o.operator.as_str())) {
                let numbers: Vec<f64> = operation.operands.iter().filter_map(|o| o.as_float().ok()).map(f64::from).collect();
                let [.., x, y] = numbers[..] else { panic!("{operation:?}") };
                assert!((0.0..=width).contains(&x) && (0.0..=height).contains(&y), "{} {x} {y}", operation.operator);
            }
        }
    }
}

#[test]
fn the_same_bytes_each_time_and_on_any_thread() {
    let once = pdf::write(&specimen::document()).unwrap();
    let others: Vec<_> = (0..4).map(|_| std::thread::spawn(|| pdf::write(&specimen::document()).unwrap())).collect();
    for other in others {
        assert!(other.join().unwrap() == once);
    }
}

#[test]
fn text_of_many_scripts_comes_back_as_it_was() {
    let samples = ["Đường dây trung tính", "Zażółć gęślą jaźń", "Ουδέτερος αγωγός", "Нулевой провод", "119.6 V ± 0.9 V ≤ 2 Ω"];
    let pdf = read(&pdf::write(&with(samples.iter().map(|s| paragraph(s)).collect())).unwrap());
    let text = pages(&pdf).join(" ");
    for sample in samples {
        assert!(text.contains(sample), "{sample}: {text}");
    }
}

#[test]
fn long_labels_and_captions_keep_all_their_words() {
    let long = |word: &str| format!("{} end-of-{word}", "many words ".repeat(150));
    let facts = Block::Facts(vec![("Job".into(), text("1")), (long("label"), text(&long("value")))]);
    let sign = Block::SignOff(vec![(long("role"), Some(long("name")))]);
    let photo = |word: &str| CaptionedImage { image: Image { bytes: specimen::png(), alt: "p".into() }, caption: long(word) };
    let photos = Block::Photos(vec![photo("left"), photo("right")]);
    let text = pages(&read(&pdf::write(&with(vec![facts, sign, photos])).unwrap())).join(" ");
    for word in ["label", "value", "role", "name", "left", "right"] {
        assert!(text.contains(&format!("end-of-{word}")), "{word}: {text}");
    }
}

#[test]
fn every_column_of_a_very_wide_table_stands_on_the_page() {
    let columns: Vec<Column> = (0..120).map(|i| column(&format!("c{i}"), &format!("H{i}"), None, ColumnKind::Text)).collect();
    let cells = (0..120).map(|i| words(&format!("v{i}"))).collect();
    let pdf = read(&pdf::write(&with(vec![Block::Table(Arc::new(table("wide", "Wide", columns, vec![row(cells)])))])).unwrap());
    for id in pdf.page_iter() {
        let content = lopdf::content::Content::decode(&pdf.get_page_content(id)).unwrap();
        for operation in content.operations.iter().filter(|o| o.operator == "Tm") {
            let x = operation.operands[4].as_float().unwrap();
            assert!((54.0..558.0).contains(&x), "{x}");
        }
    }
}

#[test]
fn a_running_line_that_is_cut_says_so() {
    let mut document = with(vec![paragraph("text")]);
    document.meta.header_left = "A company with a very long name ".repeat(12);
    let text = pages(&read(&pdf::write(&document).unwrap())).join(" ");
    assert!(text.contains("A company with a very long name") && text.contains('…'), "{text}");
}

#[test]
fn no_operand_is_other_than_a_number() {
    let shape = |x: f64| Shape::Line { points: vec![(x, 1.0), (2.0, x)], width: x, colour: Colour::Ink, dash: None, round: false };
    let drawing = Drawing { width: 100.0, height: 50.0, alt: "a".into(), shapes: vec![shape(f64::NAN), shape(f64::INFINITY), shape(1.0)] };
    let figure = Block::Figure { caption: vec![], drawing: Arc::new(drawing) };
    let pdf = read(&pdf::write(&with(vec![figure])).unwrap());
    for id in pdf.page_iter() {
        let content = String::from_utf8_lossy(&pdf.get_page_content(id)).into_owned();
        assert!(!content.contains("NaN") && !content.contains("inf"), "{content}");
    }
}

#[test]
fn a_character_without_a_glyph_shows_as_a_replacement() {
    let pdf = read(&pdf::write(&with(vec![paragraph("before 漢 behind")])).unwrap());
    assert!(pages(&pdf)[0].contains("before \u{FFFD} behind"), "{}", pages(&pdf)[0]);
}

#[test]
fn headings_stay_with_what_follows() {
    // So many paragraphs that a heading would stand at the foot of a page for some of the counts.
    for count in 20..60 {
        let mut blocks: Vec<Block> = (0..count).map(|_| paragraph("One line of text.")).collect();
        blocks.push(heading(2, "Follows"));
        blocks.push(paragraph("What follows the heading."));
        for page in pages(&read(&pdf::write(&with(blocks)).unwrap())) {
            assert_eq!(page.contains("Follows"), page.contains("What follows the heading."), "{count}");
        }
    }
}

#[test]
fn documents_made_to_break_it_are_set_all_the_same() {
    let long = "x".repeat(1000);
    let figure = |width: f64, height: f64| {
        let label =
            Shape::Text { at: (1e9, f64::NAN), text: "off".into(), size: 1e6, bold: true, anchor: Anchor::End, colour: Colour::Ink };
        Block::Figure { caption: text("c"), drawing: Arc::new(Drawing { width, height, alt: "a".into(), shapes: vec![label] }) }
    };
    let mut nested = vec![paragraph("deep")];
    for _ in 0..60 {
        nested = vec![Block::List { start: None, items: vec![nested] }];
    }
    let mut boxed = vec![paragraph("deep")];
    for _ in 0..40 {
        boxed = vec![Block::Callout { signal: Some(Signal::Danger), title: text("t"), blocks: boxed }];
    }
    let wide: Vec<Column> = (0..200).map(|i| column(&format!("c{i}"), "Heading", None, ColumnKind::Text)).collect();
    let cells = (0..200).map(|i| words(&format!("cell {i}"))).collect();
    let tall = table("tall", "", vec![column("a", "A", None, ColumnKind::Text)], vec![row(vec![words(&"many words ".repeat(4000))])]);
    let odd = table(
        "odd",
        "",
        vec![column("a", "A", None, ColumnKind::Number), column("b", "B", None, ColumnKind::Name)],
        vec![
            row(vec![Cell::Number(Number { uncertainty: Some(f64::INFINITY), ..Number::new(f64::NAN, 200) })]),
            row(vec![]),
            row(vec![words("a"), words("b"), words("c")]),
        ],
    );
    let photo = |bytes: &[u8]| CaptionedImage { image: Image { bytes: Arc::from(bytes), alt: "p".into() }, caption: long.clone() };
    let cases: Vec<Vec<Block>> = vec![
        vec![],
        vec![Block::PageBreak, Block::PageBreak, Block::PageBreak],
        vec![paragraph(""), paragraph(&long), heading(1, &long), heading(9, ""), Block::Paragraph(vec![Inline::Break; 500])],
        vec![paragraph("\u{0}\u{1b}[31m\u{202e}\u{200b}\u{feff}\n\r\t\u{10ffff}")],
        vec![
            Block::Table(Arc::new(table("none", "", vec![], vec![]))),
            Block::Table(Arc::new(table("empty", "Empty", vec![column("a", "A", None, ColumnKind::Text)], vec![]))),
        ],
        vec![Block::Table(Arc::new(table("wide", "Wide", wide, vec![row(cells)])))],
        vec![Block::Table(Arc::new(tall)), Block::Table(Arc::new(odd))],
        nested,
        boxed,
        vec![figure(0.0, 0.0), figure(-5.0, 10.0), figure(f64::NAN, 10.0), figure(f64::INFINITY, 1.0), figure(1e-9, 1e9), figure(1e9, 5.0)],
        vec![
            Block::Photos(vec![photo(b""), photo(b"\xff\xd8\xff\xc0"), photo(b"\x89PNG\r\n\x1a\n"), photo(&specimen::png())]),
            Block::Photos(vec![]),
        ],
        vec![
            Block::Facts(vec![]),
            Block::Facts(vec![(long.clone(), text(&long))]),
            Block::SignOff(vec![]),
            Block::SignOff(vec![(long.clone(), Some(long.clone()))]),
        ],
    ];
    for (i, blocks) in cases.into_iter().enumerate() {
        let bytes = pdf::write(&with(blocks)).unwrap_or_else(|e| panic!("case {i}: {e}"));
        assert!(!read(&bytes).get_pages().is_empty(), "case {i}");
    }
    let mut bare = with(vec![paragraph("text")]);
    bare.meta = Meta::default();
    assert!(!read(&pdf::write(&bare).unwrap()).get_pages().is_empty());
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(48))]

    /// Whatever the words, every one of them is in the file, in order.
    #[test]
    fn no_word_is_lost(words in proptest::collection::vec("[A-Za-z0-9.,±Ω-]{1,24}", 1..120)) {
        let text: String = words.join(" ");
        let pdf = read(&pdf::write(&with(vec![paragraph(&text)])).unwrap());
        let all: String = pages(&pdf).join(" ").split_whitespace().collect();
        let sought: String = text.split_whitespace().collect();
        // The running lines stand behind each page's text.
        let found = sought.chars().try_fold(all.as_str(), |rest, c| rest.find(c).map(|i| &rest[i + c.len_utf8()..]));
        prop_assert!(found.is_some());
    }
}
