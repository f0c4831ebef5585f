//! Shapes in the making: text that keeps to its room, lines, boxes; and the cutting of tall figures into pages.

use crate::diag::steers;
use crate::report::drawing::{Anchor, Colour, Drawing, Measure, Shape};
use std::ops::Range;

/// The smallest text of a figure, in points.
pub(super) const SMALL: f64 = 7.5;
/// Names.
pub(super) const NAME: f64 = 8.5;
/// Characters of a label that are looked at, at most; a name may be of any length.
const MOST_CHARACTERS: usize = 300;

/// How a text looks.
#[derive(Clone, Copy)]
pub(super) struct Style {
    pub size: f64,
    pub bold: bool,
    pub colour: Colour,
}

impl Style {
    pub const QUIET: Self = Self { size: SMALL, bold: false, colour: Colour::Quiet };
    pub const PLAIN: Self = Self { size: SMALL, bold: false, colour: Colour::Ink };
    pub const NAME: Self = Self { size: NAME, bold: true, colour: Colour::Ink };
    pub const VALUE: Self = Self { size: NAME, bold: false, colour: Colour::Ink };

    /// The same text standing out in a colour.
    pub const fn loud(self, colour: Colour) -> Self {
        Self { bold: true, colour, ..self }
    }
}

pub(super) struct Canvas<'a> {
    measure: &'a dyn Measure,
    shapes: Vec<Shape>,
}

impl<'a> Canvas<'a> {
    pub fn new(measure: &'a dyn Measure) -> Self {
        Self { measure, shapes: Vec::new() }
    }

    pub fn finish(self, width: f64, height: f64, alt: String) -> Drawing {
        Drawing { width, height, alt, shapes: self.shapes }
    }

    pub fn width_of(&self, text: &str, style: Style) -> f64 {
        self.measure.width(&clean(text), style.size, style.bold)
    }

    /// Text on its baseline, shortened to its room; returns the width it takes, 0 where not even one letter fits.
    pub fn text(&mut self, at: (f64, f64), text: &str, style: Style, anchor: Anchor, room: f64) -> f64 {
        let text = self.fitted(text, style, room);
        if text.is_empty() {
            return 0.0;
        }
        let width = self.measure.width(&text, style.size, style.bold);
        self.shapes.push(Shape::Text { at, text, size: style.size, bold: style.bold, anchor, colour: style.colour });
        width
    }

    /// A text that begins at `x` and is followed by others: returns where it ends.
    pub fn run(&mut self, x: f64, y: f64, text: &str, style: Style, end: f64) -> f64 {
        x + self.text((x, y), text, style, Anchor::Start, end - x)
    }

    /// A sentence over as many lines as it needs, up to `most`; returns the baseline below the last.
    pub fn paragraph(&mut self, at: (f64, f64), text: &str, style: Style, room: f64, most: usize) -> f64 {
        let (x, mut y) = at;
        for line in self.broken(text, style, room, most) {
            self.text((x, y), &line, style, Anchor::Start, room);
            y += style.size * 1.4;
        }
        y
    }

    /// The lines of a sentence; what is left after `most` lines stays on the last, to be shortened there.
    pub fn broken(&self, text: &str, style: Style, room: f64, most: usize) -> Vec<String> {
        let mut lines: Vec<String> = Vec::new();
        for word in clean(text).split(' ').filter(|w| !w.is_empty()) {
            let is_last = lines.len() == most;
            match lines.last_mut() {
                Some(line) if is_last || self.width_of(&format!("{line} {word}"), style) <= room => {
                    line.push(' ');
                    line.push_str(word);
                }
                _ => lines.push(word.to_owned()),
            }
        }
        lines
    }

    /// The text as far as it fits, with an ellipsis where it was cut; empty where nothing of it fits.
    fn fitted(&self, text: &str, style: Style, room: f64) -> String {
        let text = clean(text);
        // A column is often as wide as its widest entry: rounding must not cut that one.
        let fits = |t: &str| self.measure.width(t, style.size, style.bold) <= room + 1e-6;
        if fits(&text) {
            return text;
        }
        let cuts: Vec<usize> = text.char_indices().map(|(i, _)| i).collect();
        let shortened = |n: usize| format!("{}…", text[..cuts.get(n).copied().unwrap_or(text.len())].trim_end());
        let most = (1..cuts.len()).collect::<Vec<_>>().partition_point(|n| fits(&shortened(*n)));
        if most == 0 { String::new() } else { shortened(most) }
    }

    pub fn line(&mut self, points: &[(f64, f64)], width: f64, colour: Colour) {
        self.shapes.push(Shape::Line { points: points.to_vec(), width, colour, dash: None, round: false });
    }

    pub fn rounded(&mut self, points: &[(f64, f64)], width: f64, colour: Colour) {
        self.shapes.push(Shape::Line { points: points.to_vec(), width, colour, dash: None, round: true });
    }

    pub fn dashed(&mut self, points: &[(f64, f64)], width: f64, colour: Colour, dash: (f64, f64)) {
        self.shapes.push(Shape::Line { points: points.to_vec(), width, colour, dash: Some(dash), round: false });
    }

    pub fn rect(&mut self, x: f64, y: f64, size: (f64, f64), radius: f64, fill: Colour) {
        self.shapes.push(Shape::Rect { x, y, width: size.0, height: size.1, radius, fill });
    }

    pub fn circle(&mut self, centre: (f64, f64), radius: f64, fill: Option<Colour>, stroke: Option<(f64, Colour)>) {
        self.shapes.push(Shape::Circle { centre, radius, fill, stroke });
    }

    pub fn polygon(&mut self, points: &[(f64, f64)], fill: Option<Colour>, stroke: Option<(f64, Colour)>) {
        self.shapes.push(Shape::Polygon { points: points.to_vec(), fill, stroke });
    }
}

/// A label as it can stand on one line: blanks single; characters that control a terminal or turn the direction of writing shown as
/// such, for they would carry what follows out of its place.
pub(super) fn clean(text: &str) -> String {
    let mut out = String::new();
    for c in text.trim().chars().take(MOST_CHARACTERS) {
        match c {
            c if c.is_whitespace() => {
                if !out.ends_with(' ') {
                    out.push(' ');
                }
            }
            c if c.is_control() || steers(c) => out.push(char::REPLACEMENT_CHARACTER),
            c => out.push(c),
        }
    }
    out
}

/// Cuts rows of these heights into pages of about equal height, none above `room` (but for a single row that is).
pub(super) fn pages(heights: &[f64], room: f64) -> Vec<Range<usize>> {
    let total: f64 = heights.iter().sum();
    let target = total / (total / room).ceil().max(1.0);
    let mut pages = Vec::new();
    let (mut start, mut filled) = (0, 0.0);
    for (row, height) in heights.iter().enumerate() {
        if row > start && (filled + height > room || filled + height / 2.0 > target) {
            pages.push(start..row);
            (start, filled) = (row, 0.0);
        }
        filled += height;
    }
    if start < heights.len() {
        pages.push(start..heights.len());
    }
    pages
}

#[cfg(test)]
mod tests {
    use super::*;

    struct Em;
    impl Measure for Em {
        fn width(&self, text: &str, size: f64, _bold: bool) -> f64 {
            text.chars().count() as f64 * size
        }
    }

    fn texts(canvas: Canvas) -> Vec<String> {
        let text = |s| if let Shape::Text { text, .. } = s { Some(text) } else { None };
        canvas.shapes.into_iter().filter_map(text).collect()
    }

    #[test]
    fn a_text_is_cut_to_its_room_and_left_out_where_none_of_it_fits() {
        let mut canvas = Canvas::new(&Em);
        for letters in [9.0, 5.0, 2.0, 1.0, -3.0] {
            canvas.text((0.0, 0.0), "north wall", Style::QUIET, Anchor::Start, letters * SMALL);
        }
        assert_eq!(texts(canvas), ["north wa…", "nort…", "n…"]);
    }

    #[test]
    fn a_label_is_one_line_without_characters_that_steer() {
        assert_eq!(clean(" a\t\n b\u{202e}c\u{1b}[2J "), "a b\u{fffd}c\u{fffd}[2J");
        assert_eq!(clean(&"x".repeat(5000)).len(), MOST_CHARACTERS);
    }

    #[test]
    fn a_sentence_is_broken_between_words() {
        let canvas = Canvas::new(&Em);
        assert_eq!(canvas.broken("aa bb cc dd", Style::QUIET, 5.0 * SMALL, 2), ["aa bb", "cc dd"]);
        assert_eq!(canvas.broken("aa bb cc dd", Style::QUIET, 2.0 * SMALL, 2), ["aa", "bb cc dd"]);
    }

    #[test]
    fn pages_are_even_and_lose_no_row() {
        assert_eq!(pages(&[10.0; 12], 50.0), [0..4, 4..8, 8..12]);
        assert_eq!(pages(&[10.0; 5], 50.0).len(), 1);
        assert_eq!(pages(&[90.0, 10.0, 90.0], 50.0), [0..1, 1..2, 2..3]);
        assert!(pages(&[], 50.0).is_empty());
    }
}
