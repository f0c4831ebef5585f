//! Rules: what they say of a visit.
//!
//! Every rule has the same inner form, a [`Rule`]: a name, what the rule book must know of it, and a function from [`Facts`] to
//! findings. [`list::RULES`] names them all, in the order of the book. One file a rule; rules never import each other.
//! A rule's text (title, what it checks, why, how to read it, its settings) stands in its section of the language file: it is
//! the manual page the program prints and `docs/rules.md` collects.

mod book;
mod cause;
mod facts;
mod findings;
mod list;
mod listed;
mod manual;
mod range;
mod tested;

mod accuracy_assumed;
mod breaker_conductor;
mod calibration_lapsed;
mod circuit_list;
mod continuous_load;
mod current_balance;
mod element_resistance;
mod gfci_trip;
mod ground_electrode;
mod hot_path;
mod insulation_resistance;
mod leg_difference;
mod leg_sum;
mod neutral_current_sum;
mod neutral_load;
mod neutral_path;
mod neutral_shift;
mod neutral_to_ground;
mod nominal_band;
mod not_ruled_out;
mod observation;
mod open_neutral_exposure;
mod receptacle_pattern;
mod repair_proven;
mod repeat_readings;
mod rise_above_source;
mod service_range;
mod shared_neutral_disconnect;
mod shared_neutral_legs;
mod supply_voltage;
mod temperature_rise;
mod torque;
mod utilization_range;
mod voltage_drop;
mod voltage_unbalance;

pub use facts::Facts;
pub use findings::Findings;
pub use list::RULES;
pub use manual::{ManualLimit, ManualPage, ManualSetting, manual, manual_pages};

use crate::results::{Finding, Verdict};
use crate::rulebook::{LimitRow, RuleEntry, RuleSpec, Rulebook, Setting};
use std::cmp::Reverse;

/// A rule.
#[derive(Debug)]
pub struct Rule {
    /// What the rule book knows of it.
    pub spec: RuleSpec,
    /// Looks at the facts and says what it finds, passes included, in the order of the workbook.
    pub run: fn(&Facts, &Settings, &mut Findings),
}

/// A rule's settings as they are in force.
#[derive(Debug)]
pub struct Settings<'a> {
    entry: &'a RuleEntry,
    coverage: f64,
    limits: Vec<&'a LimitRow>,
}

impl<'a> Settings<'a> {
    fn new(book: &'a Rulebook, entry: &'a RuleEntry) -> Self {
        Self { entry, coverage: book.coverage(), limits: book.limits_of(entry.spec.id).collect() }
    }

    /// The value of one of the rule's settings.
    #[must_use]
    pub fn get(&self, setting: &Setting) -> f64 {
        self.entry.get(setting)
    }

    /// Coverage factor of expanded uncertainties.
    #[must_use]
    pub fn coverage(&self) -> f64 {
        self.coverage
    }

    /// The basis in force.
    #[must_use]
    pub fn basis(&self) -> &'a str {
        self.entry.basis()
    }

    /// The rule's limit rows, a user's first.
    #[must_use]
    pub fn limits(&self) -> &[&'a LimitRow] {
        &self.limits
    }

    /// Limit profiles in order of preference.
    #[must_use]
    pub fn profiles(&self) -> &'a [String] {
        &self.entry.profiles
    }
}

/// Runs every rule that is on. Findings are returned with what passed, in a fixed order: failed, undecided, passed; the worst
/// signal word first; then the order of the rules; then that of the workbook.
#[must_use]
pub fn check(facts: &Facts, book: &Rulebook) -> Vec<Finding> {
    check_within(facts, book, usize::MAX).0
}

/// As [`check`], but keeps no more than so many that passed, the first ones; the second value counts those that were not kept.
/// What failed or is undecided is always kept.
#[must_use]
pub fn check_within(facts: &Facts, book: &Rulebook, most_passed: usize) -> (Vec<Finding>, usize) {
    let mut all: Vec<Finding> = Vec::new();
    let (mut room, mut unlisted) = (most_passed, 0);
    for rule in RULES {
        if let Some(entry) = book.rule(rule.spec.id).filter(|entry| entry.enabled) {
            let settings = Settings::new(book, entry);
            let mut findings = Findings::new(&settings, room);
            (rule.run)(facts, &settings, &mut findings);
            let (kept, left, more) = findings.finish();
            all.extend(kept);
            room = left;
            unlisted += more;
        }
    }
    // The sort is stable: rules and rows keep their order.
    all.sort_by_key(|f| (rank(f.verdict), Reverse(f.signal)));
    (all, unlisted)
}

fn rank(verdict: Verdict) -> u8 {
    match verdict {
        Verdict::Fail => 0,
        Verdict::Undecided => 1,
        Verdict::Pass => 2,
    }
}
