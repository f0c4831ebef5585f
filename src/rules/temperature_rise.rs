//! `temperature-rise`.

use super::tested::{Saying, finding, in_unit, shown, standard};
use super::{Facts, Findings, Rule, Settings};
use crate::electrics::thermography::{Grade, over_ambient, over_similar};
use crate::quantity::{Celsius, Measured, Unit};
use crate::results::{Signal, Verdict};
use crate::rulebook::RuleSpec;
use crate::visit::{Measures, Test, TestKind};
use crate::wording::Sentence;

pub(super) static RULE: Rule = Rule {
    spec: RuleSpec {
        id: "temperature-rise",
        signal: Signal::Caution,
        basis: "ANSI/NETA MTS, table 100.18; a value in a gap of the table takes the more severe grade",
        settings: &[],
    },
    run,
};

fn run(facts: &Facts, _: &Settings, out: &mut Findings) {
    for test in &facts.visit.tests {
        if let TestKind::TemperatureRise { over_ambient } = test.kind
            && let Some(measured) = in_unit(test, Unit::Celsius)
        {
            judged(facts, test, over_ambient, measured, out);
        }
    }
}

fn judged(facts: &Facts, test: &Test, ambient: bool, measured: Measured, out: &mut Findings) {
    let grade = if ambient { over_ambient } else { over_similar };
    let (low, value) = match measured {
        Measured::Value(v) => (v, v),
        Measured::AtMost(v) => (0.0, v),
        Measured::OverRange(range) => (range.unwrap_or(f64::MAX), range.unwrap_or(f64::MAX)),
        Measured::NotMeasured => return,
    };
    let u = measured.value().map_or(0.0, |v| standard(facts, Measures::Temperature, v));
    let reach = out.expanded(u);
    let worst = grade(Celsius(value));
    // It may be nothing at all at the low end of what the reading allows.
    let verdict = match (worst, grade(Celsius(low - reach))) {
        (Grade::Unremarkable, _) => Verdict::Pass,
        (_, Grade::Unremarkable) => Verdict::Undecided,
        _ => Verdict::Fail,
    };
    let (says, advice, signal) = match worst {
        Grade::Unremarkable => ("temperature-rise.pass", "advice.none", Signal::Notice),
        Grade::Possible => ("temperature-rise.possible", "temperature-rise.possible-advice", Signal::Notice),
        Grade::Probable => ("temperature-rise.probable", "temperature-rise.probable-advice", Signal::Caution),
        Grade::Monitor => ("temperature-rise.monitor", "temperature-rise.monitor-advice", Signal::Caution),
        Grade::Major => ("temperature-rise.major", "temperature-rise.major-advice", Signal::Warning),
    };
    let over = Sentence::new(if ambient { "temperature-rise.ambient" } else { "temperature-rise.similar" });
    let sentence = Sentence::new(says).with("value", shown(measured, 1, Unit::Celsius)).with("over", over);
    let saying = Saying { signal, verdict, says: sentence, advice: Sentence::new(advice) };
    // Below 1 °C the table says nothing.
    out.push(finding(out, test, saying, measured, u, Unit::Celsius).limit(None, Some(1.0)));
}
