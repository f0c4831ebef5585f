//! Pages as printpdf operations: subset fonts, glyphs, paths, images.

use super::flow::{Flow, Picture, PictureKind};
use super::page::Pages;
use super::shape::{FACES, Glyph, Run};
use super::strip::{Paint, Rgb};
use super::{PdfError, finish};
use crate::report::document::Document;
use printpdf::{
    Codepoint, Color, CurTransMat, DictItem, ExternalStream, ExternalXObject, FontId, Line, LineCapStyle, LineDashPattern, LinePoint, Mm,
    Op, PaintMode, ParsedFont, PdfDocument, PdfFontHandle, PdfPage, PdfSaveOptions, Point, Polygon, PolygonRing, Pt, RawImage, TextItem,
    TextMatrix, WindingOrder, XObject, XObjectId, XObjectTransform,
};
use std::collections::{BTreeMap, BTreeSet};
use subsetter::GlyphRemapper;

/// A face as it is embedded.
struct Face {
    id: FontId,
    remapper: GlyphRemapper,
    font: ParsedFont,
}

/// The file.
pub(super) fn write(document: &Document, flow: &Flow, pages: &Pages) -> Result<Vec<u8>, PdfError> {
    let faces = faces(pages)?;
    let mut pdf = PdfDocument::new(&document.meta.title);
    for face in faces.iter().flatten() {
        pdf.resources.fonts.map.insert(face.id.clone(), printpdf::PdfFont::new(face.font.clone()));
    }
    for (number, picture) in flow.pictures.iter().enumerate() {
        pdf.resources.xobjects.map.insert(image_id(number), image(picture));
    }
    let (width, height) = pages.size;
    let contents =
        (0..pages.pages.len()).map(|p| Painter { faces: &faces, pictures: &flow.pictures, height, ops: Vec::new() }.page(pages, flow, p));
    let pages_out: Vec<PdfPage> = contents.map(|ops| PdfPage::new(Mm::from(Pt(width)), Mm::from(Pt(height)), ops)).collect();
    pdf.with_pages(pages_out);
    let options = PdfSaveOptions { optimize: false, subset_fonts: false, secure: true, image_optimization: None };
    let mut warnings = Vec::new();
    finish::finish(pdf.to_lopdf_document(&options, &mut warnings), document, flow, pages)
}

fn image_id(number: usize) -> XObjectId {
    XObjectId(format!("Im{number}"))
}

/// The faces in use, each with the glyphs in use and no others.
fn faces(pages: &Pages) -> Result<Vec<Option<Face>>, PdfError> {
    let mut used: [BTreeSet<u16>; 4] = Default::default();
    for paint in pages.pages.iter().flat_map(|p| &p.marks).flat_map(|m| &m.paints) {
        if let Paint::Text { run, .. } = paint {
            used[run.face].extend(run.glyphs.iter().map(|g| g.id));
        }
    }
    used.iter().enumerate().map(|(i, glyphs)| if glyphs.is_empty() { Ok(None) } else { face(i, glyphs).map(Some) }).collect()
}

fn face(number: usize, glyphs: &BTreeSet<u16>) -> Result<Face, PdfError> {
    let (name, bytes) = FACES[number];
    let glyphs: Vec<u16> = glyphs.iter().copied().collect();
    let remapper = GlyphRemapper::new_from_glyphs_sorted(&glyphs);
    let subset = subsetter::subset(bytes, 0, &remapper).map_err(|e| PdfError::Font(format!("{name}: {e}")))?;
    let mut font = ParsedFont::from_bytes(&subset, 0, &mut Vec::new()).ok_or_else(|| PdfError::Font(name.to_owned()))?;
    font.font_name = Some(format!("{}+{name}", tag(&glyphs)));
    Ok(Face { id: FontId(format!("Face{number}")), remapper, font })
}

/// Six capital letters that name a subset (ISO 32000-1, 9.6.4), from its glyphs.
fn tag(glyphs: &[u16]) -> String {
    // FNV-1a, 32 bits: any mixing of the glyph numbers will do.
    let mut mixed = glyphs.iter().flat_map(|g| g.to_be_bytes()).fold(0x811c_9dc5_u32, |h, b| (h ^ u32::from(b)).wrapping_mul(0x0100_0193));
    let mut letters = String::new();
    for _ in 0..6 {
        letters.push(char::from(b'A' + u8::try_from(mixed % 26).unwrap_or(0)));
        mixed /= 26;
    }
    letters
}

/// A JPEG goes in as it is; a PNG is decoded, and one that can't be is a grey point.
fn image(picture: &Picture) -> XObject {
    let (width, height) = picture.pixels;
    match picture.kind {
        PictureKind::Jpeg(components) => {
            let name = |n: &str| DictItem::Name(n.as_bytes().to_vec());
            let dict: BTreeMap<String, DictItem> = [
                ("Type", name("XObject")),
                ("Subtype", name("Image")),
                ("Width", DictItem::Int(i64::from(width))),
                ("Height", DictItem::Int(i64::from(height))),
                ("ColorSpace", name(if components == 1 { "DeviceGray" } else { "DeviceRGB" })),
                ("BitsPerComponent", DictItem::Int(8)),
                ("Filter", name("DCTDecode")),
            ]
            .into_iter()
            .map(|(k, v)| (k.to_owned(), v))
            .collect();
            let stream = ExternalStream { dict, content: picture.bytes.to_vec(), compress: false };
            XObject::External(ExternalXObject { stream, width: None, height: None, dpi: None })
        }
        PictureKind::Png => RawImage::decode_from_bytes(&picture.bytes, &mut Vec::new()).map_or_else(|_| grey(), XObject::Image),
    }
}

fn grey() -> XObject {
    let dict = [("Type", "XObject"), ("Subtype", "Image"), ("ColorSpace", "DeviceGray")]
        .map(|(k, v)| (k.to_owned(), DictItem::Name(v.as_bytes().to_vec())));
    let numbers = [("Width", 1), ("Height", 1), ("BitsPerComponent", 8)].map(|(k, v)| (k.to_owned(), DictItem::Int(v)));
    let stream = ExternalStream { dict: dict.into_iter().chain(numbers).collect(), content: vec![0xdd], compress: false };
    XObject::External(ExternalXObject { stream, width: None, height: None, dpi: None })
}

struct Painter<'a> {
    faces: &'a [Option<Face>],
    pictures: &'a [Picture],
    height: f32,
    ops: Vec<Op>,
}

impl Painter<'_> {
    fn page(mut self, pages: &Pages, flow: &Flow, page: usize) -> Vec<Op> {
        let mut number = 0;
        for mark in &pages.pages[page].marks {
            match mark.node {
                Some(node) => {
                    let id = DictItem::Dict { map: [("MCID".to_owned(), DictItem::Int(number))].into() };
                    self.ops.push(Op::BeginMarkedContentWithProperties { tag: flow.structure.nodes[node].tag.to_owned(), properties: id });
                    number += 1;
                }
                None => self.ops.push(Op::BeginMarkedContent { tag: "Artifact".to_owned() }),
            }
            for paint in &mark.paints {
                self.paint(paint);
            }
            self.ops.push(Op::EndMarkedContent);
        }
        self.ops
    }

    fn paint(&mut self, paint: &Paint) {
        match paint {
            Paint::Text { x, y, run, colour } => self.text(*x, *y, run, *colour),
            Paint::Line { points, width, colour, dash, round } => {
                self.stroke(*width, *colour);
                let dash = dash.map_or_else(LineDashPattern::default, |(d, g)| LineDashPattern::new(0.0, &[d, g]));
                self.ops.push(Op::SetLineDashPattern { dash });
                self.ops.push(Op::SetLineCapStyle { cap: if *round { LineCapStyle::Round } else { LineCapStyle::Butt } });
                let points = points.iter().map(|(x, y)| self.point(*x, *y, false)).collect();
                self.ops.push(Op::DrawLine { line: Line { points, is_closed: false } });
            }
            Paint::Shape { outline, fill, stroke } => {
                if let Some(fill) = fill {
                    self.ops.push(Op::SetFillColor { col: colour(*fill) });
                }
                if let Some((width, line)) = stroke {
                    self.stroke(*width, *line);
                    self.ops.push(Op::SetLineDashPattern { dash: LineDashPattern::default() });
                }
                let mode = match (fill, stroke) {
                    (Some(_), Some(_)) => PaintMode::FillStroke,
                    (None, Some(_)) => PaintMode::Stroke,
                    (Some(_), None) => PaintMode::Fill,
                    (None, None) => return,
                };
                let points = outline.iter().map(|(x, y, bezier)| self.point(*x, *y, *bezier)).collect();
                let polygon = Polygon { rings: vec![PolygonRing { points }], mode, winding_order: WindingOrder::NonZero };
                self.ops.push(Op::DrawPolygon { polygon });
            }
            Paint::Image { x, y, width, height, image } => self.image(*x, *y, *width, *height, *image),
        }
    }

    fn point(&self, x: f32, y: f32, bezier: bool) -> LinePoint {
        LinePoint { p: Point { x: Pt(x), y: Pt(self.height - y) }, bezier }
    }

    fn stroke(&mut self, width: f32, line: Rgb) {
        self.ops.push(Op::SetOutlineColor { col: colour(line) });
        self.ops.push(Op::SetOutlineThickness { pt: Pt(width) });
    }

    /// Glyphs at the places they were shaped to: widths in the file are whole thousandths of the size, and what is left is
    /// made up for glyph by glyph.
    fn text(&mut self, x: f32, y: f32, run: &Run, ink: Rgb) {
        let Some(face) = self.faces.get(run.face).and_then(Option::as_ref) else { return };
        let thousandths = 1000.0 / run.size.max(0.01);
        let upem = f32::from(face.font.pdf_font_metrics.units_per_em).max(1.0);
        let mut codes = Vec::with_capacity(run.glyphs.len());
        let (mut pen, mut wanted) = (0.0f32, 0.0f32);
        for Glyph { id, advance, text, .. } in &run.glyphs {
            let gid = face.remapper.get(*id).unwrap_or(0);
            let width = face.font.get_glyph_width(gid).map_or(0.0, |w| (f32::from(w) * 1000.0 / upem).trunc());
            wanted += advance * thousandths;
            pen += width;
            let correction = (pen - wanted).round();
            pen -= correction;
            codes.push(Codepoint::with_cid(gid, correction, text.clone()));
        }
        self.ops.push(Op::SetFillColor { col: colour(ink) });
        self.ops.push(Op::StartTextSection);
        self.ops.push(Op::SetFont { font: PdfFontHandle::External(face.id.clone()), size: Pt(run.size) });
        self.ops.push(Op::SetTextMatrix { matrix: TextMatrix::Raw([1.0, 0.0, 0.0, 1.0, x, self.height - y]) });
        self.ops.push(Op::ShowText { items: vec![TextItem::GlyphIds(codes)] });
        self.ops.push(Op::EndTextSection);
    }

    fn image(&mut self, x: f32, y: f32, width: f32, height: f32, number: usize) {
        let Some(picture) = self.pictures.get(number) else { return };
        let matrix = placed(picture.orientation, x, self.height - y - height, width, height);
        self.ops.push(Op::SaveGraphicsState);
        self.ops.push(Op::SetTransformationMatrix { matrix: CurTransMat::Raw(matrix) });
        self.ops.push(Op::UseXobject {
            id: image_id(number),
            transform: XObjectTransform { no_auto_scale: true, ..XObjectTransform::default() },
        });
        self.ops.push(Op::RestoreGraphicsState);
    }
}

/// The matrix that sets an image of an EXIF orientation upright into a rectangle with its lower left corner at a point
/// (Exif 2.32, 4.6.4, tag 274).
fn placed(orientation: u8, x: f32, y: f32, w: f32, h: f32) -> [f32; 6] {
    match orientation {
        2 => [-w, 0.0, 0.0, h, x + w, y],
        3 => [-w, 0.0, 0.0, -h, x + w, y + h],
        4 => [w, 0.0, 0.0, -h, x, y + h],
        5 => [0.0, -h, -w, 0.0, x + w, y + h],
        6 => [0.0, -h, w, 0.0, x, y + h],
        7 => [0.0, h, w, 0.0, x, y],
        8 => [0.0, h, -w, 0.0, x + w, y],
        _ => [w, 0.0, 0.0, h, x, y],
    }
}

fn colour(rgb: Rgb) -> Color {
    let [r, g, b] = rgb.map(|c| f32::from(c) / 255.0);
    Color::Rgb(printpdf::Rgb { r, g, b, icc_profile: None })
}
