//! `midwire rules`.

use super::{DONE, args, settings};
use crate::rules;
use std::io::Write;

/// Prints the rule book in force.
pub fn run(args: &args::Rules) -> anyhow::Result<u8> {
    let settings = settings(args.rules.as_deref(), None)?;
    let known: Vec<&str> = settings.rulebook.rules().iter().map(|r| r.spec.id).collect();
    for name in &args.names {
        if !known.contains(&name.as_str()) {
            let nearest = known.iter().max_by(|a, b| strsim::jaro_winkler(a, name).total_cmp(&strsim::jaro_winkler(b, name)));
            anyhow::bail!("there is no rule `{name}`; the nearest is `{}`", nearest.copied().unwrap_or_default());
        }
    }
    std::io::stdout().write_all(rules::manual(&settings.rulebook, &settings.language, &args.names).as_bytes())?;
    Ok(DONE)
}
