//! Figures: a drawing's shapes as paints, labels as text.

use super::super::shape::{self, Span};
use super::super::strip::{Mark, Paint, Strip, circle, rectangle};
use super::super::structure::Attribute;
use super::{Flow, Place};
use crate::report::document::Inline;
use crate::report::drawing::{Anchor, Colour, Drawing, Shape};
use std::sync::Arc;

/// Tallest figure in points; a taller one is scaled down.
const TALLEST: f32 = 600.0;
/// Farthest a shape may reach, in points: what is beyond is no drawing.
const FARTHEST: f64 = 1e5;
/// Size of captions.
const CAPTION: f32 = 8.5;

impl Flow<'_> {
    /// A drawing with its caption below.
    pub(super) fn figure(&mut self, caption: &[Inline], drawing: &Drawing, place: Place) {
        let (width, height) = (drawing.width as f32, drawing.height as f32);
        if !(width > 0.0 && height > 0.0 && width.is_finite() && height.is_finite()) {
            return;
        }
        let scale = (place.width / width).min(TALLEST / height).min(1.0);
        let node = self.structure.add(place.node, "Figure");
        self.structure.nodes[node].alt = Some(drawing.alt.clone());
        self.structure.nodes[node].attribute = Attribute::Box((place.x, 0.0, width * scale, height * scale));
        let paints = drawing.shapes.iter().filter(|s| is_finite(s)).flat_map(|s| self.paints(s, scale, place.x)).collect();
        let marks = vec![Mark { node: Some(node), paints }];
        self.strips.push(Strip {
            height: height * scale,
            gap: 8.0,
            keep: !caption.is_empty(),
            marks,
            figures: vec![node],
            ..Strip::default()
        });
        self.caption(caption, Place { node, ..place });
    }

    /// A caption in quiet type.
    pub(super) fn caption(&mut self, caption: &[Inline], place: Place) {
        if caption.is_empty() {
            return;
        }
        let node = self.structure.add(place.node, "Caption");
        let spans = self.spans(caption, self.colour(Colour::Quiet));
        self.text(&spans, CAPTION, Place { node, ..place }, 2.0);
    }

    fn paints(&self, shape: &Shape, k: f32, left: f32) -> Vec<Paint> {
        let at = |(x, y): (f64, f64)| (left + x as f32 * k, y as f32 * k);
        let rgb = |c: &Colour| self.colour(*c);
        let stroke = |s: &Option<(f64, Colour)>| s.map(|(w, c)| (w as f32 * k, self.colour(c)));
        match shape {
            Shape::Line { points, width, colour, dash, round } => vec![Paint::Line {
                points: points.iter().map(|p| at(*p)).collect(),
                width: *width as f32 * k,
                colour: rgb(colour),
                dash: dash.map(|(d, g)| (d as f32 * k, g as f32 * k)),
                round: *round,
            }],
            Shape::Rect { x, y, width, height, radius, fill } => {
                let (x, y) = at((*x, *y));
                let outline = rectangle(x, y, *width as f32 * k, *height as f32 * k, *radius as f32 * k);
                vec![Paint::Shape { outline, fill: Some(rgb(fill)), stroke: None }]
            }
            Shape::Polygon { points, fill, stroke: line } => {
                let outline = points.iter().map(|p| at(*p)).map(|(x, y)| (x, y, false)).collect();
                vec![Paint::Shape { outline, fill: fill.as_ref().map(rgb), stroke: stroke(line) }]
            }
            Shape::Circle { centre, radius, fill, stroke: line } => {
                let (x, y) = at(*centre);
                vec![Paint::Shape { outline: circle(x, y, *radius as f32 * k), fill: fill.as_ref().map(rgb), stroke: stroke(line) }]
            }
            Shape::Text { at: point, text, size, bold, anchor, colour } => {
                let span = Span { bold: *bold, ..Span::new(text, rgb(colour)) };
                let lines = shape::shape(std::slice::from_ref(&span), *size as f32 * k).lines(f32::MAX);
                let Some(line) = lines.into_iter().next() else { return Vec::new() };
                let (x, y) = at(*point);
                let x = match anchor {
                    Anchor::Start => x,
                    Anchor::Middle => x - line.width / 2.0,
                    Anchor::End => x - line.width,
                };
                line.runs.into_iter().map(|run| Paint::Text { x: x + run.x, y, run: Arc::new(run), colour: span.colour }).collect()
            }
        }
    }
}

/// All its numbers are near; a shape that is nowhere is left out.
fn is_finite(shape: &Shape) -> bool {
    let near = |v: f64| v.abs() < FARTHEST;
    let all = |points: &[(f64, f64)]| points.iter().all(|(x, y)| near(*x) && near(*y));
    let thin = |stroke: &Option<(f64, Colour)>| stroke.is_none_or(|(w, _)| near(w));
    match shape {
        Shape::Line { points, width, dash, .. } => all(points) && near(*width) && dash.is_none_or(|(d, g)| near(d) && near(g)),
        Shape::Rect { x, y, width, height, radius, .. } => [x, y, width, height, radius].into_iter().all(|v| near(*v)),
        Shape::Polygon { points, stroke, .. } => all(points) && thin(stroke),
        Shape::Circle { centre, radius, stroke, .. } => all(&[*centre]) && near(*radius) && thin(stroke),
        Shape::Text { at, size, .. } => all(&[*at]) && near(*size),
    }
}
