//! Markup that is always well-formed: what is opened is closed, what is text is escaped.

use crate::render::text::visible;

/// Markup under construction.
pub(super) struct Markup {
    out: String,
}

impl Markup {
    /// Nothing yet.
    pub(super) fn new() -> Self {
        Self { out: String::with_capacity(1 << 16) }
    }

    /// What was written.
    pub(super) fn finish(self) -> String {
        self.out
    }

    /// An element with attributes and content.
    pub(super) fn element(&mut self, tag: &str, attributes: &[(&str, &str)], content: impl FnOnce(&mut Self)) {
        self.tag(tag, attributes);
        self.out.push('>');
        content(self);
        self.out.push_str("</");
        self.out.push_str(tag);
        self.out.push('>');
    }

    /// An element that holds nothing.
    pub(super) fn void(&mut self, tag: &str, attributes: &[(&str, &str)]) {
        self.tag(tag, attributes);
        self.out.push_str(" />");
    }

    /// Text as it stands, with what hides or reorders made visible.
    pub(super) fn text(&mut self, text: &str) {
        escape(&visible(text), &mut self.out);
    }

    /// Markup of this program's own making.
    pub(super) fn raw(&mut self, markup: &str) {
        self.out.push_str(markup);
    }

    /// A line end between blocks, for whoever reads the source.
    pub(super) fn line(&mut self) {
        self.out.push('\n');
    }

    fn tag(&mut self, tag: &str, attributes: &[(&str, &str)]) {
        self.out.push('<');
        self.out.push_str(tag);
        for (name, value) in attributes {
            self.out.push(' ');
            self.out.push_str(name);
            self.out.push_str("=\"");
            escape(&visible(value), &mut self.out);
            self.out.push('"');
        }
    }
}

fn escape(text: &str, out: &mut String) {
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            c => out.push(c),
        }
    }
}
