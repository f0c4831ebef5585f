//! The diagnosis: causes, what the readings leave open, what to read next, what would happen.

use super::{Draft, name, names, number, opt, text};
use crate::quantity::Unit;
use crate::report::Source;
use crate::report::document::{Cell, ColumnKind, Number, Table};
use crate::report::words;
use crate::results::{AddedOhms, NextReading};
use crate::wording::{Language, Sentence};

/// Causes below this probability are summed up, not listed.
const WORTH_LISTING: f64 = 0.005;
/// From here on a probability would be shown as a certainty.
const NEARLY_SURE: f64 = 0.9995;
/// Ohms from which an added resistance is as good as open, for what is shown.
const OPEN: f64 = 1e4;

/// The ranking.
pub(super) fn causes(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("causes", language)
        .column("cause", ColumnKind::Text, None)
        .column("probability", ColumnKind::Number, Some(Unit::Percent))
        .column("ohms", ColumnKind::Text, None);
    let ranking = &source.diagnosis?.ranking;
    let (first, others) = ranking.split_first()?;
    for cause in std::iter::once(first).chain(others.iter().filter(|c| c.probability >= WORTH_LISTING)) {
        draft.row(vec![
            text(&words::cause(source.visit, cause, language)),
            probability(cause.probability, language),
            opt(cause.ohms, |o| text(&ohms(&o, language))),
        ]);
    }
    let rest: f64 = others.iter().filter(|c| c.probability < WORTH_LISTING).map(|c| c.probability).sum();
    if rest > 0.0005 {
        draft.row(vec![text(&language.text("table-causes.rest")), number(100.0 * rest, 1), Cell::Empty]);
    }
    draft.finish()
}

/// Per cent, never rounded to a certainty.
fn probability(p: f64, language: &Language) -> Cell {
    if p > NEARLY_SURE { text(&language.text("table-causes.nearly-sure")) } else { number(100.0 * p, 1) }
}

fn ohms(o: &AddedOhms, language: &Language) -> String {
    let best = match o.best {
        Some(best) if best.0 < OPEN => language.quantity(best.0, words::digits(best.0), Unit::Ohm),
        _ => language.text("report.open"),
    };
    format!("{best} ({})", words::between(o.low.0, o.high.map(|h| h.0), language))
}

/// What neutral resistance the readings could not have shown, run by run.
pub(super) fn not_shown(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("not-shown", language)
        .column("run", ColumnKind::Name, None)
        .column("low", ColumnKind::Number, Some(Unit::Ohm))
        .column("high", ColumnKind::Number, Some(Unit::Ohm))
        .column("open", ColumnKind::Text, None)
        .column("amperes", ColumnKind::Number, Some(Unit::Ampere));
    for n in &source.diagnosis?.neutral {
        let open = language.text(if n.high.is_some() { "report.no" } else { "report.yes" });
        let high = opt(n.high, |h| number(h.0, 2));
        draft.row(vec![text(&name(source, n.run)), number(n.low.0, 2), high, text(&open), number(n.amperes, 1)]);
    }
    draft.finish()
}

/// The readings that would say most.
pub(super) fn next(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("next", language)
        .column("location", ColumnKind::Name, None)
        .column("quantity", ColumnKind::Name, None)
        .column("state", ColumnKind::Text, None)
        .column("tells-apart", ColumnKind::Text, None);
    for n in &source.diagnosis?.next {
        let cells = vec![
            text(&name(source, n.run)),
            text(&n.quantity.to_string()),
            text(&load_state(n, language)),
            text(&names(source, &n.tells_apart)),
        ];
        draft.row(cells);
    }
    draft.finish()
}

fn load_state(n: &NextReading, language: &Language) -> String {
    language.say(&match n.load {
        None => Sentence::new("next.as-found"),
        Some((leg, watts)) => Sentence::new("next.load-on").number("watts", watts.0, 0, Unit::Watt).with("leg", leg.name()),
    })
}

/// The volts loads would see under an open neutral.
pub(super) fn exposure(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("exposure", language)
        .column("run", ColumnKind::Name, None)
        .column("leg", ColumnKind::Name, None)
        .column("at", ColumnKind::Name, None)
        .column("loads", ColumnKind::Number, Some(Unit::Watt))
        .column("low", ColumnKind::Number, Some(Unit::Volt))
        .column("volts", ColumnKind::Number, Some(Unit::Volt));
    for e in source.exposure {
        for leg in &e.legs {
            draft.row(vec![
                text(&name(source, e.run)),
                text(leg.leg.name()),
                text(&name(source, leg.at)),
                number(leg.loads.0, 0),
                opt(leg.low, |v| number(v.0, 0)),
                number(leg.volts.0, 0),
            ]);
        }
    }
    draft.finish()
}

/// Impedances from two load states.
pub(super) fn load_steps(source: &Source, language: &Language) -> Option<Table> {
    let mut draft = Draft::new("load-steps", language)
        .column("location", ColumnKind::Name, None)
        .column("states", ColumnKind::Text, None)
        .column("step", ColumnKind::Number, Some(Unit::Ampere))
        .column("neutral", ColumnKind::Number, Some(Unit::Ohm))
        .column("line", ColumnKind::Number, Some(Unit::Ohm))
        .column("resolves", ColumnKind::Number, Some(Unit::Ohm));
    for s in &source.diagnosis?.load_steps {
        let z = |z: Option<(crate::quantity::Ohms, crate::quantity::Ohms)>| {
            opt(z, |(z, u)| Cell::Number(Number { uncertainty: Some(u.0), ..Number::new(z.0, 2) }))
        };
        let states = format!("{} → {}", super::state(language, &s.states.0), super::state(language, &s.states.1));
        draft.row(vec![text(&name(source, s.run)), text(&states), number(s.amperes, 1), z(s.neutral), z(s.line), number(s.resolves.0, 2)]);
    }
    draft.finish()
}
