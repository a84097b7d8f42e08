//! The points of a curve of a chart, thinned as the run goes by.

use super::system::Values;
use super::thin::{ColumnThinner, PathThinner};
use super::{Accepted, Observer};
use crate::plan::{CurvePlan, RunPlan};

/// Collects the points of one curve.
#[derive(Debug)]
pub struct Trace {
    values: Values,
    points: Thinner,
    y: Vec<f64>,
}

#[derive(Debug)]
enum Thinner {
    Columns(ColumnThinner),
    Path(PathThinner),
}

/// Places inside a step at which the curve is sampled.
const PLACES: [f64; 4] = [0.25, 0.5, 0.75, 1.0];

impl Trace {
    /// A trace of a curve of the plan.
    pub fn new(plan: &RunPlan, curve: &CurvePlan) -> Self {
        let mut trace = Trace {
            values: Values::new(&plan.graph, &[curve.against_node, curve.node], &plan.parameters),
            points: if curve.against == "t" {
                Thinner::Columns(ColumnThinner::new(plan.from, plan.until))
            } else {
                Thinner::Path(PathThinner::new())
            },
            y: plan.start.clone(),
        };
        trace.push(plan.from, &[]);
        trace
    }

    fn push(&mut self, t: f64, modes: &[i8]) {
        let mut out = [0.0; 2];
        self.values.at(t, &self.y, modes, &mut out);
        match &mut self.points {
            Thinner::Columns(thinner) => thinner.push(out[0], out[1]),
            Thinner::Path(thinner) => thinner.push(out[0], out[1]),
        }
    }

    /// The points.
    pub fn finish(self) -> Vec<(f64, f64)> {
        match self.points {
            Thinner::Columns(thinner) => thinner.finish(),
            Thinner::Path(thinner) => thinner.finish(),
        }
    }
}

impl Observer for Trace {
    fn step(&mut self, step: &Accepted<'_>) {
        for theta in PLACES {
            step.piece.value(theta, &mut self.y);
            self.push(step.piece.time(theta), step.modes);
        }
    }
}
