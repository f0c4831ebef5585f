//! The marked copy of a workbook: its data again, what could not be used coloured and commented.

use super::{ACCENT, Checked};
use crate::diag::{Problem, Severity};
use crate::intake::{self, Input, Refusal, Sheet, Value};
use crate::render::xlsx::{self, Marked, MarkedProblem, MarkedSheet, MarkedValue, MarkedWords, XlsxError};
use crate::report::document::{Meta, PageSize};
use crate::wording::Language;

/// Why there is no marked copy.
#[derive(Debug, thiserror::Error)]
pub enum MarkedError {
    /// The input could not be read.
    #[error(transparent)]
    Input(#[from] Refusal),
    /// The copy could not be made.
    #[error(transparent)]
    Xlsx(#[from] XlsxError),
}

/// A copy of a checked workbook as the bytes of an XLSX file: a first sheet lists its problems, each coloured and commented at its
/// cell.
///
/// # Errors
/// The input can't be read, or does not fit the file format.
pub fn marked(input: &Input, checked: &Checked, language: &Language) -> Result<Vec<u8>, MarkedError> {
    let sheets: Vec<MarkedSheet> = intake::sheets(input)?.into_iter().map(sheet).collect();
    let problems: Vec<MarkedProblem> = checked.problems.iter().map(|p| problem(p, language)).collect();
    let words = MarkedWords {
        title: language.text("marked.title"),
        headings: ["severity", "sheet", "cell", "found", "message"].map(|key| language.text(&format!("marked.{key}"))),
        none: language.text("marked.none"),
    };
    Ok(xlsx::marked(&Marked { meta: &meta(checked, language), words: &words, sheets: &sheets, problems: &problems })?)
}

fn sheet(sheet: Sheet) -> MarkedSheet {
    let cells = sheet.cells.into_iter().map(|cell| (cell.row, cell.col, value(cell.value))).collect();
    MarkedSheet { name: sheet.name.to_string(), cells }
}

fn value(value: Value) -> MarkedValue {
    match value {
        Value::Text(text) | Value::Error(text) => MarkedValue::Text(text),
        Value::NoResult(formula) if formula.starts_with('=') => MarkedValue::Text(formula),
        Value::NoResult(formula) => MarkedValue::Text(format!("={formula}")),
        Value::Number(number) => MarkedValue::Number(number),
        Value::DateTime(days) => MarkedValue::DateTime(days),
        Value::Logical(truth) => MarkedValue::Logical(truth),
    }
}

fn problem(problem: &Problem, language: &Language) -> MarkedProblem {
    let said = [Some(&problem.message), problem.hint.as_ref()].into_iter().flatten().map(|s| language.say(s));
    MarkedProblem {
        left_out: problem.severity == Severity::Error,
        severity: language.text(&format!("marked.{}", problem.severity.name())),
        sheet: problem.sheet.as_ref().map(ToString::to_string),
        cell: problem.cell.as_ref().map(|cell| (cell.row, cell.col)),
        found: problem.found.clone(),
        message: said.collect::<Vec<_>>().join(" "),
    }
}

fn meta(checked: &Checked, language: &Language) -> Meta {
    // A folder of the preparer's own is nobody else's business.
    let file = checked.file.rsplit(['/', '\\']).next().unwrap_or_default();
    let producer = concat!("midwire ", env!("CARGO_PKG_VERSION"));
    Meta {
        title: language.text("marked.title"),
        author: checked.visit.site.prepared_by.as_ref().map(|by| by.value.clone()).unwrap_or_default(),
        subject: file.to_owned(),
        language: String::new(),
        date: None,
        input_sha256: checked.sha256.clone(),
        producer: producer.to_owned(),
        header_left: language.text("marked.title"),
        header_right: file.to_owned(),
        footer_left: producer.to_owned(),
        page_words: language.text("report.page-words").replace("<page>", "{page}").replace("<pages>", "{pages}"),
        page: PageSize::Letter,
        accent: ACCENT,
        logo: None,
        decimal_mark: '.',
    }
}
