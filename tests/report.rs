//! The report: built-in templates read as a person reads them, templates of the user's own, and texts that try to be structure.

#[path = "report/outline.rs"]
mod outline;
#[path = "report/samples.rs"]
mod samples;
