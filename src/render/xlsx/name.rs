//! Sheet names as the format allows them: 1 to 31 characters, some forbidden, unique without regard to case.

use super::cell::cut;
use crate::render::text::visible;
use std::collections::BTreeSet;

/// Longest sheet name, in UTF-16 units as the format counts.
const LONGEST: usize = 31;

/// The names given so far.
#[derive(Default)]
pub(super) struct Names {
    taken: BTreeSet<String>,
}

impl Names {
    /// A legal name as near to the wanted one as can be, given to no sheet before.
    pub(super) fn unique(&mut self, wanted: &str) -> String {
        let base = legal(wanted);
        let numbered = |n: usize| {
            let ending = format!(" ({n})");
            cut(&base, LONGEST - ending.len()) + &ending
        };
        let name = if self.taken.contains(&base.to_lowercase()) {
            (2..).map(numbered).find(|n| !self.taken.contains(&n.to_lowercase()))
        } else {
            None
        };
        let name = name.unwrap_or(base);
        self.taken.insert(name.to_lowercase());
        name
    }
}

/// The name without what is forbidden in it. `_x0041_` would be read as an escape, and `History` is a program's own.
fn legal(wanted: &str) -> String {
    let shown = visible(wanted).replace("_x", "-x");
    let allowed: String =
        shown.chars().map(|c| if matches!(c, '[' | ']' | ':' | '*' | '?' | '/' | '\\' | '\n' | '\t') { '-' } else { c }).collect();
    let name = cut(allowed.trim().trim_matches('\''), LONGEST);
    let name = name.trim_end().trim_end_matches('\'');
    match name {
        "" => "Sheet".to_owned(),
        name if name.eq_ignore_ascii_case("history") => format!("{name}-"),
        name => name.to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_made_legal_and_unique() {
        let mut names = Names::default();
        let table = [
            ("Findings", "Findings"),
            ("findings", "findings (2)"),
            ("FINDINGS", "FINDINGS (3)"),
            ("a/b\\c[d]e:f*g?h", "a-b-c-d-e-f-g-h"),
            ("'quoted'", "quoted"),
            ("", "Sheet"),
            ("  '' ", "Sheet (2)"),
            ("History", "History-"),
            ("_x0041_", "-x0041_"),
            ("Neutral resistance not ruled out, all runs", "Neutral resistance not ruled ou"),
            ("Neutral resistance not ruled out, all legs", "Neutral resistance not rule (2)"),
            ("😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀", "😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀"),
            ("bell\u{7}", "bell⟨U+0007⟩"),
        ];
        for (wanted, given) in table {
            assert_eq!(names.unique(wanted), given);
        }
    }
}
