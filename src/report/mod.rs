//! The report: one HTML page by the templates in `templates/`, and the register of all reports.
//!
//! Enters: a study, its models, what came of its runs, digests. Leaves: text. All HTML lies in the templates but what
//! pulldown-cmark writes for prose; this stage does not touch the disk but to read a folder of templates.

mod drawings;
mod ledger;
mod number;
mod page;
mod prose;
mod register;
mod templates;
mod view;

pub use number::shown;
pub use page::{ReportInputs, compose};
pub use register::{RegisterEntry, compose_register};
pub use templates::{TemplateError, Templates};
