//! A drawing as SVG 1.1: labels as real text, no script, nothing fetched from elsewhere.

use crate::report::drawing::{Anchor, Colour, Drawing, Shape};
use std::fmt::Write as _;

/// Faces close to the report's own, which the figures were measured with; none is fetched.
const FACES: &str = "Noto Sans, Segoe UI, Helvetica Neue, Arial, sans-serif";

/// The drawing as one `svg` element, one unit a point; `accent` is the company's colour. Its alternative text stands in `title` and
/// `desc`, the first sentence and the whole.
#[must_use]
pub fn write(drawing: &Drawing, accent: [u8; 3]) -> String {
    let (w, h) = (num(drawing.width), num(drawing.height));
    let mut out = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" role=\"img\" width=\"{w}pt\" height=\"{h}pt\" viewBox=\"0 0 {w} {h}\" \
         font-family=\"{FACES}\">\n"
    );
    let title = drawing.alt.split_inclusive(". ").next().unwrap_or_default().trim_end();
    let _ = writeln!(out, "<title>{}</title>", escaped(title));
    let _ = writeln!(out, "<desc>{}</desc>", escaped(&drawing.alt));
    let paint = Paint { accent };
    for shape in &drawing.shapes {
        paint.shape(&mut out, shape);
        out.push('\n');
    }
    out.push_str("</svg>\n");
    out
}

struct Paint {
    accent: [u8; 3],
}

impl Paint {
    fn colour(&self, colour: Colour) -> String {
        let [r, g, b] = colour.srgb(self.accent);
        format!("#{r:02x}{g:02x}{b:02x}")
    }

    fn area(&self, fill: Option<Colour>, stroke: Option<(f64, Colour)>) -> String {
        let mut out = format!(" fill=\"{}\"", fill.map_or_else(|| "none".to_owned(), |c| self.colour(c)));
        if let Some((width, colour)) = stroke {
            let _ = write!(out, " stroke=\"{}\" stroke-width=\"{}\"", self.colour(colour), num(width));
        }
        out
    }

    /// Writing to a `String` does not fail.
    fn shape(&self, out: &mut String, shape: &Shape) {
        let _ = match shape {
            Shape::Line { points, width, colour, dash, round } => {
                let dash = dash.map_or_else(String::new, |(on, off)| format!(" stroke-dasharray=\"{} {}\"", num(on), num(off)));
                let ends = if *round { " stroke-linecap=\"round\" stroke-linejoin=\"round\"" } else { "" };
                let stroke = self.area(None, Some((*width, *colour)));
                write!(out, "<polyline points=\"{}\"{stroke}{dash}{ends}/>", corners(points))
            }
            Shape::Rect { x, y, width, height, radius, fill } => {
                let round = if *radius > 0.0 { format!(" rx=\"{}\"", num(*radius)) } else { String::new() };
                let (x, y, w, h) = (num(*x), num(*y), num(*width), num(*height));
                write!(out, "<rect x=\"{x}\" y=\"{y}\" width=\"{w}\" height=\"{h}\"{round} fill=\"{}\"/>", self.colour(*fill))
            }
            Shape::Polygon { points, fill, stroke } => {
                write!(out, "<polygon points=\"{}\"{}/>", corners(points), self.area(*fill, *stroke))
            }
            Shape::Circle { centre, radius, fill, stroke } => {
                let (x, y, r) = (num(centre.0), num(centre.1), num(*radius));
                write!(out, "<circle cx=\"{x}\" cy=\"{y}\" r=\"{r}\"{}/>", self.area(*fill, *stroke))
            }
            Shape::Text { at, text, size, bold, anchor, colour } => {
                let anchor = match anchor {
                    Anchor::Start => "",
                    Anchor::Middle => " text-anchor=\"middle\"",
                    Anchor::End => " text-anchor=\"end\"",
                };
                let weight = if *bold { " font-weight=\"700\"" } else { "" };
                let (x, y, size, fill) = (num(at.0), num(at.1), num(*size), self.colour(*colour));
                write!(out, "<text x=\"{x}\" y=\"{y}\" font-size=\"{size}\"{weight}{anchor} fill=\"{fill}\">{}</text>", escaped(text))
            }
        };
    }
}

fn corners(points: &[(f64, f64)]) -> String {
    points.iter().map(|(x, y)| format!("{},{}", num(*x), num(*y))).collect::<Vec<_>>().join(" ")
}

/// A coordinate to a hundredth of a point, without needless digits; 0 for what is no number.
fn num(value: f64) -> String {
    if !value.is_finite() {
        return "0".to_owned();
    }
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

/// Text as XML 1.0 can hold it: markup escaped, characters it has no place for shown as such.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            '\t' | '\n' | '\r' => out.push(' '),
            '\u{fffe}' | '\u{ffff}' => out.push(char::REPLACEMENT_CHARACTER),
            c if c.is_control() => out.push(char::REPLACEMENT_CHARACTER),
            c => out.push(c),
        }
    }
    out
}
