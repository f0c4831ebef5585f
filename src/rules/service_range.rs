//! `service-range`.

use super::{Rule, range};
use crate::results::Signal;
use crate::rulebook::RuleSpec;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "service-range",
        signal: Signal::Caution,
        basis: "ANSI C84.1, Table 1, service voltage (or the profile chosen)",
        settings: &[],
    },
    run: |facts, settings, out| range::run(&SAYS, facts, settings, out),
};

const SAYS: range::Says = range::Says {
    pass: "service-range.pass",
    fail_low: "service-range.low",
    fail_high: "service-range.high",
    undecided: "service-range.undecided",
    advice: "service-range.advice",
    recheck: "service-range.recheck",
};
