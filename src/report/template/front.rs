//! The front matter of a template.

use crate::report::TemplateError;
use serde::Deserialize;

/// What a template says of its document.
#[derive(Clone, Debug, Default, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Front {
    /// Title of the document.
    pub title: String,
    /// Sheets of the XLSX, in order.
    #[serde(default)]
    pub sheets: Vec<SheetPlan>,
}

/// A sheet of the XLSX.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SheetPlan {
    /// Its name.
    pub name: String,
    /// Its tables, by name.
    pub tables: Vec<String>,
}

const FENCE: &str = "+++";

/// Front matter and body; the body keeps its line numbers.
pub(super) fn split(file: &str, text: &str) -> Result<(Front, String), TemplateError> {
    let fail = |line, message: String| TemplateError { file: file.to_owned(), line, message };
    let mut lines = text.lines();
    if lines.next().map(str::trim_end) != Some(FENCE) {
        return Ok((Front::default(), text.to_owned()));
    }
    let mut toml = String::new();
    let mut count = 1;
    for line in lines.by_ref() {
        count += 1;
        if line.trim_end() == FENCE {
            let front = toml::from_str(&toml).map_err(|e| {
                let line = e.span().map_or(1, |s| toml[..s.start].matches('\n').count() + 2);
                fail(line, e.message().to_owned())
            })?;
            let body: Vec<&str> = lines.collect();
            return Ok((front, "\n".repeat(count) + &body.join("\n") + "\n"));
        }
        toml.push_str(line);
        toml.push('\n');
    }
    Err(fail(1, "the front matter that begins here has no closing line `+++`".to_owned()))
}
