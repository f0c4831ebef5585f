//! The list of all rules, in the order of the book.

use super::Rule;
use super::{leg_difference, nominal_band, service_range, utilization_range};

/// All rules.
pub static RULES: &[&Rule] = &[&nominal_band::RULE, &service_range::RULE, &utilization_range::RULE, &leg_difference::RULE];
