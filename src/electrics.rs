//! Published methods and tables of the trade: formulas on magnitudes, conductor and ampacity tables, curves.
//!
//! Pure functions over [`crate::quantity`] types; no visit, no limits in force, no wording. Each states its source. A source
//! marked "from memory" was not at hand when it was entered: the tests name what else confirms it.

pub mod conductor;
