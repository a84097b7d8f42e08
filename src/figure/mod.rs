//! Charts as SVG, tables as data, numbers as text.
//!
//! Enters: plain numbers and titles. Leaves: strings and plain data. This stage knows nothing of runs, and holds no
//! HTML.

pub mod axis;
pub mod chart;
pub mod convergence;
pub mod digits;
pub mod stability;
mod surface;
mod width;
