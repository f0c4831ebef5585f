//! `midwire batch`: every workbook below a folder, in parallel, resumable.
//!
//! Work goes in portions: a portion is read, checked and rendered in parallel, then named in the order of its files (so that
//! collisions are resolved the same way each time), written in parallel, and entered into the journal in order. Memory depends on
//! the portion alone. What the journal says is done, with the same input and settings and its outputs in place, is not done again.

mod journal;
mod progress;
mod register;
mod walk;
mod work;

use super::{DONE, FAILED, args, files, name, report, settings, terminal};
use crate::pipeline::Settings;
use anyhow::Context;
use journal::{Entry, Journal, Status};
use progress::Progress;
use rayon::prelude::*;
use std::collections::HashSet;
use std::path::PathBuf;
use work::{Outcome, Rendered};

/// Files of a portion for each thread: enough to keep all busy, few enough to hold in memory.
const PORTION: usize = 8;

/// Does all that is missing or changed; the register is written at the end, also when something failed.
pub fn run(args: &args::Batch) -> anyhow::Result<u8> {
    std::fs::create_dir_all(&args.output).with_context(|| format!("{} can't be made", args.output.display()))?;
    let settings = settings(args.look.rules.as_deref(), args.look.map.as_deref())?;
    let look = report::look(&args.look)?;
    let job = work::Job { settings: &settings, options: look.options(), html: args.look.html, fingerprint: fingerprint(args, &look)? };
    let found = walk::workbooks(&args.folder, &args.output, args.only.as_deref(), args.since.as_deref())?;
    let mut journal = Journal::open(&args.output)?;
    files::clear(&args.output)?;
    let threads = args.jobs.unwrap_or_else(|| std::thread::available_parallelism().map_or(1, std::num::NonZero::get)).clamp(1, 256);
    let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build()?;
    let progress = Progress::new(found.len(), args.quiet);
    let mut names = journal.names();
    for portion in found.chunks(threads * PORTION) {
        let outcomes: Vec<Outcome> =
            pool.install(|| portion.par_iter().map(|file| work::one(&args.folder, file, &job, &journal, args.force)).collect());
        let written = write(&pool, args, outcomes, &mut names, &mut journal)?;
        for entry in written {
            progress.done(&entry);
            journal.enter(entry)?;
        }
    }
    progress.finish();
    close(args, &settings, &journal, &found, &progress)
}

/// SHA-256 over everything but the workbook that decides the output.
fn fingerprint(args: &args::Batch, look: &report::Look) -> anyhow::Result<String> {
    let rules = args.look.rules.as_deref().map(files::text).transpose()?.unwrap_or_default();
    let map = args.look.map.as_deref().map(files::text).transpose()?.unwrap_or_default();
    let template = look.template().map_or("", |(_, text)| text);
    let page = format!("{:?} {:?} html {}", look.page(), args.look.date, args.look.html);
    let parts = [("program", env!("CARGO_PKG_VERSION")), ("rules", &rules), ("map", &map), ("template", template), ("page", &page)];
    let parts: Vec<(String, Vec<u8>)> = parts.iter().map(|(k, v)| ((*k).to_owned(), v.as_bytes().to_vec())).collect();
    Ok(crate::pipeline::sha256(&crate::intake::Content::Folder(&parts)))
}

/// Names a portion's reports in the order of their files, then writes them.
fn write(
    pool: &rayon::ThreadPool,
    args: &args::Batch,
    outcomes: Vec<Outcome>,
    names: &mut HashSet<String>,
    journal: &mut Journal,
) -> anyhow::Result<Vec<Entry>> {
    let mut named: Vec<(Option<Rendered>, Entry)> = Vec::with_capacity(outcomes.len());
    for outcome in outcomes {
        match outcome {
            Outcome::Unchanged => {}
            Outcome::Failed(entry) => named.push((None, *entry)),
            Outcome::Rendered(rendered, mut entry) => {
                let own = journal.name_of(&entry.file).filter(|own| name::is_of(own, &rendered.wanted)).map(str::to_owned);
                let chosen = own.unwrap_or_else(|| name::unique(&rendered.wanted, names));
                if chosen != rendered.wanted {
                    anstream::eprintln!(
                        "midwire: {}: another workbook is named {}; its reports are named {chosen}",
                        terminal::line(&entry.file),
                        rendered.wanted
                    );
                }
                journal.begin(&chosen)?;
                entry.name = Some(chosen);
                named.push((Some(*rendered), *entry));
            }
        }
    }
    let journal = &*journal;
    Ok(pool.install(|| named.into_par_iter().map(|(rendered, entry)| store(args, rendered, entry, journal)).collect()))
}

fn store(args: &args::Batch, rendered: Option<Rendered>, mut entry: Entry, journal: &Journal) -> Entry {
    let Some(rendered) = rendered else { return entry };
    let name = entry.name.clone().unwrap_or_default();
    for (ending, bytes) in rendered.files {
        let file = format!("{name}.{ending}");
        let ours = args.force || journal.is_ours(&name);
        match files::write(&args.output.join(&file), &bytes, ours) {
            Ok(()) => entry.outputs.push(journal::OutputFile { name: file, bytes: bytes.len() as u64 }),
            Err(e) => {
                entry.status = Status::Failed;
                entry.reason = Some(format!("{e:#}"));
                break;
            }
        }
    }
    entry
}

/// Register, failures, and what the user is told at the end.
fn close(args: &args::Batch, settings: &Settings, journal: &Journal, found: &[PathBuf], progress: &Progress) -> anyhow::Result<u8> {
    register::write(&args.output, journal, &settings.language)?;
    let here: HashSet<String> = found.iter().map(|f| walk::shown(f)).collect();
    let failed: Vec<&Entry> = journal.entries().filter(|e| e.status == Status::Failed && here.contains(&e.file)).collect();
    for entry in &failed {
        anstream::eprintln!("midwire: {}: {}", terminal::line(&entry.file), terminal::line(entry.reason.as_deref().unwrap_or_default()));
    }
    anstream::println!(
        "{}: {} workbooks; {} done now, {} unchanged, {} failed; register in {}",
        args.folder.display(),
        found.len(),
        progress.written(),
        found.len().saturating_sub(progress.count()),
        failed.len(),
        args.output.join(register::NAME).display()
    );
    Ok(if failed.is_empty() { DONE } else { FAILED })
}
