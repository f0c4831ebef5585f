//! The elementary functions, from one library, so that every machine computes the same bits.
//!
//! The standard library's `exp`, `ln`, `powf`, `sin`… call the system's mathematics library, whose last bits differ between
//! systems; a report must not. Only this file names `libm`. `sqrt` is exact by IEEE 754 and may be called directly.

/// eˣ.
#[must_use]
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}

/// Natural logarithm; NaN below zero, −∞ at zero.
#[must_use]
pub fn ln(x: f64) -> f64 {
    libm::log(x)
}

/// ln(1 + x), exact near zero.
#[must_use]
pub fn ln_1p(x: f64) -> f64 {
    libm::log1p(x)
}

/// Decimal logarithm.
#[must_use]
pub fn log10(x: f64) -> f64 {
    libm::log10(x)
}

/// xʸ.
#[must_use]
pub fn pow(x: f64, y: f64) -> f64 {
    libm::pow(x, y)
}

/// √(x² + y²) without overflow.
#[must_use]
pub fn hypot(x: f64, y: f64) -> f64 {
    libm::hypot(x, y)
}

/// Sine of an angle in radians.
#[must_use]
pub fn sin(x: f64) -> f64 {
    libm::sin(x)
}

/// Cosine of an angle in radians.
#[must_use]
pub fn cos(x: f64) -> f64 {
    libm::cos(x)
}

/// Arc cosine in radians; the argument is clamped to [−1, 1], since rounding may carry a cosine just past it.
#[must_use]
pub fn acos(x: f64) -> f64 {
    libm::acos(x.clamp(-1.0, 1.0))
}

/// Angle of the point (x, y) in radians.
#[must_use]
pub fn atan2(y: f64, x: f64) -> f64 {
    libm::atan2(y, x)
}

/// Error function.
#[must_use]
pub fn erf(x: f64) -> f64 {
    libm::erf(x)
}

/// Standard normal distribution function Φ.
#[must_use]
pub fn normal_cdf(x: f64) -> f64 {
    0.5 * libm::erfc(-x / std::f64::consts::SQRT_2)
}
