//! The place in a run at which a quantity was found, and what the error there means for the quantity.

use super::path::Path;
use super::system::Values;
use crate::arithmetic::{larger, smaller};
use crate::scheme::rates::Rates;

use super::system::System;

/// A place inside a step, with what is needed to weigh errors there.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Place {
    /// The time.
    pub t: f64,
    /// The state.
    pub y: Vec<f64>,
    /// The derivative of the dense output; empty where it is not known.
    slope: Vec<f64>,
    modes: Vec<i8>,
    /// Distance in time to the nearer end of the step.
    reach: f64,
    /// The step.
    pub h: f64,
}

impl Place {
    /// Takes down the place `theta` of a step.
    pub fn take(&mut self, path: &mut impl Path, theta: f64, modes: &[i8], states: usize) {
        self.t = path.time(theta);
        self.y.resize(states, 0.0);
        path.state(theta, &mut self.y);
        self.slope.resize(states, 0.0);
        if !path.slope(theta, &mut self.slope) {
            self.slope.clear();
        }
        self.modes.clear();
        self.modes.extend_from_slice(modes);
        self.h = path.t_new() - path.t();
        self.reach = self.h * smaller(theta, 1.0 - theta);
    }

    /// How far interpolation may move output `index` of `values` here: the defect of the dense output, acting
    /// from the nearer end of the step.
    pub fn interpolation(&self, values: &mut Values, index: usize, system: &mut System) -> f64 {
        if self.reach <= 0.0 || self.slope.is_empty() {
            return 0.0;
        }
        let mut rates = vec![0.0; self.y.len()];
        system.modes.clone_from(&self.modes);
        system.rates(self.t, &self.y, &mut rates);
        let moved: Vec<f64> =
            self.y.iter().zip(&self.slope).zip(&rates).map(|((y, s), f)| y + self.reach * (s - f)).collect();
        let shift = self.output(values, index, &moved) - self.output(values, index, &self.y);
        if shift.is_finite() { shift.abs() } else { 0.0 }
    }

    /// How far changes of the states by `sizes` (each up or down) may move output `index` of `values` here, to
    /// first order.
    pub fn sensitivity(&self, values: &mut Values, index: usize, sizes: &[f64]) -> f64 {
        let here = self.output(values, index, &self.y);
        let mut moved = self.y.clone();
        let mut sum = 0.0;
        for (i, size) in sizes.iter().enumerate() {
            // A difference quotient with a step that is large beside rounding, scaled to the size asked for.
            let probe = PROBE * larger(self.y[i].abs(), size.abs());
            if probe == 0.0 {
                continue;
            }
            moved[i] = self.y[i] + probe;
            let change = (self.output(values, index, &moved) - here) / probe * size;
            moved[i] = self.y[i];
            if change.is_finite() {
                sum += change.abs();
            }
        }
        sum
    }

    /// How fast output `index` of `values` changes here along the solution, by a central difference.
    pub fn rate_of_change(&self, values: &mut Values, index: usize) -> f64 {
        let ahead = 1e-4 * self.h;
        if self.slope.is_empty() || ahead == 0.0 {
            return 0.0;
        }
        let mut out = vec![0.0; values.outputs];
        let mut side = |sign: f64| {
            let moved: Vec<f64> =
                self.y.iter().zip(&self.slope).map(|(y, slope)| y + sign * ahead * slope).collect();
            values.at(self.t + sign * ahead, &moved, &self.modes, &mut out);
            out[index]
        };
        (side(1.0) - side(-1.0)) / (2.0 * ahead)
    }

    fn output(&self, values: &mut Values, index: usize, y: &[f64]) -> f64 {
        let mut out = vec![0.0; values.outputs];
        values.at(self.t, y, &self.modes, &mut out);
        out[index]
    }

    /// Output `index` of `values` here.
    pub fn value(&self, values: &mut Values, index: usize) -> f64 {
        self.output(values, index, &self.y)
    }
}

/// Relative size of the probing step of a difference quotient.
const PROBE: f64 = 1e-6;
