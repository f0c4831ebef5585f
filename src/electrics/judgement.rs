//! Judging a measured value by limits, the uncertainty of the measurement taken into account.
//!
//! The rule is the guarded one of JCGM 106:2012 (Evaluation of measurement data: the role of measurement uncertainty in conformity
//! assessment), clause 8.3, applied at both ends: the expanded interval `value ± k·u` must lie wholly inside the limits to pass,
//! wholly outside to fail, and decides nothing otherwise. Limits themselves are allowed values.

use crate::quantity::math;
use crate::results::{Limit, Verdict};

/// Verdict on a value with a standard uncertainty, both in the limit's unit, by the interval of coverage factor `k`.
///
/// A value, uncertainty or factor that is not a finite number decides nothing.
#[must_use]
pub fn judge(value: f64, standard: f64, limit: Limit, k: f64) -> Verdict {
    let reach = (k * standard).abs();
    if !value.is_finite() || !reach.is_finite() {
        return Verdict::Undecided;
    }
    let outside = limit.low.is_some_and(|low| value + reach < low) || limit.high.is_some_and(|high| value - reach > high);
    let inside = limit.low.is_none_or(|low| value - reach >= low) && limit.high.is_none_or(|high| value + reach <= high);
    match (outside, inside) {
        (true, _) => Verdict::Fail,
        (false, true) => Verdict::Pass,
        (false, false) => Verdict::Undecided,
    }
}

/// Probability that the true value lies within the limits, its distribution taken as normal (JCGM 106:2012, 7.2 to 7.4).
///
/// With no uncertainty it is 0 or 1. NaN where the value or the uncertainty is not a number.
#[must_use]
pub fn conformity(value: f64, standard: f64, limit: Limit) -> f64 {
    let below = |bound: f64| {
        if standard == 0.0 {
            return if value <= bound { 1.0 } else { 0.0 };
        }
        math::normal_cdf((bound - value) / standard)
    };
    match (limit.low, limit.high) {
        (None, None) => 1.0,
        (None, Some(high)) => below(high),
        // By symmetry, so that the far tail keeps its digits.
        (Some(low), None) => conformity(-value, standard, Limit { low: None, high: Some(-low) }),
        (Some(low), Some(high)) if standard == 0.0 => f64::from(u8::from(value >= low && value <= high)),
        (Some(low), Some(high)) => (below(high) - below(low)).clamp(0.0, 1.0),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn high(high: f64) -> Limit {
        Limit { low: None, high: Some(high) }
    }

    /// JCGM 106:2012, examples of clause 7 (from memory): Zener diode and burst pressure; then the worked values of a 0.7 % + 2
    /// counts meter, recomputed by hand from Φ.
    #[test]
    fn probability_of_conformity_is_that_of_the_worked_examples() {
        let low = |low| Limit { low: Some(low), high: None };
        for (value, u, limit, expected) in [
            (-5.47, 0.05, high(-5.40), 0.9192),
            (509.7, 8.6, low(490.0), 0.9890),
            (125.5, 0.62267, high(126.0), 0.7890),
            (113.6, 0.57458, low(114.0), 0.2432),
        ] {
            assert!((conformity(value, u, limit) - expected).abs() < 5e-4, "{value}");
        }
    }

    /// ISO 14253-1 and ILAC-G8:09/2019: guard band of one expanded uncertainty, k = 2: acceptance below 124.755 V.
    #[test]
    fn a_guard_band_separates_pass_undecided_and_fail() {
        let u = 0.62267;
        for (value, verdict) in [
            (124.7, Verdict::Pass),
            (124.8, Verdict::Undecided),
            (125.5, Verdict::Undecided),
            (127.2, Verdict::Undecided),
            (127.3, Verdict::Fail),
        ] {
            assert_eq!(judge(value, u, high(126.0), 2.0), verdict, "{value}");
        }
    }

    #[test]
    fn limits_are_allowed_values_and_nonsense_decides_nothing() {
        assert_eq!(judge(126.0, 0.0, high(126.0), 2.0), Verdict::Pass);
        assert_eq!(judge(f64::NAN, 0.1, high(126.0), 2.0), Verdict::Undecided);
        assert_eq!(judge(1.0, f64::INFINITY, high(126.0), 2.0), Verdict::Undecided);
    }
}
