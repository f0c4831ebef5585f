//! The run tree.

use crate::house::House;
use midwire::report::drawing::{Colour, Drawing, Shape};
use midwire::results::CauseKind;
use midwire::visit::Leg;

fn chain(names: &[&str]) -> House {
    let mut house = House::new("120/240");
    let mut from = "";
    for name in names {
        house = house.run(name, from, "L1 L2", "outlet");
        from = name;
    }
    house
}

/// Heavy strokes: width and colour.
fn strokes(drawing: &Drawing) -> Vec<(f64, Colour)> {
    let stroke = |s: &Shape| match s {
        Shape::Line { width, colour, round: true, .. } => Some((*width, *colour)),
        _ => None,
    };
    drawing.shapes.iter().filter_map(stroke).collect()
}

#[test]
fn a_stroke_is_as_heavy_as_its_run_is_likely() {
    // 0.6 shared over two runs; 0.3; 0.08.
    let figure = chain(&["A", "B", "C", "D", "E"])
        .cause(CauseKind::Neutral, &["B", "C"], 0.6)
        .cause(CauseKind::Hot(Leg::L1), &["D"], 0.2)
        .cause(CauseKind::Neutral, &["D"], 0.1)
        .cause(CauseKind::Neutral, &["E"], 0.08)
        .cause(CauseKind::None, &[], 0.02)
        .figure("run-tree")
        .remove(0);
    let widths: Vec<f64> = strokes(&figure.drawing).iter().map(|s| s.0).collect();
    let [b, c, d, e] = widths[..] else { panic!("{widths:?}") };
    assert!((b - c).abs() < 1e-12 && (b - d).abs() < 1e-12, "equal shares, equal strokes: {widths:?}");
    // In proportion to the probability, over a thin line that every run has.
    let thin = e - 0.08 / (0.3 - 0.08) * (b - e);
    assert!(thin > 0.3 && thin < 1.5, "{thin}");
}

#[test]
fn the_leading_set_stands_out_by_colour_weight_and_shape() {
    let figure =
        chain(&["A", "B", "C"]).cause(CauseKind::Neutral, &["B"], 0.7).cause(CauseKind::Neutral, &["C"], 0.3).figure("run-tree").remove(0);
    let strokes = strokes(&figure.drawing);
    assert!(matches!(strokes[0], (heavy, Colour::Signal(_)) if heavy > strokes[1].0) && strokes[1].1 == Colour::Quiet, "{strokes:?}");
    let squares = figure.drawing.shapes.iter().filter(|s| matches!(s, Shape::Rect { fill: Colour::Signal(_), .. })).count();
    assert_eq!(squares, 1);
    assert!(figure.caption.contains("neutral of B, 70 % probable"), "{}", figure.caption);
}

#[test]
fn no_probability_is_shown_as_certainty() {
    let figure =
        chain(&["A", "B"]).cause(CauseKind::Neutral, &["B"], 0.999_999).cause(CauseKind::None, &[], 1e-6).figure("run-tree").remove(0);
    assert!(figure.caption.contains("neutral of B, over 99.9 % probable"), "{}", figure.caption);
}

#[test]
fn without_a_diagnosis_or_a_fault_all_runs_are_thin() {
    assert!(strokes(&chain(&["A", "B"]).figure("run-tree")[0].drawing).is_empty());
    let none = chain(&["A", "B"]).cause(CauseKind::None, &[], 1.0).figure("run-tree").remove(0);
    assert!(strokes(&none.drawing).is_empty());
    assert!(none.drawing.alt.contains("point at no run"), "{}", none.drawing.alt);
}

#[test]
fn ten_thousand_runs_in_a_chain_are_drawn_in_part_and_counted() {
    let mut house = House::new("120/240");
    let names: Vec<String> = (0..10_000).map(|i| format!("R{i}")).collect();
    let mut from = "";
    let mut runs = Vec::new();
    for name in &names {
        let mut one = House::new("120/240").run(name, from, "L1 L2", "").visit.runs;
        runs.append(&mut one);
        from = name;
    }
    house.visit.tree = midwire::visit::Tree::new(&runs);
    house.visit.runs = runs;
    let house = house.cause(CauseKind::Neutral, &["R9000"], 0.9).cause(CauseKind::None, &[], 0.1);
    let started = std::time::Instant::now();
    let figures = house.figure("run-tree");
    assert!(started.elapsed().as_secs() < 8);
    assert!(figures[0].caption.contains("200 of 10000"), "{}", figures[0].caption);
    let has_it = |s: &Shape| matches!(s, Shape::Text { text, .. } if text == "R9000");
    assert!(figures.iter().any(|f| f.drawing.shapes.iter().any(has_it)), "the suspect is among them");
}

#[test]
fn a_ring_and_a_loose_run_are_listed_with_their_sources() {
    let house = House::new("120/240")
        .run("A", "", "L1 L2", "")
        .run("X", "Y", "L1 L2", "")
        .run("Y", "X", "L1 L2", "")
        .run("Z", "nowhere", "L1", "shed");
    let figure = &house.figure("run-tree")[0];
    for said in ["A", "X", "Y", "Z", "from Y", "from X", "from nowhere · shed"] {
        assert!(figure.drawing.shapes.iter().any(|s| matches!(s, Shape::Text { text, .. } if text == said)), "{said}");
    }
}
