//! Which cause explains the readings.
mod cholesky;
mod evidence;
mod fit;
mod hypotheses;
mod model;
mod observation;
mod parameter;
mod reduce;
mod scan;
mod settings;
mod site;

pub use settings::DiagnosisSettings;

use crate::results::Diagnosis;
use crate::visit::{Stage, Visit};
use evidence::rank;
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
    let ranked = rank(visit, &levels);
    Some(Diagnosis { ranking: ranked.into_iter().map(|w| w.cause).collect(), neutral: vec![], next: vec![], load_steps: vec![], repair: None })
}
