//! Why a run ended before its end.

use crate::scheme::rates::NotFinite;

/// Why a run ended before its end.
#[derive(Clone, Debug, PartialEq)]
pub enum Stop {
    /// A rate was infinite or not a number.
    NotFinite(NotFinite),
    /// The limit of steps was met.
    TooManySteps {
        /// The limit.
        limit: u64,
        /// The time reached.
        time: f64,
    },
    /// The step fell to the rounding of time: the solution ends here, or blows up.
    StepTooSmall {
        /// The time reached.
        time: f64,
        /// The state there.
        state: Vec<f64>,
    },
    /// A switch flips back and forth on the spot.
    Chattering {
        /// The time.
        time: f64,
        /// Which switch of the graph.
        switch: usize,
    },
}

impl From<NotFinite> for Stop {
    fn from(cause: NotFinite) -> Self {
        Stop::NotFinite(cause)
    }
}
