//! Load of the legs by the circuit list, and the fewest breaker moves that would even them.
//!
//! Loads are taken as listed, all at once: no demand factors, for the list does not say what runs together. A load between two
//! lines counts half on each. On split phase such loads weigh on both legs alike and make no neutral current.

mod circuits;
mod moves;
mod search;

use crate::electrics::neutral;
use crate::quantity::{Amperes, VoltAmperes, math};
use crate::results::{Balance, LegLoad, Move};
use crate::visit::{Arrangement, Leg, System, Visit};
use circuits::Circuits;
use moves::Choice;

/// What the balance aims at and how hard it tries.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BalanceSettings {
    /// Imbalance in per cent of the mean leg that is good enough (common practice, no source).
    pub target_percent: f64,
    /// Where the target is out of reach, moves are proposed only if they bring the imbalance down by so many per cent of the mean.
    pub worthwhile_percent: f64,
    /// Most moves proposed.
    pub most_moves: usize,
    /// Power factor that turns a motor's watts into volt-amperes; other loads are taken at 1 (common practice, no source).
    pub motor_power_factor: f64,
}

impl Default for BalanceSettings {
    fn default() -> Self {
        Self { target_percent: 10.0, worthwhile_percent: 5.0, most_moves: 8, motor_power_factor: 0.8 }
    }
}

/// Volt-amperes on L1, L2, L3.
pub(crate) type PerLeg = [f64; 3];

/// Load on the legs: all of it, and the part between line and neutral.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(crate) struct Loading {
    pub total: PerLeg,
    pub to_neutral: PerLeg,
}

impl Loading {
    pub fn add(&mut self, other: &Self) {
        for leg in 0..3 {
            self.total[leg] += other.total[leg];
            self.to_neutral[leg] += other.to_neutral[leg];
        }
    }
}

/// The balance of a visit's circuit list. `None` where the list has no load or the system no second leg.
///
/// Every listed run counts, reachable from the utility or not. Only circuits may be moved: runs with a breaker that are fed from
/// another run and have no further breaker below them; what hangs below moves along. A circuit of one leg may go to another leg. A
/// multiwire circuit may only have its legs exchanged among each other, so its hots never meet on one leg. A line-to-line circuit of
/// a wye may go to another pair. On a high-leg delta only L1 and L3 are compared, and circuits move between these two.
///
/// The search is exact for one move, and for two and three moves up to 700 and 160 possible moves; of longer lists it tries that
/// many, spread evenly over their sizes. Beyond three moves it goes on with the best next one. Cost grows in proportion to the list.
#[must_use]
pub fn balance(visit: &Visit, settings: &BalanceSettings) -> Option<Balance> {
    let compared = compared_legs(&visit.system)?;
    let circuits = Circuits::of(visit, settings.motor_power_factor);
    let now = circuits.sum();
    if now.total.iter().sum::<f64>() <= 0.0 {
        return None;
    }
    let gauge = Gauge { system: &visit.system, compared };
    let choices = moves::choices(visit, &circuits, compared);
    let chosen: Vec<&Choice> = search::fewest(&choices, &now, &gauge, settings);
    let mut moved = circuits.clone();
    for choice in &chosen {
        moved.apply(choice);
    }
    let after = moved.sum();
    Some(Balance {
        legs: leg_loads(&visit.system, &circuits),
        neutral: gauge.neutral(&now),
        imbalance_percent: gauge.imbalance(&now),
        moves: chosen.iter().map(|c| Move { run: c.run, from: c.from.clone(), to: c.to.clone() }).collect(),
        after: leg_loads(&visit.system, &moved),
        neutral_after: gauge.neutral(&after),
        imbalance_after_percent: gauge.imbalance(&after),
    })
}

/// Neutral current of line-to-neutral loads in volt-amperes on L1, L2, L3, each current in phase with its leg's nominal voltage.
#[must_use]
pub fn neutral_current(system: &System, to_neutral: [VoltAmperes; 3]) -> Amperes {
    let current = |leg: Leg| {
        let (re, im) = system.phasor(leg);
        let volts = math::hypot(re, im);
        if volts > 0.0 { Amperes(to_neutral[leg.index()].0 / volts) } else { Amperes(0.0) }
    };
    let [a, b, c] = Leg::ALL.map(current);
    match system.arrangement {
        Arrangement::OneLeg => a,
        Arrangement::SplitPhase => neutral::split_phase(a, b),
        Arrangement::TwoLegsOfWye => neutral::wye(a, b, Amperes(0.0)),
        Arrangement::Wye => neutral::wye(a, b, c),
        // The high leg stands at right angles to the two others, which lie in opposition.
        Arrangement::HighLegDelta => Amperes(math::hypot((a - c).0, b.0)),
    }
}

/// The legs whose loads should be alike.
fn compared_legs(system: &System) -> Option<&'static [Leg]> {
    match system.arrangement {
        Arrangement::OneLeg => None,
        Arrangement::HighLegDelta => Some(&[Leg::L1, Leg::L3]),
        Arrangement::SplitPhase | Arrangement::TwoLegsOfWye | Arrangement::Wye => Some(system.legs()),
    }
}

/// How a loading is judged.
pub(crate) struct Gauge<'a> {
    system: &'a System,
    compared: &'static [Leg],
}

impl Gauge<'_> {
    /// Largest deviation of a compared leg from their mean in per cent of the mean; 0 without load on them.
    pub fn imbalance(&self, loading: &Loading) -> f64 {
        let of = |leg: &Leg| loading.total[leg.index()];
        let mean = self.compared.iter().map(of).sum::<f64>() / self.compared.len() as f64;
        if mean <= 0.0 {
            return 0.0;
        }
        100.0 * self.compared.iter().map(|leg| (of(leg) - mean).abs()).fold(0.0, f64::max) / mean
    }

    pub fn neutral(&self, loading: &Loading) -> Amperes {
        neutral_current(self.system, loading.to_neutral.map(VoltAmperes))
    }
}

fn leg_loads(system: &System, circuits: &Circuits) -> Vec<LegLoad> {
    let sum = circuits.sum();
    system
        .legs()
        .iter()
        .map(|&leg| LegLoad {
            leg,
            va: VoltAmperes(sum.total[leg.index()]),
            circuits: circuits.shares(leg).map(|(run, va)| (run, VoltAmperes(va))).collect(),
        })
        .collect()
}
