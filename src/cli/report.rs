//! `midwire report`.

use super::{DONE, FAILED, args, check, files, name, settings, terminal};
use crate::pipeline::{self, Checked, ReportOptions, Settings};
use crate::render;
use crate::report::document::PageSize;
use anyhow::Context;
use std::collections::HashSet;
use std::path::{Path, PathBuf};

/// Checks each workbook and writes its reports; one that fails does not stop the others.
pub fn run(args: &args::Report) -> anyhow::Result<u8> {
    let settings = settings(args.rules.as_deref())?;
    let date = args.date.as_deref().map(|d| d.parse::<jiff::civil::Date>().map(|d| d.to_string())).transpose();
    let date = date.context("--date takes a day as YYYY-MM-DD")?;
    let template = args.template.as_deref().map(|p| files::text(p).map(|t| (p.display().to_string(), t))).transpose()?;
    let options = ReportOptions {
        page: match args.page {
            args::Page::Letter => PageSize::Letter,
            args::Page::A4 => PageSize::A4,
        },
        accent: pipeline::ACCENT,
        date,
        template: template.as_ref().map(|(n, t)| (n.as_str(), t.as_str())),
    };
    if let Some(folder) = &args.output {
        std::fs::create_dir_all(folder).with_context(|| format!("{} can't be made", folder.display()))?;
    }
    let mut names: HashSet<String> = HashSet::new();
    let mut status = DONE;
    for path in &args.workbooks {
        let shown = path.display().to_string();
        let done = check::one(path, &shown, &settings)
            .map_err(|(e, _)| anyhow::anyhow!(e))
            .and_then(|checked| write(args, path, &checked, &settings, &options, &mut names));
        if let Err(e) = done {
            status = FAILED;
            anstream::eprintln!("midwire: {}: {}", terminal::line(&shown), terminal::visible(&format!("{e:#}")));
        }
    }
    Ok(status)
}

fn write(
    args: &args::Report,
    path: &Path,
    checked: &Checked,
    settings: &Settings,
    options: &ReportOptions,
    names: &mut HashSet<String>,
) -> anyhow::Result<()> {
    let folder = args.output.clone().unwrap_or_else(|| path.parent().map_or_else(PathBuf::new, Path::to_owned));
    let stem = path.file_stem().map_or_else(String::new, |s| s.to_string_lossy().into_owned());
    let wanted = name::of(&checked.visit, &stem);
    let chosen = name::unique(&wanted, names);
    if chosen != wanted {
        anstream::eprintln!("midwire: {}: another workbook of this call is named {wanted}; its reports are named {chosen}", terminal::line(&checked.file));
    }
    let document = pipeline::document(checked, settings, options)?;
    let mut files = vec![("pdf", render::pdf::write(&document)?), ("xlsx", render::xlsx::write(&document)?)];
    if args.html {
        files.push(("html", render::html::write(&document).into_bytes()));
    }
    // Refused before anything is written, so that a visit has all of its files or none.
    let inputs: Vec<PathBuf> = args.workbooks.iter().filter_map(|w| w.canonicalize().ok()).collect();
    for (ending, _) in &files {
        let target = folder.join(format!("{chosen}.{ending}"));
        if target.canonicalize().is_ok_and(|t| inputs.contains(&t)) {
            anyhow::bail!("{} is an input of this call and is never written to; choose another folder with -o", target.display());
        }
        if !args.force && target.exists() {
            anyhow::bail!("{} exists; --force replaces it, -o writes to another folder", target.display());
        }
    }
    for (ending, bytes) in &files {
        let target = folder.join(format!("{chosen}.{ending}"));
        files::write(&target, bytes, args.force)?;
        anstream::println!("{}", target.display());
    }
    Ok(())
}
