//! The document as one self-contained HTML file.
