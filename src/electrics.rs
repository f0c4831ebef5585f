//! Published methods and tables of the trade: formulas on magnitudes, conductor and ampacity tables, curves.
//!
//! Pure functions over [`crate::quantity`] types; no visit, no limits in force, no wording. Each states its source. A source
//! marked "from memory" was not at hand when it was entered: the tests name what else confirms it.

pub mod ampacity;
pub mod conductor;
pub mod drop;
pub mod element;
pub mod gfci;
pub mod grounding;
pub mod insulation;
pub mod judgement;
pub mod lamp;
pub mod legs;
pub mod load_step;
pub mod neutral;
pub mod plane;
pub mod reactance;
pub mod thermography;
pub mod tolerance;
pub mod unbalance;
