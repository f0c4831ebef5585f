//! Photos: JPEG passed through as it is, PNG decoded, two abreast with their captions.

use super::super::shape::{self, Line, Span};
use super::super::strip::{Mark, Paint, Strip, rectangle};
use super::super::structure::Attribute;
use super::{Flow, Place, baseline};
use crate::report::document::{CaptionedImage, Image};
use crate::report::drawing::Colour;
use std::sync::Arc;

/// Between two photos.
const GUTTER: f32 = 14.0;
/// Tallest photo.
const TALLEST: f32 = 230.0;
/// Size of captions.
const CAPTION: f32 = 8.5;
/// Height of a logo.
const LOGO: f32 = 38.0;
/// Most pixels of a photo.
const MOST_PIXELS: u64 = 60_000_000;

/// An image that can be painted.
#[derive(Clone, Debug)]
pub(in crate::render::pdf) struct Picture {
    /// The file.
    pub bytes: Arc<[u8]>,
    /// Pixels as stored.
    pub pixels: (u32, u32),
    /// How it is stored.
    pub kind: PictureKind,
    /// EXIF orientation, 1 to 8.
    pub orientation: u8,
}

/// How an image is stored.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(in crate::render::pdf) enum PictureKind {
    /// JPEG with so many components.
    Jpeg(u8),
    /// PNG.
    Png,
}

impl Picture {
    /// Looks at an image file; `None` where it is neither JPEG nor PNG, or too large.
    fn of(bytes: &Arc<[u8]>) -> Option<Self> {
        let (pixels, kind) = jpeg(bytes).map(|(p, n)| (p, PictureKind::Jpeg(n))).or_else(|| png(bytes).map(|p| (p, PictureKind::Png)))?;
        let within = pixels.0 > 0 && pixels.1 > 0 && u64::from(pixels.0) * u64::from(pixels.1) <= MOST_PIXELS;
        within.then(|| Self { bytes: Arc::clone(bytes), pixels, kind, orientation: orientation(bytes) })
    }

    /// Width by height as it is to be seen.
    fn aspect(&self) -> f32 {
        let (w, h) = (self.pixels.0 as f32, self.pixels.1 as f32);
        if self.orientation > 4 { h / w } else { w / h }
    }
}

/// Size and components from the frame header of a JPEG (ITU-T T.81, B.2.2).
fn jpeg(bytes: &[u8]) -> Option<((u32, u32), u8)> {
    if !bytes.starts_with(&[0xff, 0xd8]) {
        return None;
    }
    let mut at = 2;
    loop {
        let head = bytes.get(at..at + 4)?;
        if head[0] != 0xff {
            return None;
        }
        let (marker, length) = (head[1], usize::from(u16::from_be_bytes([head[2], head[3]])));
        if marker == 0xff {
            at += 1;
            continue;
        }
        if matches!(marker, 0xc0..=0xcf) && !matches!(marker, 0xc4 | 0xc8 | 0xcc) {
            let frame = bytes.get(at + 5..at + 10)?;
            let pair = |a: u8, b: u8| u32::from(u16::from_be_bytes([a, b]));
            return (matches!(frame[4], 1 | 3) && bytes.get(at + 4) == Some(&8))
                .then(|| ((pair(frame[2], frame[3]), pair(frame[0], frame[1])), frame[4]));
        }
        at += 2 + length.max(2);
    }
}

/// Size from the header of a PNG.
fn png(bytes: &[u8]) -> Option<(u32, u32)> {
    let head = bytes.get(..24).filter(|h| h.starts_with(b"\x89PNG\r\n\x1a\n") && &h[12..16] == b"IHDR")?;
    let number = |at: usize| head.get(at..at + 4)?.try_into().ok().map(u32::from_be_bytes);
    Some((number(16)?, number(20)?))
}

fn orientation(bytes: &[u8]) -> u8 {
    let read = exif::Reader::new().read_from_container(&mut std::io::Cursor::new(bytes));
    let field = read.ok().and_then(|e| e.get_field(exif::Tag::Orientation, exif::In::PRIMARY)?.value.get_uint(0));
    field.and_then(|v| u8::try_from(v).ok()).filter(|v| (1..=8).contains(v)).unwrap_or(1)
}

impl Flow<'_> {
    /// The company's logo above everything else.
    pub(super) fn logo(&mut self, logo: &Image, place: Place) {
        let Some(picture) = Picture::of(&logo.bytes) else { return };
        let height = LOGO.min(place.width / picture.aspect().max(0.01));
        let width = height * picture.aspect();
        let node = self.structure.add(place.node, "Figure");
        self.structure.nodes[node].alt = Some(logo.alt.clone());
        self.structure.nodes[node].attribute = Attribute::Box((place.x, 0.0, width, height));
        self.pictures.push(picture);
        let paint = Paint::Image { x: place.x, y: 0.0, width, height, image: self.pictures.len() - 1 };
        self.strips.push(Strip {
            height: height + 8.0,
            keep: true,
            marks: vec![Mark { node: Some(node), paints: vec![paint] }],
            figures: vec![node],
            ..Strip::default()
        });
    }

    /// Photos in rows of two.
    pub(super) fn photos(&mut self, photos: &[CaptionedImage], place: Place) {
        let half = (place.width - GUTTER) / 2.0;
        for row in photos.chunks(2) {
            let pictures: Vec<Option<Picture>> = row.iter().map(|p| Picture::of(&p.image.bytes)).collect();
            let fitted: Vec<(f32, f32)> = pictures.iter().map(|p| p.as_ref().map_or((half, 40.0), |p| fit(p.aspect(), half))).collect();
            let height = fitted.iter().map(|f| f.1).fold(0.0, f32::max);
            let mut strip = Strip { height, gap: 9.0, ..Strip::default() };
            let mut captions = Vec::new();
            for (i, (photo, picture)) in row.iter().zip(pictures).enumerate() {
                let x = place.x + i as f32 * (half + GUTTER);
                let node = self.photo(&mut strip, photo, picture, (x, height, fitted[i]), place.node);
                let caption = self.structure.add(node, "Caption");
                let spans = [Span::new(&photo.caption, self.colour(Colour::Quiet))];
                captions.push((x, shape::shape(&spans, CAPTION).lines(half), spans, caption));
            }
            self.strips.push(strip);
            self.captions(captions);
        }
    }

    /// Captions side by side, a strip a line, so that a long one goes on over the page.
    fn captions(&mut self, captions: Vec<(f32, Vec<Line>, [Span; 1], usize)>) {
        let count = captions.iter().map(|c| c.1.len()).max().unwrap_or(0);
        if count > 0
            && let Some(above) = self.strips.last_mut()
        {
            above.keep = true;
        }
        let mut strips: Vec<Strip> = (0..count).map(|_| Strip { height: CAPTION * 1.35, ..Strip::default() }).collect();
        for (x, lines, spans, node) in captions {
            for (strip, line) in strips.iter_mut().zip(lines) {
                self.set(strip, line, &spans, (x, 2.0 + baseline(CAPTION)), node);
            }
        }
        self.strips.extend(strips);
    }

    fn photo(
        &mut self,
        strip: &mut Strip,
        photo: &CaptionedImage,
        picture: Option<Picture>,
        (x, base, (w, h)): (f32, f32, (f32, f32)),
        parent: usize,
    ) -> usize {
        let node = self.structure.add(parent, "Figure");
        self.structure.nodes[node].alt = Some(photo.image.alt.clone());
        self.structure.nodes[node].attribute = Attribute::Box((x, base - h, w, h));
        let paint = match picture {
            Some(picture) => {
                self.pictures.push(picture);
                Paint::Image { x, y: base - h, width: w, height: h, image: self.pictures.len() - 1 }
            }
            // A file that is no picture after all: an empty frame above its caption says so.
            None => {
                Paint::Shape { outline: rectangle(x, base - h, w, h, 0.0), fill: None, stroke: Some((0.6, self.colour(Colour::Quiet))) }
            }
        };
        strip.marks.push(Mark { node: Some(node), paints: vec![paint] });
        strip.figures.push(node);
        node
    }
}

fn fit(aspect: f32, width: f32) -> (f32, f32) {
    let height = width / aspect.max(0.01);
    if height <= TALLEST { (width, height) } else { (TALLEST * aspect, TALLEST) }
}
