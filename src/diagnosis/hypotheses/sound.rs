//! Nothing wrong.

use super::super::fit::{fit, fit_hot, scores};
use super::super::model::{Model, Task};
use super::super::settings::PRIOR_SOUND;
use super::super::site::Site;
use super::{Bench, Evaluated, FAR, Hypothesis};
use crate::diagnosis::scan::{Curve, EXPLAINS};

/// Fits the sound network.
pub(super) fn bench<'a>(prior: f64, site: &'a Site, mut model: Model<'a>) -> Option<Bench<'a>> {
    let task = Task::default();
    let start = model.start();
    let sound = fit(&mut model, &task, &start, FAR)?;
    let misfit = sound.cost / (EXPLAINS * site.observations.list.len() as f64);
    let temperature = if sound.temperature > 1.0 { sound.temperature } else { misfit.max(1.0) };
    let near =
        if sound.temperature <= 1.0 && temperature > 1.0 { fit_hot(&mut model, &task, &start, 6, temperature)? } else { sound.clone() };
    let scores = scores(&mut model, &task, &near, temperature)?;
    Some(Bench { site, model, prior, sound, near: (near, temperature), scores })
}

/// The sound network as a hypothesis.
pub(super) fn evaluated(bench: &Bench) -> Evaluated {
    Evaluated {
        hypothesis: Hypothesis::Sound,
        prior: PRIOR_SOUND,
        evidence: bench.sound.evidence,
        task: Task::default(),
        fit: bench.sound.clone(),
        curve: Curve::default(),
    }
}
