//! Strips onto pages, with running lines, repeated headers and the order of the content.

use super::flow::Flow;
use super::shape::{self, Span};
use super::strip::{Area, Mark, Paint, Strip, Target};
use super::structure::{Attribute, Kid};
use crate::report::document::{Document, PageSize};
use crate::report::drawing::Colour;
use std::sync::Arc;

/// Margins at the sides.
pub(super) const SIDE: f32 = 54.0;
/// From the top of the page to the text.
const TOP: f32 = 66.0;
/// From the text to the foot of the page.
const BOTTOM: f32 = 60.0;
/// Size of running lines.
const RUNNING: f32 = 7.8;

/// A filled page.
#[derive(Default)]
pub(super) struct Page {
    /// Marked content in the order it is painted; its number is its position among those with a node.
    pub marks: Vec<Mark>,
    /// Links.
    pub areas: Vec<Area>,
}

/// A heading's place.
pub(super) struct Placed {
    /// The heading.
    pub target: Target,
    /// Its page.
    pub page: usize,
    /// From the top of the page.
    pub y: f32,
}

/// All pages.
pub(super) struct Pages {
    /// The pages.
    pub pages: Vec<Page>,
    /// Headings.
    pub placed: Vec<Placed>,
    /// Figures, each with the top of its strip on its page.
    figures: Vec<(usize, f32)>,
    /// Width and height.
    pub size: (f32, f32),
}

struct Filler<'a> {
    headers: &'a [Vec<Strip>],
    pages: Pages,
    y: f32,
    fresh: bool,
}

/// Fills pages, then paints the running lines, which know how many pages there are.
pub(super) fn fill(document: &Document, flow: &mut Flow) -> Pages {
    let size = points(document.meta.page);
    let headers = std::mem::take(&mut flow.headers);
    let pages = Pages { pages: vec![Page::default()], placed: Vec::new(), figures: Vec::new(), size };
    let mut filler = Filler { headers: &headers, pages, y: TOP, fresh: true };
    let strips = std::mem::take(&mut flow.strips);
    filler.all(strips);
    let mut pages = filler.pages;
    running(document, &mut pages);
    for (node, top) in &pages.figures {
        if let Attribute::Box((x, y, ..)) = &mut flow.structure.nodes[*node].attribute {
            *x += SIDE;
            *y += top;
        }
    }
    number(&pages, flow);
    pages
}

fn points(page: PageSize) -> (f32, f32) {
    let (width, height) = page.points();
    (width as f32, height as f32)
}

impl Filler<'_> {
    fn foot(&self) -> f32 {
        self.pages.size.1 - BOTTOM
    }

    fn all(&mut self, strips: Vec<Strip>) {
        // How much room a strip and those that must stay with it need.
        let mut needs = vec![0.0f32; strips.len()];
        for i in (0..strips.len()).rev() {
            let after = strips.get(i + 1).filter(|_| strips[i].keep).map_or(0.0, |s| s.gap + needs[i + 1]);
            needs[i] = strips[i].height + after;
        }
        let whole = self.foot() - TOP;
        let mut bound = false;
        for (strip, need) in strips.into_iter().zip(needs) {
            if strip.breaks {
                self.turn(None);
                bound = false;
                continue;
            }
            let keep = strip.keep;
            // Inside a group that has been placed together nothing turns the page, unless the group is taller than a page.
            let need = if bound || need > whole { strip.height } else { need };
            if !self.fresh && self.y + strip.gap + need > self.foot() {
                self.turn(strip.table);
            }
            bound = keep;
            self.put(strip);
        }
    }

    fn turn(&mut self, table: Option<usize>) {
        if self.fresh {
            return;
        }
        self.pages.pages.push(Page::default());
        self.y = TOP;
        self.fresh = true;
        let header = table.and_then(|t| self.headers.get(t)).map_or(&[][..], Vec::as_slice);
        // A header that would fill the page is not worth repeating.
        let fits = header.iter().map(|s| s.height).sum::<f32>() < (self.foot() - TOP) / 2.0;
        for header in header.iter().filter(|_| fits) {
            let mut again = header.clone();
            again.gap = 0.0;
            again.areas.clear();
            for mark in &mut again.marks {
                mark.node = None;
            }
            self.put(again);
        }
    }

    fn put(&mut self, mut strip: Strip) {
        if !self.fresh {
            self.y += strip.gap;
        }
        strip.shift(SIDE, self.y);
        let page = self.pages.pages.len() - 1;
        let top = self.y;
        self.pages.figures.extend(strip.figures.drain(..).map(|node| (node, top)));
        if let Some(target) = strip.target.take() {
            self.pages.placed.push(Placed { target, page, y: self.y });
        }
        if let Some(page) = self.pages.pages.last_mut() {
            page.marks.append(&mut strip.marks);
            page.areas.append(&mut strip.areas);
        }
        self.y += strip.height;
        self.fresh = false;
    }
}

/// Head and foot of every page, as artifacts.
fn running(document: &Document, pages: &mut Pages) {
    let meta = &document.meta;
    let (width, height) = pages.size;
    let quiet = Colour::Quiet.srgb(meta.accent);
    let count = pages.pages.len();
    let rule = |y: f32, colour: [u8; 3], w: f32| Paint::Line {
        points: vec![(SIDE, y), (width - SIDE, y)],
        width: w,
        colour,
        dash: None,
        round: false,
    };
    for (i, page) in pages.pages.iter_mut().enumerate() {
        let words = meta.page_words.replace("{page}", &(i + 1).to_string()).replace("{pages}", &count.to_string());
        let half = (width - 2.0 * SIDE) / 2.0 - 6.0;
        let mut paints = vec![rule(44.0, Colour::Accent.srgb(meta.accent), 0.9), rule(height - 44.0, Colour::Faint.srgb(meta.accent), 0.5)];
        paints.extend(line(&meta.header_left, quiet, true, SIDE, 38.0, half, false));
        paints.extend(line(&meta.header_right, quiet, false, width - SIDE, 38.0, half, true));
        paints.extend(line(&meta.footer_left, quiet, false, SIDE, height - 33.0, half * 1.6, false));
        paints.extend(line(&words, quiet, false, width - SIDE, height - 33.0, half, true));
        page.marks.push(Mark { node: None, paints });
    }
}

/// One line of text from a point, or up to it; what does not fit is cut, and dots say so.
fn line(text: &str, colour: [u8; 3], bold: bool, x: f32, y: f32, room: f32, to: bool) -> Vec<Paint> {
    let broken = |text: &str| shape::shape(&[Span { bold, ..Span::new(text, colour) }], RUNNING).lines(room);
    let mut lines = broken(text);
    if lines.len() > 1 {
        let first: String = lines[0].runs.iter().flat_map(|r| &r.glyphs).map(|g| g.text.as_str()).collect();
        let kept = first.chars().count().saturating_sub(2);
        lines = broken(&format!("{}…", first.chars().take(kept).collect::<String>().trim_end()));
    }
    let Some(line) = lines.into_iter().next() else { return Vec::new() };
    let left = if to { x - line.width } else { x };
    line.runs.into_iter().map(|run| Paint::Text { x: left + run.x, y, run: Arc::new(run), colour }).collect()
}

/// Gives the structure its content: page and number of each mark and link; then puts the kids of each node in reading order.
fn number(pages: &Pages, flow: &mut Flow) {
    let nodes = &mut flow.structure.nodes;
    let mut first: Vec<Option<(usize, usize)>> = vec![None; nodes.len()];
    for (p, page) in pages.pages.iter().enumerate() {
        for (n, node) in page.marks.iter().filter_map(|m| m.node).enumerate() {
            nodes[node].kids.push(Kid::Content(p, n));
            first[node] = first[node].or(Some((p, n)));
        }
        for (n, area) in page.areas.iter().enumerate() {
            nodes[area.node].kids.push(Kid::Link(p, n));
        }
    }
    // Nodes stand behind their parents, so that going backwards each knows its first content before its parent asks.
    for n in (0..nodes.len()).rev() {
        let of = |kid: &Kid| match kid {
            Kid::Node(k) => first[*k],
            Kid::Content(p, m) => Some((*p, *m)),
            Kid::Link(..) => None,
        };
        let mut at = None;
        let mut keyed: Vec<_> = nodes[n]
            .kids
            .iter()
            .map(|kid| {
                // What has no content of its own stays behind what stood before it.
                at = of(kid).or(at);
                (at, *kid)
            })
            .collect();
        keyed.sort_by_key(|(place, _)| *place);
        first[n] = keyed.iter().find_map(|(place, _)| *place);
        nodes[n].kids = keyed.into_iter().map(|(_, kid)| kid).collect();
    }
}
