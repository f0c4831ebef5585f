//! The renderers, each read back by something that did not write it.

#[path = "render/html.rs"]
mod html;
#[path = "render/marked.rs"]
mod marked;
#[path = "render/pdf.rs"]
mod pdf;
#[path = "render/specimen.rs"]
mod specimen;
#[path = "render/xlsx.rs"]
mod xlsx;
