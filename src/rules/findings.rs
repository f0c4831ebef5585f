//! Collecting what a rule finds.

use super::Settings;
use crate::diag::CellRef;
use crate::electrics::judgement;
use crate::results::{Finding, Limit, Signal, Verdict};
use crate::visit::ReadingRow;
use crate::wording::Sentence;

/// Collects the findings of one rule; it knows the rule's name, basis, signal word and coverage factor.
#[derive(Debug)]
pub struct Findings<'a> {
    rule: &'static str,
    signal: Signal,
    user_signal: Option<Signal>,
    basis: &'a str,
    user_basis: bool,
    coverage: f64,
    items: Vec<Finding>,
    /// How many more that passed are kept.
    room: usize,
    /// Those that passed and were not kept.
    unlisted: usize,
}

impl<'a> Findings<'a> {
    pub(super) fn new(settings: &Settings<'a>, room: usize) -> Self {
        let entry = settings.entry;
        Self {
            rule: entry.spec.id,
            signal: entry.spec.signal,
            user_signal: entry.signal,
            basis: entry.basis(),
            user_basis: entry.basis.is_some(),
            coverage: settings.coverage,
            items: Vec::new(),
            room,
            unlisted: 0,
        }
    }

    /// What was kept, how many more that passed could be, and how many were not.
    pub(super) fn finish(self) -> (Vec<Finding>, usize, usize) {
        (self.items, self.room, self.unlisted)
    }

    /// A finding with the rule's own signal word.
    #[must_use]
    pub fn draft(&self, verdict: Verdict, cell: &CellRef, says: Sentence, advice: Sentence) -> Finding {
        self.draft_as(self.signal, verdict, cell, says, advice)
    }

    /// A finding with another signal word than the rule's own, unless the user set one.
    ///
    /// What passed asks for nothing. What is undecided is one word milder: that a limit may be exceeded is less than that it is. What passed is a NOTICE.
    #[must_use]
    pub fn draft_as(&self, signal: Signal, verdict: Verdict, cell: &CellRef, says: Sentence, advice: Sentence) -> Finding {
        let signal = self.user_signal.unwrap_or(signal);
        let signal = match verdict {
            Verdict::Fail => signal,
            Verdict::Undecided => milder(signal),
            Verdict::Pass => Signal::Notice,
        };
        let advice = if verdict == Verdict::Pass { Sentence::new("advice.none") } else { advice };
        Finding::new(self.rule, signal, verdict, cell.clone(), says, advice, self.basis)
    }

    /// A finding about a set of readings, at its place, state and stage.
    #[must_use]
    pub fn of_row(&self, verdict: Verdict, row: &ReadingRow, cell: &CellRef, says: Sentence, advice: &'static str) -> Finding {
        self.draft(verdict, cell, says, Sentence::new(advice)).at(&row.location.value).taken(&row.state, row.stage)
    }

    /// The same with another signal word.
    #[must_use]
    pub fn of_row_as(
        &self,
        signal: Signal,
        verdict: Verdict,
        row: &ReadingRow,
        cell: &CellRef,
        says: Sentence,
        advice: &'static str,
    ) -> Finding {
        self.draft_as(signal, verdict, cell, says, Sentence::new(advice)).at(&row.location.value).taken(&row.state, row.stage)
    }

    /// The basis of a finding: a limit row's own, unless the user set one for the rule.
    #[must_use]
    pub fn basis_or<'b>(&'b self, own: &'b str) -> &'b str {
        if self.user_basis { self.basis } else { own }
    }

    /// The verdict on a value with its standard uncertainty.
    #[must_use]
    pub fn judge(&self, value: f64, standard: f64, limit: Limit) -> Verdict {
        judgement::judge(value, standard, limit, self.coverage)
    }

    /// The expanded uncertainty of a standard one.
    #[must_use]
    pub fn expanded(&self, standard: f64) -> f64 {
        self.coverage * standard
    }

    /// Takes a finding; one that passed is only counted once there is no more room for such.
    pub fn push(&mut self, finding: Finding) {
        if finding.verdict == Verdict::Pass {
            if self.room == 0 {
                self.unlisted += 1;
                return;
            }
            self.room -= 1;
        }
        self.items.push(finding);
    }
}

fn milder(signal: Signal) -> Signal {
    match signal {
        Signal::Danger => Signal::Warning,
        Signal::Warning => Signal::Caution,
        Signal::Caution | Signal::Notice => Signal::Notice,
    }
}
