//! Blocks into strips.

mod callout;
mod facts;
mod figure;
mod photo;
mod table;

use super::super::text::visible;
use super::shape::{self, Line, Span};
use super::strip::{Area, Mark, Paint, Rgb, Strip, Target};
use super::structure::{Attribute, Structure};
use crate::report::document::{Block, Document, Inline};
use crate::report::drawing::Colour;
use crate::results::Signal;
use std::sync::Arc;

pub(super) use photo::{Picture, PictureKind};

/// Size of running text in points.
pub(super) const BODY: f32 = 9.5;
/// Line height by size.
pub(super) const LEADING: f32 = 1.42;
/// Sizes of headings of level 1 to 4.
const HEADINGS: [f32; 4] = [20.0, 13.5, 11.0, 9.5];
/// Room above headings of level 1 to 4.
const ABOVE: [f32; 4] = [0.0, 17.0, 11.0, 8.0];
/// Room between paragraphs.
const GAP: f32 = 5.5;
/// Indent of a list.
const INDENT: f32 = 13.0;
/// Deepest nesting that still indents.
const DEEPEST: usize = 8;

/// Where blocks go.
#[derive(Clone, Copy)]
pub(super) struct Place {
    /// Left in points from the text's left.
    pub x: f32,
    /// Width in points.
    pub width: f32,
    /// Node of the structure.
    pub node: usize,
    /// Nesting of lists and callouts.
    pub depth: usize,
}

/// The document being laid out.
pub(super) struct Flow<'a> {
    document: &'a Document,
    /// Strips so far.
    pub strips: Vec<Strip>,
    /// Structure so far.
    pub structure: Structure,
    /// Header strips of tables, painted again on each new page.
    pub headers: Vec<Vec<Strip>>,
    /// Images.
    pub pictures: Vec<Picture>,
}

impl<'a> Flow<'a> {
    /// Lays a document out for a width in points.
    pub fn new(document: &'a Document, width: f32) -> Self {
        let mut flow = Self { document, strips: Vec::new(), structure: Structure::new(), headers: Vec::new(), pictures: Vec::new() };
        let place = Place { x: 0.0, width, node: Structure::ROOT, depth: 0 };
        if let Some(logo) = &document.meta.logo {
            flow.logo(logo, place);
        }
        flow.blocks(&document.blocks, place);
        flow
    }

    fn blocks(&mut self, blocks: &[Block], place: Place) {
        for block in blocks {
            self.block(block, place);
        }
    }

    fn block(&mut self, block: &Block, place: Place) {
        match block {
            Block::Heading { level, text, anchor } => self.heading(*level, text, anchor, place),
            Block::Paragraph(text) => self.paragraph(text, place),
            Block::List { start, items } => self.list(*start, items, place),
            Block::Callout { signal, title, blocks } => self.callout(*signal, title, blocks, place),
            Block::Table(table) => self.table(table, place),
            Block::Figure { caption, drawing } => self.figure(caption, drawing, place),
            Block::Photos(photos) => self.photos(photos, place),
            Block::Facts(facts) => self.facts(facts, place),
            Block::SignOff(lines) => self.sign_off(lines, place),
            Block::PageBreak => self.strips.push(Strip { breaks: true, ..Strip::default() }),
        }
    }

    fn colour(&self, colour: Colour) -> Rgb {
        colour.srgb(self.document.meta.accent)
    }

    fn ink(&self) -> Rgb {
        self.colour(Colour::Ink)
    }

    fn heading(&mut self, level: u8, text: &[Inline], anchor: &str, place: Place) {
        let index = usize::from(level.clamp(1, 4)) - 1;
        let tag = ["H1", "H2", "H3", "H4"][index];
        let node = self.structure.add(place.node, tag);
        let colour = if level <= 1 { self.colour(Colour::Accent) } else { self.ink() };
        let mut spans = self.spans(text, colour);
        spans.iter_mut().for_each(|s| s.bold = true);
        let size = HEADINGS[index];
        let title: String = spans.iter().filter(|s| s.mark.is_none()).map(|s| s.text.as_str()).collect();
        let first = self.strips.len();
        self.text(&spans, size, Place { node, ..place }, ABOVE[index]);
        for strip in &mut self.strips[first..] {
            strip.keep = true;
        }
        if let Some(strip) = self.strips.get_mut(first) {
            strip.target = Some(Target { level, text: title.trim().to_owned(), anchor: anchor.to_owned() });
        }
    }

    fn paragraph(&mut self, text: &[Inline], place: Place) {
        let node = self.structure.add(place.node, "P");
        let spans = self.spans(text, self.ink());
        self.text(&spans, BODY, Place { node, ..place }, GAP);
    }

    /// Lines of text as strips; no line of a paragraph stands alone at the foot or the head of a page.
    fn text(&mut self, spans: &[Span], size: f32, place: Place, gap: f32) {
        let lines = shape::shape(spans, size).lines(place.width);
        let count = lines.len();
        for (i, line) in lines.into_iter().enumerate() {
            let height = size * LEADING;
            let mut strip = Strip { height, gap: if i == 0 { gap } else { 0.0 }, ..Strip::default() };
            self.set(&mut strip, line, spans, (place.x, baseline(size)), place.node);
            strip.keep = count > 1 && (i == 0 || i + 2 == count);
            self.strips.push(strip);
        }
    }

    /// Sets a line into a strip with the pen at a point; marks are drawn, links get their area.
    fn set(&mut self, strip: &mut Strip, line: Line, spans: &[Span], (x, y): (f32, f32), node: usize) {
        let mut current = Mark { node: Some(node), paints: Vec::new() };
        for run in line.runs {
            let Some(span) = spans.get(run.span) else { continue };
            let left = x + run.x;
            if let Some(signal) = span.mark {
                let paints = callout::mark(signal, left, y - run.size * 0.76, run.size * 0.82, span.colour);
                strip.marks.push(Mark { node: None, paints });
                continue;
            }
            let width = run.width;
            let paint = |run| Paint::Text { x: left, y, run: Arc::new(run), colour: span.colour };
            match &span.link {
                None => current.paints.push(paint(run)),
                Some(href) => {
                    if !current.paints.is_empty() {
                        strip.marks.push(std::mem::replace(&mut current, Mark { node: Some(node), paints: Vec::new() }));
                    }
                    let link = self.structure.add(node, "Link");
                    let rect = (left, y - run.size, width, run.size * 1.3);
                    strip.areas.push(Area { href: Arc::clone(href), rect, node: link });
                    strip.marks.push(Mark { node: Some(link), paints: vec![paint(run)] });
                }
            }
        }
        if !current.paints.is_empty() {
            strip.marks.push(current);
        }
    }

    fn list(&mut self, start: Option<u64>, items: &[Vec<Block>], place: Place) {
        let list = self.structure.add_with(place.node, "L", Attribute::Numbered(start.is_some()));
        let indent = if place.depth < DEEPEST { INDENT } else { 0.0 };
        for (i, item) in items.iter().enumerate() {
            let node = self.structure.add(list, "LI");
            let label = self.structure.add(node, "Lbl");
            let body = self.structure.add(node, "LBody");
            let first = self.strips.len();
            self.blocks(item, Place { x: place.x + indent, width: place.width - indent, node: body, depth: place.depth + 1 });
            if self.strips.len() == first {
                self.strips.push(Strip { height: BODY * LEADING, ..Strip::default() });
            }
            let text = start.map_or_else(|| "•".to_owned(), |n| format!("{}.", n.saturating_add(i as u64)));
            self.label(first, &text, place.x, label);
        }
    }

    /// Puts a label at the left of a strip's first line.
    fn label(&mut self, strip: usize, text: &str, x: f32, node: usize) {
        let colour = self.colour(Colour::Quiet);
        let span = Span::new(text, colour);
        let lines = shape::shape(std::slice::from_ref(&span), BODY).lines(INDENT * 3.0);
        if let (Some(line), Some(strip)) = (lines.into_iter().next(), self.strips.get_mut(strip)) {
            let paints =
                line.runs.into_iter().map(|run| Paint::Text { x: x + run.x, y: baseline(BODY), run: Arc::new(run), colour }).collect();
            strip.marks.insert(0, Mark { node: Some(node), paints });
        }
    }

    /// Inlines as spans.
    fn spans(&self, inlines: &[Inline], colour: Rgb) -> Vec<Span> {
        let mut spans = Vec::new();
        self.collect(inlines, &Span::new("", colour), &mut spans);
        spans
    }

    fn collect(&self, inlines: &[Inline], style: &Span, spans: &mut Vec<Span>) {
        for inline in inlines {
            match inline {
                Inline::Text(text) => spans.push(Span { text: visible(text).into_owned(), ..style.clone() }),
                Inline::Break => spans.push(Span { text: "\n".into(), ..style.clone() }),
                Inline::Strong(inner) => self.collect(inner, &Span { bold: true, ..style.clone() }, spans),
                Inline::Emphasis(inner) => self.collect(inner, &Span { italic: true, ..style.clone() }, spans),
                Inline::Signal(signal) => spans.extend(self.signal(*signal)),
                Inline::Link { href, text } => {
                    let colour = self.colour(Colour::Accent);
                    self.collect(text, &Span { colour, link: Some(href.as_str().into()), ..style.clone() }, spans);
                }
            }
        }
    }

    /// A signal word behind the room for its mark.
    fn signal(&self, signal: Signal) -> [Span; 3] {
        let colour = self.colour(Colour::Signal(signal));
        let room = Span { mark: Some(signal), ..Span::bold("\u{2003}\u{2060}", colour) };
        [room, Span::bold("\u{2009}\u{2060}", colour), Span::bold(signal.word(), colour)]
    }
}

/// From the top of a line to its baseline.
fn baseline(size: f32) -> f32 {
    size * 1.06
}
