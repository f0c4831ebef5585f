//! `utilization-range`.

use super::{Rule, range};
use crate::results::Signal;
use crate::rulebook::RuleSpec;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "utilization-range",
        signal: Signal::Caution,
        basis: "ANSI C84.1, Table 1, utilization voltage (or the profile chosen)",
        settings: &[],
    },
    run: |facts, settings, out| range::run(&SAYS, facts, settings, out),
};

const SAYS: range::Says = range::Says {
    pass: "utilization-range.pass",
    fail_low: "utilization-range.low",
    fail_high: "utilization-range.high",
    undecided: "utilization-range.undecided",
    advice: "utilization-range.advice",
    recheck: "utilization-range.recheck",
};
