//! The drawing of the run tree: the tree and its labels, then columns of what is known of each run.

use crate::quantity::Unit;
use crate::report::drawing::{Anchor, Colour};
use crate::report::figures::Scene;
use crate::report::figures::branches::{self, Twig};
use crate::report::figures::canvas::{Canvas, Style, clean};
use crate::report::figures::neutral_position::Judgements;
use crate::report::figures::words::percent;
use crate::visit::{Leg, Quantity, ReadingRow, Run, Stage};
use crate::wording::Sentence;
use std::ops::Range;

/// Height of a row.
pub(super) const ROW: f64 = 17.0;
const HEAD: f64 = 18.0;
const FOOT: f64 = 6.0;
const RISE: f64 = 3.0;
/// Height a drawing takes above and below its rows.
pub(super) const AROUND: f64 = HEAD + FOOT;
/// Stroke of a run that is no suspect, and what certainty adds to it.
const THIN: f64 = 0.8;
const HEAVY: f64 = 5.0;
/// Probabilities below this are not written.
pub(super) const LEAST: f64 = 0.01;
const COLUMN_GAP: f64 = 13.0;
/// Widest column.
const WIDEST: f64 = 64.0;
const LEAST_LEADER: f64 = 24.0;
/// Of the width, what the tree and its labels have at least.
const LEAST_LABELS: f64 = 0.3;

/// What was read at a run's far end, for a node: the first set as found, else the first as left.
fn reading<'a>(scene: &Scene<'a>) -> Vec<Option<&'a ReadingRow>> {
    let visit = scene.source.visit;
    let mut rows: Vec<Option<&ReadingRow>> = vec![None; visit.runs.len()];
    for stage in [Stage::AsFound, Stage::AsLeft] {
        for row in visit.rows.iter().filter(|r| r.stage == stage && has_volts(scene, r)) {
            if let Some(slot) = row.run.and_then(|r| rows.get_mut(r)) {
                slot.get_or_insert(row);
            }
        }
    }
    rows
}

fn has_volts(scene: &Scene, row: &ReadingRow) -> bool {
    scene.source.visit.system.legs().iter().any(|l| row.value(Quantity::line_neutral(*l)).is_some())
}

/// What a column shows of a run, in the order of the columns.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Shows {
    Probability,
    Wire,
    Length,
    Breaker,
    Volts(Leg),
}

/// A column, set flush right.
struct Column {
    shows: Shows,
    head: String,
    /// Left and right end.
    start: f64,
    end: f64,
}

/// Columns: the tree with its labels, then what is known of each run.
pub(super) struct Chart<'a> {
    scene: &'a Scene<'a>,
    pub probability: Vec<f64>,
    pub is_leading: Vec<bool>,
    rows: Vec<Option<&'a ReadingRow>>,
    judgements: Judgements<'a>,
    columns: Vec<Column>,
    /// End of the labels.
    labels: f64,
}

impl<'a> Chart<'a> {
    pub fn new(scene: &'a Scene<'a>, shown: &[usize], probability: Vec<f64>) -> Self {
        let mut is_leading = vec![false; probability.len()];
        for run in scene.leading().iter().flat_map(|c| &c.runs) {
            if let Some(slot) = is_leading.get_mut(*run) {
                *slot = true;
            }
        }
        let (rows, judgements) = (reading(scene), Judgements::of(scene));
        let mut chart = Self { scene, probability, is_leading, rows, judgements, columns: Vec::new(), labels: scene.width };
        chart.place_columns(shown);
        chart
    }

    /// Places the columns that have something to show, from the right. Where the width is scarce those about how a run is built
    /// give way first.
    fn place_columns(&mut self, shown: &[usize]) {
        let canvas = Canvas::new(self.scene.measure);
        let width = |shows: Shows| {
            let widest =
                shown.iter().map(|run| canvas.width_of(&self.entry(shows, *run), Style::PLAIN.loud(Colour::Ink))).fold(0.0, f64::max);
            if widest > 0.0 { widest.max(canvas.width_of(&self.head_of(shows), Style::QUIET)).min(WIDEST) + COLUMN_GAP } else { 0.0 }
        };
        let volts: Vec<Shows> = self.scene.source.visit.system.legs().iter().map(|l| Shows::Volts(*l)).collect();
        let by_worth = [Shows::Probability].into_iter().chain(volts.iter().copied()).chain([Shows::Wire, Shows::Breaker, Shows::Length]);
        let mut left = (1.0 - LEAST_LABELS) * self.scene.width;
        let mut kept: Vec<(Shows, f64)> = Vec::new();
        for (shows, width) in by_worth.map(|s| (s, width(s))).filter(|(_, w)| *w > 0.0) {
            if width <= left {
                left -= width;
                kept.push((shows, width));
            }
        }
        kept.sort_by_key(|(shows, _)| *shows);
        let mut end = self.scene.width;
        for (shows, width) in kept.into_iter().rev() {
            self.columns.push(Column { shows, head: self.head_of(shows), start: end - width + COLUMN_GAP, end });
            end -= width;
        }
        self.labels = end;
    }

    fn head_of(&self, shows: Shows) -> String {
        let say = |key: &'static str| self.scene.say(&Sentence::new(key));
        match shows {
            Shows::Probability => say("figure.probability"),
            Shows::Wire => say("figure.wire"),
            Shows::Length => say("figure.length"),
            Shows::Breaker => say("figure.breaker"),
            Shows::Volts(leg) => Quantity::line_neutral(leg).to_string(),
        }
    }

    /// A column's entry for a run; empty where it is not known.
    fn entry(&self, shows: Shows, run: usize) -> String {
        let Some(r) = self.scene.source.visit.runs.get(run) else { return String::new() };
        let language = self.scene.language;
        let known = match shows {
            Shows::Probability => Some(self.probability[run]).filter(|p| *p >= LEAST).map(|p| percent(language, p)),
            Shows::Wire => r.wire.as_ref().map(|w| w.value.to_string()),
            Shows::Length => r.length.as_ref().map(|l| language.quantity(l.value.0, 1, Unit::Metre)),
            Shows::Breaker => r.breaker.as_ref().map(|b| language.quantity(b.value.0, 0, Unit::Ampere)),
            Shows::Volts(leg) => {
                let volts = self.rows[run].and_then(|row| row.value(Quantity::line_neutral(leg)));
                volts.map(|v| language.quantity(v, 1, Unit::Volt))
            }
        };
        known.unwrap_or_default()
    }

    pub fn draw(&self, canvas: &mut Canvas, twigs: &[Twig], page: &Range<usize>) -> f64 {
        let middles: Vec<f64> = (0..twigs.len()).map(|i| ROW * (i as f64 + 0.5)).collect();
        let (start, finish) = (ROW * page.start as f64, ROW * page.end as f64);
        for column in &self.columns {
            canvas.text((column.end, 9.0), &column.head, Style::QUIET, Anchor::End, column.end - column.start);
        }
        branches::trunks(canvas, twigs, &middles, start..finish, HEAD);
        for i in page.clone() {
            let y = middles[i] - start + HEAD;
            self.shade(canvas, &twigs[i], y);
            self.stroke(canvas, twigs, i, y);
        }
        for i in page.clone() {
            self.row(canvas, &twigs[i], middles[i] - start + HEAD);
        }
        finish - start + HEAD + FOOT
    }

    fn signal(&self) -> Colour {
        Colour::Signal(self.scene.leading_signal())
    }

    /// The rows the readings point at lie on a shaded ground, so that they are found in grey too.
    fn shade(&self, canvas: &mut Canvas, twig: &Twig, y: f64) {
        if self.is_leading[twig.run] {
            let left = twig.x() + 5.0;
            canvas.rect(left, y - ROW / 2.0 + 1.0, (self.scene.width - left, ROW - 2.0), 2.0, Colour::Band);
        }
    }

    /// A suspect's own stroke, over the thin line of the tree: as heavy as it is likely.
    fn stroke(&self, canvas: &mut Canvas, twigs: &[Twig], i: usize, y: f64) {
        let twig = &twigs[i];
        let probability = self.probability[twig.run];
        if probability < LEAST {
            return;
        }
        let x = twig.x();
        let from = twig.parent.and_then(|p| twigs.get(p)).map(Twig::x);
        let path = match from {
            Some(_) if twig.is_apart => vec![(x - branches::STEP, y), (x, y)],
            Some(from) if from < x => vec![(from, y - ROW / 2.0), (from, y), (x, y)],
            Some(_) => vec![(x, y - ROW + 4.0), (x, y)],
            None => vec![(x, y - ROW / 2.0), (x, y)],
        };
        let colour = if self.is_leading[twig.run] { self.signal() } else { Colour::Quiet };
        canvas.rounded(&path, THIN + HEAVY * probability.min(1.0), colour);
    }

    fn row(&self, canvas: &mut Canvas, twig: &Twig, y: f64) {
        let Some(run) = self.scene.source.visit.runs.get(twig.run) else { return };
        let is_leading = self.is_leading[twig.run];
        let colour = if is_leading { self.signal() } else { Colour::Ink };
        node(canvas, (twig.x(), y), run, is_leading.then_some(colour));
        let base = y + RISE;
        let mut end = canvas.run(twig.x() + 8.0, base, &run.name.value, Style { colour, ..Style::NAME }, self.labels);
        let said = self.said(twig, run);
        if !said.is_empty() {
            end = canvas.run(end + 6.0, base, &said, Style::QUIET, self.labels);
        }
        let entries: Vec<(&Column, String)> = self.columns.iter().map(|c| (c, self.entry(c.shows, twig.run))).collect();
        for (column, entry) in entries.iter().rev().filter(|(_, e)| !e.is_empty()) {
            let style = self.style(column.shows, twig.run, colour);
            let width = canvas.text((column.end, base), entry, style, Anchor::End, column.end - column.start);
            // A leader carries the eye from the label to the first entry.
            if end > 0.0 && column.end - width - end > LEAST_LEADER {
                canvas.dashed(&[(end + 5.0, base - 0.5), (column.end - width - 5.0, base - 0.5)], 0.6, Colour::Faint, (0.6, 2.6));
            }
            end = 0.0;
        }
    }

    fn style(&self, shows: Shows, run: usize, colour: Colour) -> Style {
        match shows {
            Shows::Probability if self.is_leading[run] => Style::PLAIN.loud(colour),
            Shows::Probability => Style::PLAIN,
            Shows::Volts(_) if self.rows[run].is_some_and(|r| self.judgements.fault(r).is_some()) => Style::PLAIN.loud(Colour::Ink),
            Shows::Volts(_) => Style::PLAIN,
            _ => Style::QUIET,
        }
    }

    /// Where the run is fed from, if no line shows it, and what it serves.
    fn said(&self, twig: &Twig, run: &Run) -> String {
        let serves = run.serves.as_ref().map(|s| clean(&s.value));
        self.scene.source_of(twig).into_iter().chain(serves).collect::<Vec<_>>().join(" · ")
    }
}

/// A node: a dot; a ring where its run shares a neutral between legs; a square in the signal colour where it is suspected.
fn node(canvas: &mut Canvas, at: (f64, f64), run: &Run, suspected: Option<Colour>) {
    let (x, y) = at;
    match suspected {
        Some(colour) => canvas.rect(x - 3.4, y - 3.4, (6.8, 6.8), 0.0, colour),
        None if run.shares_neutral() => canvas.circle(at, 2.4, Some(Colour::Paper), Some((1.1, Colour::Ink))),
        None => canvas.circle(at, 1.9, Some(Colour::Ink), None),
    }
}
