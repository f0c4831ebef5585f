//! Resistance of heating elements and filaments, cold and at work.

use crate::quantity::{Ohms, Volts, Watts};

/// Working resistance by rating: V²/P. `None` where the rating is not positive.
#[must_use]
pub fn working_ohms(watts: Watts, volts: Volts) -> Option<Ohms> {
    (watts.0 > 0.0 && volts.0 > 0.0).then(|| Ohms(volts.0 * volts.0 / watts.0))
}

/// Range of cold over working resistance of a tungsten filament. Resistivity of tungsten is 5.65 µΩ·cm at 300 K and some
/// 84.7 µΩ·cm at 2800 K, a ratio of 15 (handbook values, from memory); lamps as sold are found from 1/16 to 1/9 (common practice).
pub const COLD_FILAMENT: (f64, f64) = (1.0 / 16.0, 1.0 / 9.0);

/// Range of cold over working resistance of a nickel-chromium or iron-chromium-aluminium heating element. These alloys rise by
/// a few per cent only; makers allow +5/−10 % on watts (common practice, no source).
pub const COLD_ELEMENT: (f64, f64) = (0.90, 1.08);

/// The cold ohms to expect of a part by its rating, low and high.
#[must_use]
pub fn cold_ohms(watts: Watts, volts: Volts, filament: bool) -> Option<(Ohms, Ohms)> {
    let hot = working_ohms(watts, volts)?;
    let (low, high) = if filament { COLD_FILAMENT } else { COLD_ELEMENT };
    Some((hot * low, hot * high))
}
