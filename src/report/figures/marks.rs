//! Marks on a beam: their shape says when a reading was taken, their width how sure it is.

use super::canvas::Canvas;
use crate::report::drawing::Colour;
use crate::visit::{ReadingRow, Stage, name_key};

/// Narrowest bar and lozenge that can be told apart by shape, in points.
const LEAST_WIDTH: f64 = 3.6;
const LEAST_WAIST: f64 = 5.2;
const HEIGHT: f64 = 10.0;
const OUTLINE: f64 = 1.1;

/// When a set of readings was taken: filled before a repair, open after it; a bar with what was on as found, a lozenge in a state
/// of its own.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Kind {
    pub is_left: bool,
    pub is_own_state: bool,
}

impl Kind {
    pub fn of(row: &ReadingRow) -> Self {
        Self { is_left: row.stage == Stage::AsLeft, is_own_state: !is_default_state(row) }
    }

    /// Its line in the legend.
    pub fn key(self) -> &'static str {
        match (self.is_left, self.is_own_state) {
            (false, false) => "figure.as-found",
            (false, true) => "figure.as-found-state",
            (true, false) => "figure.as-left",
            (true, true) => "figure.as-left-state",
        }
    }
}

/// The workbook names no load state of its own for the row.
pub(super) fn is_default_state(row: &ReadingRow) -> bool {
    [Stage::AsFound, Stage::AsLeft].iter().any(|s| name_key(&row.state) == s.name())
}

/// Draws a mark at a point over a span of the beam, but never narrower than can be seen.
pub(super) fn mark(canvas: &mut Canvas, at: (f64, f64), span: (f64, f64), kind: Kind, colour: Colour) {
    let (x, y) = at;
    let inset = if kind.is_left { OUTLINE / 2.0 } else { 0.0 };
    let (fill, stroke) = if kind.is_left { (Colour::Paper, Some((OUTLINE, colour))) } else { (colour, None) };
    let tall = HEIGHT / 2.0 - inset;
    let least = if kind.is_own_state { LEAST_WAIST } else { LEAST_WIDTH };
    let (from, to) = if span.1 - span.0 >= least { span } else { (x - least / 2.0, x + least / 2.0) };
    let (from, to) = (from + inset, to - inset);
    let outline = if kind.is_own_state {
        [(x, y - tall), (to, y), (x, y + tall), (from, y)]
    } else {
        [(from, y - tall), (to, y - tall), (to, y + tall), (from, y + tall)]
    };
    canvas.polygon(&outline, Some(fill), stroke);
}
