//! The command line: the only place that opens files, prints and names `clap` and `anyhow`.
//!
//! Standard output carries results, standard error everything else. Exit status: `check` 0 nothing above NOTICE, 1 CAUTION or
//! worse, 2 input that could not be used; the others 0 all done, 2 something was not.

mod args;
mod batch;
mod blank;
mod check;
mod files;
mod map;
mod name;
mod report;
mod rules;
mod templates;
mod terminal;

use crate::intake::Mapping;
use crate::pipeline::Settings;
use clap::Parser;
use std::path::Path;
use std::process::ExitCode;

/// Everything was done, and nothing above NOTICE was found.
const DONE: u8 = 0;
/// CAUTION or worse was found.
const FOUND: u8 = 1;
/// Something could not be used or written.
const FAILED: u8 = 2;

/// Runs the command the arguments name.
#[must_use]
pub fn main() -> ExitCode {
    // A fault of the program is a line, not a page, for who did not ask for more.
    if std::env::var_os("RUST_BACKTRACE").is_none() {
        std::panic::set_hook(Box::new(|fault| {
            let place = fault.location().map_or_else(String::new, ToString::to_string);
            anstream::eprintln!("midwire: a fault of the program at {place}");
        }));
    }
    let arguments = args::Arguments::parse();
    let outcome = match &arguments.command {
        args::Command::Check(a) => check::run(a),
        args::Command::Report(a) => report::run(a),
        args::Command::Batch(a) => batch::run(a),
        args::Command::Blank(a) => blank::run(a),
        args::Command::Map(a) => map::run(a),
        args::Command::Rules(a) => rules::run(a),
        args::Command::Templates(a) => templates::run(a),
    };
    match outcome {
        Ok(status) => ExitCode::from(status),
        // A reader that closed the pipe early (`| head`) is no failure of ours.
        Err(e) if e.downcast_ref::<std::io::Error>().is_some_and(|e| e.kind() == std::io::ErrorKind::BrokenPipe) => ExitCode::from(DONE),
        Err(e) => {
            anstream::eprintln!("midwire: {}", terminal::visible(&format!("{e:#}")));
            ExitCode::from(FAILED)
        }
    }
}

/// Settings with the user's rule book and layout laid over the built-in ones.
fn settings(rules: Option<&Path>, map: Option<&Path>) -> anyhow::Result<Settings> {
    let mut settings = Settings::default();
    if let Some(path) = rules {
        let (text, name) = (files::text(path)?, path.display().to_string());
        settings.rulebook = settings.rulebook.overlay(&text, &name).map_err(|problems| {
            let lines: Vec<String> = problems.iter().map(|p| p.say(&settings.language)).collect();
            anyhow::anyhow!("the rule book can't be used\n{}", lines.join("\n"))
        })?;
    }
    if let Some(path) = map {
        let (text, name) = (files::text(path)?, path.display().to_string());
        settings.mapping = Some(Mapping::from_toml(&text, &name).map_err(|problems| {
            let lines: Vec<String> = problems.iter().map(|p| p.say(&settings.language)).collect();
            anyhow::anyhow!("the mapping can't be used\n{}", lines.join("\n"))
        })?);
    }
    Ok(settings)
}

/// Does one workbook's work. A panic in it is a fault of the program: it is said in a sentence, and costs that workbook alone.
fn contained<T>(work: impl FnOnce() -> anyhow::Result<T>) -> anyhow::Result<T> {
    let done = std::panic::catch_unwind(std::panic::AssertUnwindSafe(work));
    done.unwrap_or_else(|_| Err(anyhow::anyhow!("the program failed on this workbook; please report it with the file")))
}
