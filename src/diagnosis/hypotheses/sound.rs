//! Nothing wrong.

use super::super::fit::{Fit, fit, fit_hot, gains, scores};
use super::super::model::{Model, Task};
use super::super::settings::PRIOR_SOUND;
use super::super::site::Site;
use super::{Bench, Evaluated, FAR, Hypothesis};
use crate::diagnosis::scan::{Curve, EXPLAINS};

/// Watts tried for a load nobody wrote down: a portable heater at half power.
const UNLISTED_HEATER: f64 = 800.0;
/// Such loads switched on one after the other, at most.
const MOST_UNLISTED: usize = 2;
/// First-order gain of ln evidence from which one is tried.
const WORTH: f64 = 4.0;

/// Fits the sound network.
pub(super) fn bench<'a>(prior: f64, site: &'a Site, mut model: Model<'a>) -> Option<Bench<'a>> {
    let task = Task::default();
    let start = model.start();
    let sound = fit(&mut model, &task, &start, FAR)?;
    let sound = with_unlisted(&mut model, &task, sound);
    let misfit = sound.cost / (EXPLAINS * site.observations.list.len() as f64);
    let temperature = if sound.temperature > 1.0 { sound.temperature } else { misfit.max(1.0) };
    let near =
        if sound.temperature <= 1.0 && temperature > 1.0 { fit_hot(&mut model, &task, &start, 6, temperature)? } else { sound.clone() };
    let scores = scores(&mut model, &task, &near, temperature)?;
    Some(Bench { site, model, prior, sound, near: (near, temperature), scores })
}

/// A load nobody wrote down has next to no slope where a fit begins, at next to no watts. The one whose first-order test promises
/// most is switched on and the fit repeated from there, as long as that helps.
fn with_unlisted(model: &mut Model, task: &Task, sound: Fit) -> Fit {
    let mut best = sound;
    let extras = model.extras(UNLISTED_HEATER);
    let unknowns: Vec<usize> = extras.iter().map(|e| e.0).collect();
    for _ in 0..MOST_UNLISTED {
        let Some(gains) = gains(model, task, &best, best.temperature, &unknowns) else { break };
        let Some(most) = (0..gains.len()).max_by(|&a, &b| gains[a].total_cmp(&gains[b])).filter(|&k| gains[k] > WORTH) else { break };
        let mut start = best.z.clone();
        start[extras[most].0] = extras[most].1;
        model.restart();
        match fit(model, task, &start, FAR) {
            Some(other) if other.evidence > best.evidence + WORTH / 4.0 => best = other,
            _ => break,
        }
    }
    best
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
