//! Markdown (CommonMark) into blocks.

use super::Places;
use super::escape::{decoded, target};
use crate::report::document::{Block, Inline};
use crate::results::Signal;
use pulldown_cmark::{Event, HeadingLevel, Options, Parser, Tag, TagEnd};
use std::collections::HashSet;

/// The blocks of a text. What a report has no block for (HTML, code, Markdown tables) comes out as its text.
pub(super) fn blocks(markdown: &str, places: &Places) -> Vec<Block> {
    let mut builder = Builder { places, stack: vec![Frame::new(Kind::Root)], anchors: HashSet::new(), image: None };
    for (event, range) in Parser::new_ext(markdown, Options::empty()).into_offset_iter() {
        match event {
            Event::Start(tag) => builder.start(&tag, &markdown[range]),
            Event::End(tag) => builder.end(tag),
            Event::Text(text) | Event::Code(text) | Event::Html(text) | Event::InlineHtml(text) => builder.text(&decoded(&text)),
            Event::SoftBreak => builder.soft_break(),
            Event::HardBreak => builder.inline(Inline::Break),
            Event::Rule => builder.block(Block::PageBreak),
            _ => {}
        }
    }
    builder.stack.swap_remove(0).blocks
}

/// What a frame will become.
enum Kind {
    Root,
    Paragraph,
    Heading(u8),
    List(Option<u64>),
    Item,
    Quote,
    /// A quotation that begins with `[!WORD]`, its title not yet read.
    Marked(Option<Signal>),
    Callout {
        signal: Option<Signal>,
        title: Vec<Inline>,
    },
    Strong,
    Emphasis,
    Link(String),
}

/// An open element with what it holds so far.
struct Frame {
    kind: Kind,
    blocks: Vec<Block>,
    inlines: Vec<Inline>,
    items: Vec<Vec<Block>>,
}

impl Frame {
    fn new(kind: Kind) -> Self {
        Self { kind, blocks: Vec::new(), inlines: Vec::new(), items: Vec::new() }
    }
}

struct Builder<'a> {
    places: &'a Places<'a>,
    stack: Vec<Frame>,
    anchors: HashSet<String>,
    /// The image being read: target and caption so far.
    image: Option<(String, String)>,
}

impl Builder<'_> {
    fn top(&mut self) -> &mut Frame {
        if self.stack.is_empty() {
            self.stack.push(Frame::new(Kind::Root));
        }
        let last = self.stack.len() - 1;
        &mut self.stack[last]
    }

    fn inline(&mut self, inline: Inline) {
        self.top().inlines.push(inline);
    }

    fn text(&mut self, text: &str) {
        if let Some((_, caption)) = &mut self.image {
            caption.push_str(text);
        } else if let Some(Inline::Text(last)) = self.top().inlines.last_mut() {
            last.push_str(text);
        } else {
            self.inline(Inline::Text(text.to_owned()));
        }
    }

    /// A line end is a blank; behind the first line of a callout it ends the title.
    fn soft_break(&mut self) {
        if self.in_marked() { self.title() } else { self.text(" ") }
    }

    /// What the open paragraph holds is the title of the callout around it.
    fn title(&mut self) {
        let mut title = std::mem::take(&mut self.top().inlines);
        if let Some(Inline::Text(first)) = title.first_mut() {
            let rest = first.split_once(']').map_or("", |(_, rest)| rest);
            *first = rest.strip_prefix(' ').unwrap_or(rest).to_owned();
        }
        title.retain(|i| *i != Inline::Text(String::new()));
        let at = self.stack.len().saturating_sub(2);
        if let Some(frame) = self.stack.get_mut(at) {
            let signal = if let Kind::Marked(signal) = frame.kind { signal } else { None };
            frame.kind = Kind::Callout { signal, title };
        }
    }

    fn block(&mut self, block: Block) {
        self.loose();
        self.top().blocks.push(block);
    }

    /// Text that stands in an item without a paragraph of its own.
    fn loose(&mut self) {
        let frame = self.top();
        if matches!(frame.kind, Kind::Item | Kind::Root) && !frame.inlines.is_empty() {
            let inlines = std::mem::take(&mut frame.inlines);
            frame.blocks.push(Block::Paragraph(inlines));
        }
    }

    fn start(&mut self, tag: &Tag, source: &str) {
        let kind = match tag {
            Tag::Paragraph => Kind::Paragraph,
            Tag::Heading { level, .. } => Kind::Heading(depth(*level)),
            Tag::List(start) => {
                self.loose();
                Kind::List(*start)
            }
            Tag::Item => Kind::Item,
            Tag::BlockQuote(_) => marked(source).map_or(Kind::Quote, Kind::Marked),
            Tag::Strong => Kind::Strong,
            Tag::Emphasis => Kind::Emphasis,
            Tag::Link { dest_url, .. } => Kind::Link(target(dest_url)),
            Tag::Image { dest_url, .. } => {
                self.image = Some((decoded(dest_url), String::new()));
                return;
            }
            Tag::CodeBlock(_) => Kind::Paragraph,
            _ => return,
        };
        self.stack.push(Frame::new(kind));
    }

    fn end(&mut self, tag: TagEnd) {
        match tag {
            TagEnd::Image => return self.place(),
            TagEnd::Paragraph if self.in_marked() => self.title(),
            TagEnd::Paragraph
            | TagEnd::CodeBlock
            | TagEnd::Heading(_)
            | TagEnd::List(_)
            | TagEnd::Item
            | TagEnd::BlockQuote(_)
            | TagEnd::Strong
            | TagEnd::Emphasis
            | TagEnd::Link => {}
            _ => return,
        }
        self.loose();
        if self.stack.len() > 1
            && let Some(frame) = self.stack.pop()
        {
            self.close(frame);
        }
    }

    /// Whether what is open is the first paragraph of a callout.
    fn in_marked(&self) -> bool {
        self.stack.len().checked_sub(2).and_then(|i| self.stack.get(i)).is_some_and(|f| matches!(f.kind, Kind::Marked(_)))
    }

    fn close(&mut self, frame: Frame) {
        match frame.kind {
            Kind::Root => {}
            Kind::Paragraph => {
                if frame.inlines.iter().any(|i| !matches!(i, Inline::Text(t) if t.trim().is_empty())) {
                    self.block(Block::Paragraph(frame.inlines));
                }
                // Placed things stand behind the paragraph they were named in.
                for block in frame.blocks {
                    self.block(block);
                }
            }
            Kind::Heading(level) => {
                let anchor = self.anchor(&frame.inlines);
                self.block(Block::Heading { level, text: frame.inlines, anchor });
            }
            Kind::List(start) => self.block(Block::List { start, items: frame.items }),
            Kind::Item => self.top().items.push(frame.blocks),
            Kind::Quote | Kind::Marked(_) => self.block(Block::Callout { signal: None, title: Vec::new(), blocks: frame.blocks }),
            Kind::Callout { signal, title } => self.block(Block::Callout { signal, title, blocks: frame.blocks }),
            Kind::Strong => self.inline(Inline::Strong(frame.inlines)),
            Kind::Emphasis => self.inline(Inline::Emphasis(frame.inlines)),
            Kind::Link(href) => {
                let safe = ["https://", "mailto:", "#"].iter().any(|s| href.starts_with(s));
                if safe {
                    self.inline(Inline::Link { href, text: frame.inlines });
                } else {
                    for inline in frame.inlines {
                        self.inline(inline);
                    }
                }
            }
        }
    }

    /// An image: a signal word within the line, or blocks behind the paragraph.
    fn place(&mut self) {
        let Some((target, caption)) = self.image.take() else { return };
        let (scheme, name) = target.split_once(':').unwrap_or((&target, ""));
        if scheme == "signal" {
            if let Some(signal) = Signal::ALL.into_iter().find(|s| s.word() == name) {
                self.inline(Inline::Signal(signal));
            }
            return;
        }
        let blocks = self.places.at(scheme, name, &caption);
        self.loose();
        // Marks such as strong hold no blocks: what is placed within them belongs to the paragraph around.
        let holds = |f: &Frame| !matches!(f.kind, Kind::Strong | Kind::Emphasis | Kind::Link(_) | Kind::Heading(_) | Kind::List(_));
        if let Some(frame) = self.stack.iter_mut().rev().find(|f| holds(f)) {
            frame.blocks.extend(blocks);
        }
    }

    fn anchor(&mut self, text: &[Inline]) -> String {
        let mut slug = String::new();
        for c in plain(text).to_lowercase().chars() {
            if c.is_alphanumeric() {
                slug.push(c);
            } else if !slug.ends_with('-') {
                slug.push('-');
            }
        }
        let base = slug.trim_matches('-').to_owned();
        let mut anchor = base.clone();
        let mut n = 1;
        while !self.anchors.insert(anchor.clone()) {
            n += 1;
            anchor = format!("{base}-{n}");
        }
        anchor
    }
}

/// Text without marks.
pub(in crate::report) fn plain(inlines: &[Inline]) -> String {
    inlines
        .iter()
        .map(|inline| match inline {
            Inline::Text(t) => t.clone(),
            Inline::Strong(i) | Inline::Emphasis(i) | Inline::Link { text: i, .. } => plain(i),
            Inline::Signal(s) => s.word().to_owned(),
            Inline::Break => " ".to_owned(),
        })
        .collect()
}

/// The signal word of a quotation whose source begins with `[!WORD]`; within `Some`, none for any other word.
fn marked(source: &str) -> Option<Option<Signal>> {
    let rest = source.trim_start_matches(['>', ' ']).strip_prefix("[!")?;
    let word = decoded(&rest[..rest.find(']')?]);
    Some(Signal::ALL.into_iter().find(|s| s.word() == word))
}

fn depth(level: HeadingLevel) -> u8 {
    match level {
        HeadingLevel::H1 => 1,
        HeadingLevel::H2 => 2,
        HeadingLevel::H3 => 3,
        _ => 4,
    }
}
