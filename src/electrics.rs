//! Published methods and tables of the trade: formulas on magnitudes, conductor and ampacity tables, curves.
//!
//! Pure functions over [`crate::quantity`] types; no visit, no limits in force, no wording. Each states its source.

pub mod judgement;
