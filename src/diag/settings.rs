//! What was wrong with a settings file of the user's: a rule book, a mapping.

use crate::wording::{Language, Sentence};

/// One thing wrong with a settings file.
#[derive(Clone, Debug, PartialEq)]
pub struct SettingsProblem {
    /// The file as named by the caller.
    pub file: String,
    /// Line, from 1.
    pub line: usize,
    /// The key with its tables, dotted: `rules.leg-sum.signal`; empty for the file as a whole.
    pub key: String,
    /// What stood there, as text of bounded length.
    pub found: String,
    /// What was expected.
    pub expected: Sentence,
    /// The known name nearest to what stood there.
    pub nearest: Option<String>,
}

impl SettingsProblem {
    /// The problem in one line: file, line, key, what stood there, what was expected.
    #[must_use]
    pub fn say(&self, language: &Language) -> String {
        let sentence = Sentence::new(if self.key.is_empty() { "settings-file.problem-in-file" } else { "settings-file.problem" })
            .with("file", self.file.as_str())
            .with("line", self.line)
            .with("key", self.key.as_str())
            .with("found", self.found.as_str())
            .with("expected", self.expected.clone());
        let mut line = language.say(&sentence);
        if let Some(nearest) = &self.nearest {
            line.push(' ');
            line.push_str(&language.say(&Sentence::new("settings-file.nearest").with("nearest", nearest.as_str())));
        }
        line
    }
}
