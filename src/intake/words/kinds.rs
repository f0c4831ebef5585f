//! The tables a workbook can hold, their named columns, and the items of a visit.

use serde::Deserialize;

/// The tables a workbook can hold.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub(crate) enum Kind {
    Visit,
    Instruments,
    Circuits,
    Readings,
    Tests,
    Observations,
    Photos,
    Work,
    Revisions,
}

impl Kind {
    /// All tables, in the order of the field workbook.
    pub const ALL: [Self; 9] = [
        Self::Visit,
        Self::Instruments,
        Self::Circuits,
        Self::Readings,
        Self::Tests,
        Self::Observations,
        Self::Photos,
        Self::Work,
        Self::Revisions,
    ];

    /// As `synonyms.toml` and a mapping name it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Visit => "visit",
            Self::Instruments => "instruments",
            Self::Circuits => "circuits",
            Self::Readings => "readings",
            Self::Tests => "tests",
            Self::Observations => "observations",
            Self::Photos => "photos",
            Self::Work => "work",
            Self::Revisions => "revisions",
        }
    }
}

/// The named columns of all tables; quantities and loads are [`super::header::heads::Head`]s.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub(crate) enum Column {
    Item,
    Entry,
    Instrument,
    Measures,
    Serial,
    CalibratedUntil,
    AccuracyPercent,
    AccuracyCounts,
    Accuracy,
    Resolution,
    Circuit,
    FedFrom,
    Serves,
    Legs,
    Breaker,
    Tie,
    Wire,
    NeutralWire,
    Length,
    Load,
    LoadKind,
    Location,
    State,
    Stage,
    Time,
    Date,
    Quantity,
    Value,
    Unit,
    Reckoned,
    Test,
    Observation,
    SignalWord,
    Advice,
    Photo,
    File,
    Caption,
    WorkDone,
    Parts,
    Issue,
    Reason,
    Remarks,
}

/// The items of the Visit sheet.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub(crate) enum Item {
    Job,
    Client,
    Address,
    Date,
    Purpose,
    PreparedBy,
    Licence,
    Company,
    System,
    NominalLineNeutral,
    NominalLineLine,
    ServiceRating,
    SuppliedBy,
    Code,
    Weather,
    Remarks,
}
