//! Text for a terminal: what came from a file can't steer it.

use crate::diag::{Problem, steers};
use crate::results::{Finding, Signal};
use crate::wording::Language;
use anstyle::{AnsiColor, Style};
use std::fmt::Write as _;

/// The text with control, escape and bidirectional characters made visible; line ends and tabs stay.
#[must_use]
pub fn visible(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        if (c.is_control() && c != '\n' && c != '\t') || steers(c) || matches!(c, '\u{200C}' | '\u{200D}') {
            let _ = write!(out, "⟨U+{:04X}⟩", u32::from(c));
        } else {
            out.push(c);
        }
    }
    out
}

/// As [`visible`], on one line.
#[must_use]
pub fn line(text: &str) -> String {
    visible(text).replace('\n', "⏎").replace('\t', " ")
}

/// The style of a signal word; the word itself carries the meaning, so nothing is lost without colour.
#[must_use]
pub fn style(signal: Signal) -> Style {
    match signal {
        Signal::Danger => Style::new().bold().invert(),
        Signal::Warning => Style::new().bold().fg_color(Some(AnsiColor::Magenta.into())),
        Signal::Caution => Style::new().bold(),
        Signal::Notice => Style::new().fg_color(Some(AnsiColor::Cyan.into())),
    }
}

/// A problem in a line or two: where, what stood there, what was expected.
#[must_use]
pub fn problem(p: &Problem, file: &str, language: &Language) -> String {
    let place = match (&p.cell, &p.sheet) {
        (Some(cell), _) => format!("{file}: {cell}"),
        (None, Some(sheet)) => format!("{file}: {sheet}"),
        (None, None) => file.to_owned(),
    };
    let found = if p.found.is_empty() { String::new() } else { format!(" found `{}`.", p.found) };
    let mut text = format!("{}: {}:{found} {}", p.severity.name(), place, language.say(&p.message));
    if let Some(hint) = &p.hint {
        let _ = write!(text, " {}", language.say(hint));
    }
    line(&text)
}

/// A finding in a short block.
#[must_use]
pub fn finding(f: &Finding, language: &Language) -> String {
    let bold = style(f.signal);
    let mut head = format!("{bold}{}{bold:#}  {}", f.signal, f.rule);
    for part in [f.location.as_deref(), f.state.as_deref(), f.stage.map(crate::visit::Stage::name)].into_iter().flatten() {
        let _ = write!(head, " · {}", line(part));
    }
    if f.verdict != crate::results::Verdict::Fail {
        let _ = write!(head, " · {}", f.verdict.name());
    }
    let cells: Vec<String> = f.cells.iter().take(6).map(ToString::to_string).collect();
    let more = f.cells.len().saturating_sub(cells.len());
    let more = if more == 0 { String::new() } else { format!(" and {more} more") };
    format!(
        "{head}\n    {}\n    {}\n    {}{more} · {}\n",
        line(&language.say(&f.says)),
        line(&language.say(&f.advice)),
        line(&cells.join(", ")),
        line(&f.basis)
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_could_steer_a_terminal_is_shown() {
        assert_eq!(visible("a\u{1b}[31mb\u{202e}c\n"), "a⟨U+001B⟩[31mb⟨U+202E⟩c\n");
        assert_eq!(line("a\nb\u{7}"), "a⏎b⟨U+0007⟩");
        assert_eq!(visible("Đường Ω ±"), "Đường Ω ±");
    }
}
