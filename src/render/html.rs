//! The document as one self-contained HTML file.
//!
//! It holds no script and asks for nothing: its one style sheet is named by hash in the content security policy, pictures stand
//! in it as data. The markup is well-formed XML too, so that any XML reader can check it.

mod block;
mod data;
mod inline;
mod mark;
mod markup;
mod style;
mod table;

use super::text::visible;
use crate::report::document::{Block, Document, Meta};
use block::Blocks;
use data::base64;
use markup::Markup;
use sha2::{Digest, Sha256};

/// The document as HTML: the same document gives the same text.
#[must_use]
pub fn write(document: &Document) -> String {
    let meta = &document.meta;
    let mut page = Markup::new();
    page.raw("<!DOCTYPE html>\n");
    let language = language(&meta.language);
    page.element("html", &[("lang", language), ("xml:lang", language), ("xmlns", "http://www.w3.org/1999/xhtml")], |page| {
        page.element("head", &[], |page| head(page, meta));
        page.line();
        page.element("body", &[], |page| body(page, document));
    });
    page.line();
    page.finish()
}

fn head(page: &mut Markup, meta: &Meta) {
    let css = style::sheet(meta);
    let policy = format!(
        "default-src 'none'; style-src 'sha256-{}'; img-src data:; base-uri 'none'; form-action 'none'",
        base64(&Sha256::digest(css.as_bytes()))
    );
    page.void("meta", &[("charset", "utf-8")]);
    page.void("meta", &[("http-equiv", "Content-Security-Policy"), ("content", &policy)]);
    page.element("title", &[], |page| page.text(&meta.title));
    let named = [
        ("viewport", "width=device-width, initial-scale=1"),
        ("color-scheme", "light dark"),
        ("referrer", "no-referrer"),
        ("author", &meta.author),
        ("description", &meta.subject),
        ("generator", &meta.producer),
        ("dcterms.issued", meta.date.as_deref().unwrap_or("")),
    ];
    for (name, content) in named.iter().filter(|(_, content)| !content.is_empty()) {
        page.void("meta", &[("name", name), ("content", &visible(content))]);
    }
    page.element("style", &[], |page| page.raw(&css));
}

fn body(page: &mut Markup, document: &Document) {
    let meta = &document.meta;
    page.element("header", &[("class", "masthead")], |page| {
        if let Some(logo) = &meta.logo {
            data::image(page, logo, "logo");
        }
        page.element("p", &[], |page| page.text(&meta.header_left));
        page.element("p", &[], |page| page.text(&meta.header_right));
    });
    page.line();
    page.element("main", &[], |page| {
        if !document.blocks.iter().any(|b| matches!(b, Block::Heading { level: 1, .. })) {
            page.element("h1", &[], |page| page.text(&meta.title));
        }
        Blocks::new(meta).write(page, &document.blocks);
    });
    page.line();
    page.element("footer", &[("class", "colophon")], |page| {
        page.element("p", &[], |page| page.text(&meta.producer));
        page.element("p", &[], |page| page.text(&format!("SHA-256 {}", meta.input_sha256)));
    });
    page.line();
}

/// The language tag, where it has the form of one.
fn language(tag: &str) -> &str {
    let is_tag = !tag.is_empty() && tag.len() <= 35 && tag.bytes().all(|b| b.is_ascii_alphanumeric() || b == b'-');
    if is_tag { tag } else { "en" }
}
