//! Reading inputs and writing outputs.

use crate::intake::{Beside, BesideError, Content};
use anyhow::{Context, bail};
use std::fs;
use std::io::{Read, Write};
use std::path::{Component, Path, PathBuf};

/// Most bytes read of one file.
const MOST_BYTES: u64 = 200 * 1024 * 1024;
/// Most csv files of a folder.
const MOST_SHEETS: usize = 64;

/// The bytes of a workbook, or of the csv files of a folder.
pub enum Loaded {
    /// One file.
    File(Vec<u8>),
    /// Name and bytes of each csv file, in order of name.
    Folder(Vec<(String, Vec<u8>)>),
}

impl Loaded {
    /// As intake takes it.
    #[must_use]
    pub fn content(&self) -> Content<'_> {
        match self {
            Self::File(bytes) => Content::File(bytes),
            Self::Folder(files) => Content::Folder(files),
        }
    }
}

/// Loads a workbook or a folder of csv files. Who asks says which one an error is about.
pub fn load(path: &Path) -> anyhow::Result<Loaded> {
    let meta = fs::metadata(path).context("it can't be opened")?;
    if !meta.is_dir() {
        return Ok(Loaded::File(bytes(path)?));
    }
    let mut names: Vec<String> = fs::read_dir(path)
        .context("it can't be listed")?
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .filter(|name| Path::new(name).extension().is_some_and(|e| e.eq_ignore_ascii_case("csv")))
        .collect();
    names.sort();
    if names.is_empty() {
        bail!("it is a folder without csv files; a workbook or a folder with one csv file a sheet was expected");
    }
    if names.len() > MOST_SHEETS {
        bail!("it holds {} csv files; at most {MOST_SHEETS} are read as one workbook", names.len());
    }
    let files = names.into_iter().map(|name| bytes(&path.join(&name)).with_context(|| name.clone()).map(|b| (name, b)));
    Ok(Loaded::Folder(files.collect::<anyhow::Result<_>>()?))
}

/// A file's bytes, bounded.
fn bytes(path: &Path) -> anyhow::Result<Vec<u8>> {
    let file = fs::File::open(path).context("it can't be opened")?;
    if !file.metadata().is_ok_and(|m| m.is_file()) {
        bail!("it is not a file");
    }
    let mut buffer = Vec::new();
    file.take(MOST_BYTES + 1).read_to_end(&mut buffer).context("it can't be read")?;
    if buffer.len() as u64 > MOST_BYTES {
        bail!("it is larger than {} MB, the most that is read", MOST_BYTES / 1024 / 1024);
    }
    Ok(buffer)
}

/// A text file.
pub fn text(path: &Path) -> anyhow::Result<String> {
    let bytes = bytes(path).with_context(|| path.display().to_string())?;
    String::from_utf8(bytes).map_err(|_| anyhow::anyhow!("{} is not UTF-8 text", path.display()))
}

/// Files beside a workbook, for photos: never outside its folder.
pub struct Siblings {
    folder: PathBuf,
}

impl Siblings {
    /// Of a workbook, or inside a folder of csv files.
    #[must_use]
    pub fn of(workbook: &Path) -> Self {
        let folder = if workbook.is_dir() { workbook.to_owned() } else { workbook.parent().map_or_else(PathBuf::new, Path::to_owned) };
        Self { folder: if folder.as_os_str().is_empty() { PathBuf::from(".") } else { folder } }
    }
}

impl Beside for Siblings {
    fn read(&self, name: &str) -> Result<Vec<u8>, BesideError> {
        let relative = Path::new(name);
        if name.contains('\\') || !relative.components().all(|c| matches!(c, Component::Normal(_))) {
            return Err(BesideError::Outside);
        }
        let folder = self.folder.canonicalize().map_err(|_| BesideError::Missing)?;
        let path = folder.join(relative).canonicalize().map_err(|_| BesideError::Missing)?;
        if !path.starts_with(&folder) {
            return Err(BesideError::Outside);
        }
        bytes(&path).map_err(|e| BesideError::Unreadable(e.root_cause().to_string()))
    }
}

/// How the names of temporary files begin.
const TEMPORARY: &str = ".midwire-";

/// Removes temporary files that a killed run left in a folder. Only for who holds the folder's lock.
pub fn clear(folder: &Path) -> anyhow::Result<()> {
    for entry in fs::read_dir(folder).with_context(|| format!("{} can't be listed", folder.display()))? {
        let entry = entry?;
        if entry.file_type()?.is_file() && entry.file_name().to_string_lossy().starts_with(TEMPORARY) {
            fs::remove_file(entry.path()).with_context(|| format!("{} can't be removed", entry.path().display()))?;
        }
    }
    Ok(())
}

/// Writes a file whole or not at all: a temporary file beside it, flushed, then renamed.
pub fn write(path: &Path, content: &[u8], force: bool) -> anyhow::Result<()> {
    let folder = path.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or_else(|| Path::new("."));
    let mut temporary = tempfile::Builder::new()
        .prefix(TEMPORARY)
        .tempfile_in(folder)
        .with_context(|| format!("{} can't be written to", folder.display()))?;
    temporary
        .write_all(content)
        .and_then(|()| temporary.as_file().sync_all())
        .with_context(|| format!("{} can't be written", path.display()))?;
    readable(temporary.as_file());
    if force {
        temporary.persist(path).map_err(|e| e.error).with_context(|| format!("{} can't be written", path.display()))?;
    } else {
        temporary
            .persist_noclobber(path)
            .map_err(|e| e.error)
            .with_context(|| format!("{} exists or can't be written; --force replaces it", path.display()))?;
    }
    Ok(())
}

/// Temporary files are private; a report is an ordinary file.
#[cfg(unix)]
fn readable(file: &fs::File) {
    use std::os::unix::fs::PermissionsExt;
    let _ = file.set_permissions(fs::Permissions::from_mode(0o644));
}

#[cfg(not(unix))]
fn readable(_: &fs::File) {}
