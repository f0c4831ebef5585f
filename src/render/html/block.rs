//! Blocks of the body.

use super::inline::{self, identifier};
use super::markup::Markup;
use super::{data, mark, table};
use crate::render::svg;
use crate::report::document::{Block, CaptionedImage, Inline, Meta};
use crate::report::drawing::Drawing;
use crate::results::Signal;
use std::collections::BTreeSet;

/// Writes blocks, and remembers which identifiers are taken.
pub(super) struct Blocks<'a> {
    meta: &'a Meta,
    taken: BTreeSet<String>,
}

impl<'a> Blocks<'a> {
    /// For a document with this metadata.
    pub(super) fn new(meta: &'a Meta) -> Self {
        Self { meta, taken: BTreeSet::new() }
    }

    /// Writes blocks one after the other.
    pub(super) fn write(&mut self, page: &mut Markup, blocks: &[Block]) {
        for block in blocks {
            page.line();
            self.block(page, block);
        }
    }

    fn block(&mut self, page: &mut Markup, block: &Block) {
        match block {
            Block::Heading { level, text, anchor } => self.heading(page, *level, text, anchor),
            Block::Paragraph(text) => page.element("p", &[], |page| inline::write(page, text)),
            Block::List { start, items } => self.list(page, *start, items),
            Block::Callout { signal, title, blocks } => self.callout(page, *signal, title, blocks),
            Block::Table(table) => table::write(page, table, self.meta.decimal_mark),
            Block::Figure { caption, drawing } => self.figure(page, caption, drawing),
            Block::Photos(photos) => page.element("div", &[("class", "photos")], |page| photos.iter().for_each(|p| photo(page, p))),
            Block::Facts(facts) => page.element("dl", &[("class", "facts")], |page| {
                facts.iter().for_each(|(label, value)| pair(page, label, |page| inline::write(page, value)));
            }),
            Block::SignOff(lines) => page.element("dl", &[("class", "sign-off")], |page| {
                lines.iter().for_each(|(label, known)| pair(page, label, |page| page.text(known.as_deref().unwrap_or("\u{a0}"))));
            }),
            Block::PageBreak => page.element("div", &[("class", "page-break")], |_| {}),
        }
    }

    fn heading(&mut self, page: &mut Markup, level: u8, text: &[Inline], anchor: &str) {
        let tag = ["h1", "h2", "h3", "h4"][usize::from(level.clamp(1, 4)) - 1];
        let wanted = identifier(anchor);
        let id = match wanted.as_str() {
            "" => None,
            _ if !self.taken.contains(&wanted) => Some(wanted),
            _ => (2..).map(|n: u64| format!("{wanted}-{n}")).find(|id| !self.taken.contains(id)),
        };
        match id {
            Some(id) => {
                page.element(tag, &[("id", &id)], |page| inline::write(page, text));
                self.taken.insert(id);
            }
            None => page.element(tag, &[], |page| inline::write(page, text)),
        }
    }

    fn list(&mut self, page: &mut Markup, start: Option<u64>, items: &[Vec<Block>]) {
        let number = start.unwrap_or(1).to_string();
        let (tag, attributes) = if start.is_some() { ("ol", &[("start", number.as_str())][..]) } else { ("ul", &[][..]) };
        page.element(tag, attributes, |page| {
            for item in items {
                page.element("li", &[], |page| match item.as_slice() {
                    [Block::Paragraph(text)] => inline::write(page, text),
                    blocks => self.write(page, blocks),
                });
            }
        });
    }

    fn callout(&mut self, page: &mut Markup, signal: Option<Signal>, title: &[Inline], blocks: &[Block]) {
        let class = format!("callout {}", signal.map_or("", |s| mark::class(s).trim_start_matches("signal ")));
        page.element("div", &[("class", class.trim_end()), ("role", "note")], |page| {
            if signal.is_some() || !title.is_empty() {
                page.element("p", &[("class", "callout-title")], |page| {
                    if let Some(signal) = signal {
                        mark::signal(page, signal);
                        page.text(" ");
                    }
                    page.element("strong", &[], |page| inline::write(page, title));
                });
            }
            self.write(page, blocks);
        });
    }

    fn figure(&mut self, page: &mut Markup, caption: &[Inline], drawing: &Drawing) {
        let accent = self.meta.accent;
        page.element("figure", &[("class", "drawing")], |page| {
            page.raw(&svg::write(drawing, accent));
            page.element("figcaption", &[], |page| inline::write(page, caption));
        });
    }
}

fn photo(page: &mut Markup, photo: &CaptionedImage) {
    page.element("figure", &[], |page| {
        data::image(page, &photo.image, "photo");
        page.element("figcaption", &[], |page| page.text(&photo.caption));
    });
}

fn pair(page: &mut Markup, label: &str, value: impl FnOnce(&mut Markup)) {
    page.element("div", &[], |page| {
        page.element("dt", &[], |page| page.text(label));
        page.element("dd", &[], value);
    });
}
