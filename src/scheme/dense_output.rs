//! The solution inside a step, as a polynomial.

use super::rates::{NotFinite, Rates, checked};
use super::step::Stepper;
use super::tableau::Dense;

/// Highest power of a [`Piece`].
pub const DEGREE: usize = 5;

/// The polynomial of one step: `y_i(theta) = sum_p coefficients[p][i] theta^p`, theta from 0 to 1.
///
/// Continuous with its first derivative from step to step.
#[derive(Clone, Debug, PartialEq)]
pub struct Piece {
    /// Time at the start of the step.
    pub t: f64,
    /// Time at its end.
    pub t_new: f64,
    states: usize,
    /// Row `p` holds the coefficients of `theta^p` for all states.
    coefficients: Vec<f64>,
    /// The state at the end, which the sum of the coefficients meets only up to rounding.
    end: Vec<f64>,
}

impl Piece {
    /// An empty piece for so many states.
    pub fn new(states: usize) -> Self {
        Piece {
            t: 0.0,
            t_new: 0.0,
            states,
            coefficients: vec![0.0; (DEGREE + 1) * states],
            end: vec![0.0; states],
        }
    }

    /// The step.
    pub fn h(&self) -> f64 {
        self.t_new - self.t
    }

    /// The time at `theta`.
    pub fn time(&self, theta: f64) -> f64 {
        if theta >= 1.0 { self.t_new } else { self.t + theta * self.h() }
    }

    /// The state at the start of the step.
    pub fn start(&self) -> &[f64] {
        &self.coefficients[..self.states]
    }

    /// The state at the end of the step.
    pub fn end(&self) -> &[f64] {
        &self.end
    }

    /// Writes the state at `theta` to `y`.
    pub fn value(&self, theta: f64, y: &mut [f64]) {
        if theta >= 1.0 {
            y.copy_from_slice(&self.end);
            return;
        }
        let n = self.states;
        for i in 0..n {
            let mut sum = self.coefficients[DEGREE * n + i];
            for p in (0..DEGREE).rev() {
                sum = sum * theta + self.coefficients[p * n + i];
            }
            y[i] = sum;
        }
    }

    /// Writes the derivative with respect to time at `theta` to `slope`.
    pub fn slope(&self, theta: f64, slope: &mut [f64]) {
        let n = self.states;
        let h = self.h();
        for i in 0..n {
            let mut sum = DEGREE as f64 * self.coefficients[DEGREE * n + i];
            for p in (1..DEGREE).rev() {
                sum = sum * theta + p as f64 * self.coefficients[p * n + i];
            }
            slope[i] = sum / h;
        }
    }

    /// Makes the cubic through values and rates at both ends.
    ///
    /// # Accuracy
    /// Of order 3: the error of interpolation is `O(h^4)`.
    ///
    /// # Source
    /// Hermite interpolation; Hairer, Norsett & Wanner I, sect. II.6.
    pub fn hermite(&mut self, t: f64, y: &[f64], f: &[f64], t_new: f64, y_new: &[f64], f_new: &[f64]) {
        let n = self.states;
        let h = t_new - t;
        (self.t, self.t_new) = (t, t_new);
        self.end.copy_from_slice(y_new);
        self.coefficients[4 * n..].fill(0.0);
        for i in 0..n {
            let rise = y_new[i] - y[i];
            self.coefficients[i] = y[i];
            self.coefficients[n + i] = h * f[i];
            self.coefficients[2 * n + i] = 3.0 * rise - h * (2.0 * f[i] + f_new[i]);
            self.coefficients[3 * n + i] = h * (f[i] + f_new[i]) - 2.0 * rise;
        }
    }

    /// Makes the interpolant that belongs to the scheme, from the stages of its last step.
    fn matched(
        &mut self,
        stepper: &Stepper,
        weights: &[Vec<f64>],
        t: f64,
        y: &[f64],
        t_new: f64,
        y_new: &[f64],
    ) {
        let n = self.states;
        let h = t_new - t;
        let k = stepper.stages();
        (self.t, self.t_new) = (t, t_new);
        self.end.copy_from_slice(y_new);
        self.coefficients.fill(0.0);
        self.coefficients[..n].copy_from_slice(y);
        for p in 1..=DEGREE {
            for i in 0..n {
                let mut sum = 0.0;
                for (j, row) in weights.iter().enumerate() {
                    if let Some(weight) = row.get(p - 1)
                        && *weight != 0.0
                    {
                        sum += weight * k[j * n + i];
                    }
                }
                self.coefficients[p * n + i] = h * sum;
            }
        }
    }

    /// Raises the polynomial to degree 5 by the rates at one and two thirds of the step, taken on the
    /// polynomial as it is: where that has an error of `O(h^m)`, `m <= 5`, the new one has `O(h^(m+1))`.
    ///
    /// # Errors
    /// [`NotFinite`] where a rate is not finite; the polynomial is then left as it was.
    ///
    /// # Source
    /// Enright, Jackson, Norsett & Thomsen (1986), ACM TOMS 12, 193-218 ("bootstrapping"); Hairer, Norsett &
    /// Wanner I, sect. II.6.
    fn lift<R: Rates>(
        &mut self,
        rates: &mut R,
        f: &[f64],
        f_new: &[f64],
        room: &mut Room,
    ) -> Result<(), NotFinite> {
        let n = self.states;
        let h = self.h();
        for (theta, out) in [(1.0 / 3.0, &mut room.first), (2.0 / 3.0, &mut room.second)] {
            self.value(theta, &mut room.y);
            checked(rates, self.time(theta), &room.y, out)?;
        }
        for i in 0..n {
            // P' is the cubic through the four rates at 0, 1/3, 2/3, 1, plus c times the quartic that is zero
            // there; c makes the integral of P' meet the rise over the step.
            let rise = self.end[i] - self.coefficients[i];
            let (g0, g1, g2, g3) = (h * f[i], h * room.first[i], h * room.second[i], h * f_new[i]);
            let c = -270.0 * (rise - (g0 + 3.0 * (g1 + g2) + g3) / 8.0);
            let first = g1 - g0;
            let second = g2 - 2.0 * g1 + g0;
            let third = g3 - 3.0 * (g2 - g1) - g0;
            let d1 = 3.0 * (first - second / 2.0 + third / 3.0) - 2.0 * c / 9.0;
            let d2 = 4.5 * (second - third) + 11.0 * c / 9.0;
            let d3 = 4.5 * third - 2.0 * c;
            self.coefficients[n + i] = g0;
            self.coefficients[2 * n + i] = d1 / 2.0;
            self.coefficients[3 * n + i] = d2 / 3.0;
            self.coefficients[4 * n + i] = d3 / 4.0;
            self.coefficients[5 * n + i] = c / 5.0;
        }
        Ok(())
    }

    /// Makes the polynomial of the stepper's last step, which went from `(t, y)` with rate `f` to
    /// `(t_new, y_new)` with rate `f_new`.
    ///
    /// # Accuracy
    /// The error of interpolation is `O(h^(p+1))` for a scheme of order `p`: one order above the global error,
    /// so that a quantity inside a step converges as cleanly as one at its end.
    ///
    /// # Errors
    /// [`NotFinite`] where a rate inside the step is not finite.
    #[expect(clippy::too_many_arguments, reason = "the two ends of a step, each with time, state and rate")]
    pub fn fill<R: Rates>(
        &mut self,
        stepper: &Stepper,
        rates: &mut R,
        t: f64,
        y: &[f64],
        f: &[f64],
        t_new: f64,
        y_new: &[f64],
        f_new: &[f64],
        room: &mut Room,
    ) -> Result<(), NotFinite> {
        let lifts = match &stepper.scheme().dense {
            Dense::Hermite { lifts } => {
                self.hermite(t, y, f, t_new, y_new, f_new);
                *lifts
            }
            Dense::Matched { weights, lifts } => {
                self.matched(stepper, weights, t, y, t_new, y_new);
                *lifts
            }
        };
        for _ in 0..lifts {
            self.lift(rates, f, f_new, room)?;
        }
        Ok(())
    }

    /// The part of `piece` from `theta` = `from` to `from + width`, re-expanded about its start, less the
    /// polynomial `less` of that same span.
    pub fn part_less(&mut self, piece: &Piece, from: f64, width: f64, less: &Piece) {
        let n = self.states;
        (self.t, self.t_new) = (less.t, less.t_new);
        for i in 0..n {
            // Taylor shift by repeated synthetic division.
            let mut shifted = [0.0; DEGREE + 1];
            for (p, coefficient) in shifted.iter_mut().enumerate() {
                *coefficient = piece.coefficients[p * n + i];
            }
            for p in 0..DEGREE {
                for q in (p..DEGREE).rev() {
                    shifted[q] += from * shifted[q + 1];
                }
            }
            let mut power = 1.0;
            for (p, coefficient) in shifted.iter().enumerate() {
                self.coefficients[p * n + i] = coefficient * power - less.coefficients[p * n + i];
                power *= width;
            }
        }
        let mut end = std::mem::take(&mut self.end);
        piece.value(from + width, &mut end);
        for i in 0..n {
            end[i] -= less.end[i];
        }
        self.end = end;
    }
}

/// Room for the rates inside a step.
#[derive(Debug)]
pub struct Room {
    y: Vec<f64>,
    first: Vec<f64>,
    second: Vec<f64>,
}

impl Room {
    /// Room for so many states.
    pub fn new(states: usize) -> Self {
        Room { y: vec![0.0; states], first: vec![0.0; states], second: vec![0.0; states] }
    }
}
