//! Names in a template: what it places must exist, and what is misspelt gets the nearest known name.

use super::front::Front;
use super::places::{SCHEMES, known};
use crate::report::TemplateError;

/// How alike two names must be (Jaro-Winkler) for one to be taken for the other misspelt.
const ALIKE: f64 = 0.75;

/// Holds the places of a template and the tables of its sheets against the known names. Names that the template computes are not
/// looked at.
pub(super) fn check(file: &str, front: &Front, text: &str) -> Result<(), TemplateError> {
    let fail = |line, message| TemplateError { file: file.to_owned(), line, message };
    for (line, target) in targets(text) {
        if let Some(message) = complaint(target) {
            return Err(fail(line, message));
        }
    }
    let tables = known("table").unwrap_or_default();
    for table in front.sheets.iter().flat_map(|s| &s.tables) {
        if !tables.contains(&table.as_str()) {
            let line = text.lines().position(|l| l.contains(table.as_str())).map_or(1, |l| l + 1);
            let message = format!("there is no table `{table}`");
            return Err(fail(line, hinted(&message, nearest(table, tables.iter().copied()))));
        }
    }
    Ok(())
}

/// The targets of images, with their lines.
fn targets(text: &str) -> impl Iterator<Item = (usize, &str)> {
    text.lines().enumerate().flat_map(|(n, line)| {
        line.split("![").skip(1).filter_map(move |rest| {
            let target = rest.split_once("](")?.1;
            Some((n + 1, &target[..target.find(')')?]))
        })
    })
}

/// What is wrong with a target.
fn complaint(target: &str) -> Option<String> {
    if target.contains("{{") || target.contains("{%") {
        return None;
    }
    let (scheme, name) = target.split_once(':').unwrap_or((target, ""));
    let Some(names) = known(scheme) else {
        let message = format!("nothing can be placed by `{scheme}:`");
        return Some(hinted(&message, nearest(scheme, SCHEMES.into_iter())));
    };
    let message = format!("there is no `{scheme}:{name}`");
    (!names.contains(&name)).then(|| hinted(&message, nearest(name, names.into_iter())))
}

/// The message with the nearest known name.
pub(super) fn hinted(message: &str, near: Option<&str>) -> String {
    near.map_or_else(|| message.to_owned(), |near| format!("{message}; the nearest known name is `{near}`"))
}

/// The known name most like a wanted one, by the last parts of dotted names; none where nothing is like it.
pub(super) fn nearest<'a>(wanted: &str, known: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    fn last(name: &str) -> &str {
        name.rsplit('.').next().unwrap_or(name)
    }
    let scored = known.map(|name| (strsim::jaro_winkler(last(name), last(wanted)), name)).filter(|(score, _)| *score >= ALIKE);
    scored.max_by(|a, b| a.0.total_cmp(&b.0).then(b.1.cmp(a.1))).map(|(_, name)| name)
}

/// The name a message is about: what stands between its first backticks or quotation marks.
pub(super) fn quoted(message: &str) -> Option<&str> {
    let open = message.find(['`', '\'', '"'])?;
    let mark = message[open..].chars().next()?;
    let rest = &message[open + 1..];
    Some(&rest[..rest.find(mark)?])
}
