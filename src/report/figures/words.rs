//! Words that several figures say.

use super::Scene;
use super::canvas::clean;
use crate::quantity::Unit;
use crate::results::{Cause, CauseKind, Finding, Signal, Verdict};
use crate::wording::{Arg, Language, Sentence};

/// Names in one sentence, at most.
const MOST_NAMES: usize = 4;

impl Scene<'_> {
    pub fn say(&self, sentence: &Sentence) -> String {
        self.language.say(sentence)
    }

    /// A run's name as it can stand in a label; empty where there is no such run.
    pub fn name(&self, run: usize) -> String {
        self.source.visit.runs.get(run).map_or_else(String::new, |r| clean(&r.name.value))
    }

    /// Names of runs for a sentence, with how many more there are.
    pub fn names(&self, runs: &[usize]) -> Arg {
        let mut names: Vec<Arg> = runs.iter().take(MOST_NAMES).map(|r| Arg::from(self.name(*r))).collect();
        if runs.len() > MOST_NAMES {
            names.push(Sentence::new("advice.more").with("n", runs.len() - MOST_NAMES).into());
        }
        names.into()
    }

    /// The cause the readings point at, where it lies in runs.
    pub fn leading(&self) -> Option<&Cause> {
        let cause = self.source.diagnosis?.ranking.first()?;
        (matches!(cause.kind, CauseKind::Neutral | CauseKind::Hot(_)) && !cause.runs.is_empty()).then_some(cause)
    }

    /// The signal word the rules gave that cause.
    pub fn leading_signal(&self) -> Signal {
        let is_of_cause = |f: &&Finding| matches!(f.rule, "neutral-path" | "hot-path") && f.verdict != Verdict::Pass;
        self.source.findings.iter().filter(is_of_cause).map(|f| f.signal).max().unwrap_or(Signal::Warning)
    }

    /// A cause as a label: `neutral of 5/7 and 5/7a, 97 % probable`.
    pub fn suspicion(&self, cause: &Cause) -> Option<Sentence> {
        let sentence = match cause.kind {
            CauseKind::Neutral => Sentence::new("figure.cause-neutral"),
            CauseKind::Hot(leg) => Sentence::new("figure.cause-hot").with("leg", leg.name()),
            _ => return None,
        };
        Some(sentence.with("runs", self.names(&cause.runs)).with("percent", percent(self.language, cause.probability)))
    }

    /// The leading cause as a sentence; `None` where the readings point at no run.
    pub fn pointed_at(&self) -> Option<String> {
        let cause = self.leading().and_then(|c| self.suspicion(c))?;
        Some(self.say(&Sentence::new("figure.points").with("cause", cause)))
    }

    /// Which of how many drawings this is, for the caption; nothing where it is the only one.
    pub fn part(&self, page: usize, of: usize) -> String {
        let part = Sentence::new("figure.part").with("page", page + 1).with("of", of);
        if of > 1 { format!(" {}", self.say(&part)) } else { String::new() }
    }
}

/// A probability in per cent: near the ends with a decimal, and never 100, for the readings prove nothing beyond doubt.
pub(super) fn percent(language: &Language, probability: f64) -> String {
    let percent = 100.0 * probability.clamp(0.0, 1.0);
    let decimals = u8::from(!(1.0..=99.0).contains(&percent));
    let shown = language.quantity(percent.min(99.9), decimals, Unit::Percent);
    if percent < 99.95 { shown } else { language.say(&Sentence::new("figure.over").with("percent", shown)) }
}
