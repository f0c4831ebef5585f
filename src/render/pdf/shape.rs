//! Shaping and line breaking: styled text into lines of glyphs.

use parley::fontique::{Blob, Collection, CollectionOptions};
use parley::{FontContext, FontFamily, FontStyle, FontWeight, LayoutContext, LineHeight, OverflowWrap, StyleProperty};
use std::cell::RefCell;
use std::sync::{Arc, OnceLock};

/// Faces of the report's font: regular, bold, italic, bold italic.
pub(super) const FACES: [(&str, &[u8]); 4] = [
    ("NotoSans-Regular", notosans::REGULAR_TTF),
    ("NotoSans-Bold", notosans::BOLD_TTF),
    ("NotoSans-Italic", notosans::ITALIC_TTF),
    ("NotoSans-BoldItalic", notosans::BOLD_ITALIC_TTF),
];

/// Stands for a character that the font has no glyph for; the font has one for it.
const REPLACEMENT: char = '\u{FFFD}';

/// Forbids a line break where it stands.
pub(super) const WORD_JOINER: char = '\u{2060}';

/// A stretch of text in one style.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Span {
    /// The text.
    pub text: String,
    /// Bold.
    pub bold: bool,
    /// Italic.
    pub italic: bool,
    /// sRGB.
    pub colour: [u8; 3],
    /// Link target.
    pub link: Option<Arc<str>>,
    /// Not text but a mark to be drawn in its place; the text keeps the room for it.
    pub mark: Option<crate::results::Signal>,
}

impl Span {
    /// Plain text.
    pub fn new(text: &str, colour: [u8; 3]) -> Self {
        Self { text: text.to_owned(), bold: false, italic: false, colour, link: None, mark: None }
    }

    /// In bold.
    pub fn bold(text: &str, colour: [u8; 3]) -> Self {
        Self { bold: true, ..Self::new(text, colour) }
    }
}

/// A glyph with the text it stands for.
#[derive(Clone, Debug)]
pub(super) struct Glyph {
    /// Glyph number in the whole face.
    pub id: u16,
    /// Advance in points.
    pub advance: f32,
    /// Offset from the pen in points, to the right and downwards.
    pub offset: (f32, f32),
    /// Text, empty for the further glyphs of a cluster.
    pub text: String,
}

/// Glyphs of one face and span.
#[derive(Clone, Debug)]
pub(super) struct Run {
    /// Position in [`FACES`].
    pub face: usize,
    /// Position of its span.
    pub span: usize,
    /// From the line's left, in points.
    pub x: f32,
    /// Width in points.
    pub width: f32,
    /// Size in points.
    pub size: f32,
    /// The glyphs from left to right.
    pub glyphs: Vec<Glyph>,
}

/// A broken line.
#[derive(Clone, Debug, Default)]
pub(super) struct Line {
    /// Its runs from left to right.
    pub runs: Vec<Run>,
    /// Width without blanks at its end.
    pub width: f32,
}

/// Text that has been shaped, not yet broken.
pub(super) struct Shaped {
    layout: parley::Layout<u32>,
    text: String,
}

struct Shaper {
    fonts: FontContext,
    layout: LayoutContext<u32>,
    blobs: [u64; 4],
}

/// The faces, loaded once; clones share them.
fn blobs() -> &'static [Blob<u8>; 4] {
    static BLOBS: OnceLock<[Blob<u8>; 4]> = OnceLock::new();
    BLOBS.get_or_init(|| FACES.map(|(_, bytes)| Blob::new(Arc::new(bytes))))
}

thread_local! {
    static SHAPER: RefCell<Shaper> = RefCell::new(Shaper::new());
}

impl Shaper {
    fn new() -> Self {
        let collection = Collection::new(CollectionOptions { shared: false, system_fonts: false });
        let mut fonts = FontContext { collection, ..FontContext::default() };
        for blob in blobs() {
            fonts.collection.register_fonts(blob.clone(), None);
        }
        Self { fonts, layout: LayoutContext::new(), blobs: [0, 1, 2, 3].map(|i: usize| blobs()[i].id()) }
    }

    fn shape(&mut self, spans: &[Span], size: f32) -> Shaped {
        let text: String = spans.iter().map(|s| s.text.as_str()).collect();
        let mut builder = self.layout.ranged_builder(&mut self.fonts, &text, 1.0, false);
        builder.push_default(FontFamily::named("Noto Sans"));
        builder.push_default(StyleProperty::FontSize(size));
        builder.push_default(StyleProperty::LineHeight(LineHeight::FontSizeRelative(1.4)));
        builder.push_default(StyleProperty::OverflowWrap(OverflowWrap::BreakWord));
        let mut at = 0;
        for (number, span) in (0u32..).zip(spans) {
            let range = at..at + span.text.len();
            at = range.end;
            builder.push(StyleProperty::Brush(number), range.clone());
            if span.bold {
                builder.push(StyleProperty::FontWeight(FontWeight::BOLD), range.clone());
            }
            if span.italic {
                builder.push(StyleProperty::FontStyle(FontStyle::Italic), range);
            }
        }
        Shaped { layout: builder.build(&text), text }
    }
}

/// Shapes text at a size in points. Characters without a glyph become U+FFFD.
pub(super) fn shape(spans: &[Span], size: f32) -> Shaped {
    SHAPER.with_borrow_mut(|shaper| {
        let mut shaped = shaper.shape(spans, size);
        shaped.layout.break_all_lines(None);
        let missing = shaped.missing();
        if missing.is_empty() {
            return shaped;
        }
        let known = |text: &str| text.chars().map(|c| if missing.contains(&c) { REPLACEMENT } else { c }).collect();
        let spans: Vec<Span> = spans.iter().map(|s| Span { text: known(&s.text), ..s.clone() }).collect();
        shaper.shape(&spans, size)
    })
}

impl Shaped {
    /// Narrowest and widest the text can be set, in points.
    pub fn widths(&self) -> (f32, f32) {
        let widths = self.layout.calculate_content_widths();
        (widths.min, widths.max)
    }

    /// Characters whose cluster holds the glyph of a missing character.
    fn missing(&self) -> Vec<char> {
        let mut missing = Vec::new();
        for line in self.layout.lines() {
            for run in line.runs() {
                for cluster in run.clusters().filter(|c| c.glyphs().any(|g| g.id == 0)) {
                    let text = self.text.get(cluster.text_range()).unwrap_or_default();
                    missing.extend(text.chars().filter(|c| !c.is_whitespace() && *c != REPLACEMENT));
                }
            }
        }
        missing.sort_unstable();
        missing.dedup();
        missing
    }

    /// Lines no wider than a width in points (one where a single character is wider).
    pub fn lines(mut self, width: f32) -> Vec<Line> {
        self.layout.break_all_lines(Some(width.max(1.0)));
        let ids = SHAPER.with_borrow(|s| s.blobs);
        self.layout.lines().map(|line| self.line(&line, &ids)).collect()
    }

    fn line(&self, line: &parley::Line<'_, u32>, ids: &[u64; 4]) -> Line {
        let mut out = Line { runs: Vec::new(), width: line.metrics().advance - line.metrics().hanging_advance };
        let mut x = 0.0;
        for run in line.runs() {
            let id = run.font().data.id();
            let face = ids.iter().position(|i| *i == id).unwrap_or(0);
            for cluster in run.visual_clusters() {
                let span = cluster.style().brush as usize;
                let text = self.text.get(cluster.text_range()).unwrap_or_default();
                let fits = out.runs.last().is_some_and(|r| r.face == face && r.span == span);
                if !fits {
                    out.runs.push(Run { face, span, x, width: 0.0, size: run.font_size(), glyphs: Vec::new() });
                }
                if let Some(current) = out.runs.last_mut() {
                    add(current, &cluster, text);
                    x += cluster.advance();
                    current.width = x - current.x;
                }
            }
        }
        out
    }
}

/// Adds a cluster's glyphs; a cluster without glyphs (the rest of a ligature, a line end) gives its text to the glyph before it.
fn add(run: &mut Run, cluster: &parley::Cluster<'_, u32>, text: &str) {
    let before = run.glyphs.len();
    for glyph in cluster.glyphs() {
        let id = u16::try_from(glyph.id).unwrap_or(0);
        run.glyphs.push(Glyph { id, advance: glyph.advance, offset: (glyph.x, glyph.y), text: String::new() });
    }
    let shown = text.trim_end_matches(['\n', '\r', '\u{2028}', '\u{2029}']);
    let target = if run.glyphs.len() > before { before } else { before.wrapping_sub(1) };
    if let Some(glyph) = run.glyphs.get_mut(target) {
        // A word joiner keeps letters together; it is no text.
        glyph.text.extend(shown.chars().filter(|c| *c != WORD_JOINER));
    }
}

/// Advance width in points of a line of text.
pub(super) fn width(text: &str, size: f32, bold: bool) -> f32 {
    let span = Span { bold, ..Span::new(text, [0; 3]) };
    shape(&[span], size).widths().1
}
