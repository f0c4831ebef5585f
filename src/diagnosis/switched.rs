//! What a state's name says of the load that is switched on: `1500 W heater on at 5/7a, L2`.

use crate::visit::{Leg, Visit, name_key};

/// What was switched, as far as the state names it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Switched {
    /// Watts.
    pub watts: Option<f64>,
    /// The leg.
    pub leg: Option<Leg>,
    /// The run at whose far end.
    pub run: Option<usize>,
}

impl Switched {
    /// Reads a state's name. A run's name counts where it is not a bare number, or stands behind `at`.
    pub fn read(visit: &Visit, state: &str) -> Self {
        let words: Vec<&str> = state.split(|c: char| c.is_whitespace() || "(),;:".contains(c)).filter(|w| !w.is_empty()).collect();
        let mut read = Self::default();
        for (k, word) in words.iter().enumerate() {
            let (before, after) = (k.checked_sub(1).map(|b| words[b]), words.get(k + 1).copied());
            read.watts = read.watts.or_else(|| watts(word, after));
            read.leg = read.leg.or_else(|| Leg::ALL.into_iter().find(|l| l.name().eq_ignore_ascii_case(word)));
            let is_name = before == Some("at") || word.chars().any(|c| !c.is_ascii_digit() && c != '.');
            read.run = read.run.or_else(|| is_name.then(|| run(visit, word)).flatten());
        }
        read
    }
}

fn run(visit: &Visit, word: &str) -> Option<usize> {
    let key = name_key(word);
    visit.runs.iter().position(|r| name_key(&r.name.value) == key)
}

/// `1500W`, `1500 W`, `1.5 kW`.
fn watts(word: &str, after: Option<&str>) -> Option<f64> {
    let lower = word.to_ascii_lowercase();
    let (number, unit) = match lower.find(|c: char| c.is_ascii_alphabetic()) {
        Some(at) => lower.split_at(at),
        None => (lower.as_str(), ""),
    };
    let unit = if unit.is_empty() { after.unwrap_or_default().to_ascii_lowercase() } else { unit.to_owned() };
    let factor = match unit.as_str() {
        "w" => 1.0,
        "kw" => 1000.0,
        _ => return None,
    };
    number.parse::<f64>().ok().map(|n| n * factor).filter(|w| *w > 0.0 && *w < 1e5)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn watts_are_read_with_and_without_a_blank() {
        assert_eq!(watts("1500", Some("W")), Some(1500.0));
        assert_eq!(watts("1.5kW", None), Some(1500.0));
        assert_eq!(watts("1500", Some("VA")), None);
        assert_eq!(watts("heater", None), None);
    }
}
