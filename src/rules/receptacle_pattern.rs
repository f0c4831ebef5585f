//! `receptacle-pattern`.

use super::facts::{Known, common_gain};
use super::{Facts, Findings, Rule, Settings};
use crate::quantity::Unit;
use crate::results::{Signal, Verdict};
use crate::rulebook::{RuleSpec, Setting};
use crate::visit::{Leg, Quantity, ReadingRow};
use crate::wording::Sentence;

const ZERO: Setting = Setting::new("zero-volts", 5.0, Unit::Volt, (0.0, 1000.0));
const LIVE_LOW: Setting = Setting::new("live-low-percent", 87.5, Unit::Percent, (0.0, 1000.0));
const LIVE_HIGH: Setting = Setting::new("live-high-percent", 108.4, Unit::Percent, (0.0, 1000.0));
const NONE: Setting = Setting::new("none-volts", 0.05, Unit::Volt, (0.0, 1000.0));
const LOADED: Setting = Setting::new("loaded-amperes", 5.0, Unit::Ampere, (0.0, 10_000.0));

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "receptacle-pattern",
        signal: Signal::Warning,
        basis: "Common practice: the fault table of hot, neutral and ground; false ground by none on N-G under load. \
                NEC 406.4(D), 250.142(B)",
        settings: &[ZERO, LIVE_LOW, LIVE_HIGH, NONE, LOADED],
    },
    run,
};

#[derive(Clone, Copy, PartialEq)]
enum Level {
    Zero,
    Live,
    Other,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Pattern {
    Correct,
    Exchanged,
    FalseGround,
    ReversedPolarity,
    OpenGround,
    OpenNeutral,
    OpenNeutralLoaded,
    OpenHot,
    LostSharedNeutral,
    Unclear,
}

impl Pattern {
    fn of(hot_neutral: Level, hot_ground: Level, neutral_ground: Level) -> Self {
        use Level::{Live, Other, Zero};
        match (hot_neutral, hot_ground, neutral_ground) {
            (Live, Live, Zero) => Self::Correct,
            (Live, Zero, Live) => Self::ReversedPolarity,
            // With ground open both float, or collapse to nothing before a meter of low impedance.
            (Live, Other, Zero | Other) | (Live, Zero, Zero | Other) => Self::OpenGround,
            (Zero, Live, Zero) => Self::OpenNeutral,
            (Zero, Live, Live) => Self::OpenNeutralLoaded,
            (Zero, Zero, Zero) => Self::OpenHot,
            (Other, Live, Other | Live) => Self::LostSharedNeutral,
            _ => Self::Unclear,
        }
    }

    /// Signal word, what it says and what it advises.
    fn says(self) -> (Signal, &'static str, &'static str) {
        match self {
            Self::Correct => (Signal::Notice, "receptacle-pattern.pass", "advice.none"),
            Self::Exchanged => (Signal::Warning, "receptacle-pattern.exchanged", "receptacle-pattern.advice"),
            Self::FalseGround => (Signal::Warning, "receptacle-pattern.false-ground", "receptacle-pattern.advice-false-ground"),
            Self::ReversedPolarity => (Signal::Warning, "receptacle-pattern.reversed-polarity", "receptacle-pattern.advice"),
            Self::OpenGround => (Signal::Warning, "receptacle-pattern.open-ground", "receptacle-pattern.advice-open-ground"),
            Self::OpenNeutral => (Signal::Warning, "receptacle-pattern.open-neutral", "receptacle-pattern.advice-off"),
            Self::OpenNeutralLoaded => (Signal::Warning, "receptacle-pattern.open-neutral-loaded", "receptacle-pattern.advice-off"),
            Self::OpenHot => (Signal::Caution, "receptacle-pattern.open-hot", "receptacle-pattern.advice-open-hot"),
            Self::LostSharedNeutral => (Signal::Danger, "receptacle-pattern.lost-shared-neutral", "receptacle-pattern.advice-off"),
            Self::Unclear => (Signal::Notice, "receptacle-pattern.unclear", "receptacle-pattern.advice-unclear"),
        }
    }
}

fn run(facts: &Facts, settings: &Settings, out: &mut Findings) {
    for row in &facts.visit.rows {
        for leg in facts.visit.system.legs() {
            let known = |q| facts.known(row, q);
            if let (Some(hn), Some(hg), Some(ng)) =
                (known(Quantity::line_neutral(*leg)), known(Quantity::LineGround(*leg)), known(Quantity::NeutralGround))
            {
                judge(facts, settings, row, *leg, [hn, hg, ng], out);
            }
        }
    }
}

fn judge(facts: &Facts, settings: &Settings, row: &ReadingRow, leg: Leg, [hn, hg, ng]: [Known; 3], out: &mut Findings) {
    let Some(nominal) = facts.visit.system.nominal(Quantity::line_neutral(leg)) else { return };
    let level = |k: &Known| match k.value {
        v if v.abs() < settings.get(&ZERO) => Level::Zero,
        v if (settings.get(&LIVE_LOW)..=settings.get(&LIVE_HIGH)).contains(&(100.0 * v / nominal.0)) => Level::Live,
        _ => Level::Other,
    };
    let mut pattern = Pattern::of(level(&hn), level(&hg), level(&ng));
    if pattern == Pattern::Correct {
        pattern = correct_or_not(facts, settings, row, leg, [hn, hg, ng], out);
    }
    let (signal, key, advice) = pattern.says();
    // Three readings fit a fault, they never prove it; where they fit the table's sound row there is nothing to say.
    let verdict = match pattern {
        Pattern::Correct => Verdict::Pass,
        Pattern::FalseGround | Pattern::Unclear => Verdict::Undecided,
        _ => Verdict::Fail,
    };
    let says = Sentence::new(key)
        .with("leg", leg.name())
        .number("hn", hn.value, 1, Unit::Volt)
        .number("hg", hg.value, 1, Unit::Volt)
        .number("ng", ng.value, 1, Unit::Volt);
    out.push(
        out.of_row_as(signal, verdict, row, hn.cell(), says, advice)
            .measured(hn.value, Some(out.expanded(hn.standard())), Unit::Volt)
            .related([hg.cell().clone(), ng.cell().clone()]),
    );
}

/// What looks sound at first: neutral and ground exchanged show by H-G below H-N (it should be above by N-G), a false ground by
/// none at all on N-G under load.
fn correct_or_not(facts: &Facts, settings: &Settings, row: &ReadingRow, leg: Leg, [hn, hg, ng]: [Known; 3], out: &Findings) -> Pattern {
    let below = hn.value - hg.value;
    let standard = common_gain(hn.accuracy, below, &[1.0, -1.0]);
    let none = crate::results::Limit { low: None, high: Some(0.0) };
    // The difference must be that of N-G itself, or it is drift between the readings.
    if out.judge(below, standard, none) == Verdict::Fail && ng.value > settings.get(&NONE) && below >= 0.5 * ng.value {
        return Pattern::Exchanged;
    }
    let amperes = row.value(Quantity::LineCurrent(leg)).unwrap_or(0.0);
    if !facts.at_service(row) && ng.value <= settings.get(&NONE) && amperes >= settings.get(&LOADED) {
        return Pattern::FalseGround;
    }
    Pattern::Correct
}
