//! The fewest moves.

use super::moves::Choice;
use super::{BalanceSettings, Gauge, Loading};

/// Most possible moves that pairs are tried of, and triples.
const PAIRS_OF: usize = 700;
const TRIPLES_OF: usize = 160;

/// A difference in imbalance below this, in per cent, is none: it keeps rounding from choosing.
const SAME: f64 = 1e-9;

/// The fewest moves that bring the imbalance to the target; among as many, those that leave least, then the first in list order.
/// Where the target is out of reach, the moves that leave least, if that is worthwhile. A set that would raise the neutral current
/// does not count.
pub(super) fn fewest<'a>(choices: &'a [Choice], now: &Loading, gauge: &Gauge<'_>, settings: &BalanceSettings) -> Vec<&'a Choice> {
    let at_first = gauge.imbalance(now);
    if at_first <= settings.target_percent {
        return Vec::new();
    }
    let search = Search { gauge, now, neutral: gauge.neutral(now).0 };
    let mut best = Found { imbalance: at_first, set: Vec::new() };
    for moves in 1..=settings.most_moves.min(3) {
        search.exact(choices, moves, &mut best);
        if best.imbalance <= settings.target_percent {
            return best.set;
        }
    }
    search.go_on(choices, settings, &mut best);
    if best.imbalance <= settings.target_percent || at_first - best.imbalance >= settings.worthwhile_percent {
        best.set
    } else {
        Vec::new()
    }
}

struct Found<'a> {
    imbalance: f64,
    set: Vec<&'a Choice>,
}

struct Search<'s> {
    gauge: &'s Gauge<'s>,
    now: &'s Loading,
    neutral: f64,
}

impl Search<'_> {
    /// Takes the set if it leaves less than the best one and does not raise the neutral current.
    fn consider<'a>(&self, loading: &Loading, set: &[&'a Choice], best: &mut Found<'a>) {
        let imbalance = self.gauge.imbalance(loading);
        if imbalance < best.imbalance - SAME && self.gauge.neutral(loading).0 <= self.neutral + SAME {
            *best = Found { imbalance, set: set.to_vec() };
        }
    }

    fn exact<'a>(&self, choices: &'a [Choice], moves: usize, best: &mut Found<'a>) {
        let pool = match moves {
            1 => choices.iter().collect(),
            2 => spread(choices, PAIRS_OF),
            _ => spread(choices, TRIPLES_OF),
        };
        self.extend(&pool, moves, self.now, &mut Vec::with_capacity(moves), best);
    }

    /// All sets of so many further moves, in list order, of different circuits.
    fn extend<'a>(&self, pool: &[&'a Choice], further: usize, loading: &Loading, set: &mut Vec<&'a Choice>, best: &mut Found<'a>) {
        if further == 0 {
            self.consider(loading, set, best);
            return;
        }
        for (at, choice) in pool.iter().enumerate() {
            if set.last().is_some_and(|last| last.run == choice.run) {
                continue;
            }
            let mut next = *loading;
            next.add(&choice.change);
            set.push(choice);
            self.extend(&pool[at + 1..], further - 1, &next, set, best);
            set.pop();
        }
    }

    /// Adds the best next move to the best set until the target, the most moves, or no gain.
    fn go_on<'a>(&self, choices: &'a [Choice], settings: &BalanceSettings, best: &mut Found<'a>) {
        while best.imbalance > settings.target_percent && best.set.len() < settings.most_moves {
            let before = best.imbalance;
            let set = best.set.clone();
            let mut loading = *self.now;
            for choice in &set {
                loading.add(&choice.change);
            }
            for choice in choices.iter().filter(|c| set.iter().all(|s| s.run != c.run)) {
                let mut next = loading;
                next.add(&choice.change);
                let mut longer = set.clone();
                longer.push(choice);
                self.consider(&next, &longer, best);
            }
            if best.imbalance >= before {
                return;
            }
        }
        best.set.sort_by_key(|c| c.run);
    }
}

/// All choices, or so many of them spread evenly over their sizes, in list order.
fn spread(choices: &[Choice], most: usize) -> Vec<&Choice> {
    if choices.len() <= most {
        return choices.iter().collect();
    }
    let size = |c: &Choice| c.change.total.iter().map(|va| va.abs()).fold(0.0, f64::max);
    let mut by_size: Vec<usize> = (0..choices.len()).collect();
    by_size.sort_by(|&a, &b| size(&choices[a]).total_cmp(&size(&choices[b])).then(a.cmp(&b)));
    let mut kept: Vec<usize> = (0..most).map(|k| by_size[k * (choices.len() - 1) / (most - 1)]).collect();
    kept.sort_unstable();
    kept.into_iter().map(|k| &choices[k]).collect()
}
