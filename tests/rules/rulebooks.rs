//! Rule books laid over the built-in one.

use super::*;

fn problems(text: &str) -> Vec<String> {
    let found = Rulebook::built_in().overlay(text, "own.toml").unwrap_err();
    found.iter().map(|p| p.say(&Language::english())).collect()
}

#[test]
fn every_problem_names_line_key_and_what_was_expected() {
    let text = "coverage-factor = nan\n[rules.leg-diference]\nenabled = false\n[rules.leg-difference]\nsignal = \"SEVERE\"\n\
                service-percent = \"3\"\nelswhere-percent = 4\n[[limits]]\nrule = \"service-range\"\nnominal = 120\nlow = 130\nhigh = 120\n";
    let said = problems(text);
    let expected = [
        "own.toml, line 1: `coverage-factor` is `nan`; expected a number from 1 to 4.",
        "own.toml, line 2: `rules.leg-diference` is `leg-diference`; expected one of",
        "own.toml, line 5: `rules.leg-difference.signal` is `SEVERE`; expected one of NOTICE, CAUTION, WARNING and DANGER.",
        "own.toml, line 6: `rules.leg-difference.service-percent` is `\"3\"`; expected a number from 0 to 100.",
        "own.toml, line 7: `rules.leg-difference.elswhere-percent`",
        "own.toml, line 8: `limits[0]`",
    ];
    assert_eq!(said.len(), expected.len(), "{said:#?}");
    for (said, expected) in said.iter().zip(expected) {
        assert!(said.starts_with(expected), "{said}");
    }
    assert!(said[1].ends_with("Did you mean `leg-difference`?"));
    assert!(said[4].ends_with("Did you mean `elsewhere-percent`?"));
}
