//! Supply voltage off.

use super::super::fit::fit;
use super::super::model::Task;
use super::super::settings::{PRIOR_SUPPLY, SUPPLY, SUPPLY_OFF};
use super::{Bench, Evaluated, FAR, Hypothesis};
use crate::diagnosis::scan::Curve;

/// Low and high.
pub(super) fn evaluate(bench: &mut Bench) -> Vec<Evaluated> {
    let mut all = Vec::new();
    for is_high in [false, true] {
        let mean = if is_high { SUPPLY_OFF.0 } else { -SUPPLY_OFF.0 };
        let task = Task { supply: Some((mean, SUPPLY_OFF.1)), ..Task::default() };
        let mut start = bench.near.0.z.clone();
        if let Some(supply) = start.first_mut() {
            *supply = (*supply * SUPPLY - mean) / SUPPLY_OFF.1;
        }
        let Some(fit) = fit(&mut bench.model, &task, &start, FAR) else { continue };
        let hypothesis = Hypothesis::Supply(is_high);
        all.push(Evaluated { hypothesis, prior: PRIOR_SUPPLY / 2.0, evidence: fit.evidence, task, fit, curve: Curve::default() });
    }
    all
}
