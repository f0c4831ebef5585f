//! The work on one workbook of a batch: read, check, render; no naming, no writing.

use super::journal::{Entry, Journal, Status, VisitLine};
use super::walk;
use crate::cli::{contained, files, name};
use crate::intake::Input;
use crate::pipeline::{self, Checked, ReportOptions, Settings};
use crate::report::cause_in_words;
use crate::results::{Signal, Verdict};
use std::path::Path;
use std::time::Instant;

/// What stays the same over the batch.
pub struct Job<'a> {
    /// Rules and words.
    pub settings: &'a Settings,
    /// Looks of the report.
    pub options: ReportOptions<'a>,
    /// HTML, too.
    pub html: bool,
    /// Hash of all of these.
    pub fingerprint: String,
}

/// Reports ready to be written.
pub struct Rendered {
    /// The name they should have.
    pub wanted: String,
    /// Ending and bytes.
    pub files: Vec<(&'static str, Vec<u8>)>,
}

/// What became of a workbook.
pub enum Outcome {
    /// Done before, with the same input and settings, and its reports are in place.
    Unchanged,
    /// Done; the reports are to be written.
    Rendered(Box<Rendered>, Box<Entry>),
    /// It could not be used.
    Failed(Box<Entry>),
}

/// Does one workbook.
pub fn one(folder: &Path, file: &Path, job: &Job, journal: &Journal, force: bool) -> Outcome {
    let begun = Instant::now();
    let shown = walk::shown(file);
    let mut entry = Entry {
        file: shown.clone(),
        input_sha256: String::new(),
        settings_sha256: job.fingerprint.clone(),
        status: Status::Failed,
        reason: None,
        name: None,
        outputs: Vec::new(),
        visit: None,
        seconds: 0.0,
    };
    let result = contained(|| render(folder, file, job, journal, force, &mut entry));
    entry.seconds = (begun.elapsed().as_secs_f64() * 1e3).round() / 1e3;
    match result {
        Ok(None) => Outcome::Unchanged,
        Ok(Some(rendered)) => {
            entry.status = Status::Written;
            Outcome::Rendered(Box::new(rendered), Box::new(entry))
        }
        Err(e) => {
            entry.reason = Some(format!("{e:#}"));
            Outcome::Failed(Box::new(entry))
        }
    }
}

fn render(folder: &Path, file: &Path, job: &Job, journal: &Journal, force: bool, entry: &mut Entry) -> anyhow::Result<Option<Rendered>> {
    let path = folder.join(file);
    let loaded = files::load(&path)?;
    let input = Input { name: &entry.file.clone(), content: loaded.content() };
    entry.input_sha256 = pipeline::sha256(&input.content);
    if !force && journal.entry(&entry.file).is_some_and(|e| in_place(journal, e, entry)) {
        return Ok(None);
    }
    let checked = pipeline::check(&input, &files::Siblings::of(&path), job.settings)?;
    entry.visit = Some(line(&checked, job.settings));
    let stem = file.file_stem().or(folder.file_name()).map_or_else(String::new, |s| s.to_string_lossy().into_owned());
    let files = pipeline::render(&checked, job.settings, &job.options, job.html)?;
    Ok(Some(Rendered { wanted: name::of(&checked.visit, &stem), files }))
}

/// Nothing has changed, and every report is there in its full length.
fn in_place(journal: &Journal, before: &Entry, now: &Entry) -> bool {
    before.status == Status::Written
        && before.input_sha256 == now.input_sha256
        && before.settings_sha256 == now.settings_sha256
        && before.outputs.iter().all(|o| std::fs::metadata(journal.folder().join(&o.name)).is_ok_and(|m| m.len() == o.bytes))
}

fn line(checked: &Checked, settings: &Settings) -> VisitLine {
    let visit = &checked.visit;
    let shown = checked.findings.iter().filter(|f| f.verdict != Verdict::Pass);
    let mut counts = [0; 4];
    for finding in shown {
        counts[Signal::Danger as usize - finding.signal as usize] += 1;
    }
    let lead = checked.diagnosis.as_ref().and_then(|d| d.ranking.first());
    let open = checked.diagnosis.iter().flat_map(|d| &d.neutral).filter(|n| n.high.is_none());
    VisitLine {
        job: visit.site.job.as_ref().map(|l| l.value.clone()),
        client: visit.site.client.as_ref().map(|l| l.value.clone()),
        address: visit.site.address.as_ref().map(|l| l.value.clone()),
        date: visit.site.date.as_ref().map(|l| l.value.to_string()),
        worst: checked.worst(),
        counts,
        cause: lead.map(|c| cause_in_words(visit, c, &settings.language)),
        probability: lead.map(|c| (c.probability * 1e4).round() / 1e4),
        not_ruled_out: open.filter_map(|n| visit.runs.get(n.run).map(|r| r.name.value.clone())).collect(),
        left_out: checked.problems.iter().filter(|p| p.severity == crate::diag::Severity::Error).count(),
    }
}
