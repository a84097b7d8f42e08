//! What a scheme calls: the rates of a system of ordinary differential equations.

/// The right-hand side `f(t, y)` of `y' = f(t, y)`.
pub trait Rates {
    /// Number of states.
    fn states(&self) -> usize;
    /// Writes `f(t, y)` to `out`. `y` and `out` have [`Rates::states`] entries.
    fn rates(&mut self, t: f64, y: &[f64], out: &mut [f64]);
}

/// A rate came out infinite or not a number.
#[derive(Clone, Debug, PartialEq)]
pub struct NotFinite {
    /// The time at which the rates were asked for.
    pub time: f64,
    /// The state at which they were asked for.
    pub state: Vec<f64>,
}

/// Evaluates the rates and checks that every one is finite.
///
/// # Errors
/// [`NotFinite`] with the time and state; `out` then holds what came.
pub fn checked<R: Rates>(rates: &mut R, t: f64, y: &[f64], out: &mut [f64]) -> Result<(), NotFinite> {
    rates.rates(t, y, out);
    if out.iter().all(|rate| rate.is_finite()) {
        Ok(())
    } else {
        Err(NotFinite { time: t, state: y.to_vec() })
    }
}
