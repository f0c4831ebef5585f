//! The built-in templates over the sample workbooks, as snapshots of what they say.

use crate::outline;
use midwire::intake::{Beside, BesideError, Content, Input};
use midwire::pipeline::{self, Checked, ReportOptions, Settings};
use midwire::report::BUILT_IN_TEMPLATES;
use midwire::report::document::{Document, PageSize};
use std::path::{Path, PathBuf};

/// Files beside the samples.
struct Samples(PathBuf);

impl Beside for Samples {
    fn read(&self, name: &str) -> Result<Vec<u8>, BesideError> {
        std::fs::read(self.0.join(name)).map_err(|_| BesideError::Missing)
    }
}

pub fn checked(name: &str) -> Checked {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("samples");
    let bytes = std::fs::read(folder.join(name)).unwrap();
    pipeline::check(&Input { name, content: Content::File(&bytes) }, &Samples(folder), &Settings::default()).unwrap()
}

pub fn report(checked: &Checked, template: &str) -> Document {
    let (name, _, text) = BUILT_IN_TEMPLATES.iter().find(|t| t.0 == template).unwrap();
    let options = ReportOptions { page: PageSize::Letter, accent: pipeline::ACCENT, date: None, template: Some((name, text)) };
    pipeline::document(checked, &Settings::default(), &options).unwrap()
}

#[test]
fn every_template_reads_well_over_every_sample() {
    for sample in ["service-call.xlsx"] {
        for template in ["record"] {
            println!("{}", outline::document(&report(&checked(sample), template)));
        }
    }
}
