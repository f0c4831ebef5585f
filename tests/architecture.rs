//! Holds the module table of DEVELOPERS.md: who may use whom, which module may name which library, where files are touched.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

/// Module and the modules it may name. What is not listed it must not know.
const MAY_USE: &[(&str, &[&str])] = &[
    ("quantity", &[]),
    ("wording", &["quantity"]),
    ("diag", &["wording"]),
    ("visit", &["quantity", "diag", "results"]),
    ("results", &["quantity", "diag", "wording", "visit"]),
    ("electrics", &["quantity", "visit", "results"]),
    ("rulebook", &["quantity", "diag", "wording", "results", "visit"]),
    ("intake", &["quantity", "diag", "wording", "visit", "results"]),
    ("balance", &["quantity", "visit", "results", "electrics"]),
    ("network", &["quantity", "diag", "visit", "results", "electrics", "rulebook"]),
    ("diagnosis", &["quantity", "diag", "visit", "results", "electrics", "rulebook", "network"]),
    ("rules", &["quantity", "diag", "wording", "visit", "results", "rulebook", "electrics"]),
    ("report", &["quantity", "diag", "wording", "visit", "results"]),
    ("render", &["quantity", "diag", "report", "results"]),
    (
        "pipeline",
        &[
            "quantity",
            "blank",
            "diag",
            "wording",
            "visit",
            "results",
            "rulebook",
            "intake",
            "balance",
            "network",
            "diagnosis",
            "rules",
            "report",
            "render",
        ],
    ),
    ("blank", &["visit", "wording"]),
    ("cli", &["quantity", "diag", "wording", "visit", "results", "rulebook", "intake", "rules", "report", "render", "pipeline"]),
];

/// Library, as the code names it, and the only places that may: a module, or a file or folder within one.
const LIBRARIES: &[(&str, &[&str])] = &[
    ("calamine", &["intake/workbook"]),
    ("quick_xml", &["intake/workbook"]),
    ("csv", &["intake/workbook", "cli/batch"]),
    ("encoding_rs", &["intake/workbook"]),
    ("chardetng", &["intake/workbook"]),
    ("rust_xlsxwriter", &["render/xlsx", "blank"]),
    ("printpdf", &["render/pdf"]),
    ("lopdf", &["render/pdf"]),
    ("parley", &["render/pdf"]),
    ("subsetter", &["render/pdf"]),
    ("notosans", &["render/pdf"]),
    ("typst_assets", &["render/pdf"]),
    ("flate2", &["render/pdf", "intake/workbook"]),
    ("exif", &["render/pdf"]),
    ("tera", &["report/template"]),
    ("pulldown_cmark", &["report/template"]),
    ("clap", &["cli"]),
    ("anyhow", &["cli"]),
    ("anstream", &["cli"]),
    ("anstyle", &["cli"]),
    ("tempfile", &["cli"]),
    ("jiff", &["cli", "intake"]),
    ("rayon", &["cli"]),
    ("indicatif", &["cli/batch"]),
    ("glob", &["cli/batch"]),
    ("unicode_width", &["render/xlsx"]),
    ("sha2", &["pipeline", "render/html"]),
    ("libm", &["quantity/math"]),
    ("serde", &["results", "rulebook", "intake", "report", "cli/batch"]),
    ("serde_json", &["pipeline", "cli"]),
    ("toml", &["rulebook", "wording", "intake", "report"]),
    ("thiserror", &["intake", "report", "wording", "render", "quantity", "network", "pipeline"]),
    ("strsim", &["rulebook", "intake", "report", "cli"]),
];

/// What only the command line does, and how it would show.
const ONLY_CLI: &[&str] =
    &["std::fs", "std::env", "std::net", "std::process", "SystemTime", "Instant::now", "println!", "eprintln!", "print!(", "eprint!("];

/// Files that may be longer than 500 lines, each for its reason.
const LONG: &[(&str, &str)] = &[];

struct Source {
    /// Path below src, without `.rs`.
    name: String,
    /// Its top module.
    module: String,
    /// Its code without comments and its tests.
    code: String,
    lines: usize,
}

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn files(folder: &Path, ending: &str) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap_or_else(|e| panic!("{}: {e}", folder.display())) {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(files(&path, ending));
        } else if path.extension().is_some_and(|e| e == ending) {
            found.push(path);
        }
    }
    found.sort();
    found
}

fn sources() -> Vec<Source> {
    let src = root().join("src");
    files(&src, "rs")
        .into_iter()
        .map(|path| {
            let text = fs::read_to_string(&path).unwrap();
            let name = path.strip_prefix(&src).unwrap().with_extension("").to_string_lossy().replace('\\', "/");
            let module = name.split('/').next().unwrap().to_owned();
            let shipped = text.split("#[cfg(test)]\nmod tests {").next().unwrap();
            let code = shipped.lines().map(|l| l.split_once("//").map_or(l, |(code, _)| code)).collect::<Vec<_>>().join("\n");
            Source { name, module, code, lines: text.lines().count() }
        })
        .filter(|s| s.module != "lib" && s.module != "main" && !s.name.ends_with("/tests") && !s.name.contains("/tests/"))
        .collect()
}

/// Names that stand directly behind `crate::`, single or in braces.
fn crate_names(code: &str) -> BTreeSet<String> {
    let mut names = BTreeSet::new();
    for part in code.split("crate::").skip(1) {
        match part.strip_prefix('{') {
            Some(list) => {
                let mut depth = 0;
                let mut word = String::new();
                for c in list.chars() {
                    match c {
                        '{' => depth += 1,
                        '}' if depth == 0 => break,
                        '}' => depth -= 1,
                        ',' if depth == 0 => {
                            names.insert(std::mem::take(&mut word));
                        }
                        c if depth == 0 => word.push(c),
                        _ => {}
                    }
                }
                names.insert(word);
            }
            None => {
                names.insert(part.to_owned());
            }
        }
    }
    let first = |n: &String| n.trim().split(|c: char| !(c.is_alphanumeric() || c == '_')).next().unwrap_or("").to_owned();
    names.iter().map(first).filter(|n| !n.is_empty()).collect()
}

/// The code names a library: `library::` as a path of its own.
fn names_library(code: &str, library: &str) -> bool {
    code.match_indices(library).any(|(at, _)| {
        let before = code[..at].chars().next_back();
        let after = &code[at + library.len()..];
        let fresh = before.is_none_or(|c| !(c.is_alphanumeric() || c == '_' || c == ':'));
        fresh && after.starts_with("::")
    })
}

#[test]
fn modules_know_only_whom_they_may() {
    let table: BTreeMap<&str, &[&str]> = MAY_USE.iter().copied().collect();
    let mut faults = Vec::new();
    for source in sources() {
        let Some(allowed) = table.get(source.module.as_str()) else {
            faults.push(format!("src/{}.rs is in no module of the table", source.name));
            continue;
        };
        for used in crate_names(&source.code) {
            if used != source.module && !allowed.contains(&used.as_str()) {
                faults.push(format!("src/{}.rs uses crate::{used}", source.name));
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn libraries_stay_behind_their_module() {
    let mut faults = Vec::new();
    for source in sources() {
        for (library, places) in LIBRARIES {
            let allowed = places.iter().any(|p| source.name == *p || source.name.starts_with(&format!("{p}/")));
            if !allowed && names_library(&source.code, library) {
                faults.push(format!("src/{}.rs names {library}", source.name));
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn every_library_is_in_the_table_and_used() {
    let manifest = fs::read_to_string(root().join("Cargo.toml")).unwrap();
    let dependencies = manifest.split("[dependencies]").nth(1).unwrap().split("\n[").next().unwrap();
    let all: String = sources().into_iter().map(|s| s.code + "\n").collect();
    for line in dependencies.lines().filter(|l| !l.starts_with('#') && l.contains('=')) {
        let package = line.split('=').next().unwrap().trim();
        let library = if package == "kamadak-exif" { "exif".to_owned() } else { package.replace('-', "_") };
        assert!(LIBRARIES.iter().any(|(l, _)| *l == library), "{package} is not in the table of libraries");
        assert!(names_library(&all, &library), "{package} is not used");
    }
}

#[test]
fn only_the_command_line_touches_files_clock_and_terminal() {
    let mut faults = Vec::new();
    for source in sources().iter().filter(|s| s.module != "cli") {
        for word in ONLY_CLI {
            if source.code.contains(word) {
                faults.push(format!("src/{}.rs: {word}", source.name));
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn renderers_do_not_know_each_other() {
    for source in sources().iter().filter(|s| s.module == "render" && s.name != "render") {
        let own = source.name.split('/').nth(1).unwrap();
        for other in ["pdf", "xlsx", "html"].iter().filter(|o| **o != own) {
            assert!(!source.code.contains(&format!("render::{other}")), "src/{}.rs knows {other}", source.name);
        }
    }
}

#[test]
fn files_stay_short_enough_to_be_read() {
    for source in sources() {
        let reason = LONG.iter().find(|(name, _)| *name == format!("{}.rs", source.name));
        assert!(source.lines <= 500 || reason.is_some(), "src/{}.rs has {} lines", source.name, source.lines);
    }
}

#[test]
fn every_path_in_the_map_exists() {
    let map = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    let mut seen = 0;
    for (i, quoted) in map.split('`').enumerate().filter(|(i, _)| i % 2 == 1) {
        let is_path = ["src/", "templates/", "tests/", "samples/", "docs/", ".ci/"].iter().any(|start| quoted.starts_with(start));
        if is_path && !quoted.contains(['<', '*', '{', ' ']) {
            seen += 1;
            assert!(root().join(quoted).exists(), "DEVELOPERS.md names `{quoted}`, which does not exist (quote {i})");
        }
    }
    assert!(seen >= 20, "the map names only {seen} paths");
}

#[test]
fn the_map_has_every_module() {
    let map = fs::read_to_string(root().join("DEVELOPERS.md")).unwrap();
    for module in sources().into_iter().map(|s| s.module).collect::<BTreeSet<_>>() {
        assert!(map.contains(&format!("| {module} |")), "DEVELOPERS.md has no row for {module}");
    }
}

#[test]
fn the_test_command_of_the_readme_is_the_one_that_is_checked() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    let ci = fs::read_to_string(root().join(".ci/run")).unwrap();
    for command in ["cargo test --locked", "cargo run --locked --release -- report samples/open-service-neutral.xlsx -o out"] {
        assert!(readme.contains(command), "README.md lacks `{command}`");
    }
    assert!(ci.contains("cargo test --locked"), ".ci/run does not run the README's test command");
}
