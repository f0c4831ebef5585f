//! The supply system: its nominal voltages, its legs, and the quantities measured between its conductors.

use crate::quantity::Volts;
use std::fmt;

/// A line conductor of the service.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Leg {
    /// Leg 1.
    L1,
    /// Leg 2. On a 240/120 delta the high leg (phase B; NEC 110.15, 408.3(E)).
    L2,
    /// Leg 3.
    L3,
}

impl Leg {
    /// All legs, in order.
    pub const ALL: [Self; 3] = [Self::L1, Self::L2, Self::L3];

    /// 0, 1 or 2.
    #[must_use]
    pub fn index(self) -> usize {
        self as usize
    }

    /// `L1`, `L2`, `L3`.
    #[must_use]
    pub fn name(self) -> &'static str {
        ["L1", "L2", "L3"][self.index()]
    }
}

impl fmt::Display for Leg {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// A conductor of a circuit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Conductor {
    /// A line conductor.
    Line(Leg),
    /// The neutral.
    Neutral,
    /// The equipment grounding conductor.
    Ground,
}

impl fmt::Display for Conductor {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Line(leg) => leg.fmt(f),
            Self::Neutral => f.write_str("N"),
            Self::Ground => f.write_str("G"),
        }
    }
}

/// The two conductors a load or a voltage lies between.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Between {
    /// A line conductor and the neutral.
    LineNeutral(Leg),
    /// Two line conductors: L1-L2, L2-L3 or L3-L1.
    LineLine(Leg, Leg),
}

impl Between {
    /// The three line-to-line pairs as they are written.
    pub const LINE_LINE: [Self; 3] = [Self::LineLine(Leg::L1, Leg::L2), Self::LineLine(Leg::L2, Leg::L3), Self::LineLine(Leg::L3, Leg::L1)];
}

impl fmt::Display for Between {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::LineNeutral(leg) => write!(f, "{leg}-N"),
            Self::LineLine(a, b) => write!(f, "{a}-{b}"),
        }
    }
}

/// A quantity of the Readings sheet.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Quantity {
    /// Line to neutral, or line to line, in volts.
    Voltage(Between),
    /// Neutral to ground, in volts.
    NeutralGround,
    /// Line to ground, in volts.
    LineGround(Leg),
    /// Current in a line conductor, in amperes.
    LineCurrent(Leg),
    /// Current in the neutral, in amperes.
    NeutralCurrent,
    /// Current in the grounding conductor, in amperes.
    GroundCurrent,
}

impl Quantity {
    /// All fifteen, in the order of the sheet.
    pub const ALL: [Self; 15] = [
        Self::line_neutral(Leg::L1),
        Self::line_neutral(Leg::L2),
        Self::line_neutral(Leg::L3),
        Self::Voltage(Between::LINE_LINE[0]),
        Self::Voltage(Between::LINE_LINE[1]),
        Self::Voltage(Between::LINE_LINE[2]),
        Self::NeutralGround,
        Self::LineGround(Leg::L1),
        Self::LineGround(Leg::L2),
        Self::LineGround(Leg::L3),
        Self::LineCurrent(Leg::L1),
        Self::LineCurrent(Leg::L2),
        Self::LineCurrent(Leg::L3),
        Self::NeutralCurrent,
        Self::GroundCurrent,
    ];

    /// The voltage of a leg against the neutral.
    #[must_use]
    pub const fn line_neutral(leg: Leg) -> Self {
        Self::Voltage(Between::LineNeutral(leg))
    }

    /// The voltage between L1 and L2.
    pub const L1_L2: Self = Self::Voltage(Between::LINE_LINE[0]);

    /// Volts rather than amperes.
    #[must_use]
    pub fn is_voltage(self) -> bool {
        matches!(self, Self::Voltage(_) | Self::NeutralGround | Self::LineGround(_))
    }

    /// Volt or ampere.
    #[must_use]
    pub fn unit(self) -> crate::quantity::Unit {
        if self.is_voltage() { crate::quantity::Unit::Volt } else { crate::quantity::Unit::Ampere }
    }
}

impl fmt::Display for Quantity {
    /// As the Readings sheet heads it: `L1-N`, `N-G`, `I L1`.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Voltage(between) => between.fmt(f),
            Self::NeutralGround => f.write_str("N-G"),
            Self::LineGround(leg) => write!(f, "{leg}-G"),
            Self::LineCurrent(leg) => write!(f, "I {leg}"),
            Self::NeutralCurrent => f.write_str("I N"),
            Self::GroundCurrent => f.write_str("I G"),
        }
    }
}

/// How the legs lie to each other.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Arrangement {
    /// One leg and the neutral (230).
    OneLeg,
    /// Two legs in opposition about the neutral (120/240).
    SplitPhase,
    /// Two legs of a wye, 120° apart (120/208).
    TwoLegsOfWye,
    /// Three legs of a wye, four wires (208Y/120, 480Y/277, 230/400).
    Wye,
    /// Four-wire delta, L1-L3 centre-tapped, L2 the high leg (240/120).
    HighLegDelta,
}

/// The system of a service.
#[derive(Clone, Debug, PartialEq)]
pub struct System {
    /// As written by ANSI C84.1: `120/240`, `208Y/120`.
    pub name: String,
    /// Arrangement of the legs.
    pub arrangement: Arrangement,
    /// Nominal line-to-neutral voltage (of the two low legs on a high-leg delta).
    pub line_to_neutral: Volts,
    /// Nominal line-to-line voltage; of a one-leg system √3 times the other, though it has no second line.
    pub line_to_line: Volts,
}

impl System {
    /// The systems that are known by name: name, arrangement, nominal line-to-neutral and line-to-line volts (ANSI C84.1;
    /// 600Y/347 CSA C235; 230/400 IEC 60038).
    pub const NAMED: [(&'static str, Arrangement, f64, f64); 8] = [
        ("120/240", Arrangement::SplitPhase, 120.0, 240.0),
        ("120/208", Arrangement::TwoLegsOfWye, 120.0, 208.0),
        ("208Y/120", Arrangement::Wye, 120.0, 208.0),
        ("240/120", Arrangement::HighLegDelta, 120.0, 240.0),
        ("480Y/277", Arrangement::Wye, 277.0, 480.0),
        ("600Y/347", Arrangement::Wye, 347.0, 600.0),
        ("230/400", Arrangement::Wye, 230.0, 400.0),
        ("230", Arrangement::OneLeg, 230.0, 400.0),
    ];

    /// The 120/240 system, also what is assumed (and said) where a workbook names none.
    #[must_use]
    pub fn split_phase_120_240() -> Self {
        Self::named("120/240").expect("listed")
    }

    /// A system by its name, exactly as listed.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        Self::NAMED.iter().find(|s| s.0 == name).map(|&(name, arrangement, ln, ll)| Self {
            name: name.to_owned(),
            arrangement,
            line_to_neutral: Volts(ln),
            line_to_line: Volts(ll),
        })
    }

    /// A system by its two nominal voltages: split phase where the line-to-line voltage is twice the other (within 3 %), a wye
    /// where it is √3 times (within 3 %); `None` for any other pair.
    #[must_use]
    pub fn by_voltages(line_to_neutral: Volts, line_to_line: Volts) -> Option<Self> {
        let ratio = line_to_line / line_to_neutral;
        let near = |target: f64| (ratio / target - 1.0).abs() < 0.03;
        let arrangement = if near(2.0) {
            Arrangement::SplitPhase
        } else if near(3f64.sqrt()) {
            Arrangement::Wye
        } else {
            return None;
        };
        let name = match arrangement {
            Arrangement::SplitPhase => format!("{}/{}", line_to_neutral.0, line_to_line.0),
            _ => format!("{}Y/{}", line_to_line.0, line_to_neutral.0),
        };
        let known = Self::NAMED.iter().find(|s| s.1 == arrangement && (s.2, s.3) == (line_to_neutral.0, line_to_line.0));
        Some(Self { name: known.map_or(name, |k| k.0.to_owned()), arrangement, line_to_neutral, line_to_line })
    }

    /// The legs it has.
    #[must_use]
    pub fn legs(&self) -> &'static [Leg] {
        match self.arrangement {
            Arrangement::OneLeg => &Leg::ALL[..1],
            Arrangement::SplitPhase | Arrangement::TwoLegsOfWye => &Leg::ALL[..2],
            Arrangement::Wye | Arrangement::HighLegDelta => &Leg::ALL,
        }
    }

    /// Nominal phasor of a leg against the neutral: real and imaginary part in volts. L1 lies on the real axis.
    #[must_use]
    pub fn phasor(&self, leg: Leg) -> (f64, f64) {
        let v = self.line_to_neutral.0;
        let h = 3f64.sqrt() / 2.0;
        match (self.arrangement, leg) {
            (_, Leg::L1) => (v, 0.0),
            (Arrangement::SplitPhase, _) => (-v, 0.0),
            // Centre tap between L1 and L3; the high leg stands at right angles to them.
            (Arrangement::HighLegDelta, Leg::L2) => (0.0, -2.0 * v * h),
            (Arrangement::HighLegDelta, Leg::L3) => (-v, 0.0),
            (_, Leg::L2) => (-v / 2.0, -v * h),
            (_, Leg::L3) => (-v / 2.0, v * h),
        }
    }

    /// Nominal value of a voltage: line to neutral, line to line, line to ground; `None` for quantities without one (N-G,
    /// currents) and for legs the system does not have.
    #[must_use]
    pub fn nominal(&self, quantity: Quantity) -> Option<Volts> {
        let has = |leg: &Leg| self.legs().contains(leg);
        let to_neutral = |leg: Leg| {
            if (self.arrangement, leg) == (Arrangement::HighLegDelta, Leg::L2) {
                self.line_to_neutral * 3f64.sqrt()
            } else {
                self.line_to_neutral
            }
        };
        match quantity {
            Quantity::Voltage(Between::LineNeutral(leg)) | Quantity::LineGround(leg) if has(&leg) => Some(to_neutral(leg)),
            Quantity::Voltage(Between::LineLine(a, b)) if has(&a) && has(&b) => Some(self.line_to_line),
            _ => None,
        }
    }
}
