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

/// Longest break time of a general residual-current device of 30 mA: 300 ms at its rated residual current, 40 ms at five times it
/// (IEC 61008-1, table of limits; from memory). `None` below 30 mA.
#[must_use]
pub fn longest_residual_device_time(residual: Amperes) -> Option<Seconds> {
    match residual.0 {
        i if i >= 0.150 => Some(Seconds(0.040)),
        i if i >= 0.030 => Some(Seconds(0.300)),
        _ => None,
    }
}
