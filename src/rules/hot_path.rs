//! `hot-path`.

use super::{Facts, Findings, Rule, Settings, cause};
use crate::results::{CauseKind, Signal, Verdict};
use crate::rulebook::RuleSpec;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "hot-path",
        signal: Signal::Warning,
        basis: "Readings fitted to the network of the circuit list (Kirchhoff's laws, Bayes' rule); NEC 110.14 on terminations",
        settings: &[cause::SURE, cause::WORTH],
    },
    run,
};

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    let Some((verdict, best)) = cause::of_kind(facts, settings, |c| matches!(c.kind, CauseKind::Hot(_))) else { return };
    let finding = match (verdict, best) {
        (Verdict::Pass, _) | (_, None) => cause::none(facts, "hot-path.pass", out),
        (_, Some(best)) => {
            let leg = if let CauseKind::Hot(leg) = best.kind { leg.name() } else { "" };
            let is_service = best.runs.iter().any(|r| facts.is_service(*r));
            let advice = if is_service { "hot-path.advice-service" } else { "hot-path.advice" };
            let says = cause::sentence(facts, "hot-path.raised", best).with("leg", leg);
            cause::finding(facts, best, Signal::Warning, verdict, says, advice, out)
        }
    };
    finding.into_iter().for_each(|f| out.push(f));
}
