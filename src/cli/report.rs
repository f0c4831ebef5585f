//! `midwire report`.

use super::{DONE, FAILED, args, check, contained, files, name, settings, terminal};
use crate::pipeline::{self, Checked, ReportOptions, Settings};
use crate::report::BUILT_IN_TEMPLATES;
use crate::report::document::PageSize;
use anyhow::Context;
use std::collections::HashSet;
use std::path::{Path, PathBuf};

/// Looks of a report, read and checked.
pub struct Look {
    page: PageSize,
    date: Option<String>,
    template: Option<(String, String)>,
}

/// Reads the template and checks the date.
pub fn look(args: &args::Look) -> anyhow::Result<Look> {
    let date = args.date.as_deref().map(|d| d.parse::<jiff::civil::Date>().map(|d| d.to_string())).transpose();
    let template = args.template.as_deref().map(|name| match BUILT_IN_TEMPLATES.iter().find(|t| t.0 == name) {
        Some((name, _, text)) => Ok((format!("{name}.md.tera"), (*text).to_owned())),
        None => files::text(Path::new(name)).map(|text| (name.to_owned(), text)),
    });
    Ok(Look {
        page: match args.page {
            args::Page::Letter => PageSize::Letter,
            args::Page::A4 => PageSize::A4,
        },
        date: date.context("--date takes a day as YYYY-MM-DD")?,
        template: template.transpose().context("--template takes the name of a built-in template or a file")?,
    })
}

impl Look {
    /// Paper.
    #[must_use]
    pub fn page(&self) -> PageSize {
        self.page
    }

    /// Name and text of the template, where it is not the default one.
    #[must_use]
    pub fn template(&self) -> Option<(&str, &str)> {
        self.template.as_ref().map(|(name, text)| (name.as_str(), text.as_str()))
    }

    /// As the pipeline takes it.
    #[must_use]
    pub fn options(&self) -> ReportOptions<'_> {
        ReportOptions { page: self.page, accent: pipeline::ACCENT, date: self.date.clone(), template: self.template() }
    }
}

/// Checks each workbook and writes its reports; one that fails does not stop the others.
pub fn run(args: &args::Report) -> anyhow::Result<u8> {
    let settings = settings(args.look.rules.as_deref(), args.look.map.as_deref())?;
    let look = look(&args.look)?;
    let options = look.options();
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
        anstream::eprintln!(
            "midwire: {}: another workbook of this call is named {wanted}; its reports are named {chosen}",
            terminal::line(&checked.file)
        );
    }
    let files = contained(|| Ok(pipeline::render(checked, settings, options, args.look.html)?))?;
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
