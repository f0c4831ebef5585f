//! Label and value pairs in two columns, and lines to sign on.

use super::super::shape::{self, Line, Span};
use super::super::strip::{Mark, Paint, Strip};
use super::{BODY, Flow, LEADING, Place, baseline};
use crate::report::document::Inline;
use crate::report::drawing::Colour;

/// Width of the labels.
const LABEL: f32 = 78.0;
/// Between the two columns.
const GUTTER: f32 = 18.0;
/// Values this much wider than a column take a row of their own.
const NARROWEST: f32 = 300.0;
/// Size of what stands on and below a line to sign on.
const SIGN_SIZE: f32 = BODY - 0.5;
/// Height of a line to sign on.
const SIGN: f32 = 30.0;

impl Flow<'_> {
    /// Pairs, two abreast where they fit.
    pub(super) fn facts(&mut self, facts: &[(String, Vec<Inline>)], place: Place) {
        let list = self.structure.add(place.node, "L");
        let half = if place.width < NARROWEST { place.width } else { (place.width - GUTTER) / 2.0 };
        let first = self.strips.len();
        let mut open: Option<Strip> = None;
        for (label, value) in facts {
            let spans = self.spans(value, self.ink());
            let shaped = shape::shape(&spans, BODY);
            let fits = half < place.width && shaped.widths().1 <= half - LABEL;
            let width = if fits { half } else { place.width };
            let lines = shaped.lines(width - LABEL);
            if !fits {
                self.strips.extend(open.take());
            }
            let second = open.is_some();
            let x = place.x + if second { half + GUTTER } else { 0.0 };
            let mut strip = open.take().unwrap_or_default();
            self.pair(&mut strip, label, lines, &spans, (x, width), list);
            if fits && !second { open = Some(strip) } else { self.strips.push(strip) }
        }
        self.strips.extend(open);
        // Few lines that say one thing together stay together.
        let last = self.strips.len().saturating_sub(1);
        for strip in self.strips.get_mut(first..last).into_iter().flatten() {
            strip.keep = true;
        }
    }

    fn pair(&mut self, strip: &mut Strip, label: &str, lines: Vec<Line>, spans: &[Span], (x, width): (f32, f32), list: usize) {
        let item = self.structure.add(list, "LI");
        let label_node = self.structure.add(item, "Lbl");
        let body = self.structure.add(item, "LBody");
        let quiet = [Span::new(label, self.colour(Colour::Quiet))];
        let top = 2.5;
        let labels = shape::shape(&quiet, BODY).lines(LABEL - 6.0);
        let count = lines.len().max(labels.len()).max(1) as f32;
        for (i, line) in labels.into_iter().enumerate() {
            self.set(strip, line, &quiet, (x, top + baseline(BODY) + i as f32 * BODY * LEADING), label_node);
        }
        for (i, line) in lines.into_iter().enumerate() {
            self.set(strip, line, spans, (x + LABEL, top + baseline(BODY) + i as f32 * BODY * LEADING), body);
        }
        strip.height = strip.height.max(2.0 * top + count * BODY * LEADING);
        let y = strip.height;
        let rule =
            Paint::Line { points: vec![(x, y), (x + width, y)], width: 0.4, colour: self.colour(Colour::Faint), dash: None, round: false };
        strip.marks.push(Mark { node: None, paints: vec![rule] });
    }

    /// Lines with their labels below, two abreast; what is known stands on the line.
    pub(super) fn sign_off(&mut self, lines: &[(String, Option<String>)], place: Place) {
        let list = self.structure.add(place.node, "L");
        let half = (place.width - GUTTER) / 2.0;
        let rows = lines.chunks(2).count();
        for (r, pair) in lines.chunks(2).enumerate() {
            let mut strip = Strip { gap: 4.0, keep: r + 1 < rows, ..Strip::default() };
            let quiet: Vec<Span> = pair.iter().map(|(label, _)| Span::new(label, self.colour(Colour::Quiet))).collect();
            let known: Vec<Span> = pair.iter().map(|(_, known)| Span::new(known.as_deref().unwrap_or_default(), self.ink())).collect();
            let broken = |span: &Span| shape::shape(std::slice::from_ref(span), SIGN_SIZE).lines(half);
            let values: Vec<Vec<Line>> = known.iter().map(broken).collect();
            let pitch = SIGN_SIZE * LEADING;
            // The line to sign on stands below the longest of what is known.
            let sign = SIGN.max(values.iter().map(Vec::len).max().unwrap_or(0) as f32 * pitch + 8.0);
            for (i, value) in values.into_iter().enumerate() {
                let x = place.x + i as f32 * (half + GUTTER);
                let item = self.structure.add(list, "LI");
                let (label_node, body) = (self.structure.add(item, "Lbl"), self.structure.add(item, "LBody"));
                let first = sign - 5.0 - (value.len().max(1) - 1) as f32 * pitch;
                for (n, line) in value.into_iter().enumerate() {
                    self.set(&mut strip, line, std::slice::from_ref(&known[i]), (x, first + n as f32 * pitch), body);
                }
                let labels = broken(&quiet[i]);
                strip.height = strip.height.max(sign + labels.len().max(1) as f32 * pitch);
                for (n, line) in labels.into_iter().enumerate() {
                    self.set(
                        &mut strip,
                        line,
                        std::slice::from_ref(&quiet[i]),
                        (x, sign + baseline(BODY) - 1.0 + n as f32 * pitch),
                        label_node,
                    );
                }
                let rule =
                    Paint::Line { points: vec![(x, sign), (x + half, sign)], width: 0.6, colour: self.ink(), dash: None, round: false };
                strip.marks.push(Mark { node: None, paints: vec![rule] });
            }
            self.strips.push(strip);
        }
    }
}
