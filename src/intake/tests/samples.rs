//! The workbooks of `samples/`: sound ones without a problem, the spoilt one with each that was planted.

use super::book::{Folder, circuits, problems, readings, said};
use crate::intake::{Content, Input, Options, read};

fn sample(name: &str) -> crate::diag::Output<crate::visit::Visit> {
    let path = format!("{}/samples/{name}", env!("CARGO_MANIFEST_DIR"));
    let bytes = std::fs::read(&path).expect("a sample");
    read(&Input { name, content: Content::File(&bytes) }, &Options { beside: &Folder, mapping: None }).expect("a workbook with readings")
}

#[test]
fn sound_samples_give_no_problem() {
    for (name, system, runs, rows) in [
        ("sound-house.xlsx", "120/240", 12, 12),
        ("open-service-neutral.xlsx", "120/240", 12, 11),
        ("shared-neutral-open.xlsx", "120/240", 12, 9),
        ("high-resistance-hot.xlsx", "120/240", 12, 9),
        ("service-call.xlsx", "120/240", 12, 13),
        ("shop-208y.xlsx", "208Y/120", 8, 5),
        ("workshop-delta.xlsx", "240/120", 4, 3),
        ("cottage.ods", "120/240", 12, 12),
    ] {
        let out = sample(name);
        assert_eq!(problems(&out.problems), "", "{name}");
        let visit = out.value;
        assert_eq!((visit.system.name.as_str(), visit.runs.len(), visit.rows.len()), (system, runs, rows), "{name}");
        assert!(visit.rows.iter().all(|r| r.run.is_some()) && visit.tree.faults.is_empty(), "{name}");
    }
}

#[test]
fn the_spoilt_sample_gives_each_planted_problem_and_no_other() {
    let out = sample("bad-cells.xlsx");
    insta::assert_snapshot!("bad-cells-problems", said(&out.problems));
    insta::assert_snapshot!("bad-cells-readings", readings(&out.value));
    insta::assert_snapshot!("bad-cells-circuits", circuits(&out.value));
}
