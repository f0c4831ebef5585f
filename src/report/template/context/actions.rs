//! What is to be done, by whom and by when.

use super::groups::Group;
use crate::results::Signal;
use serde::Serialize;
use std::collections::HashSet;

/// Actions told; the findings have all.
const MOST_ACTIONS: usize = 12;

/// Something to do.
#[derive(Debug, Serialize)]
pub(super) struct Action {
    signal: &'static str,
    advice: String,
    who: String,
    when: String,
    /// What it is about: titles of the rules that ask for it.
    title: String,
    places: String,
    /// May go away by itself once the cause that was found is mended.
    pub follows: bool,
}

/// Each advice once, worst first, what may follow from the cause found behind the rest; and how many there are beyond those told.
/// What is mended or only worth knowing asks for nothing.
pub(super) fn actions(groups: &[Group]) -> (Vec<Action>, usize) {
    let mut actions: Vec<Action> = Vec::new();
    let mut known: HashSet<&str> = HashSet::new();
    for group in groups.iter().filter(|g| !g.mended && g.signal != Signal::Notice.word()) {
        if known.insert(&group.advice) {
            actions.push(Action {
                signal: group.signal,
                advice: group.advice.clone(),
                who: group.who.clone(),
                when: group.when.clone(),
                title: group.title.clone(),
                places: group.places.clone(),
                follows: group.follows,
            });
        }
    }
    actions.sort_by_key(|a| a.follows);
    let more = actions.len().saturating_sub(MOST_ACTIONS);
    actions.truncate(MOST_ACTIONS);
    (actions, more)
}
