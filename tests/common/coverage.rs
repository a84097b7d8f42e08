//! Bounds beside the truth, for random problems whose solution is known.

use halfstep::bound::Grade;
use halfstep::cli::pipeline::evaluate;

use super::problems::problem;
use super::random::Random;

/// One bound beside the truth.
pub struct Case {
    /// Key of the scheme.
    pub scheme: &'static str,
    /// The grade of the bound.
    pub grade: Grade,
    /// True error over bound.
    pub ratio: f64,
    /// Whether the meshes agreed to rounding: such a bound is a floor, and its tightness means nothing.
    pub floor: bool,
    /// All that is known of it.
    pub text: String,
}

/// The numbers of problem `i`, solved by a scheme and steps that `i` decides.
pub fn cases(i: u64) -> Vec<Case> {
    let problem = problem(i);
    let mut random = Random::new(1_000_000 + i);
    let schemes = halfstep::scheme::all();
    let scheme = &schemes[random.below(schemes.len())];
    let adaptive = scheme.embedded_order.is_some() && random.below(2) == 0;
    let control = if adaptive {
        format!("tolerance: 1e-{}", 3 + random.below(6))
    } else {
        let exponent = random.between(-2.6, 0.2);
        format!("step: {:.5}", problem.scale * 10_f64.powf(exponent))
    };
    let text = problem.study(scheme.key, &control);
    let outcome = match evaluate("coverage.md", &text) {
        Ok((_, outcome)) => outcome,
        Err(faults) => {
            if faults.trim().is_empty()
                || faults.contains("step-beyond-span")
                || faults.contains("not-finite")
            {
                return Vec::new();
            }
            panic!("{faults}\n{text}");
        }
    };
    let quantities = outcome.runs.into_iter().flat_map(|run| run.quantities);
    quantities
        .filter_map(|quantity| {
            let error = quantity.true_error?.abs();
            let ratio = match quantity.bound {
                Some(bound) if bound > 0.0 => error / bound,
                _ if error == 0.0 => 0.0,
                _ => f64::INFINITY,
            };
            let text = format!(
                "{i} {} {control}: {} = {:?}, true error {error:e}, bound {:?}, {} {:?}",
                problem.family,
                quantity.text,
                quantity.value,
                quantity.bound,
                quantity.why,
                quantity.estimates
            );
            let floor = quantity.why.contains("to rounding");
            Some(Case { scheme: scheme.key, grade: quantity.grade, ratio, floor, text })
        })
        .collect()
}
