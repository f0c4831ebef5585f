//! A small drawing interface: shapes in points, colours by role, labels as real text.
//!
//! Figures build a [`Drawing`]; the PDF and SVG back ends paint it. The origin is the top left corner, y grows downwards, one
//! unit is one point (1/72 in).

use crate::results::Signal;

/// A finished drawing.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Drawing {
    /// Width in points; the text column of a report is 504 pt on Letter, 487 pt on A4.
    pub width: f64,
    /// Height in points.
    pub height: f64,
    /// Alternative text: what a reader who cannot see it must know.
    pub alt: String,
    /// Shapes, painted in order.
    pub shapes: Vec<Shape>,
}

/// One shape.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// A stroked polyline.
    Line {
        /// Its corners.
        points: Vec<(f64, f64)>,
        /// Stroke width.
        width: f64,
        /// Colour.
        colour: Colour,
        /// Dash and gap lengths; solid where `None`.
        dash: Option<(f64, f64)>,
        /// Rounded ends.
        round: bool,
    },
    /// A filled rectangle with optional corner radius.
    Rect {
        /// Left.
        x: f64,
        /// Top.
        y: f64,
        /// Width.
        width: f64,
        /// Height.
        height: f64,
        /// Corner radius.
        radius: f64,
        /// Fill.
        fill: Colour,
    },
    /// A filled or stroked closed polygon.
    Polygon {
        /// Corners.
        points: Vec<(f64, f64)>,
        /// Fill.
        fill: Option<Colour>,
        /// Stroke width and colour.
        stroke: Option<(f64, Colour)>,
    },
    /// A filled circle.
    Circle {
        /// Centre.
        centre: (f64, f64),
        /// Radius.
        radius: f64,
        /// Fill.
        fill: Option<Colour>,
        /// Stroke width and colour.
        stroke: Option<(f64, Colour)>,
    },
    /// A line of text on its baseline.
    Text {
        /// Anchor point.
        at: (f64, f64),
        /// The text.
        text: String,
        /// Font size in points.
        size: f64,
        /// Bold.
        bold: bool,
        /// Which part of the text stands at the anchor.
        anchor: Anchor,
        /// Colour.
        colour: Colour,
    },
}

/// Where a text stands to its anchor point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    /// Begins there.
    Start,
    /// Centred there.
    Middle,
    /// Ends there.
    End,
}

/// A colour by role; each back end knows its sRGB value from [`Colour::srgb`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Colour {
    /// Text and marks.
    Ink,
    /// Secondary text.
    Quiet,
    /// Beams, rules, guides.
    Faint,
    /// Shaded tolerance band.
    Band,
    /// Paper.
    Paper,
    /// The company's accent.
    Accent,
    /// A signal word's colour.
    Signal(Signal),
}

impl Colour {
    /// sRGB of the role; `accent` is the company's.
    #[must_use]
    pub fn srgb(self, accent: [u8; 3]) -> [u8; 3] {
        match self {
            Self::Ink => [0x1d, 0x23, 0x2b],
            Self::Quiet => [0x55, 0x60, 0x6b],
            Self::Faint => [0xc4, 0xcb, 0xd2],
            Self::Band => [0xe3, 0xec, 0xea],
            Self::Paper => [0xff, 0xff, 0xff],
            Self::Accent => accent,
            // Darkness falls with severity, so that the order survives a grey print; each has 4.5:1 on white.
            Self::Signal(Signal::Danger) => [0x8c, 0x12, 0x2b],
            Self::Signal(Signal::Warning) => [0xa8, 0x41, 0x0c],
            Self::Signal(Signal::Caution) => [0x7a, 0x5c, 0x00],
            Self::Signal(Signal::Notice) => [0x2c, 0x5a, 0x78],
        }
    }
}

/// Measures text, so that figures can place labels without knowing fonts.
pub trait Measure {
    /// Advance width in points of a line of text in the report's font.
    fn width(&self, text: &str, size: f64, bold: bool) -> f64;
}
