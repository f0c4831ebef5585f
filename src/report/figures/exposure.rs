//! Exposure bars: the volts each leg's loads would see if a shared neutral opened, against the band they tolerate.

use super::canvas::{Canvas, Style, pages};
use super::marks::{Kind, mark};
use super::neutral_position::foremost;
use super::{Figure, MOST_HEIGHT, Scene};
use crate::quantity::Unit;
use crate::report::drawing::{Anchor, Colour};
use crate::results::{ExposedLeg, Exposure, Finding, Limit, Signal};
use crate::wording::Sentence;
use std::ops::Range;
use std::sync::Arc;

/// Shared neutrals drawn, at most; of more, those whose loads would be farthest off.
const MOST: usize = 40;
const ROW: f64 = 15.0;
const GAP: f64 = 7.0;
const HEAD: f64 = 20.0;
const FOOT: f64 = 4.0;
const RISE: f64 = 3.0;
/// The end of a range is an open mark.
const RANGE_END: Kind = Kind { is_left: true, is_own_state: false };

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    let nominal = scene.source.visit.system.line_to_neutral.0;
    let all: Vec<&Exposure> = scene.source.exposure.iter().filter(|e| can_be_drawn(e)).collect();
    let weights: Vec<f64> = all.iter().map(|e| e.legs.iter().flat_map(ends).map(|v| (v - nominal).abs()).fold(0.0, f64::max)).collect();
    let shown: Vec<&Exposure> = foremost(&weights, MOST).into_iter().map(|i| all[i]).collect();
    if shown.is_empty() {
        return Vec::new();
    }
    let chart = Chart::new(scene, &shown);
    let heights: Vec<f64> = shown.iter().map(|e| height(e)).collect();
    let pages = pages(&heights, MOST_HEIGHT - HEAD - FOOT);
    let mut caption = scene.say(&Sentence::new("figure.exposure"));
    if chart.band.is_some() {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.exposure-shaded")));
    }
    if shown.iter().flat_map(|e| &e.legs).any(|l| l.low.is_some()) {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.exposure-range")));
    }
    if shown.len() < all.len() {
        let left_out = Sentence::new("figure.exposure-left-out").with("n", shown.len()).with("of", all.len());
        caption = format!("{caption} {}", scene.say(&left_out));
    }
    let alt = chart.alternative(&all);
    let draw = |(i, page): (usize, &Range<usize>)| {
        let mut canvas = Canvas::new(scene.measure);
        let height = chart.draw(&mut canvas, &shown[page.clone()]);
        let drawing = canvas.finish(scene.width, height, alt.clone());
        Figure { name: "exposure", caption: format!("{caption}{}", scene.part(i, pages.len())), drawing: Arc::new(drawing) }
    };
    pages.iter().enumerate().map(draw).collect()
}

fn can_be_drawn(exposure: &Exposure) -> bool {
    !exposure.legs.is_empty() && exposure.legs.iter().flat_map(ends).all(f64::is_finite)
}

/// The least and the most volts of a leg; twice the same where there is one solution.
fn ends(leg: &ExposedLeg) -> [f64; 2] {
    [leg.low.unwrap_or(leg.volts).0, leg.volts.0]
}

fn height(exposure: &Exposure) -> f64 {
    ROW * exposure.legs.len() as f64 + GAP
}

struct Chart<'a> {
    scene: &'a Scene<'a>,
    /// What loads tolerate, as the rule judges it.
    band: Option<Limit>,
    /// Right end of the axis in volts.
    most: f64,
    /// Left and right end of the axis in points.
    axis: [f64; 2],
    /// End of the names.
    names: f64,
}

impl<'a> Chart<'a> {
    fn new(scene: &'a Scene<'a>, shown: &[&Exposure]) -> Self {
        let canvas = Canvas::new(scene.measure);
        let highest = shown.iter().flat_map(|e| &e.legs).flat_map(ends).fold(0.0, f64::max);
        let names = shown.iter().map(|e| canvas.width_of(&scene.name(e.run), Style::NAME)).fold(20.0, f64::max).min(0.17 * scene.width);
        let band = scene.source.findings.iter().filter(|f| f.rule == "open-neutral-exposure").find_map(|f| f.limit);
        Self { scene, band, most: scene.source.visit.system.line_to_line.0.max(highest), axis: [names + 30.0, 0.74 * scene.width], names }
    }

    fn x(&self, volts: f64) -> f64 {
        let [left, right] = self.axis;
        left + (right - left) * (volts / self.most).clamp(0.0, 1.0)
    }

    fn draw(&self, canvas: &mut Canvas, page: &[&Exposure]) -> f64 {
        let bottom = HEAD + page.iter().map(|e| height(e)).sum::<f64>() - GAP;
        self.scale(canvas, bottom);
        let mut y = HEAD;
        for exposure in page {
            let finding = self.finding(exposure);
            let colour = finding.filter(|f| f.signal > Signal::Notice).map_or(Colour::Ink, |f| Colour::Signal(f.signal));
            let name = Style { colour, ..Style::NAME };
            canvas.text((0.0, y + ROW / 2.0 + RISE), &self.scene.name(exposure.run), name, Anchor::Start, self.names);
            for leg in &exposure.legs {
                self.leg(canvas, leg, finding, y + ROW / 2.0);
                y += ROW;
            }
            y += GAP;
        }
        bottom + FOOT
    }

    fn finding(&self, exposure: &Exposure) -> Option<&'a Finding> {
        let name = self.scene.source.visit.runs.get(exposure.run).map(|r| r.name.value.as_str())?;
        self.scene.source.findings.iter().find(|f| f.rule == "open-neutral-exposure" && f.location.as_deref() == Some(name))
    }

    /// The tolerated band, nominal, and the ends of the axis.
    fn scale(&self, canvas: &mut Canvas, bottom: f64) {
        let [left, right] = self.axis;
        let nominal = self.scene.source.visit.system.line_to_neutral.0;
        let say = |v: f64| self.scene.language.quantity(v, 0, Unit::Volt);
        let (mut from, mut to) = (nominal, nominal);
        if let Some(band) = self.band {
            (from, to) = (band.low.unwrap_or(0.0), band.high.unwrap_or(self.most));
            canvas.rect(self.x(from), HEAD - 4.0, (self.x(to) - self.x(from), bottom - HEAD + 4.0), 0.0, Colour::Band);
        }
        canvas.line(&[(self.x(nominal), HEAD - 4.0), (self.x(nominal), bottom)], 0.5, Colour::Faint);
        canvas.text((left, 10.0), &say(0.0), Style::QUIET, Anchor::Middle, 30.0);
        let middle = if from < to {
            let tolerated = Sentence::new("figure.tolerated").number("low", from, 0, Unit::One).number("high", to, 0, Unit::Volt);
            self.scene.say(&tolerated)
        } else {
            say(nominal)
        };
        let centre = self.x((from + to) / 2.0);
        let room = 2.0 * ((centre - left).min(right - centre) - 22.0);
        canvas.text((centre, 10.0), &middle, Style::QUIET, Anchor::Middle, room);
        let head = self.scene.say(&Sentence::new("figure.exposed-head"));
        canvas.text((right + 24.0, 10.0), &head, Style::QUIET, Anchor::Start, self.scene.width - right - 24.0);
        canvas.text((right, 10.0), &say(self.most), Style::QUIET, Anchor::Middle, 40.0);
    }

    fn leg(&self, canvas: &mut Canvas, leg: &ExposedLeg, finding: Option<&Finding>, y: f64) {
        let [left, right] = self.axis;
        let [low, high] = ends(leg);
        let is_off = self.band.is_some_and(|b| b.low.is_some_and(|l| low < l) || b.high.is_some_and(|h| high > h));
        let signal = finding.map_or(Signal::Notice, |f| f.signal);
        let colour = if is_off { Colour::Signal(signal) } else { Colour::Ink };
        canvas.text((left - 8.0, y + RISE), leg.leg.name(), Style::PLAIN, Anchor::End, 22.0);
        canvas.rounded(&[(left, y), (right, y)], 1.4, Colour::Faint);
        let nominal = self.scene.source.visit.system.line_to_neutral.0;
        if leg.low.is_some() {
            canvas.line(&[(self.x(low), y), (self.x(high), y)], 2.2, colour);
            mark(canvas, (self.x(low), y), (0.0, 0.0), RANGE_END, colour);
            mark(canvas, (self.x(high), y), (0.0, 0.0), RANGE_END, colour);
        } else {
            canvas.line(&[(self.x(nominal), y), (self.x(high), y)], 2.2, colour);
            mark(canvas, (self.x(high), y), (0.0, 0.0), Kind::default(), colour);
        }
        let style = if is_off { Style::PLAIN.loud(colour) } else { Style::PLAIN };
        let at = canvas.run(right + 10.0, y + RISE, &self.volts(leg), style, self.scene.width);
        let place = Sentence::new("figure.exposed-at").with("at", self.scene.name(leg.at)).number("watts", leg.loads.0, 0, Unit::Watt);
        canvas.run(at + 6.0, y + RISE, &self.scene.say(&place), Style::QUIET, self.scene.width);
    }

    /// `171 V`, or a range.
    fn volts(&self, leg: &ExposedLeg) -> String {
        match leg.low {
            Some(low) => {
                let range = Sentence::new("figure.range").number("low", low.0, 0, Unit::One).number("high", leg.volts.0, 0, Unit::Volt);
                self.scene.say(&range)
            }
            None => self.scene.language.quantity(leg.volts.0, 0, Unit::Volt),
        }
    }

    fn alternative(&self, all: &[&Exposure]) -> String {
        let mut parts = vec![self.scene.say(&Sentence::new("figure.exposure-alt").with("n", all.len()))];
        let legs = all.iter().flat_map(|e| e.legs.iter().map(move |l| (e.run, l)));
        if let Some((run, leg)) = legs.reduce(|a, b| if b.1.volts.0 > a.1.volts.0 { b } else { a }) {
            let highest = Sentence::new("figure.exposure-alt-highest")
                .with("run", self.scene.name(run))
                .with("leg", leg.leg.name())
                .with("at", self.scene.name(leg.at))
                .with("volts", self.volts(leg));
            parts.push(self.scene.say(&highest));
        }
        if let Some((low, high)) = self.band.and_then(|b| Some((b.low?, b.high?))) {
            let band = Sentence::new("figure.exposure-alt-band").number("low", low, 0, Unit::Volt).number("high", high, 0, Unit::Volt);
            parts.push(self.scene.say(&band));
        }
        parts.join(" ")
    }
}
