//! What printpdf does not write: the structure tree, the outline, links, metadata and the PDF/A-2a form (ISO 19005-2).

mod metadata;

use super::PdfError;
use super::flow::Flow;
use super::page::{Pages, Placed};
use super::structure::{Attribute, Kid, Node};
use crate::report::document::Document;
use lopdf::{Dictionary, Object, ObjectId, SaveOptions, Stream, dictionary};

/// Title levels of the outline: the document's title, which is the first heading, is left out.
const TOP_LEVEL: u8 = 2;

/// Adds what is missing and saves.
pub(super) fn finish(mut pdf: lopdf::Document, document: &Document, flow: &Flow, pages: &Pages) -> Result<Vec<u8>, PdfError> {
    let page_ids: Vec<ObjectId> = pdf.page_iter().collect();
    let nodes: Vec<ObjectId> = flow.structure.nodes.iter().map(|_| pdf.new_object_id()).collect();
    let root = pdf.new_object_id();
    let links = links(&mut pdf, pages, &page_ids);
    structure(&mut pdf, flow, pages, &page_ids, (root, &nodes, &links));
    let outline = outline(&mut pdf, pages, &page_ids);
    let profile = pdf.add_object(Stream::new(dictionary! { "N" => 3 }, typst_assets::icc::S_RGB_V4.to_vec()));
    let intent = dictionary! {
        "Type" => "OutputIntent",
        "S" => "GTS_PDFA1",
        "OutputConditionIdentifier" => Object::string_literal("sRGB"),
        "Info" => Object::string_literal("sRGB IEC61966-2.1"),
        "DestOutputProfile" => profile,
    };
    let xmp = pdf.add_object(metadata::xmp(&document.meta));
    let language = if document.meta.language.is_empty() { "en" } else { &document.meta.language };
    let catalog = pdf.catalog_mut()?;
    for key in ["Outlines", "PageMode", "OutputIntents", "Metadata", "OCProperties", "PageLayout", "Names"] {
        catalog.remove(key.as_bytes());
    }
    catalog.set("Lang", Object::string_literal(language));
    catalog.set("MarkInfo", dictionary! { "Marked" => true });
    catalog.set("StructTreeRoot", root);
    catalog.set("ViewerPreferences", dictionary! { "DisplayDocTitle" => true });
    catalog.set("OutputIntents", vec![Object::Dictionary(intent)]);
    catalog.set("Metadata", xmp);
    if let Some(outline) = outline {
        catalog.set("Outlines", outline);
        catalog.set("PageMode", "UseOutlines");
    }
    let info = pdf.add_object(metadata::info(&document.meta));
    pdf.trailer.set("Info", info);
    let id = metadata::identifier(&document.meta);
    pdf.trailer.set("ID", vec![id.clone(), id]);
    pdf.version = "1.7".to_owned();
    pdf.prune_objects();
    pdf.renumber_objects();
    pdf.compress();
    let mut bytes = Vec::new();
    pdf.save_with_options(&mut bytes, SaveOptions::builder().use_object_streams(true).use_xref_streams(true).build())?;
    Ok(bytes)
}

/// Text of a PDF object: PDFDocEncoding where it is plain ASCII, else UTF-16.
fn text(value: &str) -> Object {
    if value.is_ascii() {
        return Object::string_literal(value);
    }
    let utf16 = std::iter::once(0xfeff).chain(value.encode_utf16()).flat_map(u16::to_be_bytes).collect();
    Object::String(utf16, lopdf::StringFormat::Hexadecimal)
}

/// Link annotations, page by page.
fn links(pdf: &mut lopdf::Document, pages: &Pages, page_ids: &[ObjectId]) -> Vec<Vec<ObjectId>> {
    let mut all = Vec::new();
    let mut key = i64::try_from(page_ids.len()).unwrap_or(i64::MAX);
    for (page, page_id) in pages.pages.iter().zip(page_ids) {
        let mut ids = Vec::new();
        for area in &page.areas {
            let (x, y, w, h) = area.rect;
            let (low, high) = (pages.size.1 - y - h, pages.size.1 - y);
            let rect: Vec<Object> = [x, low, x + w, high].map(Object::Real).to_vec();
            let mut annotation = dictionary! {
                "Type" => "Annot", "Subtype" => "Link", "F" => 4, "Rect" => rect,
                "Border" => vec![0.into(), 0.into(), 0.into()], "StructParent" => key, "Contents" => text(&area.href),
            };
            key += 1;
            match area.href.strip_prefix('#') {
                Some(anchor) => {
                    if let Some(placed) = pages.placed.iter().find(|p| p.target.anchor == anchor) {
                        annotation.set("Dest", destination(placed, pages, page_ids));
                    }
                }
                None => annotation.set("A", dictionary! { "Type" => "Action", "S" => "URI", "URI" => text(&area.href) }),
            }
            ids.push(pdf.add_object(annotation));
        }
        if let Ok(page) = pdf.get_dictionary_mut(*page_id) {
            page.remove(b"Annots");
            if !ids.is_empty() {
                page.set("Annots", ids.iter().map(|id| Object::Reference(*id)).collect::<Vec<_>>());
            }
        }
        all.push(ids);
    }
    all
}

fn destination(placed: &Placed, pages: &Pages, page_ids: &[ObjectId]) -> Vec<Object> {
    let page = page_ids.get(placed.page).map_or(Object::Null, |id| Object::Reference(*id));
    vec![page, "XYZ".into(), Object::Null, Object::Real(pages.size.1 - placed.y + 8.0), Object::Null]
}

/// The structure tree and the way back from content to it.
fn structure(
    pdf: &mut lopdf::Document,
    flow: &Flow,
    pages: &Pages,
    page_ids: &[ObjectId],
    (root, nodes, links): (ObjectId, &[ObjectId], &[Vec<ObjectId>]),
) {
    let mut parents: Vec<Option<usize>> = vec![None; nodes.len()];
    for (n, node) in flow.structure.nodes.iter().enumerate() {
        for kid in &node.kids {
            if let Kid::Node(k) = kid {
                parents[*k] = Some(n);
            }
        }
    }
    for (n, node) in flow.structure.nodes.iter().enumerate() {
        let parent = parents[n].map_or(root, |p| nodes[p]);
        let element = element(node, parent, page_ids, nodes, links, pages);
        pdf.objects.insert(nodes[n], Object::Dictionary(element));
    }
    let mut tree: Vec<Object> = Vec::new();
    for (p, page) in pages.pages.iter().enumerate() {
        let owners: Vec<Object> = page.marks.iter().filter_map(|m| m.node).map(|n| Object::Reference(nodes[n])).collect();
        let owners = pdf.add_object(owners);
        tree.push(i64::try_from(p).unwrap_or(0).into());
        tree.push(owners.into());
        if let Some(Ok(page)) = page_ids.get(p).map(|id| pdf.get_dictionary_mut(*id)) {
            page.set("StructParents", i64::try_from(p).unwrap_or(0));
            page.set("Tabs", "S");
        }
    }
    let areas = pages.pages.iter().flat_map(|p| &p.areas);
    for (key, area) in (pages.pages.len()..).zip(areas) {
        tree.push(i64::try_from(key).unwrap_or(0).into());
        tree.push(nodes[area.node].into());
    }
    let next = i64::try_from(tree.len() / 2).unwrap_or(0);
    let tree = pdf.add_object(dictionary! { "Nums" => tree });
    let top = dictionary! { "Type" => "StructTreeRoot", "K" => nodes[0], "ParentTree" => tree, "ParentTreeNextKey" => next };
    pdf.objects.insert(root, Object::Dictionary(top));
}

fn element(node: &Node, parent: ObjectId, page_ids: &[ObjectId], nodes: &[ObjectId], links: &[Vec<ObjectId>], pages: &Pages) -> Dictionary {
    let mut element = dictionary! { "Type" => "StructElem", "S" => node.tag, "P" => parent };
    let page_of = |page: usize| page_ids.get(page).map_or(Object::Null, |id| Object::Reference(*id));
    let home = node.kids.iter().find_map(|k| if let Kid::Content(page, _) | Kid::Link(page, _) = k { Some(*page) } else { None });
    if let Some(home) = home {
        element.set("Pg", page_of(home));
    }
    let number = |n: usize| i64::try_from(n).unwrap_or(0);
    let kids: Vec<Object> = node
        .kids
        .iter()
        .filter_map(|kid| match kid {
            Kid::Node(n) => Some(Object::Reference(nodes[*n])),
            Kid::Content(page, n) if Some(*page) == home => Some(number(*n).into()),
            Kid::Content(page, n) => Some(dictionary! { "Type" => "MCR", "Pg" => page_of(*page), "MCID" => number(*n) }.into()),
            Kid::Link(page, n) => {
                let link = *links.get(*page)?.get(*n)?;
                Some(dictionary! { "Type" => "OBJR", "Pg" => page_of(*page), "Obj" => link }.into())
            }
        })
        .collect();
    element.set("K", kids);
    if let Some(alt) = &node.alt {
        element.set("Alt", text(alt));
    }
    match node.attribute {
        Attribute::None => {}
        Attribute::ColumnScope => element.set("A", dictionary! { "O" => "Table", "Scope" => "Column" }),
        Attribute::Span(columns) => element.set("A", dictionary! { "O" => "Table", "ColSpan" => number(columns) }),
        Attribute::Numbered(yes) => {
            element.set("A", dictionary! { "O" => "List", "ListNumbering" => if yes { "Decimal" } else { "Disc" } })
        }
        Attribute::Box((x, y, w, h)) => {
            let rect: Vec<Object> = [x, pages.size.1 - y - h, x + w, pages.size.1 - y].map(Object::Real).to_vec();
            element.set("A", dictionary! { "O" => "Layout", "Placement" => "Block", "BBox" => rect });
        }
    }
    element
}

/// An entry of the outline and the heading it leads to.
type Item<'a> = (ObjectId, &'a Placed);

/// The outline: headings of level 2, those of level 3 below them.
fn outline(pdf: &mut lopdf::Document, pages: &Pages, page_ids: &[ObjectId]) -> Option<ObjectId> {
    let mut items: Vec<(Item, Vec<Item>)> = Vec::new();
    for placed in pages.placed.iter().filter(|p| p.target.level >= TOP_LEVEL) {
        match items.last_mut() {
            Some((_, below)) if placed.target.level > TOP_LEVEL => below.push((pdf.new_object_id(), placed)),
            _ => items.push(((pdf.new_object_id(), placed), Vec::new())),
        }
    }
    let (first, last) = (items.first()?.0.0, items.last()?.0.0);
    let root = pdf.new_object_id();
    let top: Vec<Item> = items.iter().map(|(item, _)| *item).collect();
    chain(pdf, &top, root, pages, page_ids);
    for ((id, _), below) in &items {
        chain(pdf, below, *id, pages, page_ids);
        if let (Some((a, _)), Some((z, _)), Ok(item)) = (below.first(), below.last(), pdf.get_dictionary_mut(*id)) {
            item.set("First", *a);
            item.set("Last", *z);
            item.set("Count", -i64::try_from(below.len()).unwrap_or(0));
        }
    }
    let count = i64::try_from(items.len()).unwrap_or(0);
    pdf.objects.insert(root, dictionary! { "Type" => "Outlines", "First" => first, "Last" => last, "Count" => count }.into());
    Some(root)
}

/// Items of one level, each knowing its neighbours.
fn chain(pdf: &mut lopdf::Document, items: &[Item], parent: ObjectId, pages: &Pages, page_ids: &[ObjectId]) {
    for (i, (id, placed)) in items.iter().enumerate() {
        let mut item =
            dictionary! { "Title" => text(&placed.target.text), "Parent" => parent, "Dest" => destination(placed, pages, page_ids) };
        if let Some((before, _)) = i.checked_sub(1).and_then(|b| items.get(b)) {
            item.set("Prev", *before);
        }
        if let Some((after, _)) = items.get(i + 1) {
            item.set("Next", *after);
        }
        pdf.objects.insert(*id, item.into());
    }
}
