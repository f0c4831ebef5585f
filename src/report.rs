//! The report: what was found, as a tree of blocks that every renderer understands.
//!
//! A Tera template yields Markdown; Markdown, computed tables and computed figures become a [`Document`]. Renderers see the
//! document alone: if one wants more, the document lacks a block.

pub mod document;
pub mod drawing;

mod duties;
mod facts;
pub mod figures;
mod repair;
mod sheets;
mod tables;
mod template;
mod words;

pub use facts::visible;
pub use words::cause as cause_in_words;

use crate::diag::Problem;
use crate::results::{Balance, Diagnosis, Exposure, Finding};
use crate::visit::Visit;
use crate::wording::Language;
use document::{Document, Meta, PageSize};
use drawing::Measure;
use template::{Context, Front, Places};

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
    /// Comparisons that passed and are not among the findings.
    pub passed_unlisted: usize,
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
pub const BUILT_IN_TEMPLATES: &[(&str, &str, &str)] = &[
    (
        "client",
        "for the client: is it safe, what to do, who does it, by when; then all that stands behind it",
        include_str!("../templates/client.md.tera"),
    ),
    (
        "record",
        "of a service call: as found and as left side by side, work done, what proves the repair",
        include_str!("../templates/record.md.tera"),
    ),
    ("letter", "one page: what was found and what to do", include_str!("../templates/letter.md.tera")),
];

/// Characters of the hash that the footer shows.
const HASH_SHOWN: usize = 12;

/// The document of a checked visit.
///
/// # Errors
/// The template can't be used.
pub fn build(source: &Source, options: &Options) -> Result<Document, TemplateError> {
    let language = options.language;
    let date = issue_date(source, options);
    let tables = tables::build(source, language);
    let figures = figures::build(source, language, options.measure, options.page.text_width());
    let places = Places {
        language,
        figures: figures.into_iter().map(|f| (f.name, f.caption, f.drawing)).collect(),
        facts: facts::all(source, language, date.as_deref()),
        photos: facts::photos(source),
        sign_off: facts::sign_off(source, language),
        tables,
    };
    let table_names: Vec<&str> = places.tables.iter().map(|t| t.name.as_str()).collect();
    let figure_names: Vec<&str> = places.figures.iter().map(|f| f.0).collect();
    let context = Context::new(source, language, date.as_deref(), &table_names, &figure_names);
    let (_, _, client) = BUILT_IN_TEMPLATES[0];
    let (file, text) = options.template.unwrap_or(("client.md.tera", client));
    let (front, blocks) = template::fill(file, text, &context, &places)?;
    let meta = meta(source, options, &front, date);
    Ok(Document { sheets: sheets::plan(&front, &places, language, &meta), meta, blocks })
}

/// The date of issue: as asked for, else the latest revision's, else the visit's.
fn issue_date(source: &Source, options: &Options) -> Option<String> {
    let revision = source.visit.revisions.iter().filter_map(|r| r.date.as_ref()).map(|d| d.value).max();
    let own = revision.or(source.visit.site.date.as_ref().map(|d| d.value)).map(|d| d.to_string());
    options.date.clone().or(own)
}

fn meta(source: &Source, options: &Options, front: &Front, date: Option<String>) -> Meta {
    let language = options.language;
    let site = &source.visit.site;
    let text = |l: &Option<crate::diag::Located<String>>| l.as_ref().map_or_else(String::new, |l| visible(&l.value));
    let joined = |parts: [String; 2]| parts.into_iter().filter(|p| !p.is_empty()).collect::<Vec<_>>().join(" · ");
    let title = if front.title.is_empty() { language.text("report.title") } else { front.title.clone() };
    let company = text(&site.company);
    let hash: String = source.sha256.chars().take(HASH_SHOWN).collect();
    Meta {
        author: text(&site.prepared_by),
        subject: joined([text(&site.address), site.date.as_ref().map_or_else(String::new, |d| d.value.to_string())]),
        language: language.tag.clone(),
        date,
        input_sha256: source.sha256.to_owned(),
        producer: source.program.to_owned(),
        header_left: if company.is_empty() { title.clone() } else { company },
        header_right: joined([text(&site.job), text(&site.client)]),
        footer_left: format!("{} {hash}… · {}", language.text("report.input"), source.program),
        page_words: language.text("report.page-words").replace("<page>", "{page}").replace("<pages>", "{pages}"),
        page: options.page,
        accent: options.accent,
        logo: None,
        decimal_mark: language.number(0.5, 1).chars().nth(1).unwrap_or('.'),
        title,
    }
}
