//! Charts as SVG, tables as data, numbers as text.
//!
//! Enters: plain numbers and titles. Leaves: strings and plain data. This stage knows nothing of runs, and holds no
//! HTML.

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
