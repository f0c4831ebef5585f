//! Resistance of conductors.
//!
//! Gauge and kcmil sizes: NEC chapter 9 table 8, DC resistance at 75 °C of uncoated conductors. Sizes 14 to 8 stand there solid
//! and stranded, 6 and larger stranded only. [`Make::AsUsual`] takes solid up to 8 and stranded above, as building wire is
//! commonly sold in the small sizes. Many copies of the table mix the two columns unawares.
//!
//! Metric sizes, and gauges the table leaves out: by area and resistivity at 20 °C (annealed copper 1/58 Ω·mm²/m, IEC 60028;
//! aluminium 0.028264 Ω·mm²/m, IEC 60889; both from memory, confirmed by table 8 within 2 %).

use crate::quantity::{Celsius, Metres, Ohms, math};
use crate::visit::{Metal, Wire, WireSize};
use std::ops::Mul;

/// Resistance per length.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct OhmsPerMetre(pub f64);

impl OhmsPerMetre {
    /// From ohms per 1000 ft, as the tables print them.
    #[must_use]
    pub fn from_per_thousand_feet(ohms: f64) -> Self {
        Self(ohms / (1000.0 * Metres::PER_FOOT))
    }

    /// In ohms per 1000 ft.
    #[must_use]
    pub fn per_thousand_feet(self) -> f64 {
        self.0 * 1000.0 * Metres::PER_FOOT
    }
}

impl Mul<Metres> for OhmsPerMetre {
    type Output = Ohms;
    fn mul(self, length: Metres) -> Ohms {
        Ohms(self.0 * length.0)
    }
}

/// How the strands of a conductor are made.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Make {
    /// Solid up to 8 AWG, stranded above.
    AsUsual,
    /// Solid; above 8 AWG, where the table has no such row, stranded.
    Solid,
    /// Stranded.
    Stranded,
}

/// A row of table 8: size, then ohms per 1000 ft at 75 °C, copper solid and stranded, aluminium solid and stranded.
struct Row(WireSize, [f64; 4]);

const fn awg(n: i8, cu: (f64, f64), al: (f64, f64)) -> Row {
    Row(WireSize::Awg(n), [cu.0, cu.1, al.0, al.1])
}
const fn stranded(size: WireSize, cu: f64, al: f64) -> Row {
    Row(size, [cu, cu, al, al])
}

/// NEC chapter 9 table 8, uncoated copper and aluminium. The rows above 500 kcmil are from memory.
#[allow(clippy::approx_constant)] // 3.14 Ω is what the table prints for 14 AWG stranded.
const TABLE_8: [Row; 27] = [
    awg(18, (7.77, 7.95), (12.8, 13.1)),
    awg(16, (4.89, 4.99), (8.05, 8.21)),
    awg(14, (3.07, 3.14), (5.06, 5.17)),
    awg(12, (1.93, 1.98), (3.18, 3.25)),
    awg(10, (1.21, 1.24), (2.00, 2.04)),
    awg(8, (0.764, 0.778), (1.26, 1.28)),
    stranded(WireSize::Awg(6), 0.491, 0.808),
    stranded(WireSize::Awg(4), 0.308, 0.508),
    stranded(WireSize::Awg(3), 0.245, 0.403),
    stranded(WireSize::Awg(2), 0.194, 0.319),
    stranded(WireSize::Awg(1), 0.154, 0.253),
    stranded(WireSize::Awg(0), 0.122, 0.201),
    stranded(WireSize::Awg(-1), 0.0967, 0.159),
    stranded(WireSize::Awg(-2), 0.0766, 0.126),
    stranded(WireSize::Awg(-3), 0.0608, 0.100),
    stranded(WireSize::Kcmil(250), 0.0515, 0.0847),
    stranded(WireSize::Kcmil(300), 0.0429, 0.0707),
    stranded(WireSize::Kcmil(350), 0.0367, 0.0605),
    stranded(WireSize::Kcmil(400), 0.0321, 0.0529),
    stranded(WireSize::Kcmil(500), 0.0258, 0.0424),
    stranded(WireSize::Kcmil(600), 0.0214, 0.0353),
    stranded(WireSize::Kcmil(700), 0.0184, 0.0303),
    stranded(WireSize::Kcmil(750), 0.0171, 0.0282),
    stranded(WireSize::Kcmil(800), 0.0161, 0.0265),
    stranded(WireSize::Kcmil(900), 0.0143, 0.0235),
    stranded(WireSize::Kcmil(1000), 0.0129, 0.0212),
    stranded(WireSize::Kcmil(1250), 0.0103, 0.0169),
];

/// Temperature the table's resistances hold at.
pub const TABLE_TEMPERATURE: Celsius = Celsius(75.0);

/// Resistance per metre of a conductor at a temperature, with the usual make. `None` for a size that is none (0 kcmil, a gauge
/// above 40 or beyond 4/0, an area that is not positive and finite).
#[must_use]
pub fn per_metre(wire: Wire, at: Celsius) -> Option<OhmsPerMetre> {
    per_metre_made(wire, Make::AsUsual, at)
}

/// Resistance of a length of conductor, one way.
#[must_use]
pub fn resistance(wire: Wire, length: Metres, at: Celsius) -> Option<Ohms> {
    per_metre(wire, at).map(|r| r * length)
}

/// Resistance per metre with the make named.
///
/// Correction of table values: R₂ = R₁·[1 + α·(T₂ − 75)], α 0.00323 for copper, 0.00330 for aluminium (table 8, notes).
#[must_use]
pub fn per_metre_made(wire: Wire, make: Make, at: Celsius) -> Option<OhmsPerMetre> {
    let Some(Row(size, columns)) = TABLE_8.iter().find(|row| row.0 == wire.size) else {
        return by_resistivity(wire, at);
    };
    let solid = match make {
        Make::Solid => true,
        Make::Stranded => false,
        Make::AsUsual => matches!(size, WireSize::Awg(8..)),
    };
    let metal = match wire.metal {
        Metal::Copper => 0,
        Metal::Aluminium => 2,
    };
    let at_75 = columns[metal + usize::from(!solid)];
    Some(OhmsPerMetre::from_per_thousand_feet(at_75 * correction(wire.metal, TABLE_TEMPERATURE, at)))
}

/// Factor that carries a table 8 resistance from one temperature to another.
#[must_use]
pub fn correction(metal: Metal, from: Celsius, to: Celsius) -> f64 {
    let alpha = match metal {
        Metal::Copper => 0.003_23,
        Metal::Aluminium => 0.003_30,
    };
    let at = |t: Celsius| 1.0 + alpha * (t - TABLE_TEMPERATURE).0;
    at(to) / at(from)
}

/// Resistivity at 20 °C in Ω·mm²/m, and its temperature coefficient at 20 °C.
fn resistivity(metal: Metal) -> (f64, f64) {
    match metal {
        Metal::Copper => (1.0 / 58.0, 0.003_93),
        Metal::Aluminium => (0.028_264, 0.004_03),
    }
}

fn by_resistivity(wire: Wire, at: Celsius) -> Option<OhmsPerMetre> {
    let area = square_millimetres(wire.size)?;
    let (rho, alpha) = resistivity(wire.metal);
    Some(OhmsPerMetre(rho / area * (1.0 + alpha * (at.0 - 20.0))))
}

/// Cross-section of a size in mm². Gauges by their definition: the diameter is 0.127 mm · 92^((36 − n)/39) (ASTM B258).
#[must_use]
pub fn square_millimetres(size: WireSize) -> Option<f64> {
    /// mm² in a thousand circular mils.
    const PER_KCMIL: f64 = 0.506_707_479;
    let area = match size {
        WireSize::Awg(n) if (-3..=40).contains(&n) => {
            let diameter = 0.127 * math::pow(92.0, (36.0 - f64::from(n)) / 39.0);
            std::f64::consts::FRAC_PI_4 * diameter * diameter
        }
        WireSize::Awg(_) => return None,
        WireSize::Kcmil(k) => f64::from(k) * PER_KCMIL,
        WireSize::SquareMillimetres(a) => a,
    };
    (area.is_finite() && area > 0.0).then_some(area)
}
