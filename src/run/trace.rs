//! The points of a curve of a chart, thinned as the run goes by.

use super::system::Values;
use super::thin::{PathThinner, Thinner};
use super::{Accepted, Observer};
use crate::plan::{CurvePlan, RunPlan};

/// Collects the points of one curve.
#[derive(Debug)]
pub struct Trace {
    values: Values,
    points: Points,
    y: Vec<f64>,
}

#[derive(Debug)]
enum Points {
    Columns(Thinner),
    Path(PathThinner),
}

/// Columns of a curve over time: about two a pixel of a wide chart.
const COLUMNS: usize = 1440;
/// Most points of a path.
const MOST_POINTS: usize = 6000;

/// Places inside a step at which the curve is sampled.
const PLACES: [f64; 4] = [0.25, 0.5, 0.75, 1.0];

impl Trace {
    /// A trace of a curve of the plan.
    pub fn new(plan: &RunPlan, curve: &CurvePlan) -> Self {
        let mut trace = Trace {
            values: Values::new(&plan.graph, &[curve.against_node, curve.node], &plan.parameters),
            points: if curve.against == "t" {
                Points::Columns(Thinner::new(plan.from, plan.until, COLUMNS))
            } else {
                Points::Path(PathThinner::new(MOST_POINTS))
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
            Points::Columns(thinner) => thinner.push(out[0], out[1]),
            Points::Path(thinner) => thinner.push(out[0], out[1]),
        }
    }

    /// The points.
    pub fn finish(self) -> Vec<(f64, f64)> {
        match self.points {
            Points::Columns(thinner) => thinner.finish(),
            Points::Path(thinner) => thinner.finish(),
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
