//! The built-in templates over the sample workbooks: what they say, and that they hold together.

use crate::outline;
use midwire::intake::{Beside, BesideError, Content, Input};
use midwire::pipeline::{self, Checked, ReportOptions, Settings};
use midwire::report::BUILT_IN_TEMPLATES;
use midwire::report::document::{Block, Document, Inline, PageSize};
use std::collections::BTreeSet;
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

/// What a person reads first: everything before the second heading of the second level.
fn first_page(document: &Document) -> String {
    let text = outline::document(document);
    let body = text.split_once("\n# ").unwrap().1;
    body.split("\n## ").take(2).collect::<Vec<_>>().join("\n## ")
}

#[test]
fn the_first_page_answers() {
    for sample in SAMPLES {
        println!("=== {sample}\n{}", first_page(&report(&checked(sample), "client")));
    }
}
