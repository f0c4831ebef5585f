//! `midwire blank`.

use super::{DONE, args, files};
use crate::pipeline;
use crate::visit::System;
use crate::wording::Language;

/// Writes an empty field workbook.
pub fn run(args: &args::Blank) -> anyhow::Result<u8> {
    let known = System::NAMED.map(|s| s.0);
    let Some(system) = System::named(&args.system) else {
        anyhow::bail!("there is no system `{}`; known are {}", args.system, known.join(", "));
    };
    let bytes = pipeline::blank(&system, &Language::english(), args.rows)?;
    files::write(&args.output, &bytes, args.force)?;
    anstream::println!("{}", args.output.display());
    Ok(DONE)
}
