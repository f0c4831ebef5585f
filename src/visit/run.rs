//! A run: one row of the circuit list, named by its far end.

use super::{Between, Leg};
use crate::diag::{CellRef, Located};
use crate::quantity::{Amperes, Metres, Watts};
use std::fmt;

/// A run as the circuit list gives it.
#[derive(Clone, Debug)]
pub struct Run {
    /// Circuit: its name and the name of its far end.
    pub name: Located<String>,
    /// Fed from; `None` for the utility.
    pub fed_from: Option<Located<String>>,
    /// Serves.
    pub serves: Option<Located<String>>,
    /// Its line conductors, and whether there is a neutral.
    pub legs: Option<Located<Legs>>,
    /// Breaker.
    pub breaker: Option<Located<Amperes>>,
    /// Common disconnect.
    pub tie: Option<Located<bool>>,
    /// Wire of the line conductors (and of the neutral, unless stated).
    pub wire: Option<Located<Wire>>,
    /// Wire of the neutral where it is another.
    pub neutral_wire: Option<Located<Wire>>,
    /// Length one way.
    pub length: Option<Located<Metres>>,
    /// Loads at its far end. A stated 0 W is a load of 0 W; a blank cell is no entry.
    pub loads: Vec<Load>,
    /// What kind the loads are.
    pub load_kind: Option<Located<LoadKind>>,
    /// Remarks.
    pub remarks: Option<Located<String>>,
    /// The row's first cell.
    pub cell: CellRef,
}

impl Run {
    /// It has a neutral (known to).
    #[must_use]
    pub fn has_neutral(&self) -> bool {
        self.legs.as_ref().is_some_and(|l| l.value.neutral)
    }

    /// Two or more legs share its neutral: a multiwire run.
    #[must_use]
    pub fn shares_neutral(&self) -> bool {
        self.legs.as_ref().is_some_and(|l| l.value.neutral && l.value.count() > 1)
    }

    /// Wire of its neutral.
    #[must_use]
    pub fn neutral(&self) -> Option<&Located<Wire>> {
        self.neutral_wire.as_ref().or(self.wire.as_ref())
    }
}

/// The conductors of a run: `L1`, `L1 L2` (shared neutral), `L1-L2` (no neutral).
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Legs {
    /// L1, L2, L3 present.
    pub lines: [bool; 3],
    /// A neutral runs along.
    pub neutral: bool,
}

impl Legs {
    /// A set of legs with or without a neutral.
    #[must_use]
    pub fn new(legs: &[Leg], neutral: bool) -> Self {
        let mut lines = [false; 3];
        for leg in legs {
            lines[leg.index()] = true;
        }
        Self { lines, neutral }
    }

    /// It carries this leg.
    #[must_use]
    pub fn has(self, leg: Leg) -> bool {
        self.lines[leg.index()]
    }

    /// Its legs in order.
    pub fn iter(self) -> impl Iterator<Item = Leg> {
        Leg::ALL.into_iter().filter(move |l| self.has(*l))
    }

    /// How many line conductors.
    #[must_use]
    pub fn count(self) -> usize {
        self.lines.iter().filter(|l| **l).count()
    }
}

impl fmt::Display for Legs {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let joint = if self.neutral { " " } else { "-" };
        let names: Vec<&str> = self.iter().map(Leg::name).collect();
        f.write_str(&names.join(joint))
    }
}

/// Conductor metal.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Metal {
    /// Copper.
    Copper,
    /// Aluminium.
    Aluminium,
}

impl fmt::Display for Metal {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Copper => "Cu",
            Self::Aluminium => "Al",
        })
    }
}

/// Conductor size.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum WireSize {
    /// American wire gauge; 1/0 is 0, 2/0 is −1, 3/0 is −2, 4/0 is −3.
    Awg(i8),
    /// Thousands of circular mils.
    Kcmil(u16),
    /// Square millimetres.
    SquareMillimetres(f64),
}

/// A conductor: size and metal. Shown canonically: `12 Cu`, `4/0 Al`, `250 kcmil Cu`, `2.5 mm2 Cu`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wire {
    /// Size.
    pub size: WireSize,
    /// Metal.
    pub metal: Metal,
    /// The workbook named no metal; copper was assumed, and said.
    pub metal_assumed: bool,
}

impl fmt::Display for Wire {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.size {
            WireSize::Awg(n) if n <= 0 => write!(f, "{}/0", 1 - i16::from(n))?,
            WireSize::Awg(n) => write!(f, "{n}")?,
            WireSize::Kcmil(n) => write!(f, "{n} kcmil")?,
            WireSize::SquareMillimetres(a) => write!(f, "{a} mm2")?,
        }
        write!(f, " {}", self.metal)
    }
}

/// A load at the far end of a run.
#[derive(Clone, Debug)]
pub struct Load {
    /// Its two conductors.
    pub between: Between,
    /// Watts at nominal voltage.
    pub watts: Located<Watts>,
}

/// How a load's current depends on its voltage.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LoadKind {
    /// I ∝ V.
    Resistive,
    /// Incandescent lamps: I ∝ V^0.55.
    Filament,
    /// Power electronics: constant power, with a cut-off.
    Electronic,
    /// Motors: current behind the voltage by the power factor.
    Motor,
}

impl LoadKind {
    /// As the circuit list writes it.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Resistive => "resistive",
            Self::Filament => "filament",
            Self::Electronic => "electronic",
            Self::Motor => "motor",
        }
    }
}
