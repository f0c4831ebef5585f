//! The run tree: the circuit list as a tree, each run's stroke as heavy as it is likely to be the fault.

mod chart;

use super::canvas::{Canvas, pages};
use super::neutral_position::foremost;
use super::words::percent;
use super::{Figure, MOST_HEIGHT, Scene, branches};
use crate::results::CauseKind;
use crate::wording::Sentence;
use chart::{AROUND, Chart, LEAST, ROW};
use std::ops::Range;
use std::sync::Arc;

/// Runs drawn, at most: some six pages. Of more, the likeliest to be at fault are kept, then those with readings, then those
/// nearest the service.
const MOST_RUNS: usize = 200;

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    let visit = scene.source.visit;
    if visit.runs.is_empty() {
        return Vec::new();
    }
    let probability = probabilities(scene);
    let shown = shown(scene, &probability);
    let twigs = branches::twigs(&visit.tree, &shown);
    let heights = vec![ROW; shown.len()];
    let pages = pages(&heights, MOST_HEIGHT - AROUND);
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
fn probabilities(scene: &Scene) -> Vec<f64> {
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
