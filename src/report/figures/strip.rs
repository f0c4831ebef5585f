//! The neutral position strip: a beam from one leg to the other for each set of readings, with a mark where the neutral sits.
//!
//! The beam is the sum of the two voltages, so the piece left of the mark is the first leg's share and the piece right of it the
//! second's. Down a sound tree the marks stand in line; below an open neutral they step aside.

use super::branches::{self, Twig};
use super::canvas::{Canvas, Style, clean, pages};
use super::marks::{Kind, mark};
use super::neutral_position::{Judgements, NAME, alternative, foremost, in_tree_order, same_location, taken, volts};
use super::{Figure, MOST_HEIGHT, Scene};
use crate::quantity::{Unit, math};
use crate::report::drawing::{Anchor, Colour};
use crate::results::{CauseKind, Verdict};
use crate::visit::{Leg, Quantity, ReadingRow};
use crate::wording::Sentence;
use std::ops::Range;
use std::sync::Arc;

/// Beams drawn, at most: some five pages. Of more sets of readings, those farthest off are kept.
const MOST_SETS: usize = 150;
const ROW: f64 = 17.0;
/// Room above a row that begins the suspected part, for what is said of it.
const NOTE: f64 = 13.0;
const HEAD: f64 = 20.0;
const FOOT: f64 = 22.0;
/// From a baseline up to the middle of its letters.
const RISE: f64 = 3.0;
/// From a node to its name, from a name to what is said behind it.
const NODE_GAP: f64 = 7.0;
const NAME_GAP: f64 = 6.0;

/// One set of readings on its beam.
struct Set<'a> {
    row: &'a ReadingRow,
    volts: [f64; 2],
    /// First of its location.
    is_first: bool,
    /// Position among the twigs.
    twig: Option<usize>,
    /// The suspected part of the tree begins here.
    has_note: bool,
    /// Said behind the name.
    said: String,
}

/// Where the neutral sits: the first leg's share of the sum of both.
fn position([first, second]: [f64; 2]) -> f64 {
    first / (first + second)
}

/// Expanded uncertainty of the position. One instrument's gain error raises both readings alike and cancels; the counts are
/// independent (JCGM 100, 5.1.2).
fn position_uncertainty([first, second]: [f64; 2], counts: f64) -> f64 {
    let sum = first + second;
    2.0 * counts * (math::hypot(first, second) / sum) / sum
}

pub(super) fn figures(scene: &Scene, first: Leg, second: Leg) -> Vec<Figure> {
    let legs = [first, second];
    let judgements = Judgements::of(scene);
    let all = in_tree_order(scene, |row| both(row, legs).is_some());
    let weight =
        |r: &&ReadingRow| both(r, legs).map_or(0.0, |v| f64::from(u8::from(judgements.fault(r).is_some())) + (position(v) - 0.5).abs());
    let weights: Vec<f64> = all.iter().map(weight).collect();
    let rows: Vec<&ReadingRow> = foremost(&weights, MOST_SETS).into_iter().map(|i| all[i]).collect();
    if rows.is_empty() {
        return Vec::new();
    }
    let (sets, twigs) = arrange(scene, &rows, legs);
    let strip = Strip::new(scene, &sets, &twigs, legs);
    let heights: Vec<f64> = sets.iter().map(Set::height).collect();
    let pages = pages(&heights, MOST_HEIGHT - HEAD - FOOT);
    let alt = alternative(scene, &judgements, &all, farthest(scene, &rows, legs));
    let mut caption = scene.say(&Sentence::new("figure.position").with("first", first.name()).with("second", second.name()));
    if !judgements.is_empty() {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.position-shaded")));
    }
    if rows.len() < all.len() {
        let left_out = Sentence::new("figure.position-left-out").with("n", rows.len()).with("of", all.len());
        caption = format!("{caption} {}", scene.say(&left_out));
    }
    let draw = |(i, page): (usize, &Range<usize>)| {
        let mut canvas = Canvas::new(scene.measure);
        let height = strip.draw(&mut canvas, &judgements, &sets, &twigs, page);
        let drawing = canvas.finish(scene.width, height, alt.clone());
        Figure { name: NAME, caption: format!("{caption}{}", scene.part(i, pages.len())), drawing: Arc::new(drawing) }
    };
    pages.iter().enumerate().map(draw).collect()
}

/// The two voltages of a row, where both were read and the beam has a length.
fn both(row: &ReadingRow, legs: [Leg; 2]) -> Option<[f64; 2]> {
    let [a, b] = legs.map(|l| volts(row, Quantity::line_neutral(l)));
    let both = [a?, b?];
    position(both).is_finite().then_some(both)
}

/// The set farthest from the middle, in words.
fn farthest(scene: &Scene, rows: &[&ReadingRow], legs: [Leg; 2]) -> Option<Sentence> {
    let off = |v: &[f64; 2]| (position(*v) - 0.5).abs();
    let known = rows.iter().filter_map(|r| Some((*r, both(r, legs)?)));
    let (row, volts) = known.reduce(|a, b| if off(&b.1) > off(&a.1) { b } else { a })?;
    Some(
        Sentence::new("figure.position-farthest")
            .with("at", clean(&row.location.value))
            .with("taken", taken(row))
            .with("first", legs[0].name())
            .with("second", legs[1].name())
            .with("a", scene.language.quantity(volts[0], 1, Unit::Volt))
            .with("b", scene.language.quantity(volts[1], 1, Unit::Volt))
            .number("percent", 100.0 * position(volts), 1, Unit::Percent),
    )
}

fn arrange<'a>(scene: &Scene<'a>, rows: &[&'a ReadingRow], legs: [Leg; 2]) -> (Vec<Set<'a>>, Vec<Twig>) {
    let mut runs: Vec<usize> = rows.iter().filter_map(|r| r.run).collect();
    runs.dedup();
    let twigs = branches::twigs(&scene.source.visit.tree, &runs);
    let suspects = scene.leading().filter(|c| c.kind == CauseKind::Neutral).map_or(&[][..], |c| &c.runs);
    let noted = runs.iter().find(|r| suspects.contains(r));
    let alike = |a: Option<&&ReadingRow>, b: &ReadingRow| a.is_some_and(|a| same_location(a, b));
    let mut twig = None;
    let mut sets = Vec::with_capacity(rows.len());
    for (i, row) in rows.iter().enumerate() {
        let is_first = !alike(i.checked_sub(1).and_then(|p| rows.get(p)), row);
        if is_first && row.run.is_some() {
            twig = Some(twig.map_or(0, |t: usize| t + 1));
        }
        let Some(volts) = both(row, legs) else { continue };
        let is_only = is_first && !alike(rows.get(i + 1), row);
        sets.push(Set {
            row,
            volts,
            is_first,
            twig: row.run.and(twig),
            has_note: is_first && row.run.is_some() && row.run.as_ref() == noted,
            said: said(scene, row, twig.filter(|_| is_first && row.run.is_some()).and_then(|t| twigs.get(t)), is_only),
        });
    }
    (sets, twigs)
}

/// What stands behind the name: where the run is fed from, if no line shows it, and what it serves, once; when the readings were
/// taken, where that is not plain.
fn said(scene: &Scene, row: &ReadingRow, twig: Option<&Twig>, is_only: bool) -> String {
    let source = twig.and_then(|t| scene.source_of(t));
    let run = twig.and_then(|t| scene.source.visit.runs.get(t.run));
    let serves = run.and_then(|r| r.serves.as_ref()).map(|s| clean(&s.value));
    let is_plain = is_only && Kind::of(row) == Kind::default();
    let parts: Vec<String> = source.into_iter().chain(serves).chain((!is_plain).then(|| taken(row))).collect();
    parts.join(" · ")
}

impl Set<'_> {
    fn height(&self) -> f64 {
        ROW + if self.has_note { NOTE } else { 0.0 }
    }
}

/// Where the columns stand.
struct Strip<'a> {
    scene: &'a Scene<'a>,
    legs: [Leg; 2],
    /// End of the labels.
    labels: f64,
    /// Ends of the beam.
    beam: [f64; 2],
}

impl<'a> Strip<'a> {
    fn new(scene: &'a Scene<'a>, sets: &[Set], twigs: &[Twig], legs: [Leg; 2]) -> Self {
        let canvas = Canvas::new(scene.measure);
        let loud = Style::VALUE.loud(Colour::Ink);
        let width = |v: f64| canvas.width_of(&scene.language.quantity(v, 1, Unit::Volt), loud);
        let widest = |leg: usize| sets.iter().map(|s| width(s.volts[leg])).fold(24.0, f64::max).min(54.0);
        let label = |s: &Set| {
            let twig = s.twig.and_then(|t| twigs.get(t)).map_or(0.0, Twig::x);
            let name = if s.is_first { canvas.width_of(&s.row.location.value, Style::NAME) + NAME_GAP } else { 0.0 };
            twig + NODE_GAP + name + canvas.width_of(&s.said, Style::QUIET)
        };
        let labels = sets.iter().map(label).fold(0.2 * scene.width, f64::max).min(0.42 * scene.width);
        let beam = [labels + 8.0 + widest(0) + 7.0, scene.width - widest(1) - 7.0];
        Self { scene, legs, labels, beam }
    }

    fn x(&self, share: f64) -> f64 {
        self.beam[0] + share.clamp(0.0, 1.0) * (self.beam[1] - self.beam[0])
    }

    /// Draws one page; returns its height.
    fn draw(&self, canvas: &mut Canvas, judgements: &Judgements, sets: &[Set], twigs: &[Twig], page: &Range<usize>) -> f64 {
        // Middle of each row on one long sheet.
        let mut end = 0.0;
        let middles: Vec<f64> = sets
            .iter()
            .map(|s| {
                end += s.height();
                end - ROW / 2.0
            })
            .collect();
        let start = middles[page.start] - sets[page.start].height() + ROW / 2.0;
        let finish = middles[page.end - 1] + ROW / 2.0;
        let y = |i: usize| middles[i] - start + HEAD;
        self.band(canvas, judgements, &sets[page.clone()]);
        self.head(canvas, finish - start + HEAD);
        let nodes: Vec<f64> = sets.iter().zip(&middles).filter(|(s, _)| s.is_first && s.twig.is_some()).map(|(_, y)| *y).collect();
        branches::trunks(canvas, twigs, &nodes, start..finish, HEAD);
        for i in page.clone() {
            let set = &sets[i];
            let twig = set.twig.and_then(|t| twigs.get(t));
            if set.has_note {
                self.note(canvas, y(i) - ROW / 2.0 - NOTE / 2.0, twig.map_or(0.0, Twig::x));
            }
            self.label(canvas, set, twig, y(i), i == page.start);
            self.beam(canvas, judgements, set, y(i));
        }
        let bottom = finish - start + HEAD;
        self.legend(canvas, &sets[page.clone()], bottom + 15.0);
        bottom + FOOT
    }

    fn head(&self, canvas: &mut Canvas, bottom: f64) {
        let [left, right] = self.beam;
        let quantity = |leg: usize| Quantity::line_neutral(self.legs[leg]).to_string();
        canvas.text((left - 7.0, 9.0), &quantity(0), Style::QUIET, Anchor::End, 60.0);
        canvas.text((right + 7.0, 9.0), &quantity(1), Style::QUIET, Anchor::Start, self.scene.width - right - 7.0);
        let middle = self.scene.say(&Sentence::new("figure.middle"));
        canvas.text((self.x(0.5), 9.0), &middle, Style::QUIET, Anchor::Middle, right - left);
        canvas.line(&[(self.x(0.5), 13.0), (self.x(0.5), bottom)], 0.5, Colour::Faint);
    }

    /// What is allowed, as one shape over the rows that follow each other.
    fn band(&self, canvas: &mut Canvas, judgements: &Judgements, sets: &[Set]) {
        let half = |s: &Set| judgements.allowed(self.scene, s.row).map(|volts| volts / (s.volts[0] + s.volts[1]));
        let mut top = HEAD;
        for group in sets.chunk_by(|a, b| half(a).is_some() == half(b).is_some()) {
            let (mut left, mut right) = (Vec::new(), Vec::new());
            for set in group {
                let bottom = top + set.height();
                if let Some(half) = half(set) {
                    left.extend([(self.x(0.5 - half), top), (self.x(0.5 - half), bottom)]);
                    right.extend([(self.x(0.5 + half), top), (self.x(0.5 + half), bottom)]);
                }
                top = bottom;
            }
            if !left.is_empty() {
                left.extend(right.into_iter().rev());
                canvas.polygon(&left, Some(Colour::Band), None);
            }
        }
    }

    fn note(&self, canvas: &mut Canvas, y: f64, from: f64) {
        let Some(sentence) = self.scene.leading().and_then(|c| self.scene.suspicion(c)) else { return };
        let colour = Colour::Signal(self.scene.leading_signal());
        let style = Style::PLAIN.loud(colour);
        let width = canvas.text((self.scene.width, y + RISE), &self.scene.say(&sentence), style, Anchor::End, 0.75 * self.scene.width);
        canvas.dashed(&[(from, y), (self.scene.width - width - 6.0, y)], 0.9, colour, (3.0, 2.0));
    }

    fn label(&self, canvas: &mut Canvas, set: &Set, twig: Option<&Twig>, y: f64, is_top: bool) {
        let x = twig.map_or(4.0, Twig::x);
        let mut at = x + NODE_GAP;
        if set.is_first {
            canvas.circle((x, y), 1.9, Some(Colour::Ink), None);
        }
        if set.is_first || is_top {
            at = canvas.run(at, y + RISE, &set.row.location.value, Style::NAME, self.labels) + NAME_GAP;
        }
        canvas.run(at, y + RISE, &set.said, Style::QUIET, self.labels);
    }

    fn beam(&self, canvas: &mut Canvas, judgements: &Judgements, set: &Set, y: f64) {
        let [left, right] = self.beam;
        let fault = judgements.fault(set.row);
        let colour = fault.map_or(Colour::Ink, |f| Colour::Signal(f.signal));
        let at = self.x(position(set.volts));
        canvas.rounded(&[(left, y), (right, y)], 1.4, Colour::Faint);
        match fault.map(|f| f.verdict) {
            Some(Verdict::Fail) => canvas.line(&[(self.x(0.5), y), (at, y)], 2.2, colour),
            Some(_) => canvas.dashed(&[(self.x(0.5), y), (at, y)], 2.2, colour, (2.0, 1.5)),
            None => {}
        }
        let counts = self.scene.source.visit.accuracy_of(set.row, Quantity::line_neutral(self.legs[0])).counts();
        // The neutral cannot be off the beam, however unsure its place is.
        let (share, unsure) = (position(set.volts), position_uncertainty(set.volts, counts));
        mark(canvas, (at, y), (self.x(share - unsure), self.x(share + unsure)), Kind::of(set.row), colour);
        let style = if fault.is_some() { Style::VALUE.loud(colour) } else { Style::VALUE };
        let say = |v: f64| self.scene.language.quantity(v, 1, Unit::Volt);
        canvas.text((left - 7.0, y + RISE), &say(set.volts[0]), style, Anchor::End, left - 15.0 - self.labels);
        canvas.text((right + 7.0, y + RISE), &say(set.volts[1]), style, Anchor::Start, self.scene.width - right - 7.0);
    }

    fn legend(&self, canvas: &mut Canvas, sets: &[Set], y: f64) {
        let mut kinds: Vec<Kind> = sets.iter().map(|s| Kind::of(s.row)).collect();
        kinds.sort_unstable();
        kinds.dedup();
        let mut x = 6.0;
        for kind in kinds {
            mark(canvas, (x, y - RISE + 0.5), (x, x), kind, Colour::Ink);
            x = canvas.run(x + 7.0, y, &self.scene.say(&Sentence::new(kind.key())), Style::QUIET, self.scene.width) + 16.0;
        }
    }
}
