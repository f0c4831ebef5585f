//! The built-in templates over the sample workbooks: what they say, and that they hold together.

use crate::outline;
use midwire::intake::{Beside, BesideError, Content, Input};
use midwire::pipeline::{self, Checked, ReportOptions, Settings};
use midwire::report::BUILT_IN_TEMPLATES;
use midwire::report::document::{Document, PageSize};
use std::path::{Path, PathBuf};

const SAMPLES: [&str; 9] = [
    "bad-cells.xlsx",
    "cottage.ods",
    "high-resistance-hot.xlsx",
    "open-service-neutral.xlsx",
    "service-call.xlsx",
    "shared-neutral-open.xlsx",
    "shop-208y.xlsx",
    "sound-house.xlsx",
    "workshop-delta.xlsx",
];

/// Files beside the samples.
struct Samples(PathBuf);

impl Beside for Samples {
    fn read(&self, name: &str) -> Result<Vec<u8>, BesideError> {
        std::fs::read(self.0.join(name)).map_err(|_| BesideError::Missing)
    }
}

fn checked(name: &str) -> Checked {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("samples");
    let bytes = std::fs::read(folder.join(name)).unwrap();
    pipeline::check(&Input { name, content: Content::File(&bytes) }, &Samples(folder), &Settings::default()).unwrap()
}

fn report(checked: &Checked, template: &str) -> Document {
    let (name, _, text) = BUILT_IN_TEMPLATES.iter().find(|t| t.0 == template).unwrap();
    let options = ReportOptions { page: PageSize::Letter, accent: pipeline::ACCENT, date: None, template: Some((name, text)) };
    pipeline::document(checked, &Settings::default(), &options).unwrap()
}

#[test]
fn every_template_holds_together_over_every_sample() {
    for sample in SAMPLES {
        let checked = checked(sample);
        for (template, _, _) in BUILT_IN_TEMPLATES {
            let document = report(&checked, template);
            crate::prose::holds_together(&document, &format!("{template} of {sample}"));
            crate::prose::has_its_cautions(&document);
        }
    }
}

#[test]
fn what_a_repair_settled_asks_for_nothing() {
    let checked = checked("service-call.xlsx");
    let text = outline::document(&report(&checked, "client"));
    assert!(text.contains("[NOTICE] Nothing unsafe was found"), "the fault was mended on the visit");
    assert!(text.contains("<b>Mended on this visit.</b>"));
    assert!(!text.contains("## What to do"));
}

#[test]
fn the_first_page_says_what_who_and_when() {
    let checked = checked("open-service-neutral.xlsx");
    for template in ["client", "letter"] {
        let text = outline::document(&report(&checked, template));
        let (before, after) = text.split_once("## What to do").unwrap();
        assert!(before.contains("Not safe"), "{before}");
        let first = after.lines().find(|l| l.starts_with("- ")).unwrap();
        assert!(first.starts_with("- (DANGER) <b>At once.</b> Call the utility now") && first.contains("By the utility"), "{first}");
    }
}
