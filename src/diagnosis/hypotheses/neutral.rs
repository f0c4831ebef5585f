//! Raised resistance of a neutral.

use super::super::settings::{OPEN_NEUTRAL, PRIOR_NEUTRAL};
use super::{Bench, Evaluated, Hypothesis};
use crate::network::SLOTS;
use crate::visit::Conductor;

/// One a span with a neutral.
pub(super) fn evaluate(bench: &mut Bench) -> Vec<Evaluated> {
    let share = PRIOR_NEUTRAL / bench.site.neutrals.max(1) as f64;
    let spans = bench.site.reduced.with(Conductor::Neutral);
    let one = |span: usize| {
        let prior = share * bench.site.reduced.runs[span].len() as f64;
        bench.added(Hypothesis::Neutral(span), (span, SLOTS - 1), prior, OPEN_NEUTRAL)
    };
    spans.into_iter().filter_map(one).collect()
}
