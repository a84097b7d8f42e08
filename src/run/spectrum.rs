//! Step times eigenvalues of the Jacobian along a run.

use super::system::Values;
use super::{Accepted, Observer};
use crate::arithmetic::eigenvalues::eigenvalues;
use crate::plan::RunPlan;

/// Number of intervals of the span at which the spectrum is taken.
const TAKES: usize = 48;
/// Above so many states the eigenvalues are left out: they cost the cube of it.
const MOST_STATES: usize = 120;

/// Takes the spectrum at evenly spread times.
#[derive(Debug)]
pub struct SpectrumWatch {
    entries: Vec<(usize, usize)>,
    values: Values,
    states: usize,
    from: f64,
    span: f64,
    next: usize,
    /// Time, real and imaginary part of step times eigenvalue.
    pub points: Vec<(f64, f64, f64)>,
}

impl SpectrumWatch {
    /// A watch for a run; `None` where the model has too many states.
    pub fn new(plan: &RunPlan) -> Option<Self> {
        let states = plan.start.len();
        if states > MOST_STATES {
            return None;
        }
        let nodes: Vec<_> = plan.jacobian.iter().map(|(_, _, node)| *node).collect();
        Some(SpectrumWatch {
            entries: plan.jacobian.iter().map(|(row, column, _)| (*row, *column)).collect(),
            values: Values::new(&plan.graph, &nodes, &plan.parameters),
            states,
            from: plan.from,
            span: plan.until - plan.from,
            next: 0,
            points: Vec::new(),
        })
    }
}

impl Observer for SpectrumWatch {
    fn step(&mut self, step: &Accepted<'_>) {
        let due = self.from + self.span * (self.next as f64 / TAKES as f64);
        if step.piece.t < due {
            return;
        }
        while self.next <= TAKES && self.from + self.span * (self.next as f64 / TAKES as f64) <= step.piece.t
        {
            self.next += 1;
        }
        let mut entries = vec![0.0; self.entries.len()];
        self.values.at(step.piece.t, step.piece.start(), step.modes, &mut entries);
        let mut matrix = vec![0.0; self.states * self.states];
        for ((row, column), entry) in self.entries.iter().zip(&entries) {
            matrix[row * self.states + column] = *entry;
        }
        let h = step.piece.h();
        for (re, im) in eigenvalues(&matrix, self.states).unwrap_or_default() {
            self.points.push((step.piece.t, h * re, h * im));
        }
    }
}
