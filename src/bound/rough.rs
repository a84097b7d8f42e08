//! Looks for a jump or kink of the rates inside a step, where no mesh point marks it.
//!
//! Such a jump fakes a clean convergence (order 1 from a scheme of order 1) and defeats extrapolation. On the
//! finest mesh four steps lie in each step of the run: for smooth rates the fourth difference over them is far
//! below the second ones; a jump makes them alike.
//!
//! The same mesh is probed once inside each step, at a place that no scheme and no halving samples: rates that
//! repeat with the steps (an oscillation that all three meshes meet in the same phase, say) show there.

use crate::arithmetic::larger;
use crate::plan::RunPlan;
use crate::run::system::System;
use crate::run::{Accepted, Flip, Observer};
use crate::scheme::rates::Rates;

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
    /// The worst defect of the dense output at the probe, for every state: step times defect.
    pub probed: Vec<Option<Rough>>,
    system: System,
    y: Vec<f64>,
    slope: Vec<f64>,
    rates: Vec<f64>,
}

/// Place of the probe in a step: two less the golden ratio, far from all nodes of schemes and their halves.
const PROBE: f64 = 0.381_966_011_250_105_1;

/// Steps count as equal if they differ by less than this share.
const EQUAL: f64 = 1e-6;
/// A fourth difference above this share of the largest second difference is a jump or kink.
const SHARE: f64 = 0.5;
/// Differences below so many roundings of the rates are noise.
const NOISE: f64 = 64.0;

impl RoughWatch {
    /// A watch for a run.
    pub(super) fn new(plan: &RunPlan) -> Self {
        let states = plan.start.len();
        RoughWatch {
            states,
            rows: vec![vec![0.0; states]; 5],
            filled: 0,
            h: 0.0,
            worst: vec![None; states],
            probed: vec![None; states],
            system: System::new(&plan.graph, &plan.rates, &plan.parameters),
            y: vec![0.0; states],
            slope: vec![0.0; states],
            rates: vec![0.0; states],
        }
    }

    fn probe(&mut self, step: &Accepted<'_>) {
        step.piece.value(PROBE, &mut self.y);
        step.piece.slope(PROBE, &mut self.slope);
        self.system.modes.clear();
        self.system.modes.extend_from_slice(step.modes);
        let time = step.piece.time(PROBE);
        self.system.rates(time, &self.y, &mut self.rates);
        let h = step.piece.h();
        for i in 0..self.states {
            // A rate that is not finite at the probe is the worst of all.
            let off = h * (self.slope[i] - self.rates[i]).abs();
            let impact = if off.is_finite() { off } else { f64::INFINITY };
            // Rounding of the polynomial's coefficients.
            let noise = NOISE * 16.0 * f64::EPSILON * (self.y[i].abs() + h * self.rates[i].abs());
            let counts = impact.is_infinite() || impact > noise;
            if counts && self.probed[i].is_none_or(|worst| impact > worst.impact) {
                self.probed[i] = Some(Rough { state: i, time, impact });
            }
        }
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
        self.probe(step);
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
