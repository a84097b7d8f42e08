//! One step of an explicit Runge-Kutta scheme.

use super::rates::{NotFinite, Rates, checked};
use super::tableau::Scheme;

/// Advances a state by one step, with room for the stages.
///
/// `k_i = f(t + c_i h, y + h sum_j a_ij k_j)`, `y_new = y + h sum_i b_i k_i`. The order of operations is the
/// scheme's definition: `j` ascending, terms with a zero coefficient left out, `h` multiplied last.
///
/// # Source
/// Hairer, Norsett & Wanner I (2nd ed. 1993), sect. II.1.
#[derive(Debug)]
pub struct Stepper {
    scheme: &'static Scheme,
    states: usize,
    /// Rows of the tableau without their zeros: index of the stage and coefficient.
    rows: Vec<Vec<(usize, f64)>>,
    weights: Vec<(usize, f64)>,
    error: Option<Vec<(usize, f64)>>,
    /// Stage rates: row `i` holds `k_i`.
    k: Vec<f64>,
    y_stage: Vec<f64>,
}

impl Stepper {
    /// A stepper of `scheme` for so many states.
    pub fn new(scheme: &'static Scheme, states: usize) -> Self {
        let stages = scheme.tableau.b.len();
        let sparse = |row: &[f64]| -> Vec<(usize, f64)> {
            row.iter().copied().enumerate().filter(|(_, weight)| *weight != 0.0).collect()
        };
        let tableau = &scheme.tableau;
        Stepper {
            scheme,
            states,
            rows: tableau.a.iter().map(|row| sparse(row)).collect(),
            weights: sparse(&tableau.b),
            error: tableau.error.as_ref().map(|row| sparse(row)),
            k: vec![0.0; stages * states],
            y_stage: vec![0.0; states],
        }
    }

    /// The scheme.
    pub fn scheme(&self) -> &'static Scheme {
        self.scheme
    }

    /// The stage rates of the last step, row by row.
    pub fn stages(&self) -> &[f64] {
        &self.k
    }

    /// Steps from `(t, y)` to `t_new`. `f` is the rate at `(t, y)`; on return `f_new` is the rate at
    /// `(t_new, y_new)`.
    ///
    /// # Accuracy
    /// The local error is of order `h^(p+1)`. Says nothing of the global error: that is the business of
    /// [`crate::bound`].
    ///
    /// # Errors
    /// [`NotFinite`] where a stage is not finite; `y_new` and `f_new` are then of no use.
    #[expect(clippy::too_many_arguments, reason = "the two ends of a step, each with time, state and rate")]
    pub fn step<R: Rates>(
        &mut self,
        rates: &mut R,
        t: f64,
        y: &[f64],
        f: &[f64],
        t_new: f64,
        y_new: &mut [f64],
        f_new: &mut [f64],
    ) -> Result<(), NotFinite> {
        let n = self.states;
        let tableau = &self.scheme.tableau;
        let stages = tableau.b.len();
        let h = t_new - t;
        self.k[..n].copy_from_slice(f);
        for i in 1..stages {
            weigh(&self.k, n, &self.rows[i], y, h, &mut self.y_stage);
            let c = tableau.c[i];
            #[expect(
                clippy::float_cmp,
                reason = "the node 1 is exact, and there the time is that of the mesh"
            )]
            let t_stage = if c == 1.0 { t_new } else { t + c * h };
            checked(rates, t_stage, &self.y_stage, &mut self.k[i * n..(i + 1) * n])?;
        }
        weigh(&self.k, n, &self.weights, y, h, y_new);
        if tableau.first_same_as_last {
            f_new.copy_from_slice(&self.k[(stages - 1) * n..]);
            Ok(())
        } else {
            checked(rates, t_new, y_new, f_new)
        }
    }

    /// Evaluations of the rates that one step takes, the rate at its end included.
    pub fn evaluations(&self) -> u64 {
        let stages = self.scheme.tableau.b.len() as u64;
        if self.scheme.tableau.first_same_as_last { stages - 1 } else { stages }
    }

    /// The local error estimate of the last step in the maximum norm, each state over
    /// `tolerance * (max(|y|, |y_new|) + scale)`; at most 1 is within tolerance. `None` for a scheme without
    /// embedded weights.
    pub fn local_error(
        &self,
        h: f64,
        y: &[f64],
        y_new: &[f64],
        tolerance: f64,
        scales: &[f64],
    ) -> Option<f64> {
        let weights = self.error.as_ref()?;
        let n = self.states;
        let mut largest = 0.0;
        for i in 0..n {
            let mut sum = 0.0;
            for (j, weight) in weights {
                sum += weight * self.k[j * n + i];
            }
            let size = crate::arithmetic::larger(y[i].abs(), y_new[i].abs());
            let ratio = (h * sum).abs() / (tolerance * (size + scales[i]));
            largest = crate::arithmetic::larger(largest, ratio);
        }
        Some(largest)
    }
}

/// `out = y + h * sum_j weights_j k_j`. For each state the sum starts at 0 and `j` ascends; the loops are nested the
/// other way round, so that whole rows of stage rates are taken at a time. Few states have code of their own, whose
/// loops the compiler unrolls: the same operations in the same order.
fn weigh(k: &[f64], n: usize, weights: &[(usize, f64)], y: &[f64], h: f64, out: &mut [f64]) {
    match n {
        1 => weigh_few::<1>(k, weights, y, h, out),
        2 => weigh_few::<2>(k, weights, y, h, out),
        3 => weigh_few::<3>(k, weights, y, h, out),
        4 => weigh_few::<4>(k, weights, y, h, out),
        5 => weigh_few::<5>(k, weights, y, h, out),
        6 => weigh_few::<6>(k, weights, y, h, out),
        _ => weigh_many(k, n, weights, y, h, out),
    }
}

#[inline]
fn weigh_few<const N: usize>(k: &[f64], weights: &[(usize, f64)], y: &[f64], h: f64, out: &mut [f64]) {
    let rows = k.as_chunks::<N>().0;
    let mut sums = [0.0; N];
    for (j, weight) in weights {
        let row = &rows[*j];
        for i in 0..N {
            sums[i] += weight * row[i];
        }
    }
    if let (Some(y), Some(out)) = (y.first_chunk::<N>(), out.first_chunk_mut::<N>()) {
        for i in 0..N {
            out[i] = y[i] + h * sums[i];
        }
    }
}

fn weigh_many(k: &[f64], n: usize, weights: &[(usize, f64)], y: &[f64], h: f64, out: &mut [f64]) {
    out.fill(0.0);
    for (j, weight) in weights {
        for (sum, rate) in out.iter_mut().zip(&k[j * n..(j + 1) * n]) {
            *sum += weight * rate;
        }
    }
    for (sum, y) in out.iter_mut().zip(y) {
        *sum = y + h * *sum;
    }
}
