//! The XLSX renderer, read back.

#[path = "render/specimen.rs"]
mod specimen;
