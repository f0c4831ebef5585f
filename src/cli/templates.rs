//! `midwire templates`.

use super::{DONE, args, files};
use crate::report::BUILT_IN_TEMPLATES;
use anyhow::Context;
use std::io::Write;

/// Lists the built-in templates, or writes them out.
pub fn run(args: &args::Templates) -> anyhow::Result<u8> {
    let mut out = std::io::stdout();
    for (name, says, text) in BUILT_IN_TEMPLATES {
        match &args.output {
            None => writeln!(out, "{name}  {says}")?,
            Some(folder) => {
                std::fs::create_dir_all(folder).with_context(|| format!("{} can't be made", folder.display()))?;
                let target = folder.join(format!("{name}.md.tera"));
                files::write(&target, text.as_bytes(), args.force)?;
                writeln!(out, "{}", target.display())?;
            }
        }
    }
    Ok(DONE)
}
