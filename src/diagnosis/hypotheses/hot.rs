//! Raised resistance of a line conductor.

use super::super::settings::{OPEN_HOT, PRIOR_HOT};
use super::{Bench, Evaluated, Hypothesis};
use crate::visit::{Conductor, Leg};

/// One a span and leg.
pub(super) fn evaluate(bench: &mut Bench) -> Vec<Evaluated> {
    let share = PRIOR_HOT / bench.site.hots.max(1) as f64;
    let mut all = Vec::new();
    for leg in Leg::ALL {
        for span in bench.site.reduced.with(Conductor::Line(leg)) {
            let prior = share * bench.site.reduced.runs[span].len() as f64;
            all.extend(bench.added(Hypothesis::Hot(span, leg), (span, leg.index()), prior, OPEN_HOT));
        }
    }
    all
}
