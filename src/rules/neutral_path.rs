//! `neutral-path`.

use super::{Facts, Findings, Rule, Settings, cause};
use crate::results::{Cause, CauseKind, Signal, Verdict};
use crate::rulebook::RuleSpec;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "neutral-path",
        signal: Signal::Warning,
        basis: "Readings fitted to the network of the circuit list (Kirchhoff's laws, Bayes' rule); NEC 300.13(B), 250.24(C)",
        settings: &[cause::SURE, cause::WORTH],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let Some((verdict, best)) = cause::of_kind(facts, settings, |c| c.kind == CauseKind::Neutral) else { return };
    let finding = match (verdict, best) {
        (Verdict::Pass, _) | (_, None) => cause::none(facts, "neutral-path.pass", out),
        (_, Some(best)) => {
            let (signal, key, advice) = action(facts, best);
            cause::finding(facts, best, signal, verdict, cause::sentence(facts, key, best), advice, out)
        }
    };
    finding.into_iter().for_each(|f| out.push(f));
}

/// Who must act depends on whose neutral it is.
fn action(facts: &Facts, cause: &Cause) -> (Signal, &'static str, &'static str) {
    let is_shared = |r: &usize| facts.visit.runs.get(*r).is_some_and(crate::visit::Run::shares_neutral);
    if cause.runs.iter().any(|r| facts.is_service(*r)) {
        (Signal::Danger, "neutral-path.service", "neutral-path.advice-service")
    } else if cause.runs.iter().any(is_shared) {
        (Signal::Warning, "neutral-path.shared", "neutral-path.advice-shared")
    } else {
        (Signal::Warning, "neutral-path.two-wire", "neutral-path.advice-two-wire")
    }
}
