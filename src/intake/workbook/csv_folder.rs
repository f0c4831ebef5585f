//! A folder of csv files: one sheet each, named by the file's stem, in order of name.
//!
//! Split here rather than by a library because a row's number has to be the one a spreadsheet shows, blank lines counted, and
//! because a quotation mark that is never closed has to be noticed: it would swallow the rest of the sheet without a word.

mod encoding;
mod fields;

use super::bounds::{Budget, MOST_SHEETS, at_most};
use super::draft::Draft;
use crate::diag::{Output, Problem, Severity};
use crate::intake::Refusal;
use crate::intake::grid::{Sheet, Value, Workbook};
use crate::wording::Sentence;
use fields::{Ending, Fields};
use std::path::Path;

/// Characters of a cell that are shown in a problem.
const SHOWN: usize = 40;

/// Reads the files.
///
/// # Errors
/// One of them is not text, or a bound is exceeded.
pub fn read(files: &[(String, Vec<u8>)], budget: &mut Budget) -> Result<Output<Workbook>, Refusal> {
    at_most(files.len(), MOST_SHEETS, "sheets")?;
    let mut files: Vec<&(String, Vec<u8>)> = files.iter().collect();
    files.sort();
    let guess = encoding::guess(files.iter().map(|(_, bytes)| bytes.as_slice()));
    let mut output = Output { value: Workbook::default(), problems: Vec::new() };
    for (name, bytes) in files {
        let stem = Path::new(name).file_stem().map_or(name.as_str().into(), |stem| stem.to_string_lossy());
        let text = encoding::decode(bytes, guess).ok_or_else(|| Refusal::NotAWorkbook(format!("{name} is not text")))?;
        let sheet = sheet(&stem, &text.text, budget, &mut output.problems)?;
        if let Some(guess) = text.guess {
            let message = Sentence::new("workbook.encoding").with("encoding", guess);
            output.problems.push(Problem::in_sheet(Severity::Warning, &sheet.name, "", message));
        }
        if text.has_gaps {
            output.problems.push(Problem::in_sheet(Severity::Warning, &sheet.name, "\u{fffd}", Sentence::new("workbook.gaps")));
        }
        output.value.sheets.push(sheet);
    }
    Ok(output)
}

fn sheet(name: &str, text: &str, budget: &mut Budget, problems: &mut Vec<Problem>) -> Result<Sheet, Refusal> {
    let mut draft = Draft::new(name, false);
    let (delimiter, text) = fields::delimiter(text);
    let (mut row, mut col) = (0, 0);
    let mut unclosed = Vec::new();
    for field in Fields::new(text, delimiter) {
        if field.is_unclosed {
            unclosed.push((row, col));
        }
        draft.put(row, col, Value::Text(field.text.into_owned()), budget)?;
        match field.ending {
            Ending::Field => col += 1,
            Ending::Record => (row, col) = (row + 1, 0),
        }
    }
    let sheet = draft.finish()?;
    if let Some(&(row, col)) = unclosed.first() {
        // Said at the first such cell alone: a column of inch marks would say it in every row.
        let found = sheet.get(row, col).and_then(|value| if let Value::Text(text) = value { Some(text.as_str()) } else { None });
        let found: String = found.unwrap_or_default().chars().take(SHOWN).collect();
        let message = Sentence::new("workbook.unclosed").with("n", unclosed.len());
        problems.push(Problem::at(Severity::Warning, &sheet.at(row, col), found, message));
    }
    Ok(sheet)
}
