//! `midwire check`.

use super::files::Loaded;
use super::{DONE, FAILED, FOUND, args, contained, files, settings, terminal};
use crate::intake::Input;
use crate::pipeline::{self, Checked, Settings};
use crate::results::{Signal, Verdict};
use anyhow::bail;
use std::io::Write;
use std::path::Path;

/// Reads, checks and prints.
pub fn run(args: &args::Check) -> anyhow::Result<u8> {
    let settings = settings(args.rules.as_deref(), args.map.as_deref())?;
    if let Some(target) = &args.marked {
        may_mark(args, target)?;
    }
    let mut status = DONE;
    let mut documents = Vec::new();
    let mut out = std::io::BufWriter::new(anstream::stdout());
    for path in &args.workbooks {
        let name = path.display().to_string();
        match loaded(path).and_then(|loaded| of(&loaded, path, &name, &settings).map(|checked| (loaded, checked))) {
            Ok((loaded, checked)) => {
                if checked.worst().is_some_and(|s| s > Signal::Notice) {
                    status = status.max(FOUND);
                }
                if args.json {
                    documents.push(pipeline::json_document(&checked, &settings.language, args.all));
                } else {
                    print(&mut out, &checked, &settings, args.all)?;
                }
                if let Some(target) = &args.marked
                    && let Err(error) = mark(&loaded, &checked, &settings, target, args.force)
                {
                    status = FAILED;
                    anstream::eprintln!("midwire: {}: {}", terminal::line(&name), terminal::line(&format!("{error:#}")));
                }
            }
            Err((error, sha256)) => {
                status = FAILED;
                anstream::eprintln!("midwire: {}: {}", terminal::line(&name), terminal::line(&error));
                documents.push(pipeline::json_refusal(&name, &sha256, &error));
            }
        }
    }
    if args.json {
        let several = args.workbooks.len() > 1;
        let document = if several { serde_json::Value::Array(documents) } else { documents.pop().unwrap_or_default() };
        serde_json::to_writer_pretty(&mut out, &document)?;
        writeln!(out)?;
    }
    out.flush()?;
    Ok(status)
}

/// One workbook; the error with the input's hash, empty where it could not be read at all.
pub fn one(path: &Path, name: &str, settings: &Settings) -> Result<Checked, (String, String)> {
    of(&loaded(path)?, path, name, settings)
}

fn loaded(path: &Path) -> Result<Loaded, (String, String)> {
    files::load(path).map_err(|e| (format!("{e:#}"), String::new()))
}

fn of(loaded: &Loaded, path: &Path, name: &str, settings: &Settings) -> Result<Checked, (String, String)> {
    let input = Input { name, content: loaded.content() };
    let sha256 = || pipeline::sha256(&loaded.content());
    let check = || Ok(pipeline::check(&input, &files::Siblings::of(path), settings)?);
    contained(check).map_err(|e| (e.to_string(), sha256()))
}

/// What would stand in the way of a marked copy is said before anything is read.
fn may_mark(args: &args::Check, target: &Path) -> anyhow::Result<()> {
    let [workbook] = args.workbooks.as_slice() else {
        bail!("--marked writes the copy of one workbook; {} were given", args.workbooks.len());
    };
    if !target.extension().is_some_and(|e| e.eq_ignore_ascii_case("xlsx")) {
        bail!("the marked copy is an xlsx workbook; {} does not end in .xlsx", target.display());
    }
    let same = target.canonicalize().is_ok_and(|t| workbook.canonicalize().is_ok_and(|w| w == t));
    if same {
        bail!("{} is the workbook itself and is never written to; name another file", target.display());
    }
    if !args.force && target.symlink_metadata().is_ok() {
        bail!("{} exists; --force replaces it", target.display());
    }
    Ok(())
}

fn mark(loaded: &Loaded, checked: &Checked, settings: &Settings, target: &Path, force: bool) -> anyhow::Result<()> {
    let input = Input { name: &checked.file, content: loaded.content() };
    let bytes = pipeline::marked(&input, checked, &settings.language)?;
    files::write(target, &bytes, force)?;
    anstream::eprintln!("midwire: the marked copy is {}", terminal::line(&target.display().to_string()));
    Ok(())
}

fn print(out: &mut impl Write, checked: &Checked, settings: &Settings, all: bool) -> std::io::Result<()> {
    let language = &settings.language;
    let file = terminal::line(&checked.file);
    let rows = checked.visit.rows.len();
    writeln!(out, "{file}: {}, {} runs, {rows} rows of readings", terminal::line(&checked.visit.system.name), checked.visit.runs.len())?;
    for p in &checked.problems {
        writeln!(out, "{}", terminal::problem(p, &file, language))?;
    }
    let shown = checked.findings.iter().filter(|f| all || f.verdict != Verdict::Pass);
    for f in shown {
        writeln!(out, "{}", terminal::finding(f, language))?;
    }
    let count = |v: Verdict| checked.findings.iter().filter(|f| f.verdict == v).count();
    let worst = checked.worst().map_or("nothing to report", Signal::word);
    writeln!(
        out,
        "{file}: {worst}; {} failed, {} undecided, {} passed; {} cells named\n",
        count(Verdict::Fail),
        count(Verdict::Undecided),
        count(Verdict::Pass) + checked.passed_unlisted,
        checked.problems.len()
    )
}
