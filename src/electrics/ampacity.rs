//! Ampacity of conductors and the overcurrent protection they may have.
//!
//! NEC table 310.16 (310.15(B)(16) in the 2011 to 2017 editions): not more than three current-carrying conductors in raceway,
//! cable or earth, ambient 30 °C. No adjustment for bundling or ambient is made here: a workbook does not tell them.

use crate::quantity::Amperes;
use crate::visit::{Metal, Wire, WireSize};

/// Temperature column of the table: the lowest rating among conductor and terminals.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Column {
    /// 60 °C; terminals of circuits of 100 A or less unless marked otherwise (110.14(C)(1)(a)).
    C60,
    /// 75 °C; terminals of circuits over 100 A.
    C75,
    /// 90 °C; for adjustment only, hardly any terminals are listed for it.
    C90,
}

/// Editions of the table, which differ in a few entries.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Default)]
pub enum Edition {
    /// NEC 2008 and earlier. Copies of it still go round.
    Before2011,
    /// NEC 2011 and later.
    #[default]
    From2011,
}

/// A row: size, then copper at 60, 75 and 90 °C, then aluminium; 0 where the table has no entry.
type Row = (WireSize, [u16; 3], [u16; 3]);

const fn awg(n: i8, cu: [u16; 3], al: [u16; 3]) -> Row {
    (WireSize::Awg(n), cu, al)
}
const fn kcmil(n: u16, cu: [u16; 3], al: [u16; 3]) -> Row {
    (WireSize::Kcmil(n), cu, al)
}

/// NEC 2011 and later. The rows of 300 to 400 kcmil and above 500 kcmil are from memory.
const TABLE_310_16: [Row; 25] = [
    awg(14, [15, 20, 25], [0, 0, 0]),
    awg(12, [20, 25, 30], [15, 20, 25]),
    awg(10, [30, 35, 40], [25, 30, 35]),
    awg(8, [40, 50, 55], [35, 40, 45]),
    awg(6, [55, 65, 75], [40, 50, 55]),
    awg(4, [70, 85, 95], [55, 65, 75]),
    awg(3, [85, 100, 115], [65, 75, 85]),
    awg(2, [95, 115, 130], [75, 90, 100]),
    awg(1, [110, 130, 145], [85, 100, 115]),
    awg(0, [125, 150, 170], [100, 120, 135]),
    awg(-1, [145, 175, 195], [115, 135, 150]),
    awg(-2, [165, 200, 225], [130, 155, 175]),
    awg(-3, [195, 230, 260], [150, 180, 205]),
    kcmil(250, [215, 255, 290], [170, 205, 230]),
    kcmil(300, [240, 285, 320], [195, 230, 260]),
    kcmil(350, [260, 310, 350], [210, 250, 280]),
    kcmil(400, [280, 335, 380], [225, 270, 305]),
    kcmil(500, [320, 380, 430], [260, 310, 350]),
    kcmil(600, [350, 420, 475], [285, 340, 385]),
    kcmil(700, [385, 460, 520], [315, 375, 425]),
    kcmil(750, [400, 475, 535], [320, 385, 435]),
    kcmil(800, [410, 490, 555], [330, 395, 445]),
    kcmil(900, [435, 520, 585], [355, 425, 480]),
    kcmil(1000, [455, 545, 615], [375, 445, 500]),
    kcmil(1250, [495, 590, 665], [405, 485, 545]),
];

/// Entries that read otherwise before 2011.
const BEFORE_2011: [(i8, Metal, [u16; 3]); 7] = [
    (14, Metal::Copper, [20, 20, 25]),
    (12, Metal::Copper, [25, 25, 30]),
    (3, Metal::Copper, [85, 100, 110]),
    (1, Metal::Copper, [110, 130, 150]),
    (12, Metal::Aluminium, [20, 20, 25]),
    (8, Metal::Aluminium, [30, 40, 45]),
    (6, Metal::Aluminium, [40, 50, 60]),
];

/// Ampacity of a conductor; `None` for sizes the table does not hold, metric ones among them.
#[must_use]
pub fn ampacity(wire: Wire, column: Column, edition: Edition) -> Option<Amperes> {
    let (_, copper, aluminium) = TABLE_310_16.iter().find(|row| row.0 == wire.size)?;
    let older = BEFORE_2011
        .iter()
        .find(|(n, metal, _)| edition == Edition::Before2011 && WireSize::Awg(*n) == wire.size && *metal == wire.metal)
        .map(|(_, _, values)| values);
    let values = older.unwrap_or(match wire.metal {
        Metal::Copper => copper,
        Metal::Aluminium => aluminium,
    });
    let amperes = values.get(column as usize).copied().filter(|a| *a > 0)?;
    Some(Amperes(f64::from(amperes)))
}

/// The column terminals allow where nothing else is marked: 60 °C up to 100 A, 75 °C above (NEC 110.14(C)(1), from memory).
#[must_use]
pub fn usual_column(breaker: Amperes) -> Column {
    if breaker.0 <= 100.0 { Column::C60 } else { Column::C75 }
}

/// Largest breaker on a small conductor, whatever its ampacity: NEC 240.4(D). `None` for larger conductors. The rule has
/// exceptions (motors, air conditioners, taps: 240.4(E), (G)) that a circuit list does not show.
#[must_use]
pub fn small_conductor_limit(wire: Wire) -> Option<Amperes> {
    match (wire.size, wire.metal) {
        (WireSize::Awg(18), Metal::Copper) => Some(Amperes(7.0)),
        (WireSize::Awg(16), Metal::Copper) => Some(Amperes(10.0)),
        (WireSize::Awg(14), Metal::Copper) | (WireSize::Awg(12), Metal::Aluminium) => Some(Amperes(15.0)),
        (WireSize::Awg(12), Metal::Copper) => Some(Amperes(20.0)),
        (WireSize::Awg(10), Metal::Aluminium) => Some(Amperes(25.0)),
        (WireSize::Awg(10), Metal::Copper) => Some(Amperes(30.0)),
        _ => None,
    }
}

/// Standard ratings of fuses and breakers, 15 to 3000 A: NEC table 240.6(A) (from memory).
const STANDARD_RATINGS: [u16; 34] = [
    15, 20, 25, 30, 35, 40, 45, 50, 60, 70, 80, 90, 100, 110, 125, 150, 175, 200, 225, 250, 300, 350, 400, 450, 500, 600, 700, 800, 1000,
    1200, 1600, 2000, 2500, 3000,
];

/// The standard rating at or next above an ampacity.
#[must_use]
pub fn next_standard_rating(ampacity: Amperes) -> Option<Amperes> {
    STANDARD_RATINGS.iter().map(|r| Amperes(f64::from(*r))).find(|r| *r >= ampacity)
}

/// Largest breaker that protects a conductor: the small-conductor limit, else the next standard rating up to 800 A and the
/// ampacity itself above (NEC 240.4(B), (C), (D)).
#[must_use]
pub fn largest_breaker(wire: Wire, column: Column, edition: Edition) -> Option<Amperes> {
    if let Some(limit) = small_conductor_limit(wire) {
        return Some(limit);
    }
    let ampacity = ampacity(wire, column, edition)?;
    let next = next_standard_rating(ampacity)?;
    Some(if next.0 <= 800.0 { next } else { ampacity })
}

/// NEC table 310.12(A): rating of a dwelling's service, smallest copper and aluminium conductor (83 % of the rating).
const DWELLING: [(u16, WireSize, WireSize); 11] = [
    (100, WireSize::Awg(4), WireSize::Awg(2)),
    (110, WireSize::Awg(3), WireSize::Awg(1)),
    (125, WireSize::Awg(2), WireSize::Awg(0)),
    (150, WireSize::Awg(1), WireSize::Awg(-1)),
    (175, WireSize::Awg(0), WireSize::Awg(-2)),
    (200, WireSize::Awg(-1), WireSize::Awg(-3)),
    (225, WireSize::Awg(-2), WireSize::Kcmil(250)),
    (250, WireSize::Awg(-3), WireSize::Kcmil(300)),
    (300, WireSize::Kcmil(250), WireSize::Kcmil(350)),
    (350, WireSize::Kcmil(350), WireSize::Kcmil(500)),
    (400, WireSize::Kcmil(400), WireSize::Kcmil(600)),
];

/// Smallest conductor for a dwelling's service, or for the feeder that carries its whole load, of a standard rating.
#[must_use]
pub fn dwelling_conductor(rating: Amperes, metal: Metal) -> Option<WireSize> {
    DWELLING.iter().find(|row| f64::from(row.0) >= rating.0).map(|row| match metal {
        Metal::Copper => row.1,
        Metal::Aluminium => row.2,
    })
}

/// Largest rating of a dwelling's service on a conductor: that of the table, where the size stands in it, else the ampacity at
/// 75 °C over 83 %, down to the standard rating. Single phase 120/240 V and two legs of a 208Y/120 wye, 100 to 400 A, no
/// adjustment factors (NEC 310.12; 310.15(B)(7) in 2014 and 2017).
#[must_use]
pub fn dwelling_rating(wire: Wire) -> Option<Amperes> {
    let size = |row: &(u16, WireSize, WireSize)| match wire.metal {
        Metal::Copper => row.1,
        Metal::Aluminium => row.2,
    };
    if let Some(row) = DWELLING.iter().find(|row| size(row) == wire.size) {
        return Some(Amperes(f64::from(row.0)));
    }
    let most = ampacity(wire, Column::C75, Edition::From2011)? / 0.83;
    let rating = STANDARD_RATINGS.iter().rev().map(|r| Amperes(f64::from(*r))).find(|r| *r <= most)?;
    (100.0..=400.0).contains(&rating.0).then_some(rating)
}

/// Most a breaker should carry for three hours or more: 80 % of its rating, the inverse of the 125 % of NEC 210.20(A) and
/// 215.3. Assemblies listed for 100 % are excepted.
#[must_use]
pub fn continuous_limit(breaker: Amperes) -> Amperes {
    breaker * 0.8
}
