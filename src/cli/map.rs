//! `midwire map`.

use super::{DONE, args, files};
use crate::intake::Input;
use crate::pipeline;
use crate::wording::Language;
use std::io::Write;

/// Prints or writes a first mapping.
pub fn run(args: &args::Map) -> anyhow::Result<u8> {
    let loaded = files::load(&args.workbook)?;
    let name = args.workbook.file_name().unwrap_or(args.workbook.as_os_str()).to_string_lossy();
    let input = Input { name: &name, content: loaded.content() };
    let mapping = pipeline::first_mapping(&input, &Language::english())?;
    match &args.output {
        Some(target) => {
            files::write(target, mapping.as_bytes(), args.force)?;
            anstream::println!("{}", target.display());
        }
        None => std::io::stdout().write_all(mapping.as_bytes())?,
    }
    Ok(DONE)
}
