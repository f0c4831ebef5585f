//! Tests that police the rule folder.

use super::*;
use midwire::results::Signal;
use midwire::rules::{RULES, manual, manual_pages};
use std::collections::BTreeSet;

/// Files of `src/rules` that are no rule.
const SHARED: [&str; 10] = ["book", "facts", "findings", "list", "listed", "manual", "range", "tested", "triangle", "cause"];

fn rule_files() -> BTreeSet<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("src/rules");
    std::fs::read_dir(folder)
        .unwrap()
        .filter_map(|entry| {
            let path = entry.unwrap().path();
            let stem = path.file_stem()?.to_str()?.to_owned();
            (path.extension()? == "rs" && !SHARED.contains(&stem.as_str())).then_some(stem)
        })
        .collect()
}

#[test]
fn every_rule_file_is_listed_once_and_named_as_its_rule() {
    let listed: Vec<String> = RULES.iter().map(|r| r.spec.id.replace('-', "_")).collect();
    let unique: BTreeSet<String> = listed.iter().cloned().collect();
    assert_eq!(listed.len(), unique.len(), "a rule is listed twice");
    assert_eq!(unique, rule_files());
}

#[test]
fn every_rule_is_explained_and_has_sound_settings() {
    let language = Language::english();
    for rule in RULES {
        let id = rule.spec.id;
        let settings = rule.spec.settings.iter().map(|s| format!("set-{}", s.key));
        for what in ["title", "checks", "why", "reading"].map(String::from).into_iter().chain(settings) {
            assert!(
                language.entry(&format!("{id}.{what}")).is_some_and(|t| !t.trim().is_empty()),
                "{id}.{what} is not in the language file"
            );
        }
        assert!(!rule.spec.basis.is_empty(), "{id} has no basis");
        for s in rule.spec.settings {
            assert!((s.least..=s.most).contains(&s.default), "{id}.{} has a default out of its range", s.key);
            assert!(!["enabled", "signal", "basis", "profile"].contains(&s.key), "{id}.{} is a reserved key", s.key);
        }
    }
}

#[test]
fn every_rule_has_fixtures_in_which_it_fires_and_is_quiet() {
    for rule in RULES {
        let id = rule.spec.id;
        let files = fixtures(id);
        for kind in ["fires", "quiet"] {
            assert!(files.iter().any(|(name, _)| name.starts_with(kind)), "tests/rules/{id} has no {kind}.toml");
        }
        for (name, text) in files {
            assert!(name.starts_with("fires") || name.starts_with("quiet"), "tests/rules/{id}/{name}.toml is neither fires nor quiet");
            let fixture = Fixture::read(&text);
            let own: Vec<Finding> = findings(&fixture).into_iter().filter(|f| f.rule == id).collect();
            let shown: Vec<&Finding> = own.iter().filter(|f| is_shown(f)).collect();
            let listing = own.iter().map(line).collect::<Vec<_>>().join("\n");
            assert_eq!(!shown.is_empty(), name.starts_with("fires"), "{id}/{name}:\n{listing}");
            for expected in &fixture.expect {
                assert!(own.iter().any(|f| matches(f, expected)), "{id}/{name}: no finding like {expected:?} among\n{listing}");
            }
            if name.starts_with("fires") {
                assert_eq!(fixture.expect.len(), shown.len(), "{id}/{name} expects another number of findings:\n{listing}");
            }
        }
    }
}

#[test]
fn every_fixture_folder_belongs_to_a_rule() {
    for entry in std::fs::read_dir(fixture_folder()).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            let name = path.file_name().unwrap().to_str().unwrap();
            assert!(RULES.iter().any(|r| r.spec.id == name), "tests/rules/{name} is no rule's");
        }
    }
}

/// Every rule over every fixture: no panic, every sentence in the language file with all its values, every finding with a cell,
/// passes as notices, the order as promised, the same findings twice.
#[test]
fn every_rule_over_every_fixture_gives_whole_sentences_in_order() {
    let language = Language::english();
    for rule in RULES {
        for (name, text) in fixtures(rule.spec.id) {
            let fixture = Fixture::read(&text);
            let found = findings(&fixture);
            assert_eq!(found, findings(&fixture));
            for finding in &found {
                let words = format!("{} {}", language.say(&finding.says), language.say(&finding.advice));
                assert!(!words.contains('⟨'), "{}/{name}: {words}", rule.spec.id);
                assert!(!finding.cells.is_empty());
                assert!(finding.verdict != Verdict::Pass || finding.signal == Signal::Notice);
            }
            let rank = |f: &Finding| (std::cmp::Reverse(f.verdict), std::cmp::Reverse(f.signal));
            assert!(found.windows(2).all(|w| rank(&w[0]) <= rank(&w[1])));
        }
    }
}

#[test]
fn the_manual_in_docs_is_that_of_the_program() {
    let text = manual(&Rulebook::built_in(), &Language::english(), &[]);
    assert!(!text.contains('⟨'), "the manual lacks a text");
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/rules.md");
    if std::env::var_os("MIDWIRE_UPDATE_DOCS").is_some() {
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(&path, &text).unwrap();
    }
    let kept = std::fs::read_to_string(&path).unwrap_or_default();
    assert!(kept == text, "docs/rules.md is not what the rules say; run the tests once with MIDWIRE_UPDATE_DOCS=1");
    assert_eq!(manual_pages(&Rulebook::built_in(), &Language::english()).len(), RULES.len());
}
