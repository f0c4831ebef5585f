//! Names of output files.

use crate::visit::Visit;
use std::collections::HashSet;

/// Most characters of a name without its ending.
const LONGEST: usize = 120;

/// `JOB_CLIENT_DATE` from what the workbook says, else from its own name; letters (of any script), digits, `-` and `_`.
#[must_use]
pub fn of(visit: &Visit, stem: &str) -> String {
    let site = &visit.site;
    let parts = [
        site.job.as_ref().map(|l| l.value.clone()),
        site.client.as_ref().map(|l| l.value.clone()),
        site.date.as_ref().map(|l| l.value.to_string()),
    ];
    let words: Vec<String> = parts.into_iter().flatten().map(|p| safe(&p)).filter(|p| !p.is_empty()).collect();
    let joined = if words.is_empty() { format!("{}_report", safe(stem)) } else { words.join("_") };
    bounded(&joined)
}

/// Only letters, digits, `-` and `_`; anything else becomes a single `-`, none at the ends.
fn safe(text: &str) -> String {
    let mut out = String::new();
    for c in text.chars() {
        if c.is_alphanumeric() || c == '_' {
            out.push(c);
        } else if !out.ends_with('-') {
            out.push('-');
        }
    }
    out.trim_matches('-').to_owned()
}

fn bounded(name: &str) -> String {
    let cut: String = name.chars().take(LONGEST).collect();
    let cut = cut.trim_matches(['-', '_', '.']);
    if cut.is_empty() {
        return "report".to_owned();
    }
    if is_device(cut) { format!("{cut}_report") } else { cut.to_owned() }
}

/// Names some systems keep for devices, whatever the ending.
fn is_device(name: &str) -> bool {
    let upper = name.to_uppercase();
    matches!(upper.as_str(), "CON" | "PRN" | "AUX" | "NUL" | "CONIN$" | "CONOUT$")
        || ["COM", "LPT"].iter().any(|d| {
            upper.strip_prefix(d).is_some_and(|n| n.chars().count() == 1 && n.chars().all(|c| c.is_ascii_digit() || "¹²³".contains(c)))
        })
}

/// The name itself, or with `-2`, `-3` … where it is taken in this call. Compared without letter case, as some systems do.
#[must_use]
pub fn unique(name: &str, taken: &mut HashSet<String>) -> String {
    let mut candidate = name.to_owned();
    let mut n = 1;
    while !taken.insert(candidate.to_lowercase()) {
        n += 1;
        let ending = format!("-{n}");
        let head: String = name.chars().take(LONGEST - ending.len()).collect();
        candidate = head + &ending;
    }
    candidate
}

/// The name is the wanted one, as it is or with a number that told it from others.
#[must_use]
pub fn is_of(name: &str, wanted: &str) -> bool {
    let number = name.strip_prefix(wanted).map(|rest| rest.strip_prefix('-').map_or(rest.is_empty(), |n| n.parse::<u32>().is_ok()));
    number == Some(true)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_are_safe_on_every_system() {
        for (text, expected) in [
            ("AF-1042", "AF-1042"),
            ("../../etc/passwd", "etc-passwd"),
            ("Orla  Penhallow", "Orla-Penhallow"),
            ("-rf .", "rf"),
            ("Łódź 12", "Łódź-12"),
            ("a\u{0}b\nc", "a-b-c"),
        ] {
            assert_eq!(safe(text), expected);
        }
        assert_eq!(bounded("con"), "con_report");
        assert_eq!(bounded("COM1"), "COM1_report");
        assert_eq!(bounded(&"x".repeat(500)).chars().count(), LONGEST);
        assert_eq!(bounded("--"), "report");
    }

    #[test]
    fn a_number_behind_a_name_is_told_from_a_date() {
        assert!(is_of("A_2026-09-14", "A_2026-09-14") && is_of("A_2026-09-14-2", "A_2026-09-14"));
        assert!(!is_of("B", "A") && !is_of("A-b", "A"));
    }

    #[test]
    fn collisions_are_numbered_in_order() {
        let mut taken = HashSet::new();
        assert_eq!(unique("A", &mut taken), "A");
        assert_eq!(unique("a", &mut taken), "a-2");
        assert_eq!(unique("A", &mut taken), "A-3");
        let long = "y".repeat(LONGEST);
        let _ = unique(&long, &mut taken);
        assert_eq!(unique(&long, &mut taken).chars().count(), LONGEST);
    }
}
