//! Leg load: the volt-amperes on each leg, circuit by circuit, as they are and after the suggested moves.

use super::canvas::{Canvas, Style, clean};
use super::{Figure, Scene};
use crate::quantity::{Unit, VoltAmperes};
use crate::report::drawing::{Anchor, Colour};
use crate::results::{Balance, LegLoad, Move};
use crate::visit::Arrangement;
use crate::wording::Sentence;
use std::sync::Arc;

const BAR: f64 = 16.0;
const GAP: f64 = 3.0;
const LEG_GAP: f64 = 11.0;
const HEAD: f64 = 16.0;
const RISE: f64 = 3.0;
/// White between two pieces.
const JOINT: f64 = 0.8;
/// A piece this wide has room for the beginning of any name.
const ROOMY: f64 = 30.0;
/// White about a name in its piece.
const MARGIN: f64 = 3.0;
/// Moves named, at most.
const MOST_MOVES: usize = 12;

pub(super) fn figures(scene: &Scene) -> Vec<Figure> {
    let Some(balance) =
        scene.source.balance.filter(|b| b.legs.iter().chain(&b.after).all(|l| l.va.0.is_finite()) && b.legs.iter().any(|l| l.va.0 > 0.0))
    else {
        return Vec::new();
    };
    let chart = Chart::new(scene, balance);
    let mut canvas = Canvas::new(scene.measure);
    let height = chart.draw(&mut canvas);
    let caption = scene.say(&Sentence::new(if balance.moves.is_empty() { "figure.load" } else { "figure.load-moves" }));
    vec![Figure { name: "leg-load", caption, drawing: Arc::new(canvas.finish(scene.width, height, chart.alternative())) }]
}

/// One piece of a bar: a circuit, or several too small to be drawn apart.
#[derive(Clone, Debug, PartialEq)]
struct Piece {
    /// The circuit; `None` for others together.
    run: Option<usize>,
    va: f64,
    /// Circuits in it.
    count: usize,
    is_moved: bool,
}

/// A leg's circuits as pieces: the greatest first, then those too small for `has_room` together, and last those that move, so that
/// the bars before and after differ at their end.
fn pieces(leg: &LegLoad, moves: &[Move], has_room: impl Fn(&Piece) -> bool) -> Vec<Piece> {
    let is_moved = |run: usize| moves.iter().any(|m| m.run == run);
    let piece = |&(run, va): &(usize, VoltAmperes)| Piece { run: Some(run), va: va.0, count: 1, is_moved: is_moved(run) };
    let (moved, mut rest): (Vec<Piece>, Vec<Piece>) = leg.circuits.iter().filter(|c| c.1.0 > 0.0).map(piece).partition(|p| p.is_moved);
    rest.sort_by(|a, b| b.va.total_cmp(&a.va));
    let (mut rest, small): (Vec<Piece>, Vec<Piece>) = rest.into_iter().partition(has_room);
    match small.as_slice() {
        [] => {}
        [one] => rest.push(one.clone()),
        several => {
            let va = several.iter().map(|p| p.va).sum();
            rest.push(Piece { run: None, va, count: several.len(), is_moved: false });
        }
    }
    rest.extend(moved);
    rest
}

struct Chart<'a> {
    scene: &'a Scene<'a>,
    balance: &'a Balance,
    left: f64,
    right: f64,
    points_per_va: f64,
}

impl<'a> Chart<'a> {
    fn new(scene: &'a Scene<'a>, balance: &'a Balance) -> Self {
        let canvas = Canvas::new(scene.measure);
        let now = scene.say(&Sentence::new("figure.now"));
        let after = scene.say(&Sentence::new("figure.after"));
        let words = canvas.width_of(&now, Style::QUIET).max(canvas.width_of(&after, Style::QUIET)).min(0.15 * scene.width);
        let totals = balance.legs.iter().chain(&balance.after);
        let total = totals.clone().map(|l| canvas.width_of(&total(scene, l), Style::VALUE)).fold(0.0, f64::max);
        let (left, right) = (24.0 + words + 8.0, scene.width - total.min(0.2 * scene.width) - 8.0);
        let most = totals.map(|l| l.va.0).fold(0.0, f64::max);
        Self { scene, balance, left, right, points_per_va: (right - left) / most }
    }

    fn draw(&self, canvas: &mut Canvas) -> f64 {
        let balance = self.balance;
        let lines = if balance.moves.is_empty() { 1.0 } else { 2.0 };
        let one = lines * (BAR + GAP) - GAP + LEG_GAP;
        // Under the bars, so that it crosses no name.
        self.mean(canvas, HEAD + one * balance.legs.len() as f64 - LEG_GAP + 3.0);
        let mut y = HEAD;
        for (i, leg) in balance.legs.iter().enumerate() {
            canvas.text((0.0, y + BAR / 2.0 + RISE), leg.leg.name(), Style::NAME, Anchor::Start, 22.0);
            let after = balance.after.get(i).filter(|_| !balance.moves.is_empty());
            if after.is_some() {
                self.word(canvas, "figure.now", y);
            }
            self.bar(canvas, leg, y);
            if let Some(after) = after {
                y += BAR + GAP;
                self.word(canvas, "figure.after", y);
                self.bar(canvas, after, y);
            }
            y += BAR + LEG_GAP;
        }
        y += 4.0;
        for sentence in self.summary() {
            y = canvas.paragraph((0.0, y), &self.scene.say(&sentence), Style::PLAIN, self.scene.width, 2);
        }
        self.moves(canvas, y)
    }

    fn word(&self, canvas: &mut Canvas, key: &'static str, y: f64) {
        let word = self.scene.say(&Sentence::new(key));
        canvas.text((self.left - 8.0, y + BAR / 2.0 + RISE), &word, Style::QUIET, Anchor::End, self.left - 32.0);
    }

    fn bar(&self, canvas: &mut Canvas, leg: &LegLoad, y: f64) {
        let mut x = self.left;
        for piece in pieces(leg, &self.balance.moves, |p| self.has_room(canvas, p)) {
            let width = piece.va * self.points_per_va;
            self.piece(canvas, &piece, (x, y), width);
            x += width;
        }
        canvas.text(
            (self.scene.width, y + BAR / 2.0 + RISE),
            &total(self.scene, leg),
            Style::VALUE,
            Anchor::End,
            self.scene.width - self.right - 4.0,
        );
    }

    fn room(&self, piece: &Piece) -> f64 {
        piece.va * self.points_per_va - JOINT - 2.0 * MARGIN
    }

    /// The piece can be named.
    fn has_room(&self, canvas: &Canvas, piece: &Piece) -> bool {
        self.room(piece) >= ROOMY || canvas.width_of(&self.label(piece), Style::PLAIN.loud(Colour::Ink)) <= self.room(piece)
    }

    fn label(&self, piece: &Piece) -> String {
        match piece.run {
            Some(run) => self.scene.name(run),
            None => self.scene.say(&Sentence::new("figure.others").with("n", piece.count)),
        }
    }

    fn piece(&self, canvas: &mut Canvas, piece: &Piece, at: (f64, f64), width: f64) {
        let (x, y) = at;
        let (fill, ink, quiet) =
            if piece.is_moved { (Colour::Accent, Colour::Paper, Colour::Paper) } else { (Colour::Band, Colour::Ink, Colour::Quiet) };
        canvas.rect(x, y, ((width - JOINT).max(0.3), BAR), 0.0, fill);
        if self.has_room(canvas, piece) {
            let (base, end) = (y + BAR / 2.0 + RISE, x + MARGIN + self.room(piece));
            let name = if piece.run.is_some() { Style::PLAIN.loud(ink) } else { Style::PLAIN };
            let at = canvas.run(x + MARGIN, base, &self.label(piece), name, end) + 4.0;
            if let Some(serves) = self.serves(piece).filter(|s| at + canvas.width_of(s, Style::QUIET) <= end) {
                canvas.run(at, base, &serves, Style { colour: quiet, ..Style::QUIET }, end);
            }
        }
    }

    fn serves(&self, piece: &Piece) -> Option<String> {
        let run = self.scene.source.visit.runs.get(piece.run?)?;
        run.serves.as_ref().map(|s| s.value.clone())
    }

    /// Where the bars would end if all legs carried alike. The high leg of a delta is not meant to.
    fn mean(&self, canvas: &mut Canvas, bottom: f64) {
        let legs = &self.balance.legs;
        if self.scene.source.visit.system.arrangement == Arrangement::HighLegDelta || legs.len() < 2 {
            return;
        }
        let x = self.left + self.points_per_va * legs.iter().map(|l| l.va.0).sum::<f64>() / legs.len() as f64;
        let word = self.scene.say(&Sentence::new("figure.mean"));
        canvas.text((x, 8.0), &word, Style::QUIET, Anchor::Middle, 80.0);
        canvas.dashed(&[(x, 11.5), (x, bottom)], 0.8, Colour::Quiet, (2.0, 2.0));
    }

    /// Imbalance and neutral current, now and after.
    fn summary(&self) -> Vec<Sentence> {
        let b = self.balance;
        let mut out = vec![Sentence::new("figure.load-now").number("imbalance", b.imbalance_percent, 1, Unit::Percent).number(
            "neutral",
            b.neutral.0,
            1,
            Unit::Ampere,
        )];
        if !b.moves.is_empty() {
            out.push(Sentence::new("figure.load-after").number("imbalance", b.imbalance_after_percent, 1, Unit::Percent).number(
                "neutral",
                b.neutral_after.0,
                1,
                Unit::Ampere,
            ));
        }
        out
    }

    fn moved(&self, m: &Move) -> String {
        let serves = self.scene.source.visit.runs.get(m.run).and_then(|r| r.serves.as_ref());
        let sentence = match serves {
            Some(serves) => Sentence::new("figure.move-serves").with("serves", clean(&serves.value)),
            None => Sentence::new("figure.move"),
        };
        self.scene.say(&sentence.with("run", self.scene.name(m.run)).with("from", m.from.as_str()).with("to", m.to.as_str()))
    }

    /// Lists the moves; returns the height of the drawing.
    fn moves(&self, canvas: &mut Canvas, mut y: f64) -> f64 {
        let moves = &self.balance.moves;
        y += if moves.is_empty() { 0.0 } else { 3.0 };
        for m in moves.iter().take(MOST_MOVES) {
            canvas.rect(0.0, y - 6.4, (7.0, 7.0), 0.0, Colour::Accent);
            canvas.text((12.0, y), &self.moved(m), Style::PLAIN, Anchor::Start, self.scene.width - 12.0);
            y += 11.5;
        }
        if moves.len() > MOST_MOVES {
            let more = Sentence::new("advice.more").with("n", moves.len() - MOST_MOVES);
            canvas.text((12.0, y), &self.scene.say(&more), Style::PLAIN, Anchor::Start, self.scene.width - 12.0);
            y += 11.5;
        }
        y - 6.0
    }

    fn alternative(&self) -> String {
        let of_leg = |key: &'static str, l: &LegLoad| {
            self.scene.say(&Sentence::new(key).with("leg", l.leg.name()).number("va", l.va.0, 0, Unit::VoltAmpere))
        };
        let mut parts: Vec<String> = self.balance.legs.iter().map(|l| of_leg("figure.load-alt", l)).collect();
        parts.extend(self.balance.moves.iter().take(MOST_MOVES).map(|m| self.moved(m)));
        if !self.balance.moves.is_empty() {
            parts.extend(self.balance.after.iter().map(|l| of_leg("figure.load-alt-after", l)));
        }
        parts.extend(self.summary().iter().map(|s| self.scene.say(s)));
        parts.join(" ")
    }
}

fn total(scene: &Scene, leg: &LegLoad) -> String {
    scene.language.quantity(leg.va.0, 0, Unit::VoltAmpere)
}
