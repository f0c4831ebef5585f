//! Legs of a circuit: `L1`, `L1 L2` with a shared neutral, `L1-L2` without one, and what panel schedules write instead.

use crate::intake::words::Words;
use crate::visit::{Leg, Legs};

/// What an entry of the Legs column says.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum LegsText {
    /// Legs and neutral.
    Certain(Legs),
    /// The legs, but not whether they share a neutral (`2P`, `A/B`, `1,3`).
    NeutralUnsaid([bool; 3]),
    /// How many legs, but not which (`2P` on three legs), or poles that two readings fit.
    WhichUnsaid,
    /// Nothing like legs.
    NotLegs,
}

/// Reads an entry of the Legs column for a system of so many legs.
pub(crate) fn legs(words: &Words, text: &str, system: &[Leg]) -> LegsText {
    let lower = text.trim().to_lowercase().replace(['\u{2010}', '\u{2011}', '\u{2012}', '\u{2013}', '\u{2014}', '\u{2212}'], "-");
    if words.choice("legs", &lower) == Some("all") {
        return unsaid(system);
    }
    if let Some(poles) = poles(&lower) {
        return match poles {
            1 if system.len() == 1 => LegsText::Certain(Legs::new(system, true)),
            n if n == system.len() && n > 1 => unsaid(system),
            _ => LegsText::WhichUnsaid,
        };
    }
    let mut parsed = Parsed::default();
    match parsed.take(words, &lower) {
        Some(()) => parsed.settle(&lower, system),
        None => LegsText::NotLegs,
    }
}

/// `2P`, `2 pole`, `3ph`: how many poles.
fn poles(text: &str) -> Option<usize> {
    let compact: String = text.chars().filter(|c| c.is_alphanumeric()).collect();
    let (digit, rest) = compact.split_at_checked(1)?;
    let poles = ["p", "pole", "poles", "ph", "phase", "pst", "hots", "legs", "wire"].contains(&rest);
    poles.then(|| digit.parse().ok()).flatten().filter(|n| (1..=3).contains(n))
}

fn unsaid(system: &[Leg]) -> LegsText {
    match system {
        [one] => LegsText::Certain(Legs::new(&[*one], true)),
        several => LegsText::NeutralUnsaid(Legs::new(several, false).lines),
    }
}

#[derive(Default)]
struct Parsed {
    legs: Vec<Leg>,
    /// Pole numbers above the number of legs.
    poles: Vec<u32>,
    /// Numbers without a letter.
    bare: bool,
    neutral: Option<bool>,
}

impl Parsed {
    /// Takes the words of the entry apart; `None` where one is no leg.
    fn take(&mut self, words: &Words, text: &str) -> Option<()> {
        let (text, neutral) = without_neutral_words(words, text);
        self.neutral = neutral;
        for word in text.split(|c: char| !c.is_alphanumeric()).filter(|w| !w.is_empty()) {
            match word {
                "neutral" | "neut" => self.neutral = Some(true),
                "leg" | "legs" | "line" | "phase" | "ph" | "hot" | "and" | "to" | "with" | "w" => {}
                _ => self.word(word)?,
            }
        }
        (!self.legs.is_empty() || !self.poles.is_empty()).then_some(())
    }

    fn word(&mut self, word: &str) -> Option<()> {
        if let Ok(number) = word.parse::<u32>() {
            self.bare = true;
            self.poles.push(number);
            return (1..=84).contains(&number).then_some(());
        }
        let mut rest = word;
        while !rest.is_empty() {
            let (leg, len) = match rest.as_bytes() {
                [b'l', b'1', ..] => (Some(Leg::L1), 2),
                [b'l', b'2', ..] => (Some(Leg::L2), 2),
                [b'l', b'3', ..] => (Some(Leg::L3), 2),
                [b'a', ..] => (Some(Leg::L1), 1),
                [b'b', ..] => (Some(Leg::L2), 1),
                [b'c', ..] => (Some(Leg::L3), 1),
                [b'n', ..] => (None, 1),
                _ => return None,
            };
            match leg {
                Some(leg) => self.legs.push(leg),
                None => self.neutral = Some(true),
            }
            rest = rest.get(len..)?;
        }
        Some(())
    }

    fn settle(mut self, text: &str, system: &[Leg]) -> LegsText {
        if self.bare {
            if !self.legs.is_empty() {
                return LegsText::NotLegs;
            }
            match poles_to_legs(&self.poles, system) {
                Some(legs) => self.legs = legs,
                None => return LegsText::WhichUnsaid,
            }
        }
        self.legs.sort_unstable();
        self.legs.dedup();
        let lines = Legs::new(&self.legs, false).lines;
        if self.legs.len() == 1 {
            return match self.neutral {
                Some(false) => LegsText::NotLegs,
                _ => LegsText::Certain(Legs { lines, neutral: true }),
            };
        }
        let written = neutral_by_writing(text).filter(|_| !self.bare);
        match self.neutral.or(written) {
            Some(neutral) => LegsText::Certain(Legs { lines, neutral }),
            None => LegsText::NeutralUnsaid(lines),
        }
    }
}

/// The entry without the words at its end that say whether there is a neutral, and what they say.
fn without_neutral_words<'t>(words: &Words, text: &'t str) -> (&'t str, Option<bool>) {
    let said = |cut: usize| words.choice("neutral", &text[cut..]).map(|key| (&text[..cut], Some(key == "shared")));
    text.match_indices(char::is_whitespace).find_map(|(cut, _)| said(cut)).unwrap_or((text, None))
}

/// Blanks alone between the legs: a shared neutral; a hyphen: none. Other marks don't say.
fn neutral_by_writing(text: &str) -> Option<bool> {
    let marks: String = text.trim().chars().filter(|c| !c.is_alphanumeric()).collect();
    let spaced = !marks.is_empty() && marks.chars().all(char::is_whitespace);
    let hyphens = marks.contains('-') && marks.chars().all(|c| c == '-' || c.is_whitespace());
    let words = text.split(|c: char| !c.is_alphanumeric()).any(|w| matches!(w, "and" | "to"));
    match (spaced && !words, hyphens) {
        (true, _) => Some(true),
        (_, true) => Some(false),
        _ => None,
    }
}

/// Legs of numbers: those of the legs themselves, or the poles of a panel, two spaces to a leg. On three legs `1,3` can be
/// either.
fn poles_to_legs(numbers: &[u32], system: &[Leg]) -> Option<Vec<Leg>> {
    let count = u32::try_from(system.len()).ok().filter(|n| *n > 0)?;
    let as_legs = numbers.iter().all(|n| (1..=count).contains(n));
    let by_pole: Vec<Leg> = numbers.iter().filter_map(|n| system.get(usize::try_from((n - 1) / 2 % count).ok()?).copied()).collect();
    let by_leg: Vec<Leg> = numbers.iter().filter_map(|n| system.get(usize::try_from(n - 1).ok()?).copied()).collect();
    let distinct = |legs: &[Leg]| legs.iter().collect::<std::collections::BTreeSet<_>>().len() == numbers.len();
    // One side of a panel has the odd or the even spaces.
    let one_side = numbers.len() > 1 && numbers.windows(2).all(|w| w[1] == w[0] + 2);
    match (as_legs, one_side && distinct(&by_pole)) {
        (true, true) => (by_leg == by_pole).then_some(by_leg),
        (true, false) => distinct(&by_leg).then_some(by_leg),
        (false, true) => Some(by_pole),
        (false, false) => (numbers.len() == 1).then_some(by_pole).filter(|_| false),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn on(system: &[Leg], text: &str) -> String {
        match legs(Words::built_in(), text, system) {
            LegsText::Certain(legs) => legs.to_string(),
            LegsText::NeutralUnsaid(lines) => format!("{}?", Legs { lines, neutral: false }),
            LegsText::WhichUnsaid => "which?".to_owned(),
            LegsText::NotLegs => "none".to_owned(),
        }
    }

    #[test]
    fn legs_are_read_as_the_trade_writes_them() {
        for (text, expected) in [
            ("L1", "L1"),
            ("l2", "L2"),
            ("A", "L1"),
            ("B", "L2"),
            ("Leg 1", "L1"),
            ("Phase B", "L2"),
            ("1", "L1"),
            ("2", "L2"),
            ("L1-N", "L1"),
            ("L1 N", "L1"),
            ("L1 L2", "L1 L2"),
            ("L2 L1", "L1 L2"),
            ("L1 L2 N", "L1 L2"),
            ("L1/L2/N", "L1 L2"),
            ("L1-L2-N", "L1 L2"),
            ("A B N", "L1 L2"),
            ("L1/L2/neutral", "L1 L2"),
            ("ABN", "L1 L2"),
            ("L1 L2 shared neutral", "L1 L2"),
            ("L1/L2 with neutral", "L1 L2"),
            ("L1/L2 MWBC", "L1 L2"),
            ("L1-L2", "L1-L2"),
            ("L1 - L2", "L1-L2"),
            ("L1\u{2013}L2", "L1-L2"),
            ("A-B", "L1-L2"),
            ("L1/L2 no neutral", "L1-L2"),
            ("A/B", "L1-L2?"),
            ("L1&L2", "L1-L2?"),
            ("L1 & L2", "L1-L2?"),
            ("L1+L2", "L1-L2?"),
            ("L1, L2", "L1-L2?"),
            ("L1 and L2", "L1-L2?"),
            ("L1L2", "L1-L2?"),
            ("AB", "L1-L2?"),
            ("1,3", "L1-L2?"),
            ("1/3", "L1-L2?"),
            ("1,2", "L1-L2?"),
            ("5,7", "L1-L2?"),
            ("2P", "L1-L2?"),
            ("2 pole", "L1-L2?"),
            ("both", "L1-L2?"),
            ("1P", "which?"),
            ("3P", "which?"),
            ("9", "which?"),
            ("blue", "none"),
            ("120", "none"),
            ("L4", "none"),
            ("", "none"),
        ] {
            assert_eq!(on(&Leg::ALL[..2], text), expected, "{text}");
        }
    }

    #[test]
    fn three_legs_leave_more_unsaid() {
        for (text, expected) in [
            ("L1 L2 L3", "L1 L2 L3"),
            ("L1-L2-L3", "L1-L2-L3"),
            ("A/B/C", "L1-L2-L3?"),
            ("ABC", "L1-L2-L3?"),
            ("3P", "L1-L2-L3?"),
            ("2,4,6", "L1-L2-L3?"),
            ("L3-L1", "L1-L3"),
            ("L2 L3", "L2 L3"),
            ("2P", "which?"),
            ("1,3", "which?"),
            ("8,10", "L1-L2?"),
            ("2,3", "L2-L3?"),
        ] {
            assert_eq!(on(&Leg::ALL, text), expected, "{text}");
        }
        assert_eq!(on(&Leg::ALL[..1], "1P"), "L1");
        assert_eq!(on(&Leg::ALL[..1], "both"), "L1");
    }
}
