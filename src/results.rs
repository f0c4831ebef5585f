//! What the phases find, as plain data: findings, balance, ranking of causes, exposure, load steps.
//!
//! Producers are network, diagnosis and rules; consumers are rules, report and the JSON output. Nothing here computes.

mod balance;
mod diagnosis;
mod finding;

pub use balance::{Balance, LegLoad, Move};
pub use diagnosis::{
    AddedOhms, Cause, CauseKind, Diagnosis, ExposedLeg, Exposure, LoadStep, NeutralInterval, NextReading, RepairEvidence, RepairOutcome,
    SupplyDirection,
};
pub use finding::{Finding, Limit, Measurement, Signal, Verdict};
