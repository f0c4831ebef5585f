//! Renderers: the document as PDF, XLSX and HTML. They see [`crate::report::document`] alone.

pub mod svg;
