//! Charts as SVG, tables as data, numbers as text.
//!
//! Enters: plain numbers and titles. Leaves: strings and plain data. Of runs this stage knows the thinning of
//! curves alone; it holds no HTML.

pub mod axis;
pub mod chart;
mod clip;
pub mod convergence;
pub mod digits;
mod exact;
mod frame;
mod labels;
#[cfg(test)]
mod samples;
pub mod stability;
mod surface;
pub mod table;
mod ticks;
mod width;
