//! Nothing wrong.

use super::super::fit::fit;
use super::super::model::{Model, Task};
use super::super::settings::PRIOR_SOUND;
use super::{Evaluated, FAR, Hypothesis};
use crate::diagnosis::scan::Curve;

/// Fits the sound network.
pub(super) fn evaluate(model: &mut Model) -> Option<Evaluated> {
    let task = Task::default();
    let start = model.start();
    let fit = fit(model, &task, &start, FAR)?;
    Some(Evaluated { hypothesis: Hypothesis::Sound, prior: PRIOR_SOUND, evidence: fit.evidence, task, fit, curve: Curve::default() })
}
