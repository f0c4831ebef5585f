//! Raised resistance of a neutral.

use super::super::settings::{OPEN_NEUTRAL, PRIOR_HOT, PRIOR_NEUTRAL, TWO_WIRE};
use super::{Bench, Evaluated, Hypothesis};
use crate::network::SLOTS;
use crate::visit::Conductor;

/// One a span with a neutral.
pub(super) fn evaluate(bench: &mut Bench) -> Vec<Evaluated> {
    let share = PRIOR_NEUTRAL / bench.site.neutrals.max(1) as f64;
    let two_wire = PRIOR_HOT / bench.site.hots.max(1) as f64 / TWO_WIRE;
    let spans = bench.site.reduced.with(Conductor::Neutral);
    let one = |span: usize| {
        let runs = bench.site.reduced.runs[span].len() as f64;
        let prior = runs * if bench.site.reduced.is_shared(span) { share } else { two_wire };
        bench.added(Hypothesis::Neutral(span), (span, SLOTS - 1), prior, OPEN_NEUTRAL)
    };
    spans.into_iter().filter_map(one).collect()
}
