//! Renderers: the document as PDF, XLSX and HTML. They see [`crate::report::document`] alone.

mod contrast;
mod text;

pub mod html;
pub mod pdf;
pub mod svg;
pub mod xlsx;
