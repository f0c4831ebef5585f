//! The marks of the signal words: one shape each, the graver the fuller, drawn in the colour of the text beside them.

use super::markup::Markup;
use crate::results::Signal;

/// A signal word with its mark before it.
pub(super) fn signal(page: &mut Markup, signal: Signal) {
    page.element("span", &[("class", class(signal))], |page| {
        page.raw(shape(signal));
        page.text(signal.word());
    });
}

/// The style sheet's classes of a signal word.
pub(super) fn class(signal: Signal) -> &'static str {
    match signal {
        Signal::Danger => "signal danger",
        Signal::Warning => "signal warning",
        Signal::Caution => "signal caution",
        Signal::Notice => "signal notice",
    }
}

/// A full octagon with a slit, a full triangle, a hollow diamond with a core, a ring.
fn shape(signal: Signal) -> &'static str {
    match signal {
        Signal::Danger => {
            r#"<svg class="mark" viewBox="0 0 16 16" aria-hidden="true"><path fill="currentColor" fill-rule="evenodd" d="M5 .5h6L15.5 5v6L11 15.5H5L.5 11V5zm5.2 2.8L4.2 11.2l1.6 1.5 6-7.9z"/></svg>"#
        }
        Signal::Warning => {
            r#"<svg class="mark" viewBox="0 0 16 16" aria-hidden="true"><path fill="currentColor" d="M8 1l7.6 13.5H.4z"/></svg>"#
        }
        Signal::Caution => {
            r#"<svg class="mark" viewBox="0 0 16 16" aria-hidden="true"><path fill="none" stroke="currentColor" stroke-width="1.8" d="M8 1.4L14.6 8 8 14.6 1.4 8z"/><circle cx="8" cy="8" r="2" fill="currentColor"/></svg>"#
        }
        Signal::Notice => {
            r#"<svg class="mark" viewBox="0 0 16 16" aria-hidden="true"><circle cx="8" cy="8" r="6" fill="none" stroke="currentColor" stroke-width="1.8"/></svg>"#
        }
    }
}
