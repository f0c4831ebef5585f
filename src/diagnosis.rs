//! Which cause explains the readings, and what they leave open.
//!
//! The circuit list makes a network (see [`crate::network`]); what the list leaves uncertain, the supply and the meters are its
//! unknowns, each with a prior. Every cause that can be named, nothing wrong among them, is fitted to all readings at once and
//! weighed by its evidence, so that a cause must explain every reading and pays for every liberty it takes. docs/diagnosis.md has
//! the method, its parameters with their reasons, and measured figures.
//!
//! Bounds on any input: readings, spans and the work of the fits are capped (see `settings`); what was given up is reported as
//! not ruled out, never as sound.

mod evidence;
mod fit;
mod hypotheses;
mod interval;
mod linear;
mod model;
mod next_reading;
mod observation;
mod parameter;
mod reduce;
mod repair;
mod scan;
mod settings;
mod site;
mod switched;

pub use settings::DiagnosisSettings;

use crate::diag::CellRef;
use crate::network;
use crate::quantity::Ohms;
use crate::results::{Cause, CauseKind, Diagnosis, NeutralInterval};
use crate::visit::{Stage, Visit};
use evidence::{Level, Weighed, rank};
use hypotheses::evaluate;
use interval::Ends;
use site::{Site, View};

/// Diagnoses a visit: the readings as found, and where there are readings as left, what they show of the repair. Where there are
/// none as found those as left are diagnosed.
///
/// `None` where there is nothing to fit: no circuit list that makes a network, or fewer than two readings on it.
#[must_use]
pub fn diagnose(visit: &Visit, settings: &DiagnosisSettings) -> Option<Diagnosis> {
    let (stage, found) = match examine(visit, Stage::AsFound, settings, None) {
        Some(found) => (Stage::AsFound, found),
        None => (Stage::AsLeft, examine(visit, Stage::AsLeft, settings, None)?),
    };
    let repair = found.ranking.first().filter(|_| stage == Stage::AsFound).and_then(|cause| {
        let left = examine(visit, Stage::AsLeft, settings, Some(cause))?;
        repair::evidence(visit, cause, &left)
    });
    let ends: Vec<(usize, Ends)> = found.neutral.iter().map(|n| (n.run, (n.low.0, n.high.map(|h| h.0)))).collect();
    let next = next_reading::propose(visit, settings, &found.ranking, &ends);
    Some(Diagnosis {
        ranking: found.ranking,
        neutral: found.neutral,
        next,
        load_steps: network::load_steps(visit),
        repair,
        left_out: found.left_out,
    })
}

/// What one stage's readings say.
struct Examined {
    ranking: Vec<Cause>,
    neutral: Vec<NeutralInterval>,
    /// Interval of the resistance that was asked about.
    asked: Option<Ends>,
    /// Readings the fit did not use.
    left_out: Vec<CellRef>,
}

/// Examines one stage; `about` is a cause whose resistance is to be bounded whatever the readings say.
///
/// Where no cause explains the readings, they are looked at again with what was switched on allowed anywhere, and then without
/// the reading that fits the best cause least, if its loss helps far enough.
fn examine(visit: &Visit, stage: Stage, settings: &DiagnosisSettings, about: Option<&Cause>) -> Option<Examined> {
    let mut view = View { stage, is_wide: false, without: Vec::new() };
    loop {
        let sites: Vec<(f64, Site)> =
            settings::TRUST.iter().map(|t| Some((t.prior, Site::new(visit, &view, settings, t)?))).collect::<Option<_>>()?;
        let mut levels = evaluate(&sites)?;
        let ranked = rank(visit, &levels);
        match wider(&view, &mut levels, &ranked) {
            Some(next) => view = next,
            None => {
                let left_out = sites.first()?.1.left_out(visit, &view);
                let mut examined = conclude(visit, &sites.first()?.1, &mut levels, ranked, about)?;
                examined.left_out = left_out;
                return Some(examined);
            }
        }
    }
}

/// Readings left out, at most.
const MOST_LEFT_OUT: usize = 2;
/// Gain of ln evidence from which a reading is left out: one in a hundred readings is misread, and it pays twice over.
const LEAVES_OUT: f64 = 9.0;

/// How to look again, where the most probable cause does not explain the readings.
fn wider(view: &View, levels: &mut [Level], ranked: &[Weighed]) -> Option<View> {
    let &(level, k) = ranked.iter().find_map(|w| w.members.first())?;
    let level = &mut levels[level];
    let best = level.all.get(k)?.clone();
    let observations = &level.site.observations;
    if best.fit.cost < UNEXPLAINED * observations.list.len() as f64 {
        return None;
    }
    if observations.states.len() > 1 && !view.is_wide {
        return Some(View { is_wide: true, ..view.clone() });
    }
    if view.without.len() >= MOST_LEFT_OUT {
        return None;
    }
    let gains = fit::without(&mut level.model, &best.task, &best.fit, best.fit.temperature)?;
    let worst = (0..gains.len()).max_by(|&a, &b| gains[a].total_cmp(&gains[b])).filter(|&k| gains[k] > LEAVES_OUT)?;
    let mut next = view.clone();
    next.without.push(observations.list[worst].cell.clone());
    Some(next)
}

/// Mean square residual (with the unknowns' own) from which the best cause is taken to explain nothing.
const UNEXPLAINED: f64 = 1.6;

fn conclude(visit: &Visit, site: &Site, levels: &mut [Level], mut ranked: Vec<Weighed>, about: Option<&Cause>) -> Option<Examined> {
    for weighed in &mut ranked {
        weighed.cause.ohms = interval::of_cause(levels, weighed);
    }
    let mut bounds = interval::Bounds::new(levels, &ranked)?;
    let ends = bounds.neutrals();
    let asked = about.and_then(|cause| bounds.of(cause));
    Some(Examined { neutral: neutral_intervals(visit, site, &ends), ranking: listed(ranked), asked, left_out: Vec::new() })
}

/// Causes below this probability are left out of the ranking, and what they had is shared out.
const LISTED: f64 = 1e-4;

/// How many times as probable as nothing wrong a cause must be to be named: one that is named has somebody open a wall or call
/// the utility; one that is not still stands in the ranking, and is not ruled out.
const NAMED: f64 = 1.5;

/// The ranking: most probable first, but for "nothing wrong", which stands first where no cause is that much more probable.
fn listed(ranked: Vec<Weighed>) -> Vec<Cause> {
    let mut causes: Vec<Cause> = ranked.into_iter().map(|w| w.cause).filter(|c| c.probability >= LISTED).collect();
    let total: f64 = causes.iter().map(|c| c.probability).sum();
    causes.iter_mut().for_each(|c| c.probability /= total);
    if let Some(sound) = causes.iter().position(|c| c.kind == CauseKind::None)
        && causes[0].probability < NAMED * causes[sound].probability
    {
        let sound = causes.remove(sound);
        causes.insert(0, sound);
    }
    causes
}

/// Intervals run by run. Runs no reading speaks of are not bounded; their neutral's current is what the circuit list makes it.
fn neutral_intervals(visit: &Visit, site: &Site, ends: &[Option<(Ends, f64)>]) -> Vec<NeutralInterval> {
    let mut span_of = vec![None; visit.runs.len()];
    for (span, runs) in site.reduced.runs.iter().enumerate() {
        runs.iter().for_each(|r| span_of[*r] = Some(span));
    }
    let of_run = |&run: &usize| {
        visit.runs[run].has_neutral().then_some(())?;
        let known = span_of[run].and_then(|s| ends.get(s).copied().flatten());
        let ((low, high), amperes) = known.unwrap_or_else(|| ((0.0, None), site.listed_neutral_amperes(run)));
        Some(NeutralInterval { run, low: Ohms(low), high: high.map(Ohms), amperes })
    };
    visit.tree.order.iter().filter_map(of_run).collect()
}
