//! `midwire check`.

use super::{DONE, FAILED, FOUND, args, files, settings, terminal};
use crate::intake::Input;
use crate::pipeline::{self, Checked, Settings};
use crate::results::{Signal, Verdict};
use std::io::Write;
use std::path::Path;

/// Reads, checks and prints.
pub fn run(args: &args::Check) -> anyhow::Result<u8> {
    let settings = settings(args.rules.as_deref())?;
    let mut status = DONE;
    let mut documents = Vec::new();
    let mut out = std::io::BufWriter::new(anstream::stdout());
    for path in &args.workbooks {
        let name = path.display().to_string();
        match one(path, &name, &settings) {
            Ok(checked) => {
                if checked.worst().is_some_and(|s| s > Signal::Notice) {
                    status = status.max(FOUND);
                }
                if args.json {
                    documents.push(pipeline::json_document(&checked, &settings.language, args.all));
                } else {
                    print(&mut out, &checked, &settings, args.all)?;
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
    let loaded = files::load(path).map_err(|e| (format!("{e:#}"), String::new()))?;
    let input = Input { name, content: loaded.content() };
    let sha256 = || pipeline::sha256(&loaded.content());
    pipeline::check(&input, &files::Siblings::of(path), settings).map_err(|e| (e.to_string(), sha256()))
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
        count(Verdict::Pass),
        checked.problems.len()
    )
}
