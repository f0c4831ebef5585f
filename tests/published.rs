//! Values published outside the project, table by table: standards, handbooks, worked examples, reference computations.
//!
//! Every row names its source beside it. "From memory" marks a figure of a standard that was not at hand; "computed" one that two
//! independent engines outside the project agree on (nodal solution with numpy, ngspice, OpenDSS). Published numbers that are wrong
//! stand in `wrong.rs`: the program must not reproduce them.

#[path = "published/conductors.rs"]
mod conductors;
#[path = "published/curves.rs"]
mod curves;
#[path = "published/geometry.rs"]
mod geometry;
#[path = "published/lamps.rs"]
mod lamps;
#[path = "published/laws.rs"]
mod laws;
#[path = "published/neutral.rs"]
mod neutral;
#[path = "published/ratings.rs"]
mod ratings;
#[path = "published/steps.rs"]
mod steps;
#[path = "published/testing.rs"]
mod testing;
#[path = "published/unbalance.rs"]
mod unbalance;
#[path = "published/wrong.rs"]
mod wrong;

/// One published value against the program's.
pub struct Check {
    source: &'static str,
    what: String,
    program: f64,
    published: f64,
    within: f64,
}

/// A check that the program's value is the published one within an absolute tolerance.
pub fn check(source: &'static str, what: impl Into<String>, program: f64, published: f64, within: f64) -> Check {
    Check { source, what: what.into(), program, published, within }
}

fn assert_all(checks: &[Check]) {
    let missed: Vec<String> = checks
        .iter()
        // A NaN is a miss too.
        .filter(|c| c.program.is_nan() || (c.program - c.published).abs() > c.within)
        .map(|c| format!("{}: {} instead of {} ± {} ({})", c.what, c.program, c.published, c.within, c.source))
        .collect();
    assert!(missed.is_empty(), "{}", missed.join("\n"));
    assert!(checks.iter().all(|c| !c.source.is_empty()), "a check without a source");
}

fn all() -> Vec<Vec<Check>> {
    vec![
        conductors::checks(),
        curves::checks(),
        geometry::checks(),
        lamps::checks(),
        neutral::checks(),
        ratings::checks(),
        steps::checks(),
        testing::checks(),
        unbalance::checks(),
    ]
}

#[test]
fn published_values_are_met() {
    for topic in all() {
        assert_all(&topic);
    }
}

#[test]
fn there_are_enough_of_them() {
    let count: usize = all().iter().map(Vec::len).sum();
    assert!(count >= 150, "only {count} published values");
}
