//! The report: what was found, as a tree of blocks that every renderer understands.
//!
//! A Tera template yields Markdown; Markdown, computed tables and computed figures become a [`Document`]. Renderers see the
//! document alone: if one wants more, the document lacks a block.

pub mod document;
pub mod drawing;
pub mod figures;

use crate::diag::Problem;
use crate::results::{Balance, Diagnosis, Exposure, Finding};
use crate::visit::Visit;
use crate::wording::Language;
use document::{Document, PageSize};
use drawing::Measure;

/// What a report is made from: everything the phases before it found.
#[derive(Clone, Copy)]
pub struct Source<'a> {
    /// The workbook's name as given.
    pub file: &'a str,
    /// SHA-256 of its bytes in hexadecimal.
    pub sha256: &'a str,
    /// Program name and version.
    pub program: &'a str,
    /// The visit.
    pub visit: &'a Visit,
    /// Cells left out, or used with a remark.
    pub problems: &'a [Problem],
    /// Findings, passes included, in the order of the rules.
    pub findings: &'a [Finding],
    /// Load of the legs.
    pub balance: Option<&'a Balance>,
    /// Ranking of causes.
    pub diagnosis: Option<&'a Diagnosis>,
    /// Volts under an open neutral.
    pub exposure: &'a [Exposure],
    /// The rules that judged something.
    pub rules: &'a [RuleBasis],
}

/// One rule for the appendix.
#[derive(Clone, Debug, PartialEq)]
pub struct RuleBasis {
    /// Its name.
    pub rule: String,
    /// Title.
    pub title: String,
    /// Limits and settings in force, in words.
    pub limits: String,
    /// Standard, edition and clause.
    pub basis: String,
}

/// How it is to look.
#[derive(Clone)]
pub struct Options<'a> {
    /// The words.
    pub language: &'a Language,
    /// Paper.
    pub page: PageSize,
    /// Accent colour as sRGB.
    pub accent: [u8; 3],
    /// Date of issue (ISO 8601) where the workbook's is not to be used.
    pub date: Option<String>,
    /// A changed template: file name and text. The built-in `client` template where `None`.
    pub template: Option<(&'a str, &'a str)>,
    /// Measures text for the figures.
    pub measure: &'a dyn Measure,
}

/// Why a template could not be used.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("{file}, line {line}: {message}")]
pub struct TemplateError {
    /// The template file as named.
    pub file: String,
    /// 1-based line.
    pub line: usize,
    /// What is wrong, with the unknown name and the nearest known one where a name is unknown.
    pub message: String,
}

/// The built-in templates: name, what it is for, text.
pub const BUILT_IN_TEMPLATES: &[(&str, &str, &str)] = &[];

/// The document of a checked visit.
///
/// # Errors
/// The template can't be used.
pub fn build(_source: &Source, _options: &Options) -> Result<Document, TemplateError> {
    todo!("the report is being built")
}
