//! `nominal-band`.

use super::{Rule, range};
use crate::results::Signal;
use crate::rulebook::RuleSpec;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec { id: "nominal-band", signal: Signal::Notice, basis: "Nominal ±5 %, common practice, no source", settings: &[] },
    run: |facts, settings, out| range::run(&SAYS, facts, settings, out),
};

const SAYS: range::Says = range::Says {
    pass: "nominal-band.pass",
    fail_low: "nominal-band.low",
    fail_high: "nominal-band.high",
    undecided: "nominal-band.undecided",
    advice: "nominal-band.advice",
    recheck: "nominal-band.recheck",
};
