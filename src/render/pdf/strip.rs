//! Strips: what a page is filled with, one below the other.

use super::shape::Run;
use std::sync::Arc;

/// A colour as sRGB.
pub(super) type Rgb = [u8; 3];

/// Something painted; y grows downwards, points.
#[derive(Clone, Debug)]
pub(super) enum Paint {
    /// Glyphs with the pen at `x`, the baseline at `y`.
    Text { x: f32, y: f32, run: Arc<Run>, colour: Rgb },
    /// A stroked polyline.
    Line { points: Vec<(f32, f32)>, width: f32, colour: Rgb, dash: Option<(f32, f32)>, round: bool },
    /// A closed shape of straight and curved sides.
    Shape { outline: Outline, fill: Option<Rgb>, stroke: Option<(f32, Rgb)> },
    /// An image, by position in the list of images.
    Image { x: f32, y: f32, width: f32, height: f32, image: usize },
}

/// Points of a closed outline; `true` marks a control point of a cubic curve.
pub(super) type Outline = Vec<(f32, f32, bool)>;

/// What is painted for one node of the structure; `None`: an artifact, of no meaning to a reader.
#[derive(Clone, Debug)]
pub(super) struct Mark {
    /// Node of the structure tree.
    pub node: Option<usize>,
    /// In order.
    pub paints: Vec<Paint>,
}

/// A place that leads elsewhere.
#[derive(Clone, Debug)]
pub(super) struct Area {
    /// `https:…`, `mailto:…` or `#anchor`.
    pub href: Arc<str>,
    /// Left, top, width, height.
    pub rect: (f32, f32, f32, f32),
    /// Node of the link in the structure tree.
    pub node: usize,
}

/// A target of links and of the outline.
#[derive(Clone, Debug)]
pub(super) struct Target {
    /// Level of the heading.
    pub level: u8,
    /// Its text.
    pub text: String,
    /// Its anchor.
    pub anchor: String,
}

/// A strip over the width of the text that is never divided.
#[derive(Clone, Debug, Default)]
pub(super) struct Strip {
    /// Height in points.
    pub height: f32,
    /// Room above it, left out at the top of a page.
    pub gap: f32,
    /// Stays on the page of the next strip.
    pub keep: bool,
    /// The table it is a row of, whose header is repeated above it on a new page.
    pub table: Option<usize>,
    /// What is painted, with the strip's top left corner at (0, 0).
    pub marks: Vec<Mark>,
    /// Links.
    pub areas: Vec<Area>,
    /// A heading begins here.
    pub target: Option<Target>,
    /// Figures in it, whose place on the page their nodes must know.
    pub figures: Vec<usize>,
    /// Begins a new page.
    pub breaks: bool,
}

impl Paint {
    /// The same, moved.
    pub fn moved(self, dx: f32, dy: f32) -> Self {
        match self {
            Self::Text { x, y, run, colour } => Self::Text { x: x + dx, y: y + dy, run, colour },
            Self::Line { points, width, colour, dash, round } => {
                let points = points.into_iter().map(|(x, y)| (x + dx, y + dy)).collect();
                Self::Line { points, width, colour, dash, round }
            }
            Self::Shape { outline, fill, stroke } => {
                let outline = outline.into_iter().map(|(x, y, c)| (x + dx, y + dy, c)).collect();
                Self::Shape { outline, fill, stroke }
            }
            Self::Image { x, y, width, height, image } => Self::Image { x: x + dx, y: y + dy, width, height, image },
        }
    }
}

impl Strip {
    /// Moves what is painted.
    pub fn shift(&mut self, dx: f32, dy: f32) {
        for mark in &mut self.marks {
            for paint in &mut mark.paints {
                *paint = paint.clone().moved(dx, dy);
            }
        }
        for area in &mut self.areas {
            area.rect.0 += dx;
            area.rect.1 += dy;
        }
    }
}

/// A rectangle, its corners rounded where a radius is given.
pub(super) fn rectangle(x: f32, y: f32, width: f32, height: f32, radius: f32) -> Outline {
    let r = radius.min(width / 2.0).min(height / 2.0).max(0.0);
    if r <= 0.0 {
        return vec![(x, y, false), (x + width, y, false), (x + width, y + height, false), (x, y + height, false)];
    }
    let (right, bottom, k) = (x + width, y + height, r * (1.0 - ARC));
    vec![
        (x + r, y, false),
        (right - r, y, false),
        (right - k, y, true),
        (right, y + k, true),
        (right, y + r, false),
        (right, bottom - r, false),
        (right, bottom - k, true),
        (right - k, bottom, true),
        (right - r, bottom, false),
        (x + r, bottom, false),
        (x + k, bottom, true),
        (x, bottom - k, true),
        (x, bottom - r, false),
        (x, y + r, false),
        (x, y + k, true),
        (x + k, y, true),
        (x + r, y, false),
    ]
}

/// Control points of a quarter circle of radius 1 stand this far along its tangents: 4/3·(√2 − 1).
const ARC: f32 = 0.552_284_8;

/// A circle.
pub(super) fn circle(cx: f32, cy: f32, r: f32) -> Outline {
    let k = r * ARC;
    vec![
        (cx + r, cy, false),
        (cx + r, cy + k, true),
        (cx + k, cy + r, true),
        (cx, cy + r, false),
        (cx - k, cy + r, true),
        (cx - r, cy + k, true),
        (cx - r, cy, false),
        (cx - r, cy - k, true),
        (cx - k, cy - r, true),
        (cx, cy - r, false),
        (cx + k, cy - r, true),
        (cx + r, cy - k, true),
        (cx + r, cy, false),
    ]
}
