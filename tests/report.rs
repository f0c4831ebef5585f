//! The report: built-in templates read as a person reads them, templates of the user's own, and texts that try to be structure.

#[path = "report/hostile.rs"]
mod hostile;
#[path = "report/made.rs"]
mod made;
#[path = "report/outline.rs"]
mod outline;
#[path = "report/prose.rs"]
mod prose;
#[path = "report/samples.rs"]
mod samples;
#[path = "rules/site.rs"]
mod site;
#[path = "report/templates.rs"]
mod templates;
