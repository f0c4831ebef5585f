//! The structure tree of a tagged PDF (ISO 32000-1, 14.7 and 14.8).

/// A node.
#[derive(Clone, Debug)]
pub(super) struct Node {
    /// Standard structure type: `P`, `Table`, `TH` …
    pub tag: &'static str,
    /// Alternative text, of figures.
    pub alt: Option<String>,
    /// Attributes that some types have.
    pub attribute: Attribute,
    /// In reading order.
    pub kids: Vec<Kid>,
}

/// Attributes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Attribute {
    /// None.
    None,
    /// Header of a column.
    ColumnScope,
    /// Cell that spans so many columns.
    Span(usize),
    /// How a list is numbered.
    Numbered(bool),
    /// Bounding box of a figure on its page: left, top, width, height.
    Box((f32, f32, f32, f32)),
}

/// A kid of a node.
#[derive(Clone, Copy, Debug)]
pub(super) enum Kid {
    /// Another node.
    Node(usize),
    /// Marked content: page and number on it.
    Content(usize, usize),
    /// A link annotation: page and number on it.
    Link(usize, usize),
}

/// All nodes; the first is the document.
#[derive(Debug)]
pub(super) struct Structure {
    /// The nodes.
    pub nodes: Vec<Node>,
}

impl Structure {
    /// A document without content.
    pub fn new() -> Self {
        Self { nodes: vec![Node { tag: "Document", alt: None, attribute: Attribute::None, kids: Vec::new() }] }
    }

    /// The document's node.
    pub const ROOT: usize = 0;

    /// A new last kid of a node.
    pub fn add(&mut self, parent: usize, tag: &'static str) -> usize {
        let node = self.nodes.len();
        self.nodes.push(Node { tag, alt: None, attribute: Attribute::None, kids: Vec::new() });
        self.nodes[parent].kids.push(Kid::Node(node));
        node
    }

    /// A new last kid with an attribute.
    pub fn add_with(&mut self, parent: usize, tag: &'static str, attribute: Attribute) -> usize {
        let node = self.add(parent, tag);
        self.nodes[node].attribute = attribute;
        node
    }
}
