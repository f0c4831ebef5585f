//! A finding: what a rule says of a place.

use crate::diag::CellRef;
use crate::quantity::Unit;
use crate::visit::Stage;
use crate::wording::Sentence;

/// Signal word of a finding, in the sense of ANSI Z535; ordered from the mildest to the worst.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "UPPERCASE")]
pub enum Signal {
    /// Worth knowing; no hazard of itself.
    Notice,
    /// Could result in minor injury or damage.
    Caution,
    /// Could result in death or serious injury, or fire.
    Warning,
    /// Will result in death or serious injury if not dealt with.
    Danger,
}

impl Signal {
    /// All four, mildest first.
    pub const ALL: [Self; 4] = [Self::Notice, Self::Caution, Self::Warning, Self::Danger];

    /// `NOTICE`, `CAUTION`, `WARNING`, `DANGER`.
    #[must_use]
    pub fn word(self) -> &'static str {
        match self {
            Self::Notice => "NOTICE",
            Self::Caution => "CAUTION",
            Self::Warning => "WARNING",
            Self::Danger => "DANGER",
        }
    }
}

impl std::fmt::Display for Signal {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.word())
    }
}

/// Outcome of a comparison with a limit; undecided where the measurement uncertainty straddles it (JCGM 106).
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Verdict {
    /// Inside the limits with room for the uncertainty.
    Pass,
    /// The uncertainty straddles a limit.
    Undecided,
    /// Outside the limits beyond the uncertainty.
    Fail,
}

impl Verdict {
    /// `pass`, `fail`, `undecided`.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Pass => "pass",
            Self::Undecided => "undecided",
            Self::Fail => "fail",
        }
    }
}

/// A measured or calculated value with its expanded uncertainty (coverage factor 2).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measurement {
    /// In `unit`.
    pub value: f64,
    /// Expanded uncertainty in `unit`; `None` for values that carry none (a count, a calculated load).
    pub uncertainty: Option<f64>,
    /// Unit of both.
    pub unit: Unit,
}

/// The limit a value was judged by, in the measurement's unit; a missing end is unbounded.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Limit {
    /// Lowest value allowed.
    pub low: Option<f64>,
    /// Highest value allowed.
    pub high: Option<f64>,
}

/// One finding. Built by [`Finding::new`], which asks for the place.
#[derive(Clone, Debug, PartialEq)]
pub struct Finding {
    /// The rule's name, as in the rule book: `leg-sum`.
    pub rule: &'static str,
    /// Its severity.
    pub signal: Signal,
    /// Outcome.
    pub verdict: Verdict,
    /// Location or run it is about, as written; `None` for the visit as a whole.
    pub location: Option<String>,
    /// State of the readings, where it rests on readings.
    pub state: Option<String>,
    /// Stage of the readings, where it rests on readings.
    pub stage: Option<Stage>,
    /// What was measured or calculated.
    pub measured: Option<Measurement>,
    /// What judged it.
    pub limit: Option<Limit>,
    /// The primary cell first, then related ones. Never empty: a finding about something missing names the cell where it was
    /// expected or the header of its table.
    pub cells: Vec<CellRef>,
    /// What it says, in plain words.
    pub says: Sentence,
    /// What to do, and by whom.
    pub advice: Sentence,
    /// Standard, edition and clause, or "common practice".
    pub basis: String,
}

impl Finding {
    /// A finding with its primary place, what it says and what it advises.
    #[must_use]
    pub fn new(
        rule: &'static str,
        signal: Signal,
        verdict: Verdict,
        primary: CellRef,
        says: Sentence,
        advice: Sentence,
        basis: &str,
    ) -> Self {
        Self {
            rule,
            signal,
            verdict,
            location: None,
            state: None,
            stage: None,
            measured: None,
            limit: None,
            cells: vec![primary],
            says,
            advice,
            basis: basis.to_owned(),
        }
    }

    /// The location or run.
    #[must_use]
    pub fn at(mut self, location: &str) -> Self {
        self.location = Some(location.to_owned());
        self
    }

    /// State and stage of the readings.
    #[must_use]
    pub fn taken(mut self, state: &str, stage: Stage) -> Self {
        self.state = Some(state.to_owned());
        self.stage = Some(stage);
        self
    }

    /// What was measured, with expanded uncertainty.
    #[must_use]
    pub fn measured(mut self, value: f64, uncertainty: Option<f64>, unit: Unit) -> Self {
        self.measured = Some(Measurement { value, uncertainty, unit });
        self
    }

    /// The limit that judged it.
    #[must_use]
    pub fn limit(mut self, low: Option<f64>, high: Option<f64>) -> Self {
        self.limit = Some(Limit { low, high });
        self
    }

    /// Related cells.
    #[must_use]
    pub fn related(mut self, cells: impl IntoIterator<Item = CellRef>) -> Self {
        for cell in cells {
            if !self.cells.contains(&cell) {
                self.cells.push(cell);
            }
        }
        self
    }
}
