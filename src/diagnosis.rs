//! Which cause explains the readings.
mod cholesky;
mod evidence;
mod fit;
mod hypotheses;
mod interval;
mod model;
mod observation;
mod parameter;
mod reduce;
mod scan;
mod settings;
mod site;

pub use settings::DiagnosisSettings;

use crate::quantity::Ohms;
use crate::results::{Diagnosis, NeutralInterval};
use crate::visit::{Stage, Visit};
use evidence::rank;
use model::Model;
use site::Site;

/// Diagnoses a visit.
#[must_use]
pub fn diagnose(visit: &Visit, settings: &DiagnosisSettings) -> Option<Diagnosis> {
    let only: Option<usize> = std::env::var("TRUST").ok().and_then(|t| t.parse().ok());
    let mut sites = Vec::new();
    for (k, trust) in settings::TRUST.iter().enumerate() {
        if only.is_none_or(|o| o == k) {
            sites.push((trust.prior, Site::new(visit, Stage::AsFound, settings, trust)?));
        }
    }
    let levels = hypotheses::evaluate(&sites)?;
    if std::env::var("DEBUG").is_ok() {
        for level in &levels {
            for e in &level.all {
                eprintln!("{:?} ev {:.2} cost {:.1}", e.hypothesis, e.evidence, e.fit.cost);
                if std::env::var("CURVE").is_ok() { for n in &e.curve.nodes { eprintln!("     {:.2} {:.2} {:.1}", n.ohms, n.fit.evidence, n.fit.cost); } }
            }
        }
    }
    let mut ranked = rank(visit, &levels);
    for k in 0..ranked.len() {
        ranked[k].cause.ohms = interval::of_cause(&levels, &ranked[k]);
    }
    let mut models: Vec<Model> = sites.iter().filter_map(|(_, s)| Model::new(&s.reduced, &s.observations, &s.parameters)).collect();
    let ends = interval::neutrals(&levels, &mut models, &ranked);
    let neutral = neutral_intervals(visit, &sites[0].1, &ends);
    Some(Diagnosis { ranking: ranked.into_iter().map(|w| w.cause).collect(), neutral, next: vec![], load_steps: vec![], repair: None })
}

fn neutral_intervals(visit: &Visit, site: &Site, ends: &[Option<(interval::Ends, f64)>]) -> Vec<NeutralInterval> {
    let mut span_of = vec![None; visit.runs.len()];
    for (span, runs) in site.reduced.runs.iter().enumerate() {
        runs.iter().for_each(|r| span_of[*r] = Some(span));
    }
    let of_run = |&run: &usize| {
        visit.runs[run].has_neutral().then_some(())?;
        let ((low, high), amperes) = span_of[run].and_then(|s| ends.get(s).copied().flatten()).unwrap_or(((0.0, None), 0.0));
        Some(NeutralInterval { run, low: Ohms(low), high: high.map(Ohms), amperes })
    };
    visit.tree.order.iter().filter_map(of_run).collect()
}
