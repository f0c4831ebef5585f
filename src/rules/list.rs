//! The list of all rules, in the order of the book.

use super::Rule;
use super::*;

/// All rules.
pub static RULES: &[&Rule] = &[
    &nominal_band::RULE,
    &service_range::RULE,
    &utilization_range::RULE,
    &leg_sum::RULE,
    &leg_difference::RULE,
    &neutral_shift::RULE,
    &rise_above_source::RULE,
    &neutral_to_ground::RULE,
    &receptacle_pattern::RULE,
    &current_balance::RULE,
    &neutral_current_sum::RULE,
    &shared_neutral_legs::RULE,
    &shared_neutral_disconnect::RULE,
    &circuit_list::RULE,
    &neutral_path::RULE,
    &hot_path::RULE,
    &supply_voltage::RULE,
    &open_neutral_exposure::RULE,
    &not_ruled_out::RULE,
    &repair_proven::RULE,
    &calibration_lapsed::RULE,
    &accuracy_assumed::RULE,
    &repeat_readings::RULE,
    &observation::RULE,
];
