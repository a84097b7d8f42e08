//! Charts as SVG, numbers as text.
//!
//! Enters: plain numbers and titles. Leaves: strings. Of runs this stage knows the thinning of
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
mod ticks;
mod width;
