//! The built-in rule book: the rules' own specifications and the embedded limit rows.

use super::RULES;
use crate::rulebook::Rulebook;

macro_rules! files {
    ($($name:literal),* $(,)?) => { [$(($name, include_str!(concat!("limits/", $name)))),*] };
}

/// In order of preference: a reading is judged by the first profile that has a row for it.
const LIMITS: [(&str, &str); 6] =
    files!["nominal-band.toml", "ansi-c84-1.toml", "csa-c235.toml", "iec-60038.toml", "ansi-c84-1-no-lighting.toml", "en-50160.toml"];

impl Rulebook {
    /// The built-in book.
    ///
    /// # Panics
    /// Never on a tested build: the files are part of the program and a test reads them.
    #[must_use]
    pub fn built_in() -> Self {
        Self::of(RULES.iter().map(|rule| &rule.spec), &LIMITS).expect("the built-in limits are tested")
    }
}
