//! The list of all rules, in the order of the book.

use super::Rule;
use super::{
    breaker_conductor, continuous_load, element_resistance, gfci_trip, ground_electrode, insulation_resistance, neutral_load,
    temperature_rise, torque, voltage_drop, voltage_unbalance,
};
use super::{leg_difference, nominal_band, service_range, utilization_range};

/// All rules.
pub static RULES: &[&Rule] = &[
    &nominal_band::RULE,
    &service_range::RULE,
    &utilization_range::RULE,
    &leg_difference::RULE,
    &voltage_unbalance::RULE,
    &voltage_drop::RULE,
    &continuous_load::RULE,
    &neutral_load::RULE,
    &breaker_conductor::RULE,
    &insulation_resistance::RULE,
    &ground_electrode::RULE,
    &gfci_trip::RULE,
    &temperature_rise::RULE,
    &torque::RULE,
    &element_resistance::RULE,
];
