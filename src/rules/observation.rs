//! `observation`.

use super::{Facts, Findings, Rule, Settings};
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::wording::Sentence;

pub(super) static RULE: Rule =
    Rule { spec: RuleSpec { id: "observation", signal: Signal::Notice, basis: "Seen by the person on site", settings: &[] }, run };

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    for seen in &facts.visit.observations {
        let says = Sentence::new("observation.seen").with("text", seen.text.value.as_str());
        let advice = match &seen.advice {
            Some(advice) => Sentence::new("observation.own-advice").with("text", advice.value.as_str()),
            None => Sentence::new("observation.advice"),
        };
        let signal = seen.signal.as_ref().map_or(Signal::Notice, |s| s.value);
        let mut finding = out.draft_as(signal, Verdict::Fail, &seen.text.cell, says, advice);
        if let Some(location) = &seen.location {
            finding = finding.at(&location.value);
        }
        out.push(finding);
    }
}
