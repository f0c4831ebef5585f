//! The SVG back end.

use crate::house::{Fixed, House};
use midwire::render::svg;
use midwire::report::drawing::{Anchor, Colour, Drawing, Shape};
use midwire::results::CauseKind;
use quick_xml::events::Event;

const ACCENT: [u8; 3] = [0x1f, 0x4d, 0x45];

/// Parses the SVG; element names in order and the texts of `text` elements.
pub fn parsed(svg: &str) -> (Vec<String>, Vec<String>) {
    let mut reader = quick_xml::Reader::from_str(svg);
    let (mut names, mut texts, mut in_text) = (Vec::new(), Vec::new(), false);
    loop {
        match reader.read_event().unwrap() {
            Event::Start(tag) => {
                let name = String::from_utf8(tag.name().as_ref().to_vec()).unwrap();
                in_text = name == "text";
                if in_text {
                    texts.push(String::new());
                }
                names.push(name);
            }
            Event::Empty(tag) => names.push(String::from_utf8(tag.name().as_ref().to_vec()).unwrap()),
            Event::Text(text) if in_text => texts.last_mut().unwrap().push_str(&text.decode().unwrap()),
            Event::GeneralRef(name) if in_text => {
                let c = name.resolve_char_ref().unwrap().or_else(|| {
                    let known = [("amp", '&'), ("lt", '<'), ("gt", '>'), ("quot", '"')];
                    known.iter().find(|(n, _)| n.as_bytes() == &name[..]).map(|(_, c)| *c)
                });
                texts.last_mut().unwrap().push(c.unwrap());
            }
            Event::End(_) => in_text = false,
            Event::Eof => return (names, texts),
            _ => {}
        }
    }
}

fn text(text: &str) -> Shape {
    Shape::Text { at: (1.0, 9.0), text: text.to_owned(), size: 8.0, bold: true, anchor: Anchor::End, colour: Colour::Accent }
}

#[test]
fn markup_in_a_label_stays_text() {
    let hostile = "</text><script>alert('&\"')</script>";
    let drawing = Drawing { width: 100.0, height: 20.0, alt: format!("{hostile}. Then."), shapes: vec![text(hostile)] };
    let out = svg::write(&drawing, ACCENT);
    let (names, texts) = parsed(&out);
    assert_eq!(names, ["svg", "title", "desc", "text"]);
    assert_eq!(texts, [hostile]);
}

#[test]
fn characters_xml_has_no_place_for_are_replaced() {
    let drawing = Drawing { width: 10.0, height: 10.0, alt: "\u{0}\u{1b}[31m".to_owned(), shapes: vec![text("a\u{8}b\u{ffff}c\td\u{85}")] };
    let (_, texts) = parsed(&svg::write(&drawing, ACCENT));
    assert_eq!(texts, ["a\u{fffd}b\u{fffd}c d\u{fffd}"]);
}

#[test]
fn numbers_are_short_and_never_nan() {
    let line = Shape::Line {
        points: vec![(f64::NAN, -0.001), (1.0 / 3.0, f64::INFINITY)],
        width: 1.50,
        colour: Colour::Ink,
        dash: Some((2.0, 1.5)),
        round: false,
    };
    let out = svg::write(&Drawing { width: 504.0, height: 12.5, alt: String::new(), shapes: vec![line] }, ACCENT);
    assert!(
        out.contains("points=\"0,0 0.33,0\" fill=\"none\" stroke=\"#1d232b\" stroke-width=\"1.5\" stroke-dasharray=\"2 1.5\""),
        "{out}"
    );
    assert!(out.contains("viewBox=\"0 0 504 12.5\""));
}

/// A small visit in which every figure has something to show.
fn small() -> House {
    House::new("120/240")
        .run("SVC", "", "L1 L2", "service")
        .built(-3, 24.0, 200.0)
        .run("5/7", "SVC", "L1 L2", "living room")
        .built(12, 21.3, 20.0)
        .load("L1", 350.0)
        .load("L2", 1100.0)
        .run("2", "SVC", "L2", "office")
        .built(12, 9.0, 20.0)
        .load("L2", 900.0)
        .read("SVC", &[("L1-N", 119.4), ("L2-N", 119.3), ("L1-L2", 238.7)])
        .read("5/7", &[("L1-N", 161.8), ("L2-N", 76.1)])
        .cause(CauseKind::Neutral, &["5/7"], 0.97)
        .cause(CauseKind::None, &[], 0.03)
        .exposed("5/7", &[("L1", None, 171.2, "5/7", 350.0), ("L2", None, 68.8, "5/7", 1100.0)])
}

#[test]
fn a_figure_is_an_image_with_a_name_and_nothing_that_runs_or_fetches() {
    for figure in small().figures(&Fixed) {
        let out = svg::write(&figure.drawing, ACCENT);
        let (names, _) = parsed(&out);
        assert_eq!(names[..3], ["svg", "title", "desc"]);
        assert!(out.starts_with("<svg xmlns=\"http://www.w3.org/2000/svg\" role=\"img\""));
        let plain = ["svg", "title", "desc", "text", "polyline", "polygon", "rect", "circle"];
        assert!(names.iter().all(|n| plain.contains(&n.as_str())), "{names:?}");
        let tags = out.lines().filter(|l| !l.starts_with("<title>") && !l.starts_with("<desc>"));
        assert!(tags.into_iter().all(|t| !t.contains("href") && !t.contains("url(") && !t.contains(" on")));
    }
}

#[test]
fn the_small_visit_as_drawn() {
    for figure in small().figures(&Fixed) {
        insta::assert_snapshot!(
            format!("figures_{}", figure.name),
            format!("{}\n\n{}", figure.caption, svg::write(&figure.drawing, ACCENT))
        );
    }
}
