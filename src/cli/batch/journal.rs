//! The journal of a batch: one JSON line a visit, only ever appended to, so that a stop at any moment loses at most the line
//! that was being written. It is the register, too, in its machine-readable form.

use crate::results::Signal;
use anyhow::Context;
use serde::{Deserialize, Serialize};
use std::collections::{BTreeMap, HashMap, HashSet};
use std::fs::{File, OpenOptions};
use std::io::{Read, Write};
use std::path::{Path, PathBuf};

/// File name in the output folder.
pub const NAME: &str = "register.jsonl";

/// What became of a workbook.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Status {
    /// All outputs are whole.
    Written,
    /// Nothing was written, or not all.
    Failed,
}

/// One output file.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct OutputFile {
    /// Name in the output folder.
    pub name: String,
    /// Its length.
    pub bytes: u64,
}

/// One visit as entered.
#[derive(Clone, Debug, Serialize, Deserialize)]
pub struct Entry {
    /// Path below the batch's folder.
    pub file: String,
    /// Hash of the workbook.
    pub input_sha256: String,
    /// Hash of everything else that decides the output.
    pub settings_sha256: String,
    /// Outcome.
    pub status: Status,
    /// Why it failed.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// Name of its reports, without ending.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub name: Option<String>,
    /// Its reports.
    #[serde(default)]
    pub outputs: Vec<OutputFile>,
    /// What the register shows of it.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub visit: Option<VisitLine>,
    /// Time it took, in seconds.
    pub seconds: f64,
}

/// A visit in a line.
#[derive(Clone, Debug, Default, Serialize, Deserialize)]
pub struct VisitLine {
    /// Job number.
    pub job: Option<String>,
    /// Client.
    pub client: Option<String>,
    /// Address.
    pub address: Option<String>,
    /// Visit date, ISO 8601.
    pub date: Option<String>,
    /// Worst signal word of what failed or is undecided.
    pub worst: Option<Signal>,
    /// Findings that failed or are undecided, DANGER first.
    pub counts: [usize; 4],
    /// Leading cause in words.
    pub cause: Option<String>,
    /// Its probability.
    pub probability: Option<f64>,
    /// Runs in which an open neutral would not have shown.
    pub not_ruled_out: Vec<String>,
    /// Cells left out.
    pub left_out: usize,
}

#[derive(Serialize, Deserialize)]
#[serde(untagged)]
enum Line {
    Begun { begun: String },
    Entry(Box<Entry>),
}

/// The journal in memory and on disk.
pub struct Journal {
    path: PathBuf,
    file: File,
    entries: BTreeMap<String, Entry>,
    begun: HashSet<String>,
    by_name: HashMap<String, String>,
}

impl Journal {
    /// Reads the journal of an output folder; a line cut short is dropped, as if it had not been written.
    pub fn open(folder: &Path) -> anyhow::Result<Self> {
        let path = folder.join(NAME);
        let said = || format!("{} can't be used", path.display());
        let mut file = OpenOptions::new().read(true).append(true).create(true).open(&path).with_context(said)?;
        let mut bytes = Vec::new();
        // Two batches never work on one folder; the lock goes with the process, however it ends.
        file.try_lock().map_err(|_| {
            anyhow::anyhow!("another batch is at work on {}; wait for it, or choose another folder with -o", folder.display())
        })?;
        file.read_to_end(&mut bytes).with_context(said)?;
        let mut journal = Self { path: path.clone(), file, entries: BTreeMap::new(), begun: HashSet::new(), by_name: HashMap::new() };
        for line in bytes.split(|b| *b == b'\n').filter(|l| !l.is_empty()) {
            match serde_json::from_slice::<Line>(line) {
                Ok(Line::Begun { begun }) => {
                    journal.begun.insert(begun);
                }
                Ok(Line::Entry(entry)) => journal.keep(*entry),
                Err(_) => {}
            }
        }
        if bytes.last().is_some_and(|b| *b != b'\n') {
            journal.file.write_all(b"\n").with_context(said)?;
        }
        Ok(journal)
    }

    fn keep(&mut self, entry: Entry) {
        if let Some(name) = &entry.name {
            self.by_name.insert(name.clone(), entry.file.clone());
        }
        self.entries.insert(entry.file.clone(), entry);
    }

    /// The output folder.
    #[must_use]
    pub fn folder(&self) -> &Path {
        self.path.parent().unwrap_or(Path::new("."))
    }

    /// The last entry of each workbook, by path.
    pub fn entries(&self) -> impl Iterator<Item = &Entry> {
        self.entries.values()
    }

    /// The last entry of a workbook.
    #[must_use]
    pub fn entry(&self, file: &str) -> Option<&Entry> {
        self.entries.get(file)
    }

    /// The name a workbook's reports have.
    #[must_use]
    pub fn name_of(&self, file: &str) -> Option<&str> {
        self.entries.get(file)?.name.as_deref()
    }

    /// Names in use, in the form they are compared in.
    #[must_use]
    pub fn names(&self) -> HashSet<String> {
        self.by_name.keys().map(|n| n.to_lowercase()).collect()
    }

    /// Files of this name are this batch's, finished or not.
    #[must_use]
    pub fn is_ours(&self, name: &str) -> bool {
        self.begun.contains(name)
    }

    /// Says that files of this name are about to be written; done before them, so that a stop leaves no file of unknown origin.
    pub fn begin(&mut self, name: &str) -> anyhow::Result<()> {
        if !self.begun.contains(name) && !self.foreign(name) {
            self.append(&Line::Begun { begun: name.to_owned() })?;
            self.begun.insert(name.to_owned());
        }
        Ok(())
    }

    /// A file of this name is there already, and not from a batch.
    fn foreign(&self, name: &str) -> bool {
        ["pdf", "xlsx", "html"].iter().any(|ending| self.folder().join(format!("{name}.{ending}")).exists())
    }

    /// Enters what became of a workbook.
    pub fn enter(&mut self, entry: Entry) -> anyhow::Result<()> {
        self.append(&Line::Entry(Box::new(entry.clone())))?;
        self.keep(entry);
        Ok(())
    }

    fn append(&mut self, line: &Line) -> anyhow::Result<()> {
        let mut bytes = serde_json::to_vec(line)?;
        bytes.push(b'\n');
        self.file.write_all(&bytes).with_context(|| format!("{} can't be written", self.path.display()))
    }
}
