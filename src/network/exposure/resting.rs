//! Where a network with an open neutral can rest.

use super::super::model::{Network, Observed};
use super::super::several;
use super::super::solve::SolveSettings;
use super::super::workspace::Workspace;
use crate::visit::Conductor;

/// Imposed volts tried, evenly spaced, before each resting point is closed in on.
pub(super) const POINTS: u32 = 48;

/// Opens the neutral of run 0 and shows every resting point; `None` where none is found.
pub(super) fn points(network: &Network, mut note: impl FnMut(&Workspace)) -> Option<()> {
    let settings = SolveSettings::default();
    let mut opened = network.clone();
    opened.spans[0].ohms[3] = Some(f64::INFINITY);
    let mut workspace = Workspace::new(&opened).ok()?;
    workspace.follow(&opened, &settings).ok()?;
    note(&workspace);
    if several::is_stiff(&opened) {
        return Some(());
    }
    if network.is_in_phase() {
        in_phase(&mut workspace, network, note);
    } else {
        let first = workspace.solution(&opened);
        several::others(&mut workspace, &opened, &settings, first, note);
    }
    Some(())
}

/// Imposes volts between the ends of the opened neutral, one after the other: where the current through them changes its sign it
/// is nought in between, and the network rests there with the neutral open.
fn in_phase(workspace: &mut Workspace, network: &Network, mut note: impl FnMut(&Workspace)) {
    let observed = Observed::Current { run: 0, conductor: Conductor::Neutral, towards_source: false };
    let reach = 1.1 * network.source.volts.iter().fold(0.0, |a: f64, b| a.max(*b));
    let current = |workspace: &mut Workspace, volts: f64| {
        workspace.insert(0, 3, volts);
        workspace.follow(network, &SolveSettings::default()).ok()?;
        workspace.value(observed)
    };
    let mut last: Option<(f64, f64)> = None;
    for point in 0..=POINTS {
        let volts = reach * (2.0 * f64::from(point) / f64::from(POINTS) - 1.0);
        let Some(amperes) = current(workspace, volts) else {
            last = None;
            continue;
        };
        let before = last.filter(|b| (b.1 < 0.0) != (amperes < 0.0));
        if let Some(rest) = before.and_then(|b| close_in(b, (volts, amperes), |v| current(workspace, v))) {
            if current(workspace, rest).is_some() {
                note(workspace);
            }
            // The next point is followed from this one.
            current(workspace, volts);
        }
        last = Some((volts, amperes));
    }
}

/// Zero between two points of opposite sign, by the Illinois variant of regula falsi (Dowell and Jarratt, BIT 11, 1971, 168–174).
fn close_in(mut a: (f64, f64), mut b: (f64, f64), mut f: impl FnMut(f64) -> Option<f64>) -> Option<f64> {
    const TOLERANCE: f64 = 1e-6;
    for _ in 0..60 {
        if (b.0 - a.0).abs() < TOLERANCE {
            break;
        }
        let x = b.0 - b.1 * (b.0 - a.0) / (b.1 - a.1);
        let y = f(x)?;
        if y == 0.0 {
            return Some(x);
        }
        if (y < 0.0) == (b.1 < 0.0) {
            a.1 *= 0.5;
        } else {
            a = b;
        }
        b = (x, y);
        if y.abs() < 1e-12 {
            break;
        }
    }
    Some(b.0)
}
