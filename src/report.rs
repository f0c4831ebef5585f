//! The report: what was found, as a tree of blocks that every renderer understands.
//!
//! A Tera template yields Markdown; Markdown, computed tables and computed figures become a [`Document`]. Renderers see the
//! document alone: if one wants more, the document lacks a block.

pub mod document;
pub mod drawing;
