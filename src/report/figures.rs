//! Computed figures: where the neutral sits, the run tree, volts under an open neutral, load of the legs.
//!
//! They share one visual language: a thin beam for a voltage or a load, a mark on it for what was found, a shaded part for what is
//! allowed. Nothing is told by colour alone: what is out of tolerance is also heavier or of another shape, for a grey print. A figure
//! taller than a page becomes several drawings of one name.

mod branches;
mod canvas;
mod exposure;
mod leg_load;
mod marks;
mod neutral_position;
mod run_tree;
mod strip;
mod triangle;
mod words;

use super::Source;
use super::drawing::{Drawing, Measure};
use crate::wording::Language;
use std::sync::Arc;

/// One drawing with its name and caption.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// `neutral-position`, `run-tree`, `exposure` or `leg-load`; drawings of one figure share it and follow each other.
    pub name: &'static str,
    /// What it shows and how to read it, in words.
    pub caption: String,
    /// The drawing.
    pub drawing: Arc<Drawing>,
}

/// No drawing is taller than this, in points, so that it fits a page with its caption.
pub const MOST_HEIGHT: f64 = 620.0;

/// What every figure is drawn from.
#[derive(Clone, Copy)]
struct Scene<'a> {
    source: &'a Source<'a>,
    language: &'a Language,
    measure: &'a dyn Measure,
    width: f64,
}

/// All figures that have something to show, in the order of a report. `width` is that of the text column in points.
#[must_use]
pub fn build(source: &Source, language: &Language, measure: &dyn Measure, width: f64) -> Vec<Figure> {
    let scene = Scene { source, language, measure, width };
    let mut figures = neutral_position::figures(&scene);
    figures.extend(run_tree::figures(&scene));
    figures.extend(exposure::figures(&scene));
    figures.extend(leg_load::figures(&scene));
    figures
}
