//! The run tree: the circuit list as a tree, each run's stroke as heavy as it is likely to be the fault.

use super::branches::{self, Twig};
use super::canvas::{Canvas, Style, pages};
use super::neutral_position::foremost;
use super::words::percent;
use super::{Figure, MOST_HEIGHT, Scene};
use crate::quantity::Unit;
use crate::report::drawing::{Anchor, Colour};
use crate::results::CauseKind;
use crate::visit::{Quantity, ReadingRow, Run, Stage};
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
    if let Some(cause) = scene.leading().and_then(|c| scene.cause(c)) {
        caption = format!("{caption} {}", scene.say(&cause));
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
        for row in visit.rows.iter().filter(|r| r.stage == stage && !volts(scene, r).is_empty()) {
            if let Some(slot) = row.run.and_then(|r| rows.get_mut(r)) {
                slot.get_or_insert(row);
            }
        }
    }
    rows
}

/// The line-to-neutral readings of a row, one a leg, in words.
fn volts(scene: &Scene, row: &ReadingRow) -> String {
    let legs = scene.source.visit.system.legs();
    let known = |v: Option<f64>| v.map_or_else(|| "–".to_owned(), |v| scene.language.number(v, 1));
    let values: Vec<Option<f64>> = legs.iter().map(|l| row.value(Quantity::line_neutral(*l))).collect();
    if values.iter().all(Option::is_none) {
        return String::new();
    }
    values.into_iter().map(known).collect::<Vec<_>>().join(" · ")
}

/// Wire, length and breaker in words, as far as they are known.
fn build(scene: &Scene, run: &Run) -> String {
    let mut parts = Vec::new();
    parts.extend(run.wire.as_ref().map(|w| w.value.to_string()));
    parts.extend(run.length.as_ref().map(|l| scene.language.quantity(l.value.0, 1, Unit::Metre)));
    parts.extend(run.breaker.as_ref().map(|b| scene.language.quantity(b.value.0, 0, Unit::Ampere)));
    parts.join(" · ")
}

fn alternative(scene: &Scene, chart: &Chart, shown: &[usize]) -> String {
    let mut parts = vec![scene.say(&Sentence::new("figure.tree-alt").with("n", scene.source.visit.runs.len()))];
    match scene.leading().and_then(|c| scene.cause(c)) {
        Some(cause) => parts.push(scene.say(&cause)),
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

/// Columns: labels, build, readings.
struct Chart<'a> {
    scene: &'a Scene<'a>,
    probability: Vec<f64>,
    is_leading: Vec<bool>,
    rows: Vec<Option<&'a ReadingRow>>,
    /// End of the labels, of what the run is built of, and of its share.
    labels: f64,
    build: f64,
    share: f64,
}

impl<'a> Chart<'a> {
    fn new(scene: &'a Scene<'a>, shown: &[usize], probability: Vec<f64>) -> Self {
        let visit = scene.source.visit;
        let canvas = Canvas::new(scene.measure);
        let rows = reading(scene);
        let widest = |texts: &mut dyn Iterator<Item = String>, style: Style, most: f64| {
            texts.map(|t| canvas.width_of(&t, style)).fold(0.0, f64::max).min(most * scene.width)
        };
        let readings = widest(&mut shown.iter().filter_map(|r| rows[*r]).map(|r| volts(scene, r)), Style::PLAIN, 0.2);
        let builds = widest(&mut shown.iter().filter_map(|r| visit.runs.get(*r)).map(|r| build(scene, r)), Style::QUIET, 0.24);
        let shares = if scene.source.diagnosis.is_some() { 34.0 } else { 0.0 };
        let heading = if readings > 0.0 { canvas.width_of(&heading(scene), Style::QUIET) } else { 0.0 };
        let build = scene.width - readings.max(heading) - 14.0;
        let share = build - builds - 14.0;
        let mut is_leading = vec![false; visit.runs.len()];
        for run in scene.leading().iter().flat_map(|c| &c.runs) {
            if let Some(slot) = is_leading.get_mut(*run) {
                *slot = true;
            }
        }
        Self { scene, probability, is_leading, rows, labels: share - shares - 8.0, build, share }
    }

    fn draw(&self, canvas: &mut Canvas, twigs: &[Twig], page: &Range<usize>) -> f64 {
        let middles: Vec<f64> = (0..twigs.len()).map(|i| ROW * (i as f64 + 0.5)).collect();
        let (start, finish) = (ROW * page.start as f64, ROW * page.end as f64);
        self.head(canvas);
        branches::trunks(canvas, twigs, &middles, start..finish, HEAD);
        for i in page.clone() {
            let y = middles[i] - start + HEAD;
            self.stroke(canvas, twigs, i, y);
        }
        for i in page.clone() {
            self.row(canvas, twigs, i, middles[i] - start + HEAD);
        }
        finish - start + HEAD + FOOT
    }

    fn head(&self, canvas: &mut Canvas) {
        let say = |key: &'static str| self.scene.say(&Sentence::new(key));
        if self.rows.iter().any(Option::is_some) {
            canvas.text((self.scene.width, 9.0), &heading(self.scene), Style::QUIET, Anchor::End, self.scene.width - self.build);
        }
        canvas.text((self.build, 9.0), &say("figure.build"), Style::QUIET, Anchor::End, self.build - self.share - 4.0);
        if self.scene.source.diagnosis.is_some() {
            canvas.text((self.share, 9.0), &say("figure.share"), Style::QUIET, Anchor::End, self.share - self.labels + 40.0);
        }
    }

    /// The run's own stroke, over the thin line of the tree: as heavy as it is likely, the neutral beside it where two legs share it.
    fn stroke(&self, canvas: &mut Canvas, twigs: &[Twig], i: usize, y: f64) {
        let twig = &twigs[i];
        let from = twig.parent.filter(|_| !twig.is_apart).and_then(|p| twigs.get(p)).map(Twig::x);
        let x = twig.x();
        let top = (y - ROW + 2.0).max(HEAD - 6.0);
        let path = match from {
            Some(from) if from < x => vec![(from, y - ROW / 2.0), (from, y), (x, y)],
            _ => vec![(x, top.max(y - ROW + 4.0)), (x, y)],
        };
        let probability = self.probability[twig.run];
        if probability < LEAST {
            return;
        }
        let colour = if self.is_leading[twig.run] { Colour::Signal(self.scene.leading_signal()) } else { Colour::Quiet };
        canvas.rounded(&path, THIN + HEAVY * probability.min(1.0), colour);
    }

    fn row(&self, canvas: &mut Canvas, twigs: &[Twig], i: usize, y: f64) {
        let twig = &twigs[i];
        let Some(run) = self.scene.source.visit.runs.get(twig.run) else { return };
        let is_leading = self.is_leading[twig.run];
        let colour = if is_leading { Colour::Signal(self.scene.leading_signal()) } else { Colour::Ink };
        node(canvas, (twig.x(), y), run, is_leading.then_some(colour));
        let name = Style { colour, ..Style::NAME };
        let base = y + RISE;
        let end = canvas.run(twig.x() + 8.0, base, &run.name.value, name, self.labels);
        let serves = match (&run.serves, &run.fed_from) {
            (_, Some(source)) if twig.is_apart || twig.parent.is_none() => {
                self.scene.say(&Sentence::new("figure.from").with("run", super::canvas::clean(&source.value)))
            }
            (Some(serves), _) => serves.value.clone(),
            _ => String::new(),
        };
        canvas.run(end + 6.0, base, &serves, Style::QUIET, self.labels);
        let probability = self.probability[twig.run];
        if probability >= LEAST {
            let style = if is_leading { Style::PLAIN.loud(colour) } else { Style::PLAIN };
            canvas.text((self.share, base), &percent(self.scene.language, probability), style, Anchor::End, self.share - self.labels);
        }
        canvas.text((self.build, base), &build(self.scene, run), Style::QUIET, Anchor::End, self.build - self.share - 8.0);
        if let Some(row) = self.rows[twig.run] {
            let style = if is_leading { Style::PLAIN.loud(Colour::Ink) } else { Style::PLAIN };
            let room = self.scene.width - self.build - 6.0;
            canvas.text((self.scene.width, base), &volts(self.scene, row), style, Anchor::End, room);
        }
    }
}

/// `L1-N · L2-N, V`.
fn heading(scene: &Scene) -> String {
    let legs = scene.source.visit.system.legs().iter();
    let names: Vec<String> = legs.map(|l| Quantity::line_neutral(*l).to_string()).collect();
    format!("{}, {}", names.join(" · "), Unit::Volt)
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
