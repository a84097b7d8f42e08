//! A scheme as data: its drawing, and the tableau read from it.

use num_rational::BigRational;

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
