//! A limit row: the voltages a rule allows for one kind of voltage of one system.

use crate::results::{Limit, Signal};
use crate::visit::{Arrangement, Between, Leg, Quantity, System};

/// A row of `[[limits]]`.
#[derive(Clone, Debug, PartialEq)]
pub struct LimitRow {
    /// The rule it belongs to.
    pub rule: &'static str,
    /// The standard, edition or local rule it is taken from; what a user chooses between.
    pub profile: String,
    /// The systems it is for; empty: any.
    pub systems: Vec<String>,
    /// The nominal voltage it is for, in volts; `None`: any.
    pub nominal: Option<f64>,
    /// The kind of voltage it is for.
    pub quantity: LimitQuantity,
    /// Where it holds.
    pub place: Place,
    /// Name of the range: `A`, `normal`; empty where there is one alone.
    pub range: String,
    /// What it allows.
    pub bounds: Bounds,
    /// Signal word of a value beyond it; the rule's own where absent.
    pub signal: Option<Signal>,
    /// Standard, edition and table.
    pub basis: String,
}

/// Kinds of voltage a limit can be for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LimitQuantity {
    /// Any voltage that has a nominal value.
    Any,
    /// Line to neutral, but for the high leg of a delta.
    LineToNeutral,
    /// Line to line.
    LineToLine,
    /// The high leg of a four-wire delta to neutral.
    HighLeg,
}

impl LimitQuantity {
    /// All of them, as a rule book writes them.
    pub const NAMED: [(&'static str, Self); 4] =
        [("any", Self::Any), ("line-to-neutral", Self::LineToNeutral), ("line-to-line", Self::LineToLine), ("high-leg", Self::HighLeg)];

    fn of(quantity: Quantity, system: &System) -> Option<Self> {
        match quantity {
            Quantity::Voltage(Between::LineNeutral(Leg::L2)) if system.arrangement == Arrangement::HighLegDelta => Some(Self::HighLeg),
            Quantity::Voltage(Between::LineNeutral(_)) => Some(Self::LineToNeutral),
            Quantity::Voltage(Between::LineLine(..)) => Some(Self::LineToLine),
            _ => None,
        }
    }
}

/// Where a limit holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// Everywhere.
    Any,
    /// At the far end of a run fed by the utility.
    Service,
    /// Everywhere else.
    Outlet,
}

impl Place {
    /// All of them, as a rule book writes them.
    pub const NAMED: [(&'static str, Self); 3] = [("any", Self::Any), ("service", Self::Service), ("outlet", Self::Outlet)];
}

/// What a limit allows.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bounds {
    /// Volts.
    Volts(Limit),
    /// Per cent of the nominal voltage, counted from it: −5 and 5.
    Percent(Limit),
}

/// Nominal voltages are written rounded (208 for 207.8, 277 for 277.1): as near as this they are the same.
const SAME_NOMINAL: f64 = 0.005;

impl LimitRow {
    /// The limit in volts for a voltage read at a place; `None` where the row is not for it.
    #[must_use]
    pub fn for_reading(&self, quantity: Quantity, system: &System, at_service: bool) -> Option<Limit> {
        let kind = LimitQuantity::of(quantity, system)?;
        let nominal = system.nominal(quantity)?.0;
        let place = match self.place {
            Place::Any => true,
            Place::Service => at_service,
            Place::Outlet => !at_service,
        };
        let fits = place
            && (self.quantity == LimitQuantity::Any || self.quantity == kind)
            && (self.systems.is_empty() || self.systems.contains(&system.name))
            && self.nominal.is_none_or(|n| (n / nominal - 1.0).abs() <= SAME_NOMINAL);
        fits.then(|| match self.bounds {
            Bounds::Volts(limit) => limit,
            Bounds::Percent(p) => {
                let volts = |percent: f64| nominal + nominal * percent / 100.0;
                Limit { low: p.low.map(volts), high: p.high.map(volts) }
            }
        })
    }
}
