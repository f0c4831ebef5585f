//! What was wrong with a rule book.

use crate::wording::{Language, Sentence};

/// One thing wrong with a rule book file.
#[derive(Clone, Debug, PartialEq)]
pub struct RulebookProblem {
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

impl RulebookProblem {
    /// The problem in one line: file, line, key, what stood there, what was expected.
    #[must_use]
    pub fn say(&self, language: &Language) -> String {
        let sentence = Sentence::new(if self.key.is_empty() { "rulebook.problem-in-file" } else { "rulebook.problem" })
            .with("file", self.file.as_str())
            .with("line", self.line)
            .with("key", self.key.as_str())
            .with("found", self.found.as_str())
            .with("expected", self.expected.clone());
        let mut line = language.say(&sentence);
        if let Some(nearest) = &self.nearest {
            line.push(' ');
            line.push_str(&language.say(&Sentence::new("rulebook.nearest").with("nearest", nearest.as_str())));
        }
        line
    }
}
