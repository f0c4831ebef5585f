//! Callouts, and the marks of signal words: a cut octagon, a triangle, a diamond with a dot, a ring. The shapes differ, so that
//! they can be told apart in black and white.

use super::super::shape::Span;
use super::super::strip::{Mark, Paint, Rgb, circle, rectangle};
use super::{BODY, Flow, Place};
use crate::report::document::{Block, Inline};
use crate::report::drawing::Colour;
use crate::results::Signal;

/// Between the bar at the left and the text.
const INSET: f32 = 11.0;
/// Width of the bar.
const BAR: f32 = 3.0;
/// Above and below the text.
const PADDING: f32 = 7.0;
/// Room above a callout.
const ABOVE: f32 = 9.0;

impl Flow<'_> {
    /// A bar at the left and a faint ground, over as many pages as it takes.
    pub(super) fn callout(&mut self, signal: Option<Signal>, title: &[Inline], blocks: &[Block], place: Place) {
        let node = self.structure.add(place.node, "Note");
        let colour = self.colour(signal.map_or(Colour::Quiet, Colour::Signal));
        let inner = Place { x: place.x + INSET, width: (place.width - INSET * 1.8).max(20.0), node, depth: place.depth + 1 };
        let first = self.strips.len();
        self.callout_title(signal, title, inner);
        self.blocks(blocks, inner);
        let last = self.strips.len();
        for (i, strip) in self.strips[first..last].iter_mut().enumerate() {
            let (top, bottom) = (if i == 0 { PADDING } else { strip.gap }, if first + i + 1 == last { PADDING } else { 0.0 });
            strip.gap = if i == 0 { ABOVE } else { 0.0 };
            strip.height += top + bottom;
            strip.shift(0.0, top);
            let ground = tint(colour);
            let fill = |outline, colour| Paint::Shape { outline, fill: Some(colour), stroke: None };
            let paints = vec![
                fill(rectangle(place.x, 0.0, place.width, strip.height, 0.0), ground),
                fill(rectangle(place.x, 0.0, BAR, strip.height, 0.0), colour),
            ];
            strip.marks.insert(0, Mark { node: None, paints });
        }
    }

    fn callout_title(&mut self, signal: Option<Signal>, title: &[Inline], place: Place) {
        if signal.is_none() && title.is_empty() {
            return;
        }
        let node = self.structure.add(place.node, "P");
        let mut spans: Vec<Span> = signal.map(|s| self.signal(s).to_vec()).unwrap_or_default();
        if !spans.is_empty() && !title.is_empty() {
            spans.push(Span::bold("\u{2002}", self.ink()));
        }
        let mut words = self.spans(title, self.ink());
        words.iter_mut().for_each(|s| s.bold = true);
        spans.extend(words);
        let first = self.strips.len();
        self.text(&spans, BODY, Place { node, ..place }, 0.0);
        for strip in &mut self.strips[first..] {
            strip.keep = true;
        }
    }
}

/// A colour thinned to a twelfth on white.
fn tint(colour: Rgb) -> Rgb {
    colour.map(|c| 255 - (255 - c) / 13)
}

/// The mark of a signal word in a square with its top left corner at a point.
pub(super) fn mark(signal: Signal, x: f32, y: f32, size: f32, colour: Rgb) -> Vec<Paint> {
    let at = |points: &[(f32, f32)]| points.iter().map(|(px, py)| (x + px * size, y + py * size, false)).collect();
    let solid = |outline| Paint::Shape { outline, fill: Some(colour), stroke: None };
    let hollow = |outline| Paint::Shape { outline, fill: None, stroke: Some((size * 0.12, colour)) };
    match signal {
        Signal::Danger => {
            let octagon = [(0.3, 0.0), (0.7, 0.0), (1.0, 0.3), (1.0, 0.7), (0.7, 1.0), (0.3, 1.0), (0.0, 0.7), (0.0, 0.3)];
            let cut = vec![(x + 0.3 * size, y + 0.75 * size), (x + 0.7 * size, y + 0.25 * size)];
            vec![solid(at(&octagon)), Paint::Line { points: cut, width: size * 0.14, colour: [255; 3], dash: None, round: false }]
        }
        Signal::Warning => vec![solid(at(&[(0.5, 0.05), (1.0, 0.95), (0.0, 0.95)]))],
        Signal::Caution => {
            let diamond = [(0.5, 0.03), (0.97, 0.5), (0.5, 0.97), (0.03, 0.5)];
            vec![hollow(at(&diamond)), solid(circle(x + 0.5 * size, y + 0.5 * size, 0.13 * size))]
        }
        Signal::Notice => vec![hollow(circle(x + 0.5 * size, y + 0.5 * size, 0.4 * size))],
    }
}
