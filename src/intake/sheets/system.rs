//! The system of the service: by its name, or by its two nominal voltages.

use super::visit_sheet::Entries;
use crate::diag::{Located, Problem, Severity};
use crate::intake::cell::{Expected, Reader, plain_text};
use crate::intake::words::Item;
use crate::quantity::parse::not_measured;
use crate::quantity::{Unit, Volts};
use crate::visit::{Arrangement, System};
use crate::wording::{Arg, Sentence};
use std::sync::Arc;

/// The system: as named, with nominal voltages of its own where they fit; by the nominal voltages alone; else assumed, and said.
pub(super) fn read(entries: &Entries<'_>, three_legs: bool, reader: &mut Reader<'_>) -> System {
    let mut nominal = |item: Item| {
        let field = *entries.get(&item)?;
        reader.number(field, &Expected::new(Unit::Volt, 50.0, 1000.0)).filter(|v| v.value > 0.0)
    };
    let nominal = (nominal(Item::NominalLineNeutral), nominal(Item::NominalLineLine));
    let entry = entries.get(&Item::System).filter(|f| !not_measured(&plain_text(f.value)));
    match entry.map(|field| (*field, named(&plain_text(field.value)))) {
        Some((_, Some(system))) => with_nominal(system, nominal, reader),
        Some((field, None)) => {
            let taken = by_nominal(&nominal).unwrap_or_else(System::split_phase_120_240);
            if !reader.broken(field) {
                let known: Vec<_> = System::NAMED.iter().map(|s| Arg::from(s.0)).collect();
                reader.error(field, Sentence::new("intake.unknown-system").with("known", known).with("taken", taken.name.as_str()));
            }
            taken
        }
        None => by_nominal(&nominal).unwrap_or_else(|| {
            if let (Some(ln), Some(ll)) = &nominal {
                let message = Sentence::new("intake.nominal-pair").with("other", ln.value.to_string());
                reader.at(Severity::Error, &ll.cell, ll.value.to_string(), message);
            }
            let sheet = entries.values().next().map(|field| field.cell().sheet);
            assumed(nominal.0.or(nominal.1), sheet, three_legs, reader)
        }),
    }
}

type Nominal = (Option<Located<f64>>, Option<Located<f64>>);

fn by_nominal(nominal: &Nominal) -> Option<System> {
    let (Some(ln), Some(ll)) = nominal else { return None };
    System::by_voltages(Volts(ln.value), Volts(ll.value))
}

/// A named system with the nominal voltages stated beside it; the voltage that is not stated follows the other one.
fn with_nominal(system: System, nominal: Nominal, reader: &mut Reader<'_>) -> System {
    let (usual_ln, usual_ll) = (system.line_to_neutral.0, system.line_to_line.0);
    let follow = |stated: f64, usual: f64, other: f64| if stated == usual { other } else { (stated * other / usual).round() };
    let (ln, ll) = match (&nominal.0, &nominal.1) {
        (None, None) => return system,
        (Some(ln), None) => (ln.value, follow(ln.value, usual_ln, usual_ll)),
        (None, Some(ll)) => (follow(ll.value, usual_ll, usual_ln), ll.value),
        (Some(ln), Some(ll)) => (ln.value, ll.value),
    };
    let fitting = of_arrangement(&system, Volts(ln), Volts(ll));
    if fitting.is_none()
        && let Some(wrong) = nominal.1.or(nominal.0)
    {
        let message = Sentence::new("intake.nominal-against-system").with("system", system.name.as_str());
        reader.at(Severity::Error, &wrong.cell, wrong.value.to_string(), message);
    }
    fitting.unwrap_or(system)
}

/// The system that is assumed where the workbook is silent, said at the one voltage it states or at its Visit sheet.
fn assumed(stated: Option<Located<f64>>, sheet: Option<Arc<str>>, three_legs: bool, reader: &mut Reader<'_>) -> System {
    let message = Sentence::new("intake.system-assumed");
    let mut problem = match (stated, sheet) {
        (Some(volts), _) => Problem::at(Severity::Warning, &volts.cell, volts.value.to_string(), message),
        (None, Some(sheet)) => Problem::in_sheet(Severity::Warning, &sheet, "", message),
        (None, None) => Problem::in_workbook(Severity::Warning, "", message),
    };
    problem.hint = three_legs.then(|| Sentence::new("intake.system-assumed-three-legs"));
    reader.push(problem);
    System::split_phase_120_240()
}

/// The system a text names; `None` where it names none, or one that is not known.
fn named(text: &str) -> Option<System> {
    let lower = text.to_lowercase();
    let says = |words: &[&str]| words.iter().any(|w| lower.contains(w));
    let numbers = voltages(&lower);
    let wye = says(&["wye", "star", "\u{3bb}"]) || letter_beside_digits(&lower, 'y');
    let delta = says(&["delta", "\u{394}", "\u{3b4}", "high leg", "high-leg", "wild leg", "wild-leg", "red leg"])
        || letter_beside_digits(&lower, 'd');
    let three = says(&["3ph", "3 ph", "3-ph", "three ph", "three-ph", "3\u{f8}", "3 \u{f8}", "3\u{3c6}", "3 \u{3c6}", "4w", "4 w", "4-w"]);
    let single = says(&["1ph", "1 ph", "1-ph", "single", "1\u{f8}", "1 \u{f8}", "1\u{3c6}", "1 \u{3c6}", "split", "3w", "3 w", "3-w"]);
    match numbers[..] {
        [230] if !three => System::named("230"),
        [a, b] => pair(a, b, Words { wye, delta, three, single }),
        _ => None,
    }
}

#[derive(Clone, Copy)]
struct Words {
    wye: bool,
    delta: bool,
    three: bool,
    single: bool,
}

fn pair(a: u32, b: u32, words: Words) -> Option<System> {
    let large_first = a > b;
    match (a.min(b), a.max(b)) {
        (120, 240) => {
            let delta = words.delta || words.three || (large_first && !words.single);
            if words.wye { None } else { System::named(if delta { "240/120" } else { "120/240" }) }
        }
        (120, 208) => System::named(if words.wye || words.three || large_first { "208Y/120" } else { "120/208" }),
        _ if words.delta => None,
        (low, high) => System::by_voltages(Volts(f64::from(low)), Volts(f64::from(high))),
    }
}

/// The nominal voltages in a text: whole numbers of 50 V and more that are no amperes (`120/240 V 200 A`).
fn voltages(text: &str) -> Vec<u32> {
    let mut rest = text;
    let mut numbers = Vec::new();
    while let Some(start) = rest.find(|c: char| c.is_ascii_digit()) {
        let digits = &rest[start..];
        let end = digits.find(|c: char| !c.is_ascii_digit()).unwrap_or(digits.len());
        rest = &digits[end..];
        let amperes = rest.trim_start().starts_with('a') && !rest.trim_start().starts_with("and");
        numbers.extend(digits[..end].parse::<u32>().ok().filter(|v| (50..=1000).contains(v) && !amperes));
    }
    numbers
}

/// The letter stands directly behind digits, as in `208Y/120`.
fn letter_beside_digits(text: &str, letter: char) -> bool {
    let behind_digit = |(i, _): (usize, &str)| {
        let after = text[i + letter.len_utf8()..].chars().next();
        text[..i].ends_with(|c: char| c.is_ascii_digit()) && !after.is_some_and(char::is_alphabetic)
    };
    text.match_indices(letter).any(behind_digit)
}

/// A system with other nominal voltages than its name says, where they are of its arrangement.
fn of_arrangement(system: &System, line_to_neutral: Volts, line_to_line: Volts) -> Option<System> {
    if (line_to_neutral, line_to_line) == (system.line_to_neutral, system.line_to_line) {
        return Some(system.clone());
    }
    let usual = system.line_to_line / system.line_to_neutral;
    let ratio = line_to_line / line_to_neutral;
    if (ratio / usual - 1.0).abs() > 0.03 {
        return None;
    }
    let by_voltages = System::by_voltages(line_to_neutral, line_to_line)?;
    match system.arrangement {
        Arrangement::SplitPhase | Arrangement::Wye => Some(by_voltages),
        arrangement => Some(System { arrangement, line_to_neutral, line_to_line, name: system.name.clone() }),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn systems_are_told_by_name_and_by_voltages() {
        for (text, expected) in [
            ("120/240", "120/240"),
            ("120/240 V", "120/240"),
            ("120/240V 1\u{f8} 3W", "120/240"),
            ("120 / 240 single phase", "120/240"),
            ("120-240", "120/240"),
            ("120/240V 1ph 200A", "120/240"),
            ("200 A 120/240", "120/240"),
            ("split phase 120/240", "120/240"),
            ("240/120 single-phase", "120/240"),
            ("240/120", "240/120"),
            ("240/120 delta", "240/120"),
            ("120/240 high leg delta", "240/120"),
            ("120/240 3ph 4W", "240/120"),
            ("120/208", "120/208"),
            ("120/208 single phase", "120/208"),
            ("208Y/120", "208Y/120"),
            ("208y/120V", "208Y/120"),
            ("208/120", "208Y/120"),
            ("120/208Y", "208Y/120"),
            ("120/208 wye", "208Y/120"),
            ("120/208V 3\u{f8} 4W", "208Y/120"),
            ("480Y/277", "480Y/277"),
            ("277/480", "480Y/277"),
            ("480/277 V", "480Y/277"),
            ("600Y/347", "600Y/347"),
            ("347/600", "600Y/347"),
            ("230/400", "230/400"),
            ("400/230 V", "230/400"),
            ("230", "230"),
            ("230 V", "230"),
            ("127/220", "220Y/127"),
            ("115/230", "115/230"),
        ] {
            assert_eq!(named(text).map(|s| s.name).as_deref(), Some(expected), "{text}");
        }
        for text in ["", "240", "120", "unknown", "120/240 wye", "120/300", "three phase", "99999/120"] {
            assert_eq!(named(text), None, "{text}");
        }
    }

    #[test]
    fn nominal_voltages_must_be_of_the_arrangement() {
        let split = System::split_phase_120_240();
        assert_eq!(of_arrangement(&split, Volts(115.0), Volts(230.0)).map(|s| s.name).as_deref(), Some("115/230"));
        assert_eq!(of_arrangement(&split, Volts(120.0), Volts(240.0)), Some(split.clone()));
        assert_eq!(of_arrangement(&split, Volts(120.0), Volts(208.0)), None);
    }
}
