//! The neutral in the triangle of the lines, one small triangle for each set of readings of a three-phase service.

use super::canvas::{Canvas, Style, clean};
use super::neutral_position::{Judgements, NAME, alternative, foremost, in_tree_order, taken, volts};
use super::{Figure, MOST_HEIGHT, Scene, marks};
use crate::quantity::{Unit, math};
use crate::report::drawing::{Anchor, Colour};
use crate::visit::{Arrangement, Between, Leg, Quantity, ReadingRow, Stage};
use crate::wording::Sentence;
use std::sync::Arc;

/// Triangles drawn, at most; of more, those whose neutral is farthest off.
const MOST: usize = 36;
const COLUMNS: usize = 3;
const HEAD: f64 = 26.0;
/// Room about a triangle for the volts at its corners.
const ABOVE: f64 = 8.0;
const BELOW: f64 = 14.0;
const FOOT: f64 = 6.0;
/// Room for a leg and its volts.
const LABEL: f64 = 46.0;
/// Between two lines of triangles.
const GAP: f64 = 12.0;
type Point = (f64, f64);

/// The lines and the neutral as points in volts: L1 and L2 (on a high-leg delta L1 and L3) on the level, the third above.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Place {
    corners: [Point; 3],
    neutral: Point,
    /// Where it belongs in this triangle.
    nominal: Point,
}

impl Place {
    fn shift(&self) -> f64 {
        math::hypot(self.neutral.0 - self.nominal.0, self.neutral.1 - self.nominal.1)
    }
}

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    let judgements = Judgements::of(scene);
    let known = |row: &ReadingRow| place(scene, row).is_some();
    let all = in_tree_order(scene, known);
    let shift = |row: &ReadingRow| place(scene, row).map_or(0.0, |p| p.shift());
    let weights: Vec<f64> = all.iter().map(|r| shift(r)).collect();
    let rows: Vec<&ReadingRow> = foremost(&weights, MOST).into_iter().map(|i| all[i]).collect();
    if rows.is_empty() {
        return Vec::new();
    }
    let grid = Grid::new(scene, rows.len());
    let pages: Vec<&[&ReadingRow]> = rows.chunks(grid.columns * grid.lines(rows.len())).collect();
    let farthest = all.iter().max_by(|a, b| shift(a).total_cmp(&shift(b))).map(|row| {
        Sentence::new("figure.triangle-farthest").with("at", clean(&row.location.value)).with("taken", taken(row)).number(
            "volts",
            shift(row),
            1,
            Unit::Volt,
        )
    });
    let alt = alternative(scene, &judgements, &all, farthest);
    let mut caption = scene.say(&Sentence::new("figure.triangle"));
    if !judgements.is_empty() {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.triangle-circle")));
    }
    if !grid.has_third {
        caption = format!("{caption} {}", scene.say(&Sentence::new("figure.triangle-two")));
    }
    if rows.len() < all.len() {
        let left_out = Sentence::new("figure.position-left-out").with("n", rows.len()).with("of", all.len());
        caption = format!("{caption} {}", scene.say(&left_out));
    }
    let draw = |(i, page): (usize, &&[&ReadingRow])| {
        let mut canvas = Canvas::new(scene.measure);
        let height = grid.draw(&mut canvas, &judgements, page);
        let drawing = canvas.finish(scene.width, height, alt.clone());
        Figure { name: NAME, caption: format!("{caption}{}", scene.part(i, pages.len())), drawing: Arc::new(drawing) }
    };
    pages.iter().enumerate().map(draw).collect()
}

/// The legs in the order of the corners.
fn order(arrangement: Arrangement) -> [Leg; 3] {
    match arrangement {
        Arrangement::HighLegDelta => [Leg::L1, Leg::L3, Leg::L2],
        _ => Leg::ALL,
    }
}

fn between(a: Leg, b: Leg) -> Quantity {
    let pair = Between::LINE_LINE.into_iter().find(|p| *p == Between::LineLine(a, b) || *p == Between::LineLine(b, a));
    Quantity::Voltage(pair.unwrap_or(Between::LINE_LINE[0]))
}

/// Places lines and neutral by the readings; `None` where they were not all read or form no triangle.
fn place(scene: &Scene, row: &ReadingRow) -> Option<Place> {
    let arrangement = scene.source.visit.system.arrangement;
    let [a, b, c] = order(arrangement);
    let to_neutral = |leg| volts(row, Quantity::line_neutral(leg));
    let side = volts(row, between(a, b)).filter(|v| *v > 0.0)?;
    let (na, nb) = (to_neutral(a)?, to_neutral(b)?);
    let along = (na * na - nb * nb + side * side) / (2.0 * side);
    let place = if arrangement == Arrangement::TwoLegsOfWye {
        // The third line was not brought along: an equilateral triangle over the side that was read.
        let third = (side / 2.0, side * 3f64.sqrt() / 2.0);
        let height = (na * na - along * along).max(0.0).sqrt();
        Place { corners: [(0.0, 0.0), (side, 0.0), third], neutral: (along, height), nominal: (side / 2.0, third.1 / 3.0) }
    } else {
        let third = apex(side, volts(row, between(c, a))?, volts(row, between(b, c))?)?;
        let nc = to_neutral(c)?;
        let height = (na * na - nc * nc + third.0 * third.0 + third.1 * third.1 - 2.0 * third.0 * along) / (2.0 * third.1);
        let nominal = match arrangement {
            Arrangement::HighLegDelta => (side / 2.0, 0.0),
            _ => ((side + third.0) / 3.0, third.1 / 3.0),
        };
        Place { corners: [(0.0, 0.0), (side, 0.0), third], neutral: (along, height), nominal }
    };
    [place.neutral, place.nominal, place.corners[2]].iter().all(|p| p.0.is_finite() && p.1.is_finite()).then_some(place)
}

/// The third corner over a side, by its distances from the side's two ends; `None` where they form no triangle worth drawing.
fn apex(side: f64, from_first: f64, from_second: f64) -> Option<Point> {
    let x = (from_first * from_first - from_second * from_second + side * side) / (2.0 * side);
    let square = from_first * from_first - x * x;
    (square > 1e-4 * side * side).then(|| (x, square.sqrt()))
}

/// From volts to the page.
struct Fit {
    /// Where the middle of the lowest level stands.
    foot: Point,
    centre: f64,
    low: f64,
    /// Points a volt.
    scale: f64,
}

impl Fit {
    fn on_page(&self, (x, y): Point) -> Point {
        (self.foot.0 + (x - self.centre) * self.scale, self.foot.1 - (y - self.low) * self.scale)
    }
}

struct Grid<'a> {
    scene: &'a Scene<'a>,
    columns: usize,
    cell: f64,
    points_per_volt: f64,
    legs: [Leg; 3],
    /// The third line was brought along.
    has_third: bool,
}

impl<'a> Grid<'a> {
    fn new(scene: &'a Scene<'a>, count: usize) -> Self {
        let columns = COLUMNS.min(count).max(1);
        let cell = scene.width / COLUMNS as f64;
        let system = &scene.source.visit.system;
        // A tenth more than nominal still fits.
        let points_per_volt = (cell - 40.0) / (1.06 * system.line_to_line.0);
        let has_third = system.arrangement != Arrangement::TwoLegsOfWye;
        Self { scene, columns, cell, points_per_volt, legs: order(system.arrangement), has_third }
    }

    fn tall(&self) -> f64 {
        (self.cell - 40.0) * 3f64.sqrt() / 2.0
    }

    fn line_height(&self) -> f64 {
        HEAD + ABOVE + self.tall() + BELOW + GAP
    }

    /// Lines of triangles on a page, spread evenly.
    fn lines(&self, count: usize) -> usize {
        let all = count.div_ceil(self.columns);
        let most = (((MOST_HEIGHT - FOOT) / self.line_height()) as usize).max(1);
        all.div_ceil(all.div_ceil(most)).max(1)
    }

    fn draw(&self, canvas: &mut Canvas, judgements: &Judgements, page: &[&ReadingRow]) -> f64 {
        for (i, row) in page.iter().enumerate() {
            let left = self.cell * (i % self.columns) as f64;
            let top = self.line_height() * (i / self.columns) as f64;
            self.triangle(canvas, judgements, row, (left, top));
        }
        let bottom = self.line_height() * page.len().div_ceil(self.columns) as f64;
        self.legend(canvas, page, bottom);
        bottom + FOOT
    }

    fn triangle(&self, canvas: &mut Canvas, judgements: &Judgements, row: &ReadingRow, at: Point) {
        let Some(place) = place(self.scene, row) else { return };
        let (left, top) = at;
        let fault = judgements.fault(row);
        let colour = fault.map_or(Colour::Ink, |f| Colour::Signal(f.signal));
        let room = self.cell - 10.0;
        canvas.text((left, top + 9.0), &row.location.value, Style { colour, ..Style::NAME }, Anchor::Start, room);
        let shift = Sentence::new("figure.shift").number("volts", place.shift(), 1, Unit::Volt).with("taken", taken(row));
        let style = if fault.is_some() { Style::PLAIN.loud(colour) } else { Style::QUIET };
        canvas.text((left, top + 20.0), &self.scene.say(&shift), style, Anchor::Start, room);

        let fit = self.fit(&place, (left + self.cell / 2.0 - 5.0, top + HEAD + ABOVE + self.tall()));
        let corners = place.corners.map(|p| fit.on_page(p));
        let (neutral, nominal) = (fit.on_page(place.neutral), fit.on_page(place.nominal));
        if let Some(allowed) = judgements.allowed(self.scene, row) {
            canvas.circle(nominal, (allowed * fit.scale).min(self.tall() / 2.0), Some(Colour::Band), Some((0.6, Colour::Quiet)));
        }
        let spokes = if fault.is_some() { colour } else { Colour::Faint };
        let [first, second, third] = corners;
        if self.has_third {
            canvas.polygon(&corners, None, Some((1.2, Colour::Faint)));
            canvas.line(&[neutral, third], 0.6, spokes);
        } else {
            canvas.line(&[first, second], 1.2, Colour::Faint);
            canvas.dashed(&[first, third, second], 0.8, Colour::Faint, (2.0, 2.0));
        }
        canvas.line(&[first, neutral, second], 0.6, spokes);
        if fault.is_some() {
            canvas.line(&[nominal, neutral], 2.2, colour);
        }
        point(canvas, neutral, row, colour);
        self.volts(canvas, row, corners, left);
    }

    /// The scale of one triangle, the level side centred over `foot`; smaller where something would leave the cell.
    fn fit(&self, place: &Place, foot: Point) -> Fit {
        let centre = place.corners[1].0 / 2.0;
        let points = place.corners.iter().chain([&place.neutral]);
        let wide = points.clone().map(|p| (p.0 - centre).abs()).fold(0.0, f64::max);
        let high = points.clone().map(|p| p.1).fold(0.0, f64::max);
        let low = points.map(|p| p.1).fold(0.0, f64::min);
        let scale = self.points_per_volt.min((self.cell / 2.0 - 9.0) / wide).min(self.tall() / (high - low));
        Fit { foot, centre, low, scale }
    }

    /// The volts to the neutral beside each corner: those of the level side below it, each in its half of the cell.
    fn volts(&self, canvas: &mut Canvas, row: &ReadingRow, corners: [Point; 3], left: f64) {
        let middle = left + self.cell / 2.0 - 5.0;
        let [first, second, third] = corners;
        let places = [
            (first.0.min(middle - LABEL), first.1 + 10.0, Anchor::Start),
            (second.0.max(middle + LABEL), second.1 + 10.0, Anchor::End),
            (third.0.clamp(left + LABEL / 2.0, left + self.cell - LABEL / 2.0), third.1 - 5.0, Anchor::Middle),
        ];
        let shown = if self.has_third { 3 } else { 2 };
        for (leg, (x, y, anchor)) in self.legs.iter().zip(places).take(shown) {
            let Some(volts) = volts(row, Quantity::line_neutral(*leg)) else { continue };
            let label = format!("{leg} {}", self.scene.language.quantity(volts, 1, Unit::Volt));
            let room = match anchor {
                Anchor::Start => middle - 1.0 - x,
                Anchor::End => x - middle - 1.0,
                Anchor::Middle => LABEL,
            };
            canvas.text((x, y), &label, Style::PLAIN, anchor, room);
        }
    }

    fn legend(&self, canvas: &mut Canvas, page: &[&ReadingRow], y: f64) {
        let mut x = 4.0;
        let kinds = [(false, "figure.as-found"), (true, "figure.as-left")];
        for (is_left, key) in kinds.into_iter().filter(|(left, _)| page.iter().any(|r| (r.stage == Stage::AsLeft) == *left)) {
            dot(canvas, (x, y - 2.6), is_left, Colour::Ink);
            x = canvas.run(x + 7.0, y, &self.scene.say(&Sentence::new(key)), Style::QUIET, self.scene.width) + 16.0;
        }
    }
}

fn point(canvas: &mut Canvas, at: Point, row: &ReadingRow, colour: Colour) {
    dot(canvas, at, marks::Kind::of(row).is_left, colour);
}

fn dot(canvas: &mut Canvas, at: Point, is_left: bool, colour: Colour) {
    if is_left {
        canvas.circle(at, 2.4, Some(Colour::Paper), Some((1.2, colour)));
    } else {
        canvas.circle(at, 2.7, Some(colour), None);
    }
}
