//! `midwire blank`.

use super::{DONE, args, files};
use crate::pipeline;
use crate::quantity::Volts;
use crate::visit::System;
use crate::wording::Language;

/// Writes an empty field workbook.
pub fn run(args: &args::Blank) -> anyhow::Result<u8> {
    let known = System::NAMED.map(|s| s.0);
    let Some(system) = System::named(&args.system).or_else(|| by_voltages(&args.system)) else {
        anyhow::bail!(
            "there is no system `{}`; known are {}, and any other by its two voltages, as in 127/220",
            args.system,
            known.join(", ")
        );
    };
    let bytes = pipeline::blank(&system, &Language::english(), args.rows)?;
    files::write(&args.output, &bytes, args.force)?;
    anstream::println!("{}", args.output.display());
    Ok(DONE)
}

/// A system by its nominal voltages, to neutral and between lines, in either order.
fn by_voltages(text: &str) -> Option<System> {
    let (one, other) = text.split_once('/')?;
    let (one, other): (f64, f64) = (one.trim().parse().ok()?, other.trim().parse().ok()?);
    let possible = one.min(other) >= 1.0 && one.max(other) <= 1000.0;
    possible.then(|| System::by_voltages(Volts(one.min(other)), Volts(one.max(other)))).flatten()
}
