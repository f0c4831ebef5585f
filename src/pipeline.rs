//! The whole flow, phase after phase: the only module that names all of them.

mod json;
mod marked;

pub use json::{document as json_document, refusal as json_refusal};
pub use marked::{MarkedError, marked};

use crate::balance::{self, BalanceSettings};
use crate::diag::Problem;
use crate::diagnosis::{self, DiagnosisSettings};
use crate::intake::{self, Beside, Content, Input, Mapping, Refusal};
use crate::network::{self, NetworkSettings};
use crate::render;
use crate::report::document::{Document, PageSize};
use crate::report::{self, RuleBasis, Source, TemplateError};
use crate::results::{Balance, Diagnosis, Exposure, Finding, Signal, Verdict};
use crate::rulebook::Rulebook;
use crate::rules::{self, Facts};
use crate::visit::{System, Visit};
use crate::wording::Language;
use sha2::{Digest, Sha256};

/// What stays the same over all workbooks of a call.
pub struct Settings {
    /// The user's own layout, where there is one.
    pub mapping: Option<Mapping>,
    /// The rules in force.
    pub rulebook: Rulebook,
    /// How the legs' balance is judged.
    pub balance: BalanceSettings,
    /// What the network is taken to be where the workbook is silent.
    pub network: NetworkSettings,
    /// Priors and bounds of the diagnosis.
    pub diagnosis: DiagnosisSettings,
    /// The words.
    pub language: Language,
}

impl Default for Settings {
    fn default() -> Self {
        Self {
            mapping: None,
            rulebook: Rulebook::built_in(),
            balance: BalanceSettings::default(),
            network: NetworkSettings::default(),
            diagnosis: DiagnosisSettings::default(),
            language: Language::english(),
        }
    }
}

/// A workbook read and checked.
pub struct Checked {
    /// Its name as given.
    pub file: String,
    /// SHA-256 of its bytes in hexadecimal.
    pub sha256: String,
    /// What it says.
    pub visit: Visit,
    /// What could not be used, or only with a remark.
    pub problems: Vec<Problem>,
    /// What the rules found, with what passed, as far as there is room for it.
    pub findings: Vec<Finding>,
    /// Comparisons that passed and are not among the findings.
    pub passed_unlisted: usize,
    /// Load of the legs, where the circuit list gives one.
    pub balance: Option<Balance>,
    /// Ranking of causes, where the readings were fitted to the network.
    pub diagnosis: Option<Diagnosis>,
    /// Volts under an open neutral.
    pub exposure: Vec<Exposure>,
}

impl Checked {
    /// The worst signal word among what failed or is undecided.
    #[must_use]
    pub fn worst(&self) -> Option<Signal> {
        self.findings.iter().filter(|f| f.verdict != Verdict::Pass).map(|f| f.signal).max()
    }
}

/// Findings that passed are kept up to this number (some 50 MB); a workbook of a hundred thousand readings has millions.
const MOST_PASSED: usize = 50_000;

/// SHA-256 of an input in hexadecimal; of a folder, over the names and contents of its files in order of name.
#[must_use]
pub fn sha256(content: &Content) -> String {
    let mut hash = Sha256::new();
    match content {
        Content::File(bytes) => hash.update(bytes),
        Content::Folder(files) => {
            let mut sorted: Vec<&(String, Vec<u8>)> = files.iter().collect();
            sorted.sort_by(|a, b| a.0.cmp(&b.0));
            for (name, bytes) in sorted {
                for part in [name.as_bytes(), bytes] {
                    hash.update((part.len() as u64).to_le_bytes());
                    hash.update(part);
                }
            }
        }
    }
    hash.finalize().iter().map(|b| format!("{b:02x}")).collect()
}

/// Reads a workbook and checks it.
///
/// # Errors
/// The input could not be used at all.
pub fn check(input: &Input, beside: &dyn Beside, settings: &Settings) -> Result<Checked, Refusal> {
    let sha256 = sha256(&input.content);
    let read = intake::read(input, &intake::Options { beside, mapping: settings.mapping.as_ref() })?;
    let visit = read.value;
    let balance = balance::balance(&visit, &settings.balance);
    let diagnosis = diagnosis::diagnose(&visit, &settings.diagnosis);
    let exposure = network::exposure(&visit, &settings.network);
    let facts = Facts { visit: &visit, balance: balance.as_ref(), diagnosis: diagnosis.as_ref(), exposure: &exposure };
    let (findings, passed_unlisted) = rules::check_within(&facts, &settings.rulebook, MOST_PASSED);
    Ok(Checked {
        file: input.name.to_owned(),
        sha256,
        visit,
        problems: read.problems,
        findings,
        passed_unlisted,
        balance,
        diagnosis,
        exposure,
    })
}

/// How a report is to look.
pub struct ReportOptions<'a> {
    /// Paper.
    pub page: PageSize,
    /// Accent colour as sRGB.
    pub accent: [u8; 3],
    /// Date of issue, where the workbook's is not to be used.
    pub date: Option<String>,
    /// A changed template: file name and text.
    pub template: Option<(&'a str, &'a str)>,
}

/// A built-in accent: a deep river green, readable on white (contrast above 7:1).
pub const ACCENT: [u8; 3] = [0x1f, 0x4d, 0x45];

/// The document of a checked workbook.
///
/// # Errors
/// The template can't be used.
pub fn document(checked: &Checked, settings: &Settings, options: &ReportOptions) -> Result<Document, TemplateError> {
    let basis = rule_bases(settings, checked);
    let source = Source {
        file: &checked.file,
        sha256: &checked.sha256,
        program: concat!("midwire ", env!("CARGO_PKG_VERSION")),
        visit: &checked.visit,
        problems: &checked.problems,
        findings: &checked.findings,
        passed_unlisted: checked.passed_unlisted,
        balance: checked.balance.as_ref(),
        diagnosis: checked.diagnosis.as_ref(),
        exposure: &checked.exposure,
        rules: &basis,
    };
    let measure = render::pdf::FontMeasure;
    report::build(
        &source,
        &report::Options {
            language: &settings.language,
            page: options.page,
            accent: options.accent,
            date: options.date.clone(),
            template: options.template,
            measure: &measure,
        },
    )
}

/// Why a report could not be made.
#[derive(Debug, thiserror::Error)]
pub enum ReportError {
    /// The template can't be used.
    #[error(transparent)]
    Template(#[from] TemplateError),
    /// The PDF could not be made.
    #[error("the PDF could not be made: {0}")]
    Pdf(#[from] render::pdf::PdfError),
    /// The XLSX could not be made.
    #[error("the XLSX could not be made: {0}")]
    Xlsx(#[from] render::xlsx::XlsxError),
}

/// The report files of a checked workbook: ending and bytes.
///
/// # Errors
/// The template can't be used, or a file could not be made.
pub fn render(
    checked: &Checked,
    settings: &Settings,
    options: &ReportOptions,
    html: bool,
) -> Result<Vec<(&'static str, Vec<u8>)>, ReportError> {
    let document = document(checked, settings, options)?;
    let mut files = vec![("pdf", render::pdf::write(&document)?), ("xlsx", render::xlsx::write(&document)?)];
    if html {
        files.push(("html", render::html::write(&document).into_bytes()));
    }
    Ok(files)
}

/// A first mapping for a workbook, as TOML.
///
/// # Errors
/// The input could not be read at all.
pub fn first_mapping(input: &Input, language: &Language) -> Result<String, Refusal> {
    intake::first_mapping(input, language)
}

/// An empty field workbook for a system.
///
/// # Errors
/// The spreadsheet library refused.
pub fn blank(system: &System, language: &Language, rows: u32) -> Result<Vec<u8>, crate::blank::Error> {
    crate::blank::write(&crate::blank::Options { system, language, rows })
}

/// The rules that judged something, each with its title, settings and basis.
fn rule_bases(settings: &Settings, checked: &Checked) -> Vec<RuleBasis> {
    rules::manual_pages(&settings.rulebook, &settings.language)
        .into_iter()
        .filter(|page| page.enabled && checked.findings.iter().any(|f| f.rule == page.id))
        .map(|page| RuleBasis {
            rule: page.id.to_owned(),
            title: page.title,
            limits: page
                .settings
                .iter()
                .map(|s| format!("{}: {} {}", s.meaning, s.value, s.unit).trim_end().to_owned())
                .collect::<Vec<_>>()
                .join("; "),
            basis: page.basis,
        })
        .collect()
}
