//! The program as a user runs it: exit status, channels, output files, the JSON document against its published schema.

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn sample(name: &str) -> PathBuf {
    root().join("samples").join(name)
}

fn midwire(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_midwire")).args(arguments).output().expect("the program starts")
}

fn said(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn printed(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn text(path: &Path) -> String {
    path.display().to_string()
}

fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(folder).unwrap().map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

fn samples() -> Vec<PathBuf> {
    let mut found: Vec<PathBuf> = fs::read_dir(root().join("samples"))
        .unwrap()
        .map(|e| e.unwrap().path())
        .filter(|p| p.extension().is_some_and(|e| e == "xlsx" || e == "ods"))
        .collect();
    found.sort();
    assert!(found.len() >= 8, "at least eight samples");
    found
}

#[test]
fn the_json_of_every_sample_follows_the_schema() {
    let schema: serde_json::Value = serde_json::from_str(&fs::read_to_string(root().join("docs/output.schema.json")).unwrap()).unwrap();
    let mut schemas = boon::Schemas::new();
    let mut compiler = boon::Compiler::new();
    compiler.add_resource("output.schema.json", schema).unwrap();
    let index = compiler.compile("output.schema.json", &mut schemas).unwrap();
    for path in samples() {
        let output = midwire(&["check", "--json", "--all", &text(&path)]);
        let document: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        if let Err(fault) = schemas.validate(&document, index) {
            panic!("{}: {fault:#}", path.display());
        }
        assert!(!printed(&output).contains('⟨'), "{}: a sentence or value is missing", path.display());
    }
    let both = midwire(&["check", "--json", &text(&sample("sound-house.xlsx")), "no-such-file.xlsx"]);
    let document: serde_json::Value = serde_json::from_slice(&both.stdout).unwrap();
    assert!(schemas.validate(&document, index).is_ok());
    assert_eq!(document.as_array().map(Vec::len), Some(2));
    assert!(document[1]["error"].is_string());
    assert_eq!(both.status.code(), Some(2));
}

#[test]
fn a_sound_sample_gives_nothing_above_notice_and_the_others_do() {
    for path in samples() {
        let status = midwire(&["check", &text(&path)]).status.code();
        let sound = ["sound-house", "cottage", "shop-208y", "workshop-delta"].contains(&path.file_stem().unwrap().to_str().unwrap());
        assert_eq!(status, Some(if sound { 0 } else { 1 }), "{}", path.display());
    }
}

#[test]
fn a_report_is_written_once_and_replaced_only_by_force() {
    let folder = tempfile::tempdir().unwrap();
    let out = text(folder.path());
    let workbook = text(&sample("sound-house.xlsx"));
    let before = fs::read(&workbook).unwrap();
    let first = midwire(&["report", &workbook, "-o", &out]);
    assert_eq!(first.status.code(), Some(0), "{}", said(&first));
    let written = names(folder.path());
    assert_eq!(written.len(), 2, "{written:?}");
    assert_eq!(printed(&first).lines().count(), 2);
    let bytes: Vec<Vec<u8>> = written.iter().map(|n| fs::read(folder.path().join(n)).unwrap()).collect();

    let second = midwire(&["report", &workbook, "-o", &out]);
    assert_eq!(second.status.code(), Some(2));
    assert!(said(&second).contains("--force"), "{}", said(&second));

    let third = midwire(&["report", &workbook, "-o", &out, "--force"]);
    assert_eq!(third.status.code(), Some(0), "{}", said(&third));
    assert_eq!(names(folder.path()), written, "no temporary file stays");
    for (name, before) in written.iter().zip(&bytes) {
        assert_eq!(&fs::read(folder.path().join(name)).unwrap(), before, "{name}: same input, same bytes");
    }
    assert_eq!(fs::read(&workbook).unwrap(), before, "the workbook is never touched");
}

#[test]
fn two_workbooks_of_one_name_get_two_reports_and_it_is_said() {
    let folder = tempfile::tempdir().unwrap();
    let workbook = text(&sample("sound-house.xlsx"));
    let output = midwire(&["report", &workbook, &workbook, "-o", &text(folder.path())]);
    assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    let written = names(folder.path());
    assert_eq!(written.len(), 4, "{written:?}");
    assert!(written.iter().any(|n| n.ends_with("-2.pdf")), "{written:?}");
    assert!(said(&output).contains("-2"), "{}", said(&output));
}

#[test]
fn what_is_no_workbook_gets_one_sentence_and_no_file() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("out");
    let bad = |name: &str, bytes: &[u8]| {
        let path = folder.path().join(name);
        fs::write(&path, bytes).unwrap();
        path
    };
    // The signature of a compound file, as [MS-CFB] 2.2 gives it, and nothing behind it.
    let compound = [0xd0, 0xcf, 0x11, 0xe0, 0xa1, 0xb1, 0x1a, 0xe1];
    let cases = [
        bad("empty.xlsx", b""),
        bad("text.xlsx", b"not a workbook"),
        bad("image.ods", b"\x89PNG\r\n\x1a\n0000"),
        bad("cut.xlsx", &fs::read(sample("sound-house.xlsx")).unwrap()[..2000]),
        bad("compound.xls", &compound),
        folder.path().join("missing.xlsx"),
    ];
    for path in cases {
        let output = midwire(&["report", &text(&path), "-o", &text(&out)]);
        assert_eq!(output.status.code(), Some(2), "{}", path.display());
        assert_eq!(said(&output).lines().count(), 1, "{}: {}", path.display(), said(&output));
        assert!(said(&output).contains(path.file_name().unwrap().to_str().unwrap()));
        assert!(names(&out).is_empty(), "{}", path.display());
    }
}

#[test]
fn one_bad_workbook_does_not_stop_the_others() {
    let folder = tempfile::tempdir().unwrap();
    let bad = folder.path().join("bad.xlsx");
    fs::write(&bad, b"nothing").unwrap();
    let out = folder.path().join("out");
    let output = midwire(&["report", &text(&bad), &text(&sample("sound-house.xlsx")), "-o", &text(&out)]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(names(&out).len(), 2);
}

#[test]
fn a_rule_book_with_a_fault_is_refused_with_key_and_line() {
    let folder = tempfile::tempdir().unwrap();
    let book = folder.path().join("ours.toml");
    fs::write(&book, "[rules.leg-summ]\nenabled = false\n").unwrap();
    let output = midwire(&["check", &text(&sample("sound-house.xlsx")), "--rules", &text(&book)]);
    assert_eq!(output.status.code(), Some(2));
    for part in ["line 1", "leg-summ", "leg-sum"] {
        assert!(said(&output).contains(part), "{}", said(&output));
    }
}

#[test]
fn the_rule_book_is_printed_whole_or_in_part() {
    let all = printed(&midwire(&["rules"]));
    assert_eq!(all.trim(), fs::read_to_string(root().join("docs/rules.md")).unwrap().trim(), "docs/rules.md is the printed rule book");
    let one = printed(&midwire(&["rules", "leg-sum"]));
    assert!(one.contains("leg-sum") && !one.contains("voltage-drop"));
    let unknown = midwire(&["rules", "leg-sun"]);
    assert_eq!(unknown.status.code(), Some(2));
    assert!(said(&unknown).contains("leg-sum"));
}

#[test]
fn templates_are_listed_and_written_out_and_a_changed_one_is_used() {
    let listed = printed(&midwire(&["templates"]));
    for name in ["client", "record", "letter"] {
        assert!(listed.contains(name), "{listed}");
    }
    let folder = tempfile::tempdir().unwrap();
    assert_eq!(midwire(&["templates", "-o", &text(folder.path())]).status.code(), Some(0));
    for name in names(folder.path()) {
        let out = folder.path().join(format!("out-{name}"));
        let template = text(&folder.path().join(&name));
        let output = midwire(&["report", &text(&sample("service-call.xlsx")), "--template", &template, "-o", &text(&out)]);
        assert_eq!(output.status.code(), Some(0), "{name}: {}", said(&output));
    }
    let broken = folder.path().join("broken.md.tera");
    fs::write(&broken, "# A title\n\n{{ site.cliemt }}\n").unwrap();
    let output = midwire(&["report", &text(&sample("service-call.xlsx")), "--template", &text(&broken), "-o", &text(folder.path())]);
    assert_eq!(output.status.code(), Some(2));
    for part in ["broken.md.tera", "line 3", "cliemt"] {
        assert!(said(&output).contains(part), "{}", said(&output));
    }
}

#[test]
fn a_marked_copy_is_written_once_never_over_the_workbook_and_for_one_alone() {
    let folder = tempfile::tempdir().unwrap();
    let workbook = folder.path().join("bad.xlsx");
    fs::copy(sample("bad-cells.xlsx"), &workbook).unwrap();
    let before = fs::read(&workbook).unwrap();
    let target = folder.path().join("marked.xlsx");
    let mark = |target: &Path, more: &[&str]| midwire(&[&["check", &text(&workbook), "--marked", &text(target)], more].concat());

    let first = mark(&target, &["--json"]);
    assert_eq!(first.status.code(), Some(1), "{}", said(&first));
    let document: serde_json::Value = serde_json::from_slice(&first.stdout).expect("standard output is the document alone");
    let marked = fs::read(&target).unwrap();
    let sheets = midwire::intake::sheets(&midwire::intake::Input { name: "", content: midwire::intake::Content::File(&marked) }).unwrap();
    let original = midwire::intake::sheets(&midwire::intake::Input { name: "", content: midwire::intake::Content::File(&before) }).unwrap();
    assert_eq!(sheets.len(), original.len() + 1, "the list, then the sheets");
    let cells = document["cells"].as_array().unwrap();
    assert!(!cells.is_empty());
    for cell in cells {
        let listed = |what: &str| sheets[0].cells.iter().any(|c| c.value == midwire::intake::Value::Text(what.to_owned()));
        for key in ["sheet", "cell"] {
            assert!(cell[key].as_str().is_none_or(|what| what.is_empty() || listed(what)), "{cell}");
        }
    }
    for (copy, sheet) in sheets.iter().skip(1).zip(&original) {
        assert_eq!(copy.name, sheet.name);
        assert_eq!(
            copy.cells.iter().map(|c| (c.row, c.col)).collect::<Vec<_>>(),
            sheet.cells.iter().map(|c| (c.row, c.col)).collect::<Vec<_>>()
        );
    }

    for (again, expected) in [
        (mark(&target, &[]), "--force"),
        (mark(&workbook, &["--force"]), "never written to"),
        (mark(&folder.path().join("marked.ods"), &[]), ".xlsx"),
        (midwire(&["check", &text(&workbook), &text(&workbook), "--marked", &text(&folder.path().join("two.xlsx"))]), "one workbook"),
    ] {
        assert_eq!(again.status.code(), Some(2));
        assert!(said(&again).contains(expected), "{}", said(&again));
        assert!(printed(&again).is_empty());
    }
    assert_eq!(mark(&target, &["--force"]).status.code(), Some(1));
    assert_eq!(fs::read(&target).unwrap(), marked, "same input, same bytes");
    assert_eq!(fs::read(&workbook).unwrap(), before);
    assert_eq!(names(folder.path()), ["bad.xlsx", "marked.xlsx"]);
}

#[test]
fn a_first_mapping_changes_nothing_and_completed_it_places_the_columns() {
    let folder = tempfile::tempdir().unwrap();
    let sheets = folder.path().join("sheets");
    fs::create_dir(&sheets).unwrap();
    fs::write(sheets.join("Blatt.csv"), "Messpunkt,U eins,VBN,Handschuh\nMain,120.1,119.4,00\n").unwrap();
    let mapping = folder.path().join("ours.toml");
    let refused = midwire(&["check", &text(&sheets)]);
    assert_eq!(refused.status.code(), Some(2), "{}", printed(&refused));

    let written = midwire(&["map", &text(&sheets), "-o", &text(&mapping)]);
    assert_eq!(written.status.code(), Some(0), "{}", said(&written));
    let first = fs::read_to_string(&mapping).unwrap();
    assert_eq!(printed(&midwire(&["map", &text(&sheets)])), first);
    assert!(said(&midwire(&["check", &text(&sheets), "--map", &text(&mapping)])).contains("no table of readings"));

    let completed = first
        .replace("# readings = \"Blatt\"", "readings = \"Blatt\"")
        .replace("# \"?\" = \"Messpunkt\"", "Location = \"Messpunkt\"")
        .replace("# \"?\" = \"U eins\"", "L1-N = \"U eins\"");
    assert_ne!(completed, first, "{first}");
    fs::write(&mapping, completed).unwrap();
    let read = midwire(&["check", "--json", &text(&sheets), "--map", &text(&mapping)]);
    let document: serde_json::Value = serde_json::from_slice(&read.stdout).unwrap();
    let reading =
        |quantity: &str| document["readings"].as_array().unwrap().iter().find(|r| r["quantity"] == quantity).map(|r| r["value"].clone());
    assert_eq!(reading("L1-N"), Some(120.1.into()), "{document:#}");
    assert_eq!(reading("L2-N"), Some(119.4.into()));
    let unplaced = document["cells"].as_array().unwrap().iter().find(|c| c["found"] == "Handschuh").expect("a column without a place");
    assert!(unplaced["message"].as_str().unwrap().contains("COLUMN = \"Handschuh\""), "{unplaced}");
    let report = midwire(&["report", &text(&sheets), "--map", &text(&mapping), "-o", &text(&folder.path().join("out"))]);
    assert_eq!(report.status.code(), Some(0), "{}", said(&report));
    let batch = midwire(&["batch", &text(folder.path()), "--map", "no-such.toml", "-o", &text(&folder.path().join("out"))]);
    assert!(said(&batch).contains("no-such.toml"), "{}", said(&batch));
}

#[test]
fn a_blank_workbook_is_for_a_system_by_name_or_voltages_and_not_for_another() {
    let folder = tempfile::tempdir().unwrap();
    for system in ["120/240", "208Y/120", "127/220"] {
        let target = text(&folder.path().join(format!("{}.xlsx", system.replace('/', "-"))));
        let written = midwire(&["blank", "--system", system, "-o", &target]);
        assert_eq!(written.status.code(), Some(0), "{}", said(&written));
        assert_eq!(midwire(&["blank", "-o", &target]).status.code(), Some(2), "never over a file that exists");
        let refused = midwire(&["check", &target]);
        assert_eq!(refused.status.code(), Some(2));
        assert!(said(&refused).contains("not filled in yet"), "{}", said(&refused));
    }
    for system in ["", "<r>120/240</r>", "NaN/240", "100/500", "1e300/2e300"] {
        let refused = midwire(&["blank", "--system", system, "-o", &text(&folder.path().join("no.xlsx"))]);
        assert_eq!(refused.status.code(), Some(2), "{system}");
        assert!(said(&refused).contains("208Y/120"), "{}", said(&refused));
    }
    assert_eq!(names(folder.path()).len(), 3);
}

#[test]
fn every_command_has_help_with_examples() {
    for command in ["check", "report", "batch", "blank", "map", "rules", "templates"] {
        let help = printed(&midwire(&[command, "--help"]));
        assert!(help.contains("Examples:"), "{command}: {help}");
    }
    let help = printed(&midwire(&["--help"]));
    assert!(help.split_whitespace().collect::<Vec<_>>().join(" ").contains("authority having jurisdiction"), "{help}");
}
