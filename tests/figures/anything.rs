//! Whatever a workbook holds: no two labels overlap, nothing leaves its drawing, letters are large enough, nothing panics.

use crate::house::{Fixed, House, bounds};
use crate::svg::parsed;
use midwire::report::drawing::Shape;
use midwire::report::figures::{Figure, MOST_HEIGHT};
use midwire::results::CauseKind;
use midwire::visit::{Leg, Stage};
use proptest::prelude::*;

/// Smallest letters that are read at arm's length, in points.
const SMALLEST: f64 = 7.5;

/// Checks a drawing; names what is wrong with it.
pub fn check(figure: &Figure) -> Result<(), String> {
    let drawing = &figure.drawing;
    let mut texts: Vec<([f64; 4], &str)> = Vec::new();
    if drawing.height > MOST_HEIGHT || drawing.alt.is_empty() || figure.caption.is_empty() {
        return Err(format!("{}: height {}, alt `{}`", figure.name, drawing.height, drawing.alt));
    }
    if drawing.alt.contains('⟨') || figure.caption.contains('⟨') {
        return Err(format!("{}: a word is missing: {} {}", figure.name, figure.caption, drawing.alt));
    }
    for shape in &drawing.shapes {
        let at = bounds(shape, &Fixed);
        let is_inside = at[0] >= -0.01 && at[1] >= -0.01 && at[2] <= drawing.width + 0.01 && at[3] <= drawing.height + 0.01;
        if !is_inside {
            return Err(format!("{}: outside {}×{}: {shape:?}", figure.name, drawing.width, drawing.height));
        }
        if let Shape::Text { text, size, .. } = shape {
            if *size < SMALLEST || text.contains('⟨') || text.contains(|c: char| c.is_control() || ('\u{202a}'..='\u{202e}').contains(&c))
            {
                return Err(format!("{}: {size} pt `{text}`", figure.name));
            }
            texts.push((at, text));
        }
    }
    texts.sort_by(|a, b| a.0[1].total_cmp(&b.0[1]));
    for (i, (a, one)) in texts.iter().enumerate() {
        for (b, other) in texts[i + 1..].iter().take_while(|(b, _)| b[1] < a[3]) {
            if a[0] < b[2] - 0.01 && b[0] < a[2] - 0.01 && a[1] < b[3] - 0.01 && b[1] < a[3] - 0.01 {
                return Err(format!("{}: `{one}` {a:?} over `{other}` {b:?}", figure.name));
            }
        }
    }
    parsed(&midwire::render::svg::write(drawing, [0, 80, 60]));
    Ok(())
}

fn check_all(house: &House) -> Result<(), String> {
    house.figures(&Fixed).iter().try_for_each(check)
}

fn names() -> impl Strategy<Value = String> {
    prop_oneof![
        6 => "[0-9]{1,2}(/[0-9]{1,2})?[a-d]?",
        1 => ".{1,12}",
        1 => Just("<b>&amp;</b>\"'".to_owned()),
        1 => Just("\u{202e}krow\u{202c} \u{200b}\u{7}\n5/7".to_owned()),
        1 => Just("מטבח ٣ 台所".to_owned()),
        1 => Just("x".repeat(300)),
        1 => Just("{runs}{percent}".to_owned()),
    ]
}

fn volts() -> impl Strategy<Value = f64> {
    prop_oneof![8 => 60.0..260.0, 2 => 0.0..600.0, 1 => Just(0.0), 1 => Just(1e9), 1 => Just(1e300), 1 => Just(-5.0)]
}

prop_compose! {
    fn a_run()(
        name in names(),
        from in 0usize..50,
        wires in prop::sample::select(vec!["L1", "L2", "L1 L2", "L1-L2"]),
        serves in prop_oneof![Just(String::new()), names(), "[a-z ]{1,40}"],
        load in prop_oneof![Just(0.0), 10.0..6000.0, Just(1e12)],
        reads in prop::collection::vec((prop::sample::select(vec!["as found", "1500 W heater on", "\u{202e}"]), any::<bool>(), [volts(), volts(), volts(), volts(), volts(), volts()]), 0..3),
        exposed in prop::option::of((volts(), prop::option::of(0.0..100.0))),
        probability in 0.0..1.0,
    ) -> Run { Run { name, from, wires, serves, load, reads, exposed, probability } }
}

#[derive(Clone, Debug)]
struct Run {
    name: String,
    from: usize,
    wires: &'static str,
    serves: String,
    load: f64,
    reads: Vec<(&'static str, bool, [f64; 6])>,
    exposed: Option<(f64, Option<f64>)>,
    probability: f64,
}

fn house(system: &str, runs: &[Run], kind: CauseKind) -> House {
    let mut house = House::new(system);
    let mut sources: Vec<String> = vec![String::new()];
    for run in runs {
        house = house.run(&run.name, &sources[run.from % sources.len()], run.wires, &run.serves).built(12, 1234.5, 20.0);
        house = house.load(if run.wires == "L2" { "L2" } else { "L1" }, run.load);
        sources.push(run.name.clone());
    }
    for run in runs {
        for (state, is_left, volts) in &run.reads {
            let values: Vec<(&str, f64)> = ["L1-N", "L2-N", "L3-N", "L1-L2", "L2-L3", "L3-L1"].into_iter().zip(*volts).collect();
            house = house.read_in(&run.name, state, if *is_left { Stage::AsLeft } else { Stage::AsFound }, &values);
        }
        if let Some((high, low)) = run.exposed {
            house = house.exposed(&run.name, &[("L1", low, high.abs(), &run.name, run.load), ("L2", None, 90.0, &run.name, 1.0)]);
        }
    }
    let total: f64 = runs.iter().map(|r| r.probability).sum::<f64>() + 0.1;
    for pair in runs.chunks(2) {
        let names: Vec<&str> = pair.iter().map(|r| r.name.as_str()).collect();
        house = house.cause(kind.clone(), &names, pair.iter().map(|r| r.probability).sum::<f64>() / total);
    }
    house
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 64, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn labels_never_overlap_and_nothing_leaves_its_drawing(
        runs in prop::collection::vec(a_run(), 1..50),
        system in prop::sample::select(vec!["120/240", "208Y/120", "240/120", "120/208", "480Y/277", "230"]),
        width in prop::sample::select(vec![487.0, 504.0, 380.0]),
        kind in prop::sample::select(vec![CauseKind::Neutral, CauseKind::Hot(Leg::L1), CauseKind::None]),
    ) {
        let mut house = house(system, &runs, kind);
        house.width = width;
        let result = check_all(&house);
        prop_assert!(result.is_ok(), "{}", result.unwrap_err());
    }
}

#[test]
fn a_bush_a_caterpillar_and_a_wide_panel_keep_their_labels_apart() {
    let mut caterpillar = House::new("120/240").run("0", "", "L1 L2", "");
    for i in 0..60 {
        let (up, on, leaf) = (format!("{i}"), format!("{}", i + 1), format!("leaf {i}"));
        caterpillar = caterpillar.run(&leaf, &up, "L1 L2", "a leaf").run(&on, &up, "L1 L2", "goes on");
        caterpillar = caterpillar.read(&leaf, &[("L1-N", 121.0), ("L2-N", 119.0)]).read(&on, &[("L1-N", 121.0), ("L2-N", 119.0)]);
    }
    check_all(&caterpillar).unwrap();
    let mut panel = House::new("120/240").run("P", "", "L1 L2", "");
    for i in 0..199 {
        panel = panel.run(&format!("{i}"), "P", "L1", "a circuit").load("L1", 100.0 * f64::from(i));
    }
    check_all(&panel).unwrap();
    let pages = panel.figure("run-tree");
    let drawn = |f: &Figure| f.drawing.shapes.iter().filter(|s| matches!(s, Shape::Text { bold: true, .. })).count();
    assert_eq!(pages.iter().map(drawn).sum::<usize>(), 200, "two hundred runs are all drawn");
}

#[test]
fn the_same_visit_gives_the_same_drawings() {
    let build = || {
        let house = House::new("120/240").run("1", "", "L1 L2", "").load("L1", 50.0).read("1", &[("L1-N", 121.0), ("L2-N", 119.0)]);
        house.figures(&Fixed)
    };
    assert_eq!(build(), build());
}
