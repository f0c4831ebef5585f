//! Voltage unbalance of three-phase systems and what it costs a motor.

use crate::quantity::Volts;

/// Largest deviation of the line-to-line voltages from their mean, in per cent of the mean (NEMA MG 1, 12.45 and 14.36; ANSI C84.1
/// annex). `None` unless the mean is positive.
///
/// The mean is not rounded first, and the farthest phase may be the low one: published examples get both wrong.
#[must_use]
pub fn nema_percent(line_to_line: [Volts; 3]) -> Option<f64> {
    let mean = line_to_line.into_iter().sum::<Volts>() / 3.0;
    let farthest = line_to_line.iter().map(|v| (*v - mean).abs().0).fold(0.0, f64::max);
    (mean.0 > 0.0).then(|| 100.0 * farthest / mean.0)
}

/// Negative-sequence over positive-sequence voltage in per cent, from the line-to-line magnitudes alone (IEC 61000-4-30):
/// β = Σv⁴/(Σv²)², u₂ = √((1 − √(3 − 6β))/(1 + √(3 − 6β))). `None` where the three form no triangle.
#[must_use]
pub fn negative_sequence_percent(line_to_line: [Volts; 3]) -> Option<f64> {
    let squares = line_to_line.map(|v| v.0 * v.0);
    let sum: f64 = squares.iter().sum();
    let beta = squares.iter().map(|s| s * s).sum::<f64>() / (sum * sum);
    // Exactly balanced voltages may round to β just above 1/3 or the root just above 1; a triangle that does not close has
    // 3 − 6β below 0.
    let under = 3.0 - 6.0 * beta;
    if !under.is_finite() || under < -1e-12 {
        return None;
    }
    let root = under.max(0.0).sqrt();
    Some(100.0 * ((1.0 - root).max(0.0) / (1.0 + root)).sqrt())
}

/// Points of the motor derating curve (NEMA MG 1, figure 14-1): a curve without digits; these are one published reading of it.
/// Others differ by 0.01 to 0.02.
const DERATING: [(f64, f64); 9] =
    [(0.5, 1.00), (1.5, 0.97), (2.0, 0.95), (2.5, 0.93), (3.0, 0.89), (3.5, 0.85), (4.0, 0.82), (4.5, 0.78), (5.0, 0.76)];

/// Share of its rating a motor may deliver under a NEMA unbalance in per cent. `None` above 5 %, where it is not to run at all.
#[must_use]
pub fn motor_derating(nema_percent: f64) -> Option<f64> {
    if nema_percent <= DERATING[0].0 {
        return Some(1.0);
    }
    DERATING.windows(2).find_map(|pair| {
        let [(x0, y0), (x1, y1)] = pair else { return None };
        (*x0 < nema_percent && nema_percent <= *x1).then(|| y0 + (y1 - y0) * (nema_percent - x0) / (x1 - x0))
    })
}

/// Extra temperature rise of a motor's windings in per cent: about twice the square of the unbalance in per cent (rule of thumb).
#[must_use]
pub fn extra_heating_percent(nema_percent: f64) -> f64 {
    2.0 * nema_percent * nema_percent
}
