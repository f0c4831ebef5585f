//! Trip limits of ground-fault circuit interrupters.

use crate::quantity::{Amperes, Seconds, math};

/// Residual current at and above which a class A device trips (UL 943).
pub const MUST_TRIP: Amperes = Amperes(0.006);

/// Residual current below which it does not (UL 943).
pub const MUST_HOLD: Amperes = Amperes(0.004);

/// Highest residual current of the time curve; above, the time at 264 mA holds.
pub const CURVE_END: Amperes = Amperes(0.264);

/// Longest trip time of a class A device: T = (20/I)^1.43 s, I in mA (UL 943). `None` below 6 mA, where it need not trip.
///
/// At 6 mA that is 5.59 s; the 25 ms one often hears belongs to 264 mA.
#[must_use]
pub fn longest_trip_time(residual: Amperes) -> Option<Seconds> {
    if residual.0.is_nan() || residual < MUST_TRIP {
        return None;
    }
    let milliamperes = residual.0.min(CURVE_END.0) * 1000.0;
    Some(Seconds(math::pow(20.0 / milliamperes, 1.43)))
}
