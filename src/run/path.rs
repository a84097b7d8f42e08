//! A solution over one step, however it is known.

use crate::scheme::dense_output::Piece;

use super::system::Values;

/// A solution over one step: `theta` from 0 to 1.
pub trait Path {
    /// Time at the start of the step.
    fn t(&self) -> f64;
    /// Time at its end.
    fn t_new(&self) -> f64;
    /// The time at `theta`.
    fn time(&self, theta: f64) -> f64 {
        if theta >= 1.0 { self.t_new() } else { self.t() + theta * (self.t_new() - self.t()) }
    }
    /// Writes the state at `theta`.
    fn state(&mut self, theta: f64, y: &mut [f64]);
    /// Writes the derivative of the state by time at `theta`; `false` where it is not known apart from the rates.
    fn slope(&mut self, theta: f64, slope: &mut [f64]) -> bool;
}

impl Path for &Piece {
    fn t(&self) -> f64 {
        self.t
    }
    fn t_new(&self) -> f64 {
        self.t_new
    }
    fn state(&mut self, theta: f64, y: &mut [f64]) {
        Piece::value(self, theta, y);
    }
    fn slope(&mut self, theta: f64, slope: &mut [f64]) -> bool {
        Piece::slope(self, theta, slope);
        true
    }
}

/// The closed forms of all states over one step.
#[derive(Debug)]
pub struct ExactPath<'a> {
    /// The closed forms, one a state.
    pub forms: &'a mut Values,
    /// Start of the step.
    pub t: f64,
    /// End of the step.
    pub t_new: f64,
}

impl Path for ExactPath<'_> {
    fn t(&self) -> f64 {
        self.t
    }
    fn t_new(&self) -> f64 {
        self.t_new
    }
    fn state(&mut self, theta: f64, y: &mut [f64]) {
        let t = self.time(theta);
        self.forms.at(t, &[], &[], y);
    }
    fn slope(&mut self, _theta: f64, _slope: &mut [f64]) -> bool {
        false
    }
}
