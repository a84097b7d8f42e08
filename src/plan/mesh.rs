//! The mesh that a run is laid out on, before kinks and jumps are located.

/// Nominal mesh points: what the study asks for, or what an adaptive run accepted.
#[derive(Clone, Debug, PartialEq)]
pub enum Nominal {
    /// A fixed step; the last one is shorter where the span is not a whole number of steps.
    Uniform {
        /// Start of time.
        from: f64,
        /// End of time.
        until: f64,
        /// The step.
        step: f64,
        /// Number of steps.
        steps: u64,
    },
    /// Points in increasing order, ends included.
    Listed(Vec<f64>),
}

/// A span that misses a whole number of steps by less than this share of a step counts as whole.
const WHOLE: f64 = 1e-6;

impl Nominal {
    /// The uniform mesh of `step` over the span. `step` and the span are positive.
    pub fn uniform(from: f64, until: f64, step: f64) -> Self {
        let ratio = (until - from) / step;
        let nearest = ratio.round();
        let steps = if (ratio - nearest).abs() < WHOLE && nearest >= 1.0 { nearest } else { ratio.ceil() };
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "positive; saturates where huge"
        )]
        Nominal::Uniform { from, until, step, steps: steps as u64 }
    }

    /// Number of steps.
    pub fn steps(&self) -> u64 {
        match self {
            Nominal::Uniform { steps, .. } => *steps,
            Nominal::Listed(points) => points.len() as u64 - 1,
        }
    }

    /// Point `k`, from 0 to the number of steps. Multiples of the step are not summed up, so that rounding does
    /// not drift.
    pub fn point(&self, k: u64) -> f64 {
        match self {
            Nominal::Uniform { from, until, step, steps } => {
                if k >= *steps {
                    *until
                } else {
                    from + k as f64 * step
                }
            }
            #[expect(clippy::cast_possible_truncation, reason = "an index of a vector")]
            Nominal::Listed(points) => points[k as usize],
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_span_of_whole_steps_has_no_sliver_at_its_end() {
        let mesh = Nominal::uniform(0.0, 9.0, 0.2);
        assert_eq!(mesh.steps(), 45);
        assert_eq!(mesh.point(45), 9.0);
    }

    #[test]
    fn the_last_step_is_shorter_where_the_span_is_not_whole() {
        let mesh = Nominal::uniform(1.0, 2.0, 0.3);
        assert_eq!(mesh.steps(), 4);
        assert_eq!(mesh.point(3), 1.0 + 3.0 * 0.3);
        assert_eq!(mesh.point(4), 2.0);
    }
}
