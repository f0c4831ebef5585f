//! One value misread.

use super::super::fit::{fit, without};
use super::super::model::Task;
use super::super::settings::PRIOR_READING;
use super::{Bench, Evaluated, FAR, Hypothesis};
use crate::diagnosis::scan::Curve;

/// Readings fitted anew without, at most: those whose loss would help most.
const FITTED: usize = 3;
/// Gain of ln evidence by the loss of a reading, below which it is not fitted anew.
const WORTH: f64 = 1.0;

/// One a voltage reading. What its loss gains is first taken from the fit of the sound network, linearised; the best are fitted
/// anew, and of the others none is credited with a gain worth a fit.
pub(super) fn evaluate(bench: &mut Bench) -> Vec<Evaluated> {
    let base = Task::default();
    let (near, temperature) = bench.near.clone();
    let Some(evidence) = without(&mut bench.model, &base, &near, temperature) else { return Vec::new() };
    let voltages: Vec<usize> = (0..evidence.len()).filter(|&k| bench.model.observations.list[k].quantity.is_voltage()).collect();
    let mut order = voltages.clone();
    order.sort_by(|&a, &b| evidence[b].total_cmp(&evidence[a]));
    order.truncate(FITTED);
    let prior = PRIOR_READING / voltages.len().max(1) as f64;
    let sound = bench.sound.evidence;
    let mut all = Vec::new();
    for k in voltages {
        let task = Task { misread: Some(k), ..Task::default() };
        let is_fitted = order.contains(&k) && evidence[k] > WORTH;
        let again = is_fitted.then(|| fit(&mut bench.model, &task, &near.z, FAR)).flatten();
        let evidence = again.as_ref().map_or(sound + evidence[k].min(WORTH), |f| f.evidence);
        let fit = again.unwrap_or_else(|| bench.sound.clone());
        all.push(Evaluated { hypothesis: Hypothesis::Reading(k), prior, evidence, task, fit, curve: Curve::default() });
    }
    all
}
