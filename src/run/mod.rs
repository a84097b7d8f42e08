//! From a plan to trajectories: steps, kinks and jumps, quantities, rows and cost.
//!
//! A trajectory is never stored whole: each accepted step is handed to the observers as a polynomial piece and
//! forgotten. This stage knows nothing of bounds.

pub mod advance;
pub mod path;
pub mod place;
pub mod sample;
pub mod spectrum;
pub mod stop;
pub mod system;
pub mod thin;
pub mod trace;
pub mod watch;

use crate::scheme::dense_output::Piece;

/// Steps rejected, by cause.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Rejections {
    /// The local error estimate was above the tolerance.
    pub local_error: u64,
    /// A stage was not finite.
    pub not_finite: u64,
    /// A kink or jump lay inside the step, which was cut there.
    pub switch: u64,
}

/// An accepted step, as observers see it.
#[derive(Clone, Copy, Debug)]
pub struct Accepted<'a> {
    /// The solution inside the step.
    pub piece: &'a Piece,
    /// The rates at its start, under the modes of this step.
    pub f: &'a [f64],
    /// The rates at its end, under the modes of this step.
    pub f_new: &'a [f64],
    /// The branch of every switch of the graph during this step: +1, -1, or 0 where it is free.
    pub modes: &'a [i8],
    /// Whether the step ends on a mesh point that a kink or jump made.
    pub cut: bool,
}

/// A kink or jump at the end of the last step.
#[derive(Clone, Copy, Debug)]
pub struct Flip<'a> {
    /// Its time.
    pub time: f64,
    /// The state there.
    pub state: &'a [f64],
    /// Which switch of the graph.
    pub switch: usize,
    /// The modes before.
    pub before: &'a [i8],
    /// The modes after.
    pub after: &'a [i8],
}

/// Sees a run go by.
pub trait Observer {
    /// A step was accepted.
    fn step(&mut self, step: &Accepted<'_>);
    /// A kink or jump was passed.
    fn flip(&mut self, _flip: &Flip<'_>) {}
}
