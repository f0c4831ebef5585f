//! The HTML renderer: what it writes, read back as XML.

use crate::specimen::{self, column, document_of, row, table, text, words};
use midwire::quantity::Unit;
use midwire::render::html::write as write_html;
use midwire::report::document::*;
use midwire::results::Verdict;
use proptest::prelude::*;
use quick_xml::events::{BytesStart, Event};
use sha2::{Digest, Sha256};
use std::sync::Arc;

/// One step through the markup.
enum Step {
    Open(String, Vec<(String, String)>),
    Text(String),
    Close,
}

/// The markup, step by step; it must be well-formed XML.
fn steps(html: &str) -> Vec<Step> {
    let mut reader = quick_xml::Reader::from_str(html);
    reader.config_mut().check_end_names = true;
    let mut steps = Vec::new();
    loop {
        match reader.read_event().expect("well-formed markup") {
            Event::Start(tag) => steps.push(open(&tag)),
            Event::Empty(tag) => steps.extend([open(&tag), Step::Close]),
            Event::End(_) => steps.push(Step::Close),
            Event::Text(text) => add(&mut steps, &text.decode().expect("UTF-8")),
            Event::GeneralRef(name) => add(&mut steps, entity(&name.decode().expect("UTF-8"))),
            Event::Eof => return steps,
            Event::DocType(_) => {}
            other => panic!("{other:?} is not expected"),
        }
    }
}

fn open(tag: &BytesStart) -> Step {
    let name = String::from_utf8_lossy(tag.name().as_ref()).into_owned();
    let attribute = |a: quick_xml::events::attributes::Attribute| {
        let value = String::from_utf8_lossy(&a.value).into_owned();
        let value = ["amp", "lt", "gt", "quot", "#39"].iter().rev().fold(value, |v, e| v.replace(&format!("&{e};"), entity(e)));
        (String::from_utf8_lossy(a.key.as_ref()).into_owned(), value)
    };
    Step::Open(name, tag.attributes().map(|a| attribute(a.expect("an attribute once"))).collect())
}

fn entity(name: &str) -> &'static str {
    match name {
        "amp" => "&",
        "lt" => "<",
        "gt" => ">",
        "quot" => "\"",
        "#39" => "'",
        other => panic!("&{other}; is not expected"),
    }
}

fn add(steps: &mut Vec<Step>, text: &str) {
    match steps.last_mut() {
        Some(Step::Text(before)) => before.push_str(text),
        _ => steps.push(Step::Text(text.to_owned())),
    }
}

/// The markup as an indented outline: elements with their attributes, texts below them.
fn outline(html: &str) -> String {
    let (mut lines, mut depth) = (String::new(), 0);
    let mut write = |depth: usize, line: &str| lines.push_str(&format!("{}{line}\n", "  ".repeat(depth)));
    for step in steps(html) {
        match step {
            Step::Open(name, attributes) => {
                let shown = attributes.iter().filter(|(name, _)| name != "d");
                let attributes: String = shown.map(|(name, value)| format!(" {name}={:.38}", value.replace('\u{2007}', "_"))).collect();
                write(depth, &format!("{name}{attributes}"));
                depth += 1;
            }
            Step::Text(text) if text.contains("box-sizing") => write(depth, "…"),
            Step::Text(text) if text.trim().is_empty() => {}
            Step::Text(text) => write(depth, &format!("“{}”", text.trim_matches('\n'))),
            Step::Close => depth -= 1,
        }
    }
    lines
}

/// The texts within each element of that name.
fn texts(html: &str, wanted: &str) -> Vec<String> {
    let (mut found, mut stack) = (Vec::new(), Vec::new());
    for step in steps(html) {
        match step {
            Step::Open(name, _) => {
                stack.push((name == wanted).then_some(found.len()));
                if name == wanted {
                    found.push(String::new());
                }
            }
            Step::Text(text) => stack.iter().flatten().for_each(|&i: &usize| found[i].push_str(&text)),
            Step::Close => drop(stack.pop()),
        }
    }
    found
}

fn attributes(html: &str) -> Vec<(String, String, String)> {
    let opened = steps(html).into_iter().filter_map(|s| if let Step::Open(name, attributes) = s { Some((name, attributes)) } else { None });
    opened.flat_map(|(element, attributes)| attributes.into_iter().map(move |(name, value)| (element.clone(), name, value))).collect()
}

fn body(blocks: Vec<Block>) -> String {
    write_html(&Document { blocks, ..document_of(Vec::new()) })
}

#[test]
fn the_specimen_reads_as_it_should() {
    insta::assert_snapshot!(outline(&write_html(&specimen::document())));
}

/// Nothing runs, nothing is asked for: checked over every element and attribute.
fn assert_inert(html: &str) {
    for (element, name, value) in attributes(html) {
        assert!(!matches!(element.as_str(), "script" | "iframe" | "object" | "embed" | "form" | "base" | "link"), "{element}");
        assert!(!name.starts_with("on") && name != "style" && name != "srcset", "{name}");
        match name.as_str() {
            "href" => assert!(value.starts_with("https://") || value.starts_with("mailto:") || value.starts_with('#'), "{value}"),
            "src" => assert!(value.starts_with("data:image/png;base64,") || value.starts_with("data:image/jpeg;base64,"), "{value:.40}"),
            _ => {}
        }
    }
    assert!(!html.contains("<script") && !html.contains("url(") && !html.contains("@import"));
}

#[test]
fn nothing_runs_and_nothing_is_fetched() {
    assert_inert(&write_html(&specimen::document()));
}

#[test]
fn the_policy_names_the_style_sheet_by_its_hash() {
    let html = write_html(&specimen::document());
    let policy = attributes(&html).into_iter().find(|(_, _, value)| value.contains("default-src")).expect("a policy").2;
    let hash = policy.split("sha256-").nth(1).and_then(|s| s.split('\'').next()).expect("a hash");
    assert_eq!(policy, format!("default-src 'none'; style-src 'sha256-{hash}'; img-src data:; base-uri 'none'; form-action 'none'"));
    let css = html.split("<style>").nth(1).and_then(|s| s.split("</style>").next()).expect("a style sheet");
    assert_eq!(decoded(hash), Sha256::digest(css.as_bytes()).to_vec());
}

/// Base 64, read bit by bit.
fn decoded(text: &str) -> Vec<u8> {
    let digits = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let values = text.bytes().filter_map(|b| digits.iter().position(|d| *d == b));
    let bits: Vec<bool> = values.flat_map(|v| (0..6).rev().map(move |i| v >> i & 1 == 1)).collect();
    bits.chunks_exact(8).map(|byte| byte.iter().fold(0, |n, bit| n << 1 | u8::from(*bit))).collect()
}

#[test]
fn links_lead_only_where_they_may() {
    let hrefs = [
        "javascript:alert(1)",
        "JAVASCRIPT:alert(1)",
        " https://a",
        "http://a",
        "data:text/html,x",
        "file:///etc",
        "//a",
        "\u{1}javascript:a",
        "vbscript:a",
        "",
    ];
    let links = hrefs.map(|href| Inline::Link { href: href.to_owned(), text: text("shown") });
    let html = body(vec![Block::Paragraph(links.to_vec())]);
    assert_inert(&html);
    assert!(texts(&html, "a").is_empty());
    assert_eq!(texts(&html, "main").concat().matches("shown").count(), hrefs.len());
    let good = Inline::Link { href: "https://ferry-valley.example/?a=\"1\"&b=<2>".to_owned(), text: text("shown") };
    let html = body(vec![Block::Paragraph(vec![good])]);
    assert!(attributes(&html).iter().any(|(_, name, value)| name == "href" && value == "https://ferry-valley.example/?a=\"1\"&b=<2>"));
}

#[test]
fn text_from_a_stranger_stays_text_everywhere() {
    let nasty = "</style><script>alert(1)</script>\" onload=\"x\" '--><!-- ]]> &amp; \u{0}\u{202e}\u{ffff} \\\" } body{";
    let mut document = specimen::document();
    let meta = &mut document.meta;
    for field in [
        &mut meta.title,
        &mut meta.author,
        &mut meta.subject,
        &mut meta.language,
        &mut meta.producer,
        &mut meta.input_sha256,
        &mut meta.header_left,
        &mut meta.header_right,
        &mut meta.footer_left,
        &mut meta.page_words,
    ] {
        *field = nasty.to_owned();
    }
    meta.date = Some(nasty.to_owned());
    meta.logo = Some(Image { bytes: Arc::from(&b"<svg onload='x'>"[..]), alt: nasty.to_owned() });
    let photo = CaptionedImage { image: Image { bytes: specimen::png(), alt: nasty.to_owned() }, caption: nasty.to_owned() };
    let cells = vec![row(vec![words(nasty), Cell::Rich(text(nasty))])];
    let columns = vec![column(nasty, nasty, None, ColumnKind::Name), column(nasty, nasty, None, ColumnKind::Text)];
    document.blocks.extend([
        Block::Heading { level: 200, text: text(nasty), anchor: nasty.to_owned() },
        Block::Facts(vec![(nasty.to_owned(), text(nasty))]),
        Block::SignOff(vec![(nasty.to_owned(), Some(nasty.to_owned()))]),
        Block::Photos(vec![photo]),
        Block::Table(Arc::new(table(nasty, nasty, columns, cells))),
        Block::Callout {
            signal: None,
            title: text(nasty),
            blocks: vec![Block::List { start: None, items: vec![vec![Block::Paragraph(text(nasty))]] }],
        },
    ]);
    let html = write_html(&document);
    assert_inert(&html);
    assert_eq!(texts(&html, "style").len(), 1);
    assert!(!html.contains('\0') && !html.contains('\u{202e}'));
}

#[test]
fn numbers_show_their_decimals_sign_uncertainty_verdict_and_cell() {
    let readings = specimen::readings();
    let html = body(vec![Block::Table(Arc::new(readings))]);
    let data = texts(&html, "data");
    assert_eq!(data[..5], ["120.4", "118.5", "238.9", "238.9", "0.0"]);
    assert!(data.contains(&"−0.1".to_owned()));
    let cells = texts(&html, "td");
    assert!(
        cells.contains(&"± 0.9".to_owned()) && cells.contains(&"151.8 fail".to_owned()) && cells.contains(&"121.2 undecided".to_owned())
    );
    assert!(attributes(&html).iter().any(|(_, n, v)| n == "title" && v == "Readings!C9"));
}

#[test]
fn numbers_take_the_decimal_mark_and_never_a_negative_zero() {
    let number = |value, decimals| row(vec![Cell::Number(Number { verdict: Some(Verdict::Pass), ..Number::new(value, decimals) })]);
    let rows = vec![number(-0.04, 1), number(-1234.5, 2), number(7.0, 0), number(f64::NAN, 1), number(f64::NEG_INFINITY, 1)];
    let block = Block::Table(Arc::new(table("n", "N", vec![column("n", "N", Some(Unit::Ohm), ColumnKind::Number)], rows)));
    let document = Document { meta: Meta { decimal_mark: ',', ..specimen::meta() }, blocks: vec![block], sheets: Vec::new() };
    let html = write_html(&document);
    assert_eq!(texts(&html, "data"), ["0,0", "−1234,50", "7", "?", "−∞"]);
    let pads: Vec<String> = attributes(&html).into_iter().filter(|(_, name, _)| name == "data-pad").map(|(_, _, value)| value).collect();
    assert_eq!(pads, ["\u{2007}", "\u{2008}\u{2007}\u{2007}", "\u{2007}", "\u{2007}"], "blanks in place of missing decimals");
}

#[test]
fn a_document_without_a_language_still_prints_numbers() {
    let block = Block::Table(Arc::new(specimen::readings()));
    let html = write_html(&Document { blocks: vec![block], ..Document::default() });
    assert_eq!(texts(&html, "data")[0], "120.4");
}

#[test]
fn anchors_are_unique_and_links_find_them() {
    let heading = |anchor: &str| Block::Heading { level: 2, text: text("H"), anchor: anchor.to_owned() };
    let link = Inline::Link { href: "#run 5/7".to_owned(), text: text("L") };
    let html = body(vec![heading("run 5/7"), heading("run 5/7"), heading(""), Block::Paragraph(vec![link])]);
    let of =
        |wanted: &str| attributes(&html).into_iter().filter(|(_, name, _)| name == wanted).map(|(_, _, value)| value).collect::<Vec<_>>();
    assert_eq!(of("id"), ["run-5-7", "run-5-7-2"]);
    assert_eq!(of("href"), ["#run-5-7"]);
}

#[test]
fn a_document_without_blocks_has_its_title() {
    assert_eq!(texts(&body(Vec::new()), "h1"), [specimen::meta().title]);
}

#[test]
fn the_same_document_gives_the_same_text() {
    assert_eq!(write_html(&specimen::document()), write_html(&specimen::document()));
}

proptest! {
    #[test]
    fn any_printable_text_comes_out_as_that_text(given in "[^\\p{C}\\p{Z}]{0,40}( [^\\p{C}\\p{Z}]{1,40}){0,3}") {
        let cells = vec![row(vec![words(&given)])];
        let html = body(vec![Block::Paragraph(text(&given)), Block::Table(Arc::new(table("t", &given, vec![column("c", &given, None, ColumnKind::Text)], cells)))]);
        prop_assert!(texts(&html, "p").contains(&given));
        for element in ["caption", "th", "td"] {
            prop_assert_eq!(texts(&html, element), vec![given.clone()]);
        }
        prop_assert!(attributes(&html).contains(&("div".to_owned(), "aria-label".to_owned(), given)));
    }

    #[test]
    fn any_text_at_all_leaves_the_markup_whole(given in any::<String>(), more in "[<>&\"'/=a-z\\-\\]!\\x00-\\x1f]{0,40}") {
        let html = body(vec![Block::Paragraph(text(&given)), Block::Paragraph(text(&more)), Block::Heading { level: 2, text: text(&more), anchor: given }]);
        assert_inert(&html);
        prop_assert!(!html.chars().any(|c| c.is_control() && !matches!(c, '\n' | '\t')));
    }
}
