//! `midwire batch`: nothing lost, nothing half done, the same bytes however it was interrupted.

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

fn samples() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("samples")
}

fn batch(folder: &Path, out: &Path, more: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_midwire"));
    command.arg("batch").arg(folder).arg("-o").arg(out).arg("--quiet").args(more).stdin(Stdio::null());
    command
}

fn run(folder: &Path, out: &Path, more: &[&str]) -> Output {
    batch(folder, out, more).output().unwrap()
}

/// All reports: the register aside, which tells of the time each took.
fn reports(out: &Path) -> BTreeMap<String, Vec<u8>> {
    let mut found = BTreeMap::new();
    for entry in fs::read_dir(out).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        if !name.starts_with("register.") {
            found.insert(name.clone(), fs::read(out.join(&name)).unwrap());
        }
    }
    found
}

/// A folder with each sample in a few places.
fn visits(root: &Path, copies: usize) -> PathBuf {
    let folder = root.join("visits");
    for n in 0..copies {
        let to = folder.join(format!("week-{n}"));
        fs::create_dir_all(&to).unwrap();
        for entry in fs::read_dir(samples()).unwrap() {
            let path = entry.unwrap().path();
            if path.extension().is_some_and(|e| e == "xlsx" || e == "ods") {
                fs::copy(&path, to.join(path.file_name().unwrap())).unwrap();
            }
        }
    }
    folder
}

fn said(output: &Output) -> String {
    String::from_utf8_lossy(&output.stderr).into_owned()
}

fn lines(out: &Path) -> Vec<serde_json::Value> {
    let text = fs::read_to_string(out.join("register.jsonl")).unwrap();
    text.lines().filter(|l| !l.is_empty()).map(|l| serde_json::from_str(l).unwrap()).collect()
}

#[test]
fn the_same_bytes_with_one_job_and_with_four() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 2);
    let (one, four) = (root.path().join("one"), root.path().join("four"));
    for (out, jobs) in [(&one, "1"), (&four, "4")] {
        let output = run(&folder, out, &["--jobs", jobs, "--html"]);
        assert_eq!(output.status.code(), Some(0), "{}", said(&output));
    }
    assert_eq!(reports(&one).len(), 2 * 9 * 3);
    assert_eq!(reports(&one), reports(&four));
}

#[test]
fn a_second_run_does_only_what_changed() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 1);
    let out = root.path().join("out");
    run(&folder, &out, &[]);
    let before = reports(&out);
    let entered = lines(&out).len();

    let again = run(&folder, &out, &[]);
    assert_eq!(again.status.code(), Some(0), "{}", said(&again));
    assert_eq!(lines(&out).len(), entered, "nothing was done again");

    let removed = before.keys().find(|n| n.ends_with(".pdf")).unwrap();
    fs::remove_file(out.join(removed)).unwrap();
    run(&folder, &out, &[]);
    assert_eq!(reports(&out), before, "what was missing is there again");
    assert_eq!(lines(&out).len(), entered + 1);

    run(&folder, &out, &["--page", "a4"]);
    assert_ne!(reports(&out), before, "other settings, other reports");
    assert_eq!(reports(&out).len(), before.len(), "under the same names");
}

#[test]
fn one_bad_workbook_costs_itself_alone() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 1);
    fs::write(folder.join("week-0/broken.xlsx"), b"no workbook").unwrap();
    let out = root.path().join("out");
    let output = run(&folder, &out, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(said(&output).contains("week-0/broken.xlsx"), "{}", said(&output));
    assert_eq!(reports(&out).len(), 9 * 2);
    let failed: Vec<_> = lines(&out).into_iter().filter(|l| l["status"] == "failed").collect();
    assert_eq!(failed.len(), 1);
    assert!(failed[0]["reason"].as_str().is_some_and(|r| !r.is_empty()));
    for name in ["register.xlsx", "register.csv"] {
        assert!(out.join(name).exists(), "{name}");
    }
    assert_eq!(fs::read_to_string(out.join("register.csv")).unwrap().lines().count(), 1 + 10);
}

#[test]
fn a_file_of_someone_else_is_not_replaced() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 1);
    let (probe, out) = (root.path().join("probe"), root.path().join("out"));
    run(&folder, &probe, &[]);
    let name = reports(&probe).into_keys().find(|n| n.ends_with(".pdf")).unwrap();
    fs::create_dir_all(&out).unwrap();
    fs::write(out.join(&name), b"mine").unwrap();
    let output = run(&folder, &out, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(fs::read(out.join(&name)).unwrap(), b"mine");
    assert_eq!(run(&folder, &out, &["--force"]).status.code(), Some(0));
    assert_ne!(fs::read(out.join(&name)).unwrap(), b"mine");
}

#[test]
fn two_batches_do_not_share_a_folder() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 1);
    let out = root.path().join("out");
    fs::create_dir_all(&out).unwrap();
    let held = fs::File::create(out.join("register.jsonl")).unwrap();
    held.lock().unwrap();
    let output = run(&folder, &out, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(said(&output).contains("another batch"), "{}", said(&output));
    assert!(reports(&out).is_empty());
}

#[test]
fn stopped_at_any_moment_it_goes_on_to_the_same_bytes() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 2);
    let whole = root.path().join("whole");
    assert_eq!(run(&folder, &whole, &["--jobs", "2"]).status.code(), Some(0));
    let expected = reports(&whole);
    let out = root.path().join("out");
    // Fifty moments spread over a run by a fixed sequence; the machine's own unevenness does the rest.
    let mut seed = 0x2545_f491_4f6c_dd1d_u64;
    for _ in 0..50 {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        let mut child = batch(&folder, &out, &["--jobs", "2"]).stdout(Stdio::null()).stderr(Stdio::null()).spawn().unwrap();
        std::thread::sleep(std::time::Duration::from_millis(seed % 120));
        let _ = child.kill();
        child.wait().unwrap();
        for (name, bytes) in if out.exists() { reports(&out) } else { BTreeMap::new() } {
            // A temporary file may be left behind by a kill; what has its final name is whole.
            if !name.starts_with('.') {
                assert_eq!(Some(&bytes), expected.get(&name), "{name}");
            }
        }
    }
    let last = run(&folder, &out, &["--jobs", "2"]);
    assert_eq!(last.status.code(), Some(0), "{}", said(&last));
    assert_eq!(reports(&out), expected, "the same reports, and no temporary file");
}

#[test]
fn only_what_is_asked_for_is_done() {
    let root = tempfile::tempdir().unwrap();
    let folder = visits(root.path(), 2);
    let out = root.path().join("out");
    run(&folder, &out, &["--only", "week-1/s*.xlsx"]);
    let files: Vec<String> = lines(&out).iter().filter_map(|l| l["file"].as_str().map(str::to_owned)).collect();
    assert!(!files.is_empty() && files.iter().all(|f| f.starts_with("week-1/s")), "{files:?}");
    run(&folder, &root.path().join("late"), &["--since", "2999-01-01"]);
    assert!(lines(&root.path().join("late")).is_empty());
}
