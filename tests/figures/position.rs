//! Where the neutral sits: on the beam and in the triangle.

use crate::house::{House, bounds};
use midwire::report::drawing::{Colour, Drawing, Shape};
use midwire::results::CauseKind;
use midwire::visit::Stage;

/// The beams of a strip: left end, right end, height.
fn beams(drawing: &Drawing) -> Vec<(f64, f64, f64)> {
    let beam = |shape: &Shape| match shape {
        Shape::Line { points, round: true, colour: Colour::Faint, .. } => Some((points[0].0, points[1].0, points[0].1)),
        _ => None,
    };
    drawing.shapes.iter().filter_map(beam).collect()
}

/// The marks on a beam: left end, right end, fill.
fn marks(drawing: &Drawing, y: f64) -> Vec<(f64, f64, Colour)> {
    let mark = |shape: &Shape| match shape {
        Shape::Polygon { points, fill: Some(fill), .. } if *fill != Colour::Band && points.len() == 4 => {
            let [left, top, right, bottom] = bounds(shape, &crate::house::Fixed);
            ((top + bottom) / 2.0 - y).abs().lt(&0.01).then_some((left, right, *fill))
        }
        _ => None,
    };
    drawing.shapes.iter().filter_map(mark).collect()
}

fn two_legs(pairs: &[(f64, f64)]) -> House {
    let mut house = House::new("120/240").run("SVC", "", "L1 L2", "service");
    for (i, (a, b)) in pairs.iter().enumerate() {
        let name = format!("{i}");
        house = house.run(&name, "SVC", "L1 L2", "").read(&name, &[("L1-N", *a), ("L2-N", *b)]);
    }
    house
}

#[test]
fn a_mark_stands_where_the_ratio_says() {
    let pairs = [(120.0, 120.0), (161.8, 76.1), (90.0, 150.0), (119.0, 121.0), (200.0, 40.0)];
    let figure = &two_legs(&pairs).figure("neutral-position")[0];
    let beams = beams(&figure.drawing);
    assert_eq!(beams.len(), pairs.len());
    for ((a, b), (left, right, y)) in pairs.iter().zip(beams) {
        let marks = marks(&figure.drawing, y);
        let [(from, to, _)] = marks[..] else { panic!("one mark a beam: {marks:?}") };
        let share = ((from + to) / 2.0 - left) / (right - left);
        assert!((share - a / (a + b)).abs() < 1e-9, "{a} {b}: {share}");
    }
}

#[test]
fn a_mark_is_as_wide_as_the_uncertainty() {
    // 40 counts of 0.1 V: a rectangle of half-width 4 V, standard uncertainty 4/√3 V (JCGM 100, 4.3.7), independent in both
    // readings; the change of the ratio is taken by finite differences.
    let (a, b, u) = (131.0, 109.0, 4.0 / 3f64.sqrt());
    let ratio = |a: f64, b: f64| a / (a + b);
    let step = 1e-4;
    let by_a = (ratio(a + step, b) - ratio(a, b)) / step * u;
    let by_b = (ratio(a, b + step) - ratio(a, b)) / step * u;
    let expanded = 2.0 * (by_a * by_a + by_b * by_b).sqrt();

    let figure = &two_legs(&[(a, b)]).meter(40.0).figure("neutral-position")[0];
    let (left, right, y) = beams(&figure.drawing)[0];
    let (from, to, _) = marks(&figure.drawing, y)[0];
    assert!(((to - from) / (right - left) - 2.0 * expanded).abs() < 1e-5, "{} {}", to - from, right - left);
}

#[test]
fn a_sure_mark_is_still_seen_and_an_unsure_one_stays_on_its_beam() {
    let sure = &two_legs(&[(120.0, 120.0)]).meter(0.0).figure("neutral-position")[0];
    let (_, _, y) = beams(&sure.drawing)[0];
    let (from, to, _) = marks(&sure.drawing, y)[0];
    assert!((to - from - 3.6).abs() < 1e-9);
    let unsure = &two_legs(&[(2.0, 238.0)]).meter(9000.0).figure("neutral-position")[0];
    let (left, right, y) = beams(&unsure.drawing)[0];
    let (from, to, _) = marks(&unsure.drawing, y)[0];
    assert!(from >= left && to <= right);
}

#[test]
fn below_an_open_neutral_the_marks_step_aside() {
    let house = House::new("120/240")
        .run("SVC", "", "L1 L2", "service")
        .run("5", "SVC", "L1 L2", "")
        .run("5a", "5", "L1 L2", "")
        .run("5b", "5a", "L1 L2", "")
        .read("SVC", &[("L1-N", 119.4), ("L2-N", 119.3)])
        .read("5", &[("L1-N", 118.9), ("L2-N", 119.0)])
        .read("5a", &[("L1-N", 161.8), ("L2-N", 76.1)])
        .read("5b", &[("L1-N", 161.2), ("L2-N", 75.9)])
        .cause(CauseKind::Neutral, &["5a"], 0.97)
        .cause(CauseKind::None, &[], 0.03);
    let figure = &house.figure("neutral-position")[0];
    let at = |(left, right, y): &(f64, f64, f64)| {
        let (from, to, fill) = marks(&figure.drawing, *y)[0];
        ((from + to) / 2.0 - (left + right) / 2.0, matches!(fill, Colour::Signal(_)))
    };
    let steps: Vec<(f64, bool)> = beams(&figure.drawing).iter().map(at).collect();
    assert!(steps[..2].iter().all(|(step, is_loud)| step.abs() < 1.0 && !is_loud), "{steps:?}");
    assert!(steps[2..].iter().all(|(step, is_loud)| *step > 30.0 && *is_loud), "{steps:?}");
    for said in ["5a (as found)", "161.8 V", "76.1 V", "neutral of 5a, 97 % probable"] {
        assert!(figure.drawing.alt.contains(said), "{said}: {}", figure.drawing.alt);
    }
}

#[test]
fn the_shaded_middle_is_the_shift_the_rule_allows() {
    // Elsewhere 5 % of 120 V (common practice, no source): 6 V either way on a beam of 240 V.
    let figure = &two_legs(&[(120.0, 120.0)]).figure("neutral-position")[0];
    let (left, right, _) = beams(&figure.drawing)[0];
    let band = figure.drawing.shapes.iter().find(|s| matches!(s, Shape::Polygon { fill: Some(Colour::Band), .. })).unwrap();
    let [from, _, to, _] = bounds(band, &crate::house::Fixed);
    assert!(((to - from) / (right - left) - 2.0 * 6.0 / 240.0).abs() < 1e-9);
}

#[test]
fn stages_and_states_have_marks_of_their_own() {
    let volts = [("L1-N", 120.0), ("L2-N", 119.0)];
    let house = House::new("120/240")
        .run("7", "", "L1 L2", "")
        .read_in("7", "as found", Stage::AsFound, &volts)
        .read_in("7", "heater on", Stage::AsFound, &volts)
        .read_in("7", "as found", Stage::AsLeft, &volts)
        .read_in("7", "heater on", Stage::AsLeft, &volts);
    let figure = &house.figure("neutral-position")[0];
    let outline = |y: f64| {
        let mark = figure.drawing.shapes.iter().find_map(|s| match s {
            Shape::Polygon { points, fill: Some(fill), .. } if *fill != Colour::Band => {
                let [_, top, _, bottom] = bounds(s, &crate::house::Fixed);
                ((top + bottom) / 2.0 - y).abs().lt(&0.01).then(|| (*fill == Colour::Paper, points[0].0 == points[2].0))
            }
            _ => None,
        });
        mark.unwrap()
    };
    // Open or filled; lozenge or bar.
    let seen: Vec<(bool, bool)> = beams(&figure.drawing).iter().map(|b| outline(b.2)).collect();
    assert_eq!(seen, [(false, false), (false, true), (true, false), (true, true)]);
}

#[test]
fn sixty_locations_go_over_several_drawings_of_bounded_height() {
    let figures = two_legs(&vec![(120.0, 119.0); 60]).figure("neutral-position");
    assert!(figures.len() >= 2);
    assert_eq!(figures.iter().map(|f| beams(&f.drawing).len()).sum::<usize>(), 60);
    assert!(figures.iter().all(|f| f.drawing.height <= midwire::report::figures::MOST_HEIGHT));
    assert!(figures[0].caption.ends_with(&format!("(1 of {})", figures.len())));
}

#[test]
fn of_very_many_the_farthest_off_are_kept_and_the_rest_is_said() {
    let mut pairs = vec![(120.0, 119.0); 2000];
    pairs[1234] = (170.0, 70.0);
    let figures = two_legs(&pairs).figure("neutral-position");
    let beams: usize = figures.iter().map(|f| beams(&f.drawing).len()).sum();
    assert!(beams < 200);
    assert!(figures[0].caption.contains(&format!("{beams} of 2000")), "{}", figures[0].caption);
    let is_worst = |s: &Shape| matches!(s, Shape::Text { text, .. } if text == "170.0 V");
    assert!(figures.iter().any(|f| f.drawing.shapes.iter().any(is_worst)));
}

#[test]
fn nothing_is_drawn_where_nothing_was_read() {
    assert!(House::new("120/240").run("1", "", "L1 L2", "").figure("neutral-position").is_empty());
    assert!(House::new("230").run("1", "", "L1", "").read("1", &[("L1-N", 230.0)]).figure("neutral-position").is_empty());
    assert!(two_legs(&[(0.0, 0.0), (f64::INFINITY, 120.0), (-3.0, 120.0)]).figure("neutral-position").is_empty());
}

/// Corners of the triangle and the dot of the neutral.
fn triangle(drawing: &Drawing) -> ([(f64, f64); 3], (f64, f64)) {
    let corners = drawing.shapes.iter().find_map(|s| match s {
        Shape::Polygon { points, fill: None, .. } => <[(f64, f64); 3]>::try_from(points.clone()).ok(),
        _ => None,
    });
    let dot = drawing.shapes.iter().find_map(|s| match s {
        Shape::Circle { centre, fill: Some(fill), .. } if *fill != Colour::Band => Some(*centre),
        _ => None,
    });
    (corners.unwrap(), dot.unwrap())
}

fn wye(to_neutral: [f64; 3], side: f64) -> House {
    let [a, b, c] = to_neutral;
    let all = [("L1-N", a), ("L2-N", b), ("L3-N", c), ("L1-L2", side), ("L2-L3", side), ("L3-L1", side)];
    House::new("208Y/120").run("P", "", "L1 L2 L3", "").read("P", &all)
}

#[test]
fn in_the_triangle_the_neutral_is_as_far_from_each_corner_as_was_read() {
    // Balanced; a neutral pulled to the middle of L1-L2 (legs of a right triangle); one on a line conductor.
    let side = 208.0;
    let middle = side * 3f64.sqrt() / 2.0;
    for read in [[side / 3f64.sqrt(); 3], [104.0, 104.0, middle], [1.0, 207.5, 207.5], [88.0, 131.0, 147.6]] {
        let figure = &wye(read, side).figure("neutral-position")[0];
        let (corners, dot) = triangle(&figure.drawing);
        let far = |p: (f64, f64), q: (f64, f64)| ((p.0 - q.0) * (p.0 - q.0) + (p.1 - q.1) * (p.1 - q.1)).sqrt();
        let volts_per_point = side / far(corners[0], corners[1]);
        for (corner, volts) in corners.into_iter().zip(read) {
            assert!((far(corner, dot) * volts_per_point - volts).abs() < 1.0, "{read:?}");
        }
    }
}

#[test]
fn the_neutral_of_a_high_leg_delta_belongs_in_the_middle_of_its_tapped_side() {
    let high = 120.0 * 3f64.sqrt();
    let all = [("L1-N", 120.0), ("L2-N", high), ("L3-N", 120.0), ("L1-L2", 240.0), ("L2-L3", 240.0), ("L3-L1", 240.0)];
    let figures = House::new("240/120").run("P", "", "L1 L2 L3", "").read("P", &all).figure("neutral-position");
    assert_eq!(figures.len(), 2, "the beam from L1 to L3, and the triangle");
    let (corners, dot) = triangle(&figures[1].drawing);
    assert!((dot.0 - (corners[0].0 + corners[1].0) / 2.0).abs() < 1e-6 && (dot.1 - corners[0].1).abs() < 1e-3);
    assert!(figures[1].drawing.alt.contains("by 0.0 V"), "{}", figures[1].drawing.alt);
}
