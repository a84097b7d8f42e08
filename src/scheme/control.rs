//! Step control of adaptive runs: a proportional-integral controller.

use crate::arithmetic::{elementary, larger, smaller};

/// Share of the step that would just meet the tolerance.
pub const SAFETY: f64 = 0.9;
/// A step shrinks by this factor at most.
pub const SMALLEST_FACTOR: f64 = 0.2;
/// A step grows by this factor at most.
pub const LARGEST_FACTOR: f64 = 5.0;
/// The largest step as a share of the span: rates that are quiet for long must not lull a run over a short pulse.
/// Common practice, no source.
pub const LARGEST_SHARE: f64 = 1.0 / 50.0;
/// Weight of the present error, over the order of the error estimate plus one.
pub const PROPORTIONAL: f64 = 0.7;
/// Weight of the last accepted error, likewise.
pub const INTEGRAL: f64 = 0.4;
/// An error ratio below this counts as this.
const SMALLEST_ERROR: f64 = 1e-10;

/// Chooses the next step from the last local errors.
///
/// `h_new = h * 0.9 * err^(-0.7/k) * err_last^(0.4/k)`, `k` the order of the error estimate, kept between a
/// fifth and five times the step, and not above the step after a rejection.
///
/// # Source
/// Gustafsson (1991), ACM TOMS 17, 533-554; Hairer & Wanner II (2nd ed. 1996), sect. IV.2.
#[derive(Clone, Debug)]
pub struct Controller {
    /// Order of the local error estimate: the lower order of the pair plus one.
    k: f64,
    last_error: f64,
    rejected: bool,
}

impl Controller {
    /// A controller for a pair whose lower order is `order`.
    pub fn new(order: u32) -> Self {
        Controller { k: f64::from(order) + 1.0, last_error: 1.0, rejected: false }
    }

    /// The factor for the next step after an accepted one with error ratio `error <= 1`.
    pub fn accepted(&mut self, error: f64) -> f64 {
        let error = larger(error, SMALLEST_ERROR);
        let factor = SAFETY
            * elementary::pow(error, -PROPORTIONAL / self.k)
            * elementary::pow(self.last_error, INTEGRAL / self.k);
        let most = if self.rejected { 1.0 } else { LARGEST_FACTOR };
        self.last_error = error;
        self.rejected = false;
        smaller(larger(factor, SMALLEST_FACTOR), most)
    }

    /// The factor for another try after a rejected step with error ratio `error > 1`.
    pub fn rejected(&mut self, error: f64) -> f64 {
        self.rejected = true;
        let factor = SAFETY * elementary::pow(error, -1.0 / self.k);
        smaller(larger(factor, SMALLEST_FACTOR), SAFETY)
    }

    /// The factor for another try after a step with a stage that was not finite.
    pub fn not_finite(&mut self) -> f64 {
        self.rejected = true;
        SMALLEST_FACTOR
    }

    /// Forgets the last error, as after a jump.
    pub fn restart(&mut self) {
        self.last_error = 1.0;
        self.rejected = false;
    }
}
