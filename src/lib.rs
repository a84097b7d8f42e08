//! halfstep turns a Markdown study with fenced YAML blocks into a report whose every number carries
//! the bound of its numerical error.
//!
//! Data flows one way; a folder may use those above it in this list and nothing below:
//!
//! - [`arithmetic`]: the bits. Elementary functions, exact ratios, eigenvalues.
//! - [`fault`]: places in study text, faults and how they are shown.
//! - [`mod@unit`]: values with a unit as a study writes them.
//! - [`study`]: Markdown text to front matter, prose and blocks, each with its place.
//! - [`model`]: block bodies to a checked model with compiled rates and Jacobian.
//! - [`scheme`]: tableaux and the only code that knows how to advance a state.
//! - [`plan`]: what to execute, in which order, as plain data.
//! - [`run`]: trajectories with dense output, quantities and cost.
//! - [`bound`]: a bound and a grade for every quantity, verdicts for the criteria.
//! - [`figure`]: charts (SVG) and tables.
//! - [`report`]: HTML by the templates in `templates/`.
//! - [`record`]: the machine-readable twin of a report, digests, writing to disk.
//! - [`cli`]: arguments, progress, exit status.

pub mod arithmetic;
pub mod bound;
pub mod cli;
pub mod fault;
pub mod figure;
pub mod model;
pub mod plan;
pub mod record;
pub mod report;
pub mod run;
pub mod scheme;
pub mod study;
pub mod unit;
