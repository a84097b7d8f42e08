//! HTML by the templates in `templates/`.
//!
//! Enters: a study, its models, what came of its runs, and its figures as SVG and tables. Leaves: one HTML
//! page with its style inside it, without script and without any address that a browser would fetch. All
//! markup lies in the templates; this folder makes the plain data that they show ([`view`]) and nothing else.
//!
//! Invariants: a number of a run is never shown without its bound or a mark that it has none; the ids of a
//! page are unique and every link inside the page has its target; the same inputs give the same bytes.

mod anchor;
mod annex;
mod block;
mod citation;
mod drawings;
mod error;
mod figures;
mod ledger;
mod number;
mod page;
mod prose;
mod register;
mod shown;
mod summary;
mod tables;
mod templates;
pub mod view;

#[cfg(test)]
mod markup;
#[cfg(test)]
mod sample;
#[cfg(test)]
mod tests;

pub use drawings::figures;
pub use error::ReportError;
pub use figures::{ChartFigure, ColumnHead, Figures, RunFigures, TableCell, TableFigure};
pub use page::{ReportInputs, compose};
pub use register::{RegisterEntry, compose_register};
pub use shown::{Show, ShownText};
pub use templates::Templates;
