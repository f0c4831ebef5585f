//! Temperature rise of connections: ANSI/NETA MTS table 100.18.

use crate::quantity::Celsius;

/// Grades of the table, mildest first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Grade {
    /// Below the first line of the table.
    Unremarkable,
    /// Possible deficiency: to be looked into.
    Possible,
    /// Probable deficiency: repair as time permits.
    Probable,
    /// Watch until it can be corrected.
    Monitor,
    /// Major discrepancy: repair at once.
    Major,
}

/// Below about this share of full load a survey says little (common practice).
pub const LEAST_LOAD: f64 = 0.4;

/// Grade by the rise over a similar part under similar load. The table leaves gaps between its whole degrees (3 to 4); a value in a
/// gap takes the more severe grade.
#[must_use]
pub fn over_similar(rise: Celsius) -> Grade {
    grade(rise, &[(1.0, Grade::Unremarkable), (3.0, Grade::Possible), (15.0, Grade::Probable)])
}

/// Grade by the rise over ambient air; gaps (10 to 11, 20 to 21) as in [`over_similar`].
#[must_use]
pub fn over_ambient(rise: Celsius) -> Grade {
    grade(rise, &[(1.0, Grade::Unremarkable), (10.0, Grade::Possible), (20.0, Grade::Probable), (40.0, Grade::Monitor)])
}

/// The first entry is open at its top (1 °C is possible already), the others include it.
fn grade(rise: Celsius, steps: &[(f64, Grade)]) -> Grade {
    let below = |(n, (top, _)): &(usize, &(f64, Grade))| if *n == 0 { rise.0 < *top } else { rise.0 <= *top };
    steps.iter().enumerate().find(below).map_or(Grade::Major, |(_, (_, grade))| *grade)
}
