//! A scheme as data: its claims, and the tableau that is read from its drawing.

use std::fmt::Write as _;

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::drawing::{self, Misdrawn};
use crate::arithmetic::ratio;

/// A scheme: what is drawn and claimed in its file, and everything that is computed from the drawing.
#[derive(Debug)]
pub struct Scheme {
    /// Name in kebab case: `dormand-prince`.
    pub key: &'static str,
    /// Display name: `Dormand-Prince 5(4)`.
    pub name: &'static str,
    /// Author, year, where to find it.
    pub source: &'static str,
    /// When to use it: one or two sentences.
    pub serves: &'static str,
    /// The drawing, as printed in the file of the scheme.
    pub drawing: &'static str,
    /// Order of the scheme, and of the embedded weights where there are any; computed from the conditions.
    pub order: u32,
    /// Order of the embedded weights.
    pub embedded_order: Option<u32>,
    /// The tableau.
    pub tableau: Tableau,
    /// How the solution inside a step is made.
    pub dense: Dense,
}

/// Coefficients of an explicit Runge-Kutta scheme with `s` stages.
#[derive(Clone, Debug, PartialEq)]
pub struct Tableau {
    /// Nodes, `s` of them.
    pub c: Vec<f64>,
    /// Row `i` has `i` entries.
    pub a: Vec<Vec<f64>>,
    /// Weights.
    pub b: Vec<f64>,
    /// `b - b_hat`, the weights of the local error estimate, each rounded once from the exact difference.
    pub error: Option<Vec<f64>>,
    /// Whether the last stage is the rate at the new point.
    pub first_same_as_last: bool,
    /// The same coefficients, exact.
    pub exact: ExactTableau,
}

/// Coefficients as exact ratios.
#[derive(Clone, Debug, PartialEq)]
pub struct ExactTableau {
    /// Nodes.
    pub c: Vec<BigRational>,
    /// Row `i` has `i` entries.
    pub a: Vec<Vec<BigRational>>,
    /// Weights.
    pub b: Vec<BigRational>,
    /// Embedded weights.
    pub b_hat: Option<Vec<BigRational>>,
    /// Weights of the scheme's own interpolant: row `i` holds the coefficients of `b_i(theta)` for the
    /// powers `theta^1, theta^2, ...`.
    pub b_theta: Option<Vec<Vec<BigRational>>>,
}

/// How the solution inside a step is made. `lifts` is how often the polynomial is then raised by two further
/// rate evaluations at one and two thirds of the step.
#[derive(Clone, Debug, PartialEq)]
pub enum Dense {
    /// The cubic through values and rates at both ends, of order 3, lifted so often.
    Hermite {
        /// Number of lifts.
        lifts: u32,
    },
    /// The scheme's own interpolant: row `i` holds the coefficients of `b_i(theta)` for the powers
    /// `theta^1, theta^2, ...`, so that `y(theta) = y + h * sum_i b_i(theta) k_i`.
    Matched {
        /// One row a stage.
        weights: Vec<Vec<f64>>,
        /// Number of lifts.
        lifts: u32,
    },
}

impl Tableau {
    /// Reads a drawn tableau: one line a stage (`c | a a a`), a line `b`, where there are embedded weights a
    /// line `b^`, where there is an interpolant a line `theta^k` for each power of theta.
    ///
    /// # Errors
    /// The first line that cannot be read, and what is wrong with it.
    pub fn read(drawing: &str) -> Result<Self, Misdrawn> {
        drawing::read(drawing).map(Self::from)
    }

    /// The same tableau with an interpolant from a drawing of its own, which holds `theta^k` lines alone.
    ///
    /// # Errors
    /// The first line that cannot be read, and what is wrong with it.
    pub fn with_interpolant(mut self, drawing: &str) -> Result<Self, Misdrawn> {
        self.exact.b_theta = Some(drawing::read_interpolant(drawing, self.exact.stages())?);
        Ok(self)
    }

    /// Number of stages `s`.
    pub fn stages(&self) -> usize {
        self.exact.stages()
    }

    /// The weights of the interpolant in binary64, one row a stage.
    pub fn interpolant(&self) -> Option<Vec<Vec<f64>>> {
        self.exact.b_theta.as_deref().map(round_rows)
    }

    /// The exact coefficients as canonical text, for a digest: a line `c`, a line `a` for each stage, then
    /// `b`, `b^` and a line `theta` for each stage where they exist; ratios in lowest terms.
    pub fn digest_text(&self) -> String {
        let mut text = String::new();
        let mut line = |label: &str, cells: &[BigRational]| {
            text.push_str(label);
            for cell in cells {
                // Writing to a string cannot fail.
                let _ = write!(text, " {}/{}", cell.numer(), cell.denom());
            }
            text.push('\n');
        };
        let exact = &self.exact;
        line("c", &exact.c);
        exact.a.iter().for_each(|row| line("a", row));
        line("b", &exact.b);
        exact.b_hat.iter().for_each(|row| line("b^", row));
        exact.b_theta.iter().flatten().for_each(|row| line("theta", row));
        text
    }
}

impl From<ExactTableau> for Tableau {
    fn from(exact: ExactTableau) -> Self {
        let error = exact
            .b_hat
            .as_ref()
            .map(|b_hat| exact.b.iter().zip(b_hat).map(|(b, b_hat)| ratio::nearest(&(b - b_hat))).collect());
        Self {
            c: round(&exact.c),
            a: round_rows(&exact.a),
            b: round(&exact.b),
            error,
            first_same_as_last: exact.first_same_as_last(),
            exact,
        }
    }
}

impl ExactTableau {
    /// Number of stages `s`.
    pub fn stages(&self) -> usize {
        self.c.len()
    }

    /// Whether the last stage is evaluated at the new point: its row is `b`, its node 1.
    fn first_same_as_last(&self) -> bool {
        let (Some(last), Some((own, others))) = (self.a.last(), self.b.split_last()) else { return false };
        !last.is_empty()
            && last.as_slice() == others
            && own.is_zero()
            && self.c.last().is_some_and(One::is_one)
    }
}

fn round(exact: &[BigRational]) -> Vec<f64> {
    exact.iter().map(ratio::nearest).collect()
}

fn round_rows(exact: &[Vec<BigRational>]) -> Vec<Vec<f64>> {
    exact.iter().map(|row| round(row)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    const BOGACKI_SHAMPINE: &str = "
          0  |
         1/2 | 1/2
         3/4 |  0    3/4
          1  | 2/9   1/3  4/9
         ----|---------------------
          b  | 2/9   1/3  4/9   0
          b^ | 7/24  1/4  1/3  1/8
    ";

    #[test]
    fn error_weights_are_the_exact_difference_rounded_once() {
        let tableau = Tableau::read(BOGACKI_SHAMPINE).unwrap();
        // Bogacki & Shampine (1989): b - b_hat = -5/72, 1/12, 1/9, -1/8.
        assert_eq!(tableau.error, Some(vec![-5.0 / 72.0, 1.0 / 12.0, 1.0 / 9.0, -0.125]));
    }

    #[test]
    fn a_last_stage_at_the_new_point_is_noticed() {
        assert!(Tableau::read(BOGACKI_SHAMPINE).unwrap().first_same_as_last);
        let other = BOGACKI_SHAMPINE.replace("1  | 2/9   1/3  4/9", "1  | 2/9   4/9  1/3");
        assert!(!Tableau::read(&other).unwrap().first_same_as_last);
        assert!(!Tableau::read("0 |\n b | 1").unwrap().first_same_as_last);
    }

    #[test]
    fn the_digest_text_sees_coefficients_and_not_their_spelling() {
        let half = Tableau::read("0 |\n 1/2 | 1/2\n b | 0 1").unwrap();
        let spelt = Tableau::read("0 |\n 0.50 | 2/4\n ---|---\n b | -0 +1.0").unwrap();
        assert_eq!(half.digest_text(), "c 0/1 1/2\na\na 1/2\nb 0/1 1/1\n");
        assert_eq!(half.digest_text(), spelt.digest_text());
        let other = Tableau::read("0 |\n 1/2 | 1/2\n b | 1/3 2/3").unwrap();
        assert_ne!(half.digest_text(), other.digest_text());
    }
}
