//! Looks for a jump or kink of the rates inside a step, where no mesh point marks it.
//!
//! Such a jump fakes a clean convergence (order 1 from a scheme of order 1) and defeats extrapolation. On the
//! finest mesh four steps lie in each step of the run: for smooth rates the fourth difference over them is far
//! below the second ones; a jump makes them alike.

use crate::arithmetic::larger;
use crate::run::{Accepted, Flip, Observer};

/// A jump that was found: which state's rate, when, and how much it may move that state.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Rough {
    /// Index of the state.
    pub state: usize,
    /// A time inside the step.
    pub time: f64,
    /// Step of the run times the size of the fourth difference, in units of the state.
    pub impact: f64,
}

/// Looks at the rates of the finest mesh.
#[derive(Debug)]
pub(super) struct RoughWatch {
    states: usize,
    /// The rates at up to five equally spaced points.
    rows: Vec<Vec<f64>>,
    filled: usize,
    h: f64,
    /// The worst finding of every state.
    pub worst: Vec<Option<Rough>>,
}

/// Steps count as equal if they differ by less than this share.
const EQUAL: f64 = 1e-6;
/// A fourth difference above this share of the largest second difference is a jump or kink.
const SHARE: f64 = 0.5;
/// Differences below so many roundings of the rates are noise.
const NOISE: f64 = 64.0;

impl RoughWatch {
    /// A watch for so many states.
    pub(super) fn new(states: usize) -> Self {
        RoughWatch { states, rows: vec![vec![0.0; states]; 5], filled: 0, h: 0.0, worst: vec![None; states] }
    }

    fn judge(&mut self, end: f64) {
        for i in 0..self.states {
            let f: Vec<f64> = self.rows.iter().map(|row| row[i]).collect();
            let second = |j: usize| (f[j - 1] - 2.0 * f[j] + f[j + 1]).abs();
            let seconds = larger(larger(second(1), second(2)), second(3));
            let fourth = (f[0] - 4.0 * f[1] + 6.0 * f[2] - 4.0 * f[3] + f[4]).abs();
            let size = f.iter().fold(0.0, |size, f| larger(size, f.abs()));
            if fourth > SHARE * seconds && fourth > NOISE * f64::EPSILON * size {
                let impact = 4.0 * self.h * fourth;
                if self.worst[i].is_none_or(|worst| impact > worst.impact) {
                    self.worst[i] = Some(Rough { state: i, time: end - 2.0 * self.h, impact });
                }
            }
        }
    }
}

impl Observer for RoughWatch {
    fn step(&mut self, step: &Accepted<'_>) {
        let h = step.piece.h();
        if self.filled == 0 || (h - self.h).abs() > EQUAL * h {
            self.rows[0].copy_from_slice(step.f);
            self.filled = 1;
            self.h = h;
        }
        self.rows[self.filled].copy_from_slice(step.f_new);
        self.filled += 1;
        if self.filled == 5 {
            self.judge(step.piece.t_new);
            self.filled = 0;
        }
    }

    fn flip(&mut self, _flip: &Flip<'_>) {
        self.filled = 0;
    }
}
