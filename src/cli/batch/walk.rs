//! Finding the workbooks below a folder.

use anyhow::Context;
use std::path::{Path, PathBuf};

/// File endings of workbooks.
const ENDINGS: [&str; 5] = ["xlsx", "xlsm", "xls", "xlsb", "ods"];
/// Deepest folder looked into.
const DEEPEST: usize = 32;

/// Workbooks below `folder`, relative to it, sorted. A folder that holds csv files is one workbook. Links are not followed; hidden
/// files, the lock files of office programs and the output folder are left out.
pub fn workbooks(folder: &Path, output: &Path, only: Option<&str>, since: Option<&str>) -> anyhow::Result<Vec<PathBuf>> {
    let only = only.map(glob::Pattern::new).transpose().context("--only takes a pattern such as *.xlsx")?;
    let since = since.map(day).transpose()?;
    let output = output.canonicalize().ok();
    let mut found = Vec::new();
    let mut open = vec![(folder.to_owned(), 0)];
    while let Some((at, depth)) = open.pop() {
        let entries = std::fs::read_dir(&at).with_context(|| format!("{} can't be listed", at.display()))?;
        let mut has_csv = false;
        for entry in entries {
            let entry = entry.with_context(|| format!("{} can't be listed", at.display()))?;
            let (path, kind) = (entry.path(), entry.file_type()?);
            let name = entry.file_name();
            let name = name.to_string_lossy();
            if name.starts_with(['.', '~']) {
                continue;
            }
            if kind.is_dir() && depth < DEEPEST && path.canonicalize().ok() != output {
                open.push((path, depth + 1));
            } else if kind.is_file() {
                let ending = path.extension().map(|e| e.to_string_lossy().to_lowercase()).unwrap_or_default();
                has_csv |= ending == "csv";
                if ENDINGS.contains(&ending.as_str()) && recent(&path, since) {
                    found.push(path);
                }
            }
        }
        if has_csv && recent(&at, since) {
            found.push(at);
        }
    }
    let mut found: Vec<PathBuf> = found.iter().filter_map(|p| p.strip_prefix(folder).ok().map(Path::to_owned)).collect();
    found.retain(|p| only.as_ref().is_none_or(|o| o.matches(&shown(p)) || p.file_name().is_some_and(|n| o.matches(&n.to_string_lossy()))));
    found.sort_by_cached_key(|p| shown(p));
    Ok(found)
}

/// A relative path as it is shown and kept in the register: with `/` on every system.
#[must_use]
pub fn shown(relative: &Path) -> String {
    let parts: Vec<_> = relative.components().map(|c| c.as_os_str().to_string_lossy()).collect();
    if parts.is_empty() { ".".to_owned() } else { parts.join("/") }
}

fn day(text: &str) -> anyhow::Result<std::time::SystemTime> {
    let day: jiff::civil::Date = text.parse().context("--since takes a day as YYYY-MM-DD")?;
    let midnight = jiff::tz::Offset::UTC.to_timestamp(day.to_datetime(jiff::civil::Time::midnight()))?;
    let seconds = u64::try_from(midnight.as_second()).context("--since takes a day after 1970")?;
    Ok(std::time::UNIX_EPOCH + std::time::Duration::from_secs(seconds))
}

fn recent(path: &Path, since: Option<std::time::SystemTime>) -> bool {
    since.is_none_or(|since| std::fs::metadata(path).and_then(|m| m.modified()).is_ok_and(|changed| changed >= since))
}
