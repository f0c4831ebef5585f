//! midwire reads a field workbook of a 120/240 V (or other low-voltage) service, says what the readings mean,
//! and writes reports of it.
//!
//! The flow goes one way; each arrow is one public function, and no phase reaches back:
//!
//! ```text
//! bytes → intake → Visit → network → Solution → diagnosis → Ranking → rules → Findings → report → Document → render → PDF, XLSX, HTML
//! ```
//!
//! [`pipeline`] is the only module that names all phases. Only [`cli`] touches files, the clock and the terminal; everything
//! else gets bytes and values. DEVELOPERS.md has the map: what each module may use and what it must not know.

pub mod balance;
pub mod blank;
pub mod cli;
pub mod diag;
pub mod diagnosis;
pub mod electrics;
pub mod intake;
pub mod network;
pub mod pipeline;
pub mod quantity;
pub mod render;
pub mod report;
pub mod results;
pub mod rulebook;
pub mod rules;
pub mod visit;
pub mod wording;
