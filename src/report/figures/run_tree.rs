//! The run tree: the circuit list as a tree, each run's stroke as heavy as it is likely to be the fault.

use super::branches::{self, Twig};
use super::canvas::{Canvas, Style, clean, pages};
use super::neutral_position::{Judgements, foremost};
use super::words::percent;
use super::{Figure, MOST_HEIGHT, Scene};
use crate::quantity::Unit;
use crate::report::drawing::{Anchor, Colour};
use crate::results::CauseKind;
use crate::visit::{Leg, Quantity, ReadingRow, Run, Stage};
use crate::wording::Sentence;
use std::ops::Range;
use std::sync::Arc;

/// Runs drawn, at most: some six pages. Of more, the likeliest to be at fault are kept, then those with readings, then those
/// nearest the service.
const MOST_RUNS: usize = 200;
const ROW: f64 = 17.0;
const HEAD: f64 = 18.0;
const FOOT: f64 = 6.0;
const RISE: f64 = 3.0;
/// Stroke of a run that is no suspect, and what certainty adds to it.
const THIN: f64 = 0.8;
const HEAVY: f64 = 5.0;
/// Probabilities below this are not written.
const LEAST: f64 = 0.01;
const COLUMN_GAP: f64 = 13.0;
/// Widest column.
const WIDEST: f64 = 64.0;
const LEAST_LEADER: f64 = 24.0;
/// Of the width, what the tree and its labels have at least.
const LEAST_LABELS: f64 = 0.3;

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    let visit = scene.source.visit;
    if visit.runs.is_empty() {
        return Vec::new();
    }
    let probability = probabilities(scene);
    let shown = shown(scene, &probability);
    let twigs = branches::twigs(&visit.tree, &shown);
    let heights = vec![ROW; shown.len()];
    let pages = pages(&heights, MOST_HEIGHT - HEAD - FOOT);
    let chart = Chart::new(scene, &shown, probability);
    let alt = alternative(scene, &chart, &shown);
    let mut caption = scene.say(&Sentence::new(if scene.source.diagnosis.is_some() { "figure.tree" } else { "figure.tree-plain" }));
    if let Some(points) = scene.pointed_at() {
        caption = format!("{caption} {points}");
    }
    if scene.source.diagnosis.is_some_and(|d| d.ranking.iter().any(|c| c.runs.len() > 1)) {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.tree-shared")));
    }
    if shown.len() < visit.runs.len() {
        let left_out = Sentence::new("figure.tree-left-out").with("n", shown.len()).with("of", visit.runs.len());
        caption = format!("{caption} {}", scene.say(&left_out));
    }
    let draw = |(i, page): (usize, &Range<usize>)| {
        let mut canvas = Canvas::new(scene.measure);
        let height = chart.draw(&mut canvas, &twigs, page);
        let drawing = canvas.finish(scene.width, height, alt.clone());
        Figure { name: "run-tree", caption: format!("{caption}{}", scene.part(i, pages.len())), drawing: Arc::new(drawing) }
    };
    pages.iter().enumerate().map(draw).collect()
}

/// Each run's share of the probabilities of the causes it belongs to.
pub(super) fn probabilities(scene: &Scene) -> Vec<f64> {
    let mut shares = vec![0.0; scene.source.visit.runs.len()];
    for cause in scene.source.diagnosis.iter().flat_map(|d| &d.ranking) {
        if matches!(cause.kind, CauseKind::Neutral | CauseKind::Hot(_)) {
            for &run in &cause.runs {
                if let Some(share) = shares.get_mut(run) {
                    *share += cause.probability / cause.runs.len() as f64;
                }
            }
        }
    }
    shares
}

/// The runs to draw: in the order of the tree, those that hang loose behind.
fn shown(scene: &Scene, probability: &[f64]) -> Vec<usize> {
    let tree = &scene.source.visit.tree;
    let n = probability.len();
    let mut is_in_order = vec![false; n];
    let mut depth = vec![0usize; n];
    for &run in &tree.order {
        is_in_order[run] = true;
        depth[run] = tree.parent[run].map_or(0, |p| depth[p] + 1);
    }
    let mut all = tree.order.clone();
    all.extend((0..n).filter(|r| !is_in_order[*r]));
    let mut is_read = vec![false; n];
    for run in scene.source.visit.rows.iter().filter_map(|r| r.run) {
        if let Some(read) = is_read.get_mut(run) {
            *read = true;
        }
    }
    let leading = scene.leading().map_or(&[][..], |c| &c.runs);
    let mut is_leading = vec![false; n];
    for run in leading {
        if let Some(slot) = is_leading.get_mut(*run) {
            *slot = true;
        }
    }
    let flag = |b: bool| f64::from(u8::from(b));
    let weight = |r: &usize| 8.0 * flag(is_leading[*r]) + 4.0 * probability[*r] + flag(is_read[*r]) + 1.0 / (1.0 + depth[*r] as f64);
    let weights: Vec<f64> = all.iter().map(weight).collect();
    foremost(&weights, MOST_RUNS).into_iter().map(|i| all[i]).collect()
}

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

fn alternative(scene: &Scene, chart: &Chart, shown: &[usize]) -> String {
    let mut parts = vec![scene.say(&Sentence::new("figure.tree-alt").with("n", scene.source.visit.runs.len()))];
    match scene.pointed_at() {
        Some(points) => parts.push(points),
        None if scene.source.diagnosis.is_some() => parts.push(scene.say(&Sentence::new("figure.tree-alt-none"))),
        None => {}
    }
    let mut others: Vec<usize> = shown.iter().copied().filter(|r| chart.probability[*r] >= LEAST && !chart.is_leading[*r]).collect();
    others.sort_by(|a, b| chart.probability[*b].total_cmp(&chart.probability[*a]));
    for run in others.into_iter().take(3) {
        let other = Sentence::new("figure.tree-alt-run")
            .with("run", scene.name(run))
            .with("percent", percent(scene.language, chart.probability[run]));
        parts.push(scene.say(&other));
    }
    parts.join(" ")
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
struct Chart<'a> {
    scene: &'a Scene<'a>,
    probability: Vec<f64>,
    is_leading: Vec<bool>,
    rows: Vec<Option<&'a ReadingRow>>,
    judgements: Judgements<'a>,
    columns: Vec<Column>,
    /// End of the labels.
    labels: f64,
}

impl<'a> Chart<'a> {
    fn new(scene: &'a Scene<'a>, shown: &[usize], probability: Vec<f64>) -> Self {
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

    fn draw(&self, canvas: &mut Canvas, twigs: &[Twig], page: &Range<usize>) -> f64 {
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
