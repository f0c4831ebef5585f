//! Exposure bars and leg load.

use crate::house::{House, WIDTH, bounds};
use midwire::report::drawing::{Colour, Drawing, Shape};

/// The marks of bars: middle and fill.
fn marks(drawing: &Drawing) -> Vec<(f64, Colour)> {
    let mark = |s: &Shape| match s {
        Shape::Polygon { fill: Some(fill), .. } => {
            let [left, _, right, _] = bounds(s, &crate::house::Fixed);
            Some(((left + right) / 2.0, *fill))
        }
        _ => None,
    };
    drawing.shapes.iter().filter_map(mark).collect()
}

/// The ends of the axes: of the beams.
fn axis(drawing: &Drawing) -> (f64, f64) {
    let beam = drawing.shapes.iter().find_map(|s| match s {
        Shape::Line { points, round: true, colour: Colour::Faint, .. } => Some((points[0].0, points[1].0)),
        _ => None,
    });
    beam.unwrap()
}

fn exposed() -> House {
    House::new("120/240")
        .run("5/7", "", "L1 L2", "living room")
        .run("5/7b", "5/7", "L1 L2", "window")
        .exposed("5/7", &[("L1", None, 180.0, "5/7b", 350.0), ("L2", None, 60.0, "5/7", 1050.0)])
        .exposed("5/7b", &[("L1", Some(40.0), 200.0, "5/7b", 60.0), ("L2", Some(40.0), 200.0, "5/7b", 60.0)])
}

#[test]
fn a_bar_ends_at_its_volts_and_a_range_at_both() {
    let figure = &exposed().figure("exposure")[0];
    let (left, right) = axis(&figure.drawing);
    let volts: Vec<f64> = marks(&figure.drawing).iter().map(|(x, _)| (x - left) / (right - left) * 240.0).collect();
    for (drawn, expected) in volts.iter().zip([180.0, 60.0, 40.0, 200.0, 40.0, 200.0]) {
        assert!((drawn - expected).abs() < 1e-6, "{volts:?}");
    }
    let is_open: Vec<bool> = marks(&figure.drawing).iter().map(|m| m.1 == Colour::Paper).collect();
    assert_eq!(is_open, [false, false, true, true, true, true]);
    assert!(figure.drawing.alt.contains("40 to 200 V on L1 at 5/7b"), "{}", figure.drawing.alt);
}

#[test]
fn the_shaded_band_is_the_one_loads_are_judged_by() {
    // 90 to 110 % of nominal: the steady band of the ITIC curve (Information Technology Industry Council, 2000).
    let figure = &exposed().figure("exposure")[0];
    let (left, right) = axis(&figure.drawing);
    let band = figure.drawing.shapes.iter().find(|s| matches!(s, Shape::Rect { fill: Colour::Band, .. })).unwrap();
    let [from, _, to, _] = bounds(band, &crate::house::Fixed);
    let volts = |x: f64| (x - left) / (right - left) * 240.0;
    assert!((volts(from) - 108.0).abs() < 1e-6 && (volts(to) - 132.0).abs() < 1e-6);
}

#[test]
fn volts_that_are_no_number_leave_their_bars_out() {
    let house = House::new("120/240").run("5", "", "L1 L2", "");
    assert!(house.figure("exposure").is_empty());
    assert!(house.exposed("5", &[("L1", None, f64::NAN, "5", 1.0)]).figure("exposure").is_empty());
}

fn loaded() -> House {
    House::new("120/240")
        .run("SVC", "", "L1 L2", "service")
        .run("1", "SVC", "L1", "kitchen")
        .built(12, 10.0, 20.0)
        .load("L1", 4000.0)
        .run("3", "SVC", "L1", "bath")
        .built(12, 10.0, 20.0)
        .load("L1", 1500.0)
        .run("2", "SVC", "L2", "office")
        .built(12, 10.0, 20.0)
        .load("L2", 2500.0)
}

/// Pieces of bars: width, top, fill.
fn pieces(drawing: &Drawing) -> Vec<(f64, f64, Colour)> {
    let piece = |s: &Shape| match s {
        Shape::Rect { width, y, height, fill, .. } if *height > 10.0 => Some((*width, *y, *fill)),
        _ => None,
    };
    drawing.shapes.iter().filter_map(piece).collect()
}

#[test]
fn pieces_are_as_wide_as_their_load_and_what_moves_is_marked_in_both_bars() {
    let figure = &loaded().figure("leg-load")[0];
    let all = pieces(&figure.drawing);
    // L1 now 4000 and 1500 (moves), L1 after 4000, L2 now 2500, L2 after 2500 and 1500. Each is drawn 0.8 pt narrower.
    let va = [4000.0, 1500.0, 4000.0, 2500.0, 2500.0, 1500.0];
    assert_eq!(all.len(), va.len());
    let scale = (all[0].0 + 0.8) / va[0];
    for ((width, _, _), va) in all.iter().zip(va) {
        assert!((width + 0.8 - va * scale).abs() < 1e-6);
    }
    let moved: Vec<usize> = (0..all.len()).filter(|i| all[*i].2 == Colour::Accent).collect();
    assert_eq!(moved, [1, 5]);
    for said in ["L1 carries 5500 VA", "Move 3 (bath) from L1 to L2", "After the moves L2 carries 4000 VA"] {
        assert!(figure.drawing.alt.contains(said), "{said}: {}", figure.drawing.alt);
    }
}

#[test]
fn thin_slices_stand_together_as_others() {
    let mut house = loaded();
    for i in 0..40 {
        house = house
            .run(&format!("small {i}"), "SVC", "L1", "")
            .load("L1", 10.0)
            .run(&format!("little {i}"), "SVC", "L2", "")
            .load("L2", 50.0);
    }
    let figure = &house.figure("leg-load")[0];
    let others = figure.drawing.shapes.iter().filter(|s| matches!(s, Shape::Text { text, .. } if text == "40 others"));
    assert!(others.count() >= 1);
    let widest = pieces(&figure.drawing).iter().map(|p| p.0).fold(0.0, f64::max);
    assert!(pieces(&figure.drawing).len() < 20 && widest < WIDTH);
}

#[test]
fn no_load_no_figure() {
    assert!(House::new("120/240").run("1", "", "L1 L2", "").figure("leg-load").is_empty());
    assert!(House::new("120/240").run("1", "", "L1", "").load("L1", 0.0).figure("leg-load").is_empty());
    assert!(House::new("120/240").run("1", "", "L1", "").load("L1", f64::INFINITY).figure("leg-load").is_empty());
}
