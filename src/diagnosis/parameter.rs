//! The unknowns of a fit and what is known of them before any reading.

use super::observation::Observations;
use super::reduce::Reduced;
use super::settings::{self, Trust};

/// What an unknown is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Target {
    /// Logarithm of the supply's volts over nominal, all legs.
    Supply,
    /// Logarithm of one leg's volts, apart from the others.
    Leg(usize),
    /// Logarithm of the electrode's ohms over the assumed ones.
    Electrode,
    /// Logarithm of a span's ohms over the calculated ones, all conductors: one cable, one length.
    Span(usize),
    /// Logarithm of a load's watts over the stated ones.
    Watts(usize),
    /// Exponent of a load.
    Exponent(usize),
    /// Gain error of an instrument.
    Gain(usize),
    /// Drift of the supply at a row.
    Drift(usize),
}

/// An unknown with its prior: normal, in its own unit.
#[derive(Clone, Copy, Debug)]
pub(super) struct Parameter {
    /// What it is.
    pub target: Target,
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub spread: f64,
}

/// All unknowns that every hypothesis has. The supply stands first.
pub(super) fn parameters(reduced: &Reduced, observations: &Observations, trust: &Trust) -> Vec<Parameter> {
    let mut all = vec![Parameter { target: Target::Supply, mean: 0.0, spread: settings::SUPPLY }];
    let mut add = |target, mean, spread| all.push(Parameter { target, mean, spread });
    let legs = (0..3).filter(|&l| reduced.network.source.volts[l] > 0.0);
    legs.for_each(|l| add(Target::Leg(l), 0.0, settings::SUPPLY_LEG));
    if reduced.network.spans.iter().any(|s| s.electrode.is_some()) {
        add(Target::Electrode, 0.0, settings::ELECTRODE.1);
    }
    for (s, is_guess) in reduced.guessed.iter().enumerate() {
        add(Target::Span(s), 0.0, if *is_guess { settings::GUESSED } else { trust.ohms });
    }
    for (k, load) in reduced.loads.iter().enumerate() {
        add(Target::Watts(k), 0.0, load.unlisted.unwrap_or(trust.watts));
        if load.kind_unknown {
            add(Target::Exponent(k), settings::EXPONENT.0, settings::EXPONENT.1);
        }
    }
    observations.gains.iter().enumerate().for_each(|(g, spread)| add(Target::Gain(g), 0.0, *spread));
    (0..observations.rows).for_each(|r| add(Target::Drift(r), 0.0, settings::DRIFT));
    all
}

/// Whitened unknowns of one level of trust as those of another: equal in their own units, unknowns it does not share at their
/// means.
pub(super) fn carry(z: &[f64], from: &[Parameter], to: &[Parameter]) -> Vec<f64> {
    let mut at = 0;
    let one = |p: &Parameter| {
        // Both lists are in the same order; either may lack some of the other's.
        let found = (at..from.len()).find(|&k| from[k].target == p.target)?;
        at = found + 1;
        Some((from[found].mean + from[found].spread * z.get(found)? - p.mean) / p.spread)
    };
    to.iter().map(one).map(Option::unwrap_or_default).collect()
}
