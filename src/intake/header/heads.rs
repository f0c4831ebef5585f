//! The grammar of quantities and loads as columns are headed: `L1-N`, `VAN`, `Leg 1 to neutral`, `I L2`, `Load W L1-L2`.

use crate::intake::words::Words;
use crate::quantity::parse::{Dimension, Scale};
use crate::visit::{Between, Leg, Quantity};
use serde::Deserialize;

/// What a word of the grammar stands for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub(crate) enum HeadWord {
    #[serde(rename = "line-1")]
    Line1,
    #[serde(rename = "line-2")]
    Line2,
    #[serde(rename = "line-3")]
    Line3,
    /// `A` is a phase or the ampere.
    #[serde(rename = "line-1-or-amps")]
    Line1OrAmps,
    Hot,
    Neutral,
    Ground,
    Volts,
    Amps,
    Load,
    Join,
    Filler,
}

/// A quantity as far as its header says which.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) enum Probe {
    /// Fully.
    Exactly(Quantity),
    /// The hot conductor of the location's circuit to its neutral (`H-N`).
    HotNeutral,
    /// To ground (`H-G`).
    HotGround,
    /// The two hots of the location's circuit (`L-L`).
    HotHot,
    /// Current in the hot.
    HotCurrent,
}

/// What a header's words mean.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) enum Head {
    /// A quantity; `implied` where the header names one conductor alone (`Volts L1`) and the neutral is understood.
    Reading { probe: Probe, implied: bool },
    /// A load between two conductors.
    Load(Between),
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum End {
    Line(Leg),
    Hot,
    Neutral,
    Ground,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Class {
    Volts,
    Amps,
    Load,
}

/// Longest header the grammar looks at; a quantity has few words.
const LONGEST: usize = 60;

/// The quantity or load a header names; `unit` is one found beside the words.
pub(crate) fn head(words: &Words, text: &str, unit: Option<Scale>) -> Option<Head> {
    if text.len() > LONGEST {
        return None;
    }
    let atoms = atoms(words, text)?;
    let class = match unit.map(|u| u.dimension) {
        None => None,
        Some(Dimension::Voltage) => Some(Class::Volts),
        Some(Dimension::Current) => Some(Class::Amps),
        Some(Dimension::Power | Dimension::ApparentPower) => Some(Class::Load),
        Some(_) => return None,
    };
    let ambiguous = atoms.contains(&HeadWord::Line1OrAmps);
    if !ambiguous {
        return build(&atoms, class);
    }
    let as_leg = build(&replaced(&atoms, HeadWord::Line1), class);
    let as_amps = build(&replaced(&atoms, HeadWord::Amps), class);
    match (as_leg, as_amps) {
        // `A-N` is a pair; `A N` can be the phase or the unit.
        (Some(leg), Some(_)) => atoms.contains(&HeadWord::Join).then_some(leg),
        (leg, amps) => leg.or(amps),
    }
}

fn replaced(atoms: &[HeadWord], by: HeadWord) -> Vec<HeadWord> {
    atoms.iter().map(|a| if *a == HeadWord::Line1OrAmps { by } else { *a }).collect()
}

/// The words of a header; `None` where one of them is not of the grammar. A compact word (`VAN`, `L1N`) is its letters, joined.
fn atoms(words: &Words, text: &str) -> Option<Vec<HeadWord>> {
    let text: String = text
        .to_lowercase()
        .chars()
        .map(|c| match c {
            '\u{2080}'..='\u{2089}' => char::from_digit(c as u32 - 0x2080, 10).unwrap_or(c),
            '\u{2010}'..='\u{2015}' | '\u{2212}' | '/' | '\u{2192}' => '-',
            c => c,
        })
        .collect();
    let mut atoms = Vec::new();
    for part in text.split_inclusive('-') {
        let joined = part.ends_with('-');
        for word in part.split(|c: char| !c.is_alphanumeric()).filter(|w| !w.is_empty()) {
            match words.head(word) {
                Some(atom) => atoms.push(atom),
                None => atoms.extend(compact(words, word)?),
            }
        }
        if joined && !atoms.is_empty() {
            atoms.push(HeadWord::Join);
        }
    }
    Some(atoms)
}

/// A word written without blanks: `van`, `l1n`, `il1`, `v12`.
fn compact(words: &Words, word: &str) -> Option<Vec<HeadWord>> {
    let mut rest = word;
    let mut atoms = Vec::new();
    if word.len() > 5 || !word.is_ascii() {
        return None;
    }
    while !rest.is_empty() {
        // Of two letters only a leg with its number and PE; `va` of `van` is two conductors.
        let pair = |w: &str| w == "pe" || w.ends_with(|c: char| c.is_ascii_digit());
        let len = [2, 1].into_iter().find(|&n| rest.get(..n).is_some_and(|w| words.head(w).is_some() && (n == 1 || pair(w))))?;
        atoms.extend(words.head(&rest[..len]));
        atoms.push(HeadWord::Join);
        rest = &rest[len..];
    }
    Some(atoms)
}

fn build(atoms: &[HeadWord], unit: Option<Class>) -> Option<Head> {
    let mut ends = Vec::new();
    let mut class = unit;
    for atom in atoms {
        let named = match atom {
            HeadWord::Volts => Class::Volts,
            HeadWord::Amps => Class::Amps,
            HeadWord::Load => Class::Load,
            HeadWord::Join | HeadWord::Filler | HeadWord::Line1OrAmps => continue,
            end => {
                ends.push(match end {
                    HeadWord::Line1 => End::Line(Leg::L1),
                    HeadWord::Line2 => End::Line(Leg::L2),
                    HeadWord::Line3 => End::Line(Leg::L3),
                    HeadWord::Neutral => End::Neutral,
                    HeadWord::Ground => End::Ground,
                    _ => End::Hot,
                });
                continue;
            }
        };
        if class.is_some_and(|c| c != named) {
            return None;
        }
        class = Some(named);
    }
    ends = without_line_before_number(&ends);
    match class {
        Some(Class::Load) => load(&ends).map(Head::Load),
        Some(Class::Amps) => current(&ends).map(|probe| Head::Reading { probe, implied: false }),
        Some(Class::Volts) | None => voltage(&ends, class.is_some()),
    }
}

/// `Line 1`, `Hot A`: the word belongs to the number behind it.
fn without_line_before_number(ends: &[End]) -> Vec<End> {
    let belongs = |i: usize| ends[i] == End::Hot && matches!(ends.get(i + 1), Some(End::Line(_)));
    (0..ends.len()).filter(|&i| !belongs(i)).map(|i| ends[i]).collect()
}

fn load(ends: &[End]) -> Option<Between> {
    match *ends {
        [End::Line(leg)] | [End::Line(leg), End::Neutral] => Some(Between::LineNeutral(leg)),
        [End::Line(a), End::Line(b)] => line_line(a, b),
        _ => None,
    }
}

fn current(ends: &[End]) -> Option<Probe> {
    match *ends {
        [End::Line(leg)] => Some(Probe::Exactly(Quantity::LineCurrent(leg))),
        [End::Neutral] => Some(Probe::Exactly(Quantity::NeutralCurrent)),
        [End::Ground] => Some(Probe::Exactly(Quantity::GroundCurrent)),
        [End::Hot] => Some(Probe::HotCurrent),
        _ => None,
    }
}

fn voltage(ends: &[End], volts: bool) -> Option<Head> {
    let probe = match *ends {
        [End::Line(leg), End::Neutral] | [End::Neutral, End::Line(leg)] => Probe::Exactly(Quantity::line_neutral(leg)),
        [End::Line(leg), End::Ground] | [End::Ground, End::Line(leg)] => Probe::Exactly(Quantity::LineGround(leg)),
        [End::Neutral, End::Ground] | [End::Ground, End::Neutral] => Probe::Exactly(Quantity::NeutralGround),
        [End::Line(a), End::Line(b)] => Probe::Exactly(Quantity::Voltage(line_line(a, b)?)),
        [End::Hot, End::Neutral] | [End::Neutral, End::Hot] => Probe::HotNeutral,
        [End::Hot, End::Ground] | [End::Ground, End::Hot] => Probe::HotGround,
        [End::Hot, End::Hot] => Probe::HotHot,
        [End::Line(leg)] if volts => return Some(Head::Reading { probe: Probe::Exactly(Quantity::line_neutral(leg)), implied: true }),
        _ => return None,
    };
    Some(Head::Reading { probe, implied: false })
}

/// A pair of lines in either order, as it is written: L1-L2, L2-L3 or L3-L1.
pub(crate) fn line_line(a: Leg, b: Leg) -> Option<Between> {
    Between::LINE_LINE.into_iter().find(|pair| matches!(*pair, Between::LineLine(x, y) if (x, y) == (a, b) || (x, y) == (b, a)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::parse::unit_word;

    fn named(text: &str, unit: Option<&str>) -> String {
        match head(Words::built_in(), text, unit.and_then(unit_word)) {
            None => "none".to_owned(),
            Some(Head::Load(between)) => format!("load {between}"),
            Some(Head::Reading { probe: Probe::Exactly(q), implied }) => format!("{q}{}", if implied { " (N implied)" } else { "" }),
            Some(Head::Reading { probe, .. }) => format!("{probe:?}"),
        }
    }

    #[test]
    fn every_way_of_writing_a_quantity_is_read() {
        for (text, expected) in [
            ("L1-N", "L1-N"),
            ("l1 n", "L1-N"),
            ("L1N", "L1-N"),
            ("L1/N", "L1-N"),
            ("L1 \u{2013} N", "L1-N"),
            ("L1 to N", "L1-N"),
            ("N-L1", "L1-N"),
            ("V L1-N", "L1-N"),
            ("VL1N", "L1-N"),
            ("V1N", "L1-N"),
            ("Leg 1 to neutral", "L1-N"),
            ("Line 1 - Neutral", "L1-N"),
            ("Phase A to neutral", "L1-N"),
            ("VAN", "L1-N"),
            ("Van", "L1-N"),
            ("VBN", "L2-N"),
            ("VCN", "L3-N"),
            ("A-N", "L1-N"),
            ("AN", "L1-N"),
            ("B-N", "L2-N"),
            ("VAB", "L1-L2"),
            ("A-B", "L1-L2"),
            ("B-C", "L2-L3"),
            ("C-A", "L3-L1"),
            ("A-C", "L3-L1"),
            ("VCA", "L3-L1"),
            ("L1-L3", "L3-L1"),
            ("L3-L1", "L3-L1"),
            ("L1L2", "L1-L2"),
            ("V12", "L1-L2"),
            ("Leg 1 to Leg 2", "L1-L2"),
            ("N-G", "N-G"),
            ("VNG", "N-G"),
            ("Neutral to ground", "N-G"),
            ("N-PE", "N-G"),
            ("N-E", "N-G"),
            ("L1-G", "L1-G"),
            ("L2-PE", "L2-G"),
            ("A to ground", "L1-G"),
            ("I L1", "I L1"),
            ("IL1", "I L1"),
            ("I1", "I L1"),
            ("IA", "I L1"),
            ("I A", "I L1"),
            ("L1 A", "I L1"),
            ("L1 amps", "I L1"),
            ("Current L2", "I L2"),
            ("Amps phase B", "I L2"),
            ("I N", "I N"),
            ("IN", "I N"),
            ("Neutral current", "I N"),
            ("Neutral amps", "I N"),
            ("I G", "I G"),
            ("Ground current", "I G"),
            ("Volts L1", "L1-N (N implied)"),
            ("V1", "L1-N (N implied)"),
            ("Leg 2 volts", "L2-N (N implied)"),
            ("V\u{2081}\u{2082}", "L1-L2"),
            ("H-N", "HotNeutral"),
            ("Hot to neutral", "HotNeutral"),
            ("L-N", "HotNeutral"),
            ("Line to neutral", "HotNeutral"),
            ("H-G", "HotGround"),
            ("L-PE", "HotGround"),
            ("L-L", "HotHot"),
            ("Hot current", "HotCurrent"),
            ("Load W L1", "load L1-N"),
            ("L1 load", "load L1-N"),
            ("Load VA A", "load L1-N"),
            ("Load L1-L2", "load L1-L2"),
            ("Load W L3-L1", "load L3-L1"),
            ("Watts B", "load L2-N"),
            ("A N", "none"),
            ("L1", "none"),
            ("N", "none"),
            ("Location", "none"),
            ("L1-L1", "none"),
            ("Remarks", "none"),
            ("Time", "none"),
            ("Glove class", "none"),
            ("bag", "none"),
            ("", "none"),
        ] {
            assert_eq!(named(text, None), expected, "{text}");
        }
    }

    #[test]
    fn a_unit_beside_the_words_tells_volts_from_amperes_and_watts() {
        for (text, unit, expected) in [
            ("L1", "A", "I L1"),
            ("L1", "V", "L1-N (N implied)"),
            ("N", "A", "I N"),
            ("L1", "W", "load L1-N"),
            ("L2", "kVA", "load L2-N"),
            ("L1-N", "V", "L1-N"),
            ("L1-N", "A", "none"),
            ("I L1", "V", "none"),
            ("L1-N", "ft", "none"),
        ] {
            assert_eq!(named(text, Some(unit)), expected, "{text} ({unit})");
        }
    }
}
