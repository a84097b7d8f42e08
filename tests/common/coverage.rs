//! Bounds beside the truth, for random problems whose solution is known.

use halfstep::bound::{Grade, RunOutcome};
use halfstep::cli::pipeline::evaluate;
use halfstep::plan::RunPlan;
use halfstep::run::system::Values;

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

/// The numbers of problem `i`, solved by a scheme and steps that `i` decides: its quantities, then its rows.
pub fn cases(i: u64) -> (Vec<Case>, Vec<Case>) {
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
    let (checked, outcome) = match evaluate("coverage.md", &text) {
        Ok(evaluated) => evaluated,
        Err(faults) => {
            if faults.contains("step-beyond-span") || faults.contains("not-finite") {
                return (Vec::new(), Vec::new());
            }
            panic!("{faults}\n{text}");
        }
    };
    let run = &outcome.runs[0];
    let rows = rows(scheme.key, &format!("{i} {} {control}", problem.family), &checked.plan.runs[0], run);
    let quantities = run.quantities.iter().filter_map(|quantity| {
        let error = quantity.true_error?.abs();
        let text = format!(
            "{i} {} {control}: {} = {:?}, true error {error:e}, bound {:?}, {} {:?}",
            problem.family, quantity.text, quantity.value, quantity.bound, quantity.why, quantity.estimates
        );
        let floor = quantity.why.contains("to rounding");
        let ratio = ratio(error, quantity.bound);
        Some(Case { scheme: scheme.key, grade: quantity.grade, ratio, floor, text })
    });
    (quantities.collect(), rows)
}

/// The rows of every state beside its closed form.
fn rows(scheme: &'static str, text: &str, plan: &RunPlan, run: &RunOutcome) -> Vec<Case> {
    let nodes: Vec<_> = plan.exact.iter().map(|(_, node)| *node).collect();
    let mut forms = Values::new(&plan.graph, &nodes, &plan.parameters);
    let mut exact = vec![0.0; nodes.len()];
    let mut cases = Vec::new();
    let rows = run.rows.as_ref().unwrap();
    for (k, time) in rows.times.iter().enumerate() {
        forms.at(*time, &[], &[], &mut exact);
        for ((state, _), exact) in plan.exact.iter().zip(&exact) {
            let column = &rows.columns[*state];
            let error = (column.values[k] - exact).abs();
            let size = exact.abs().max(1.0);
            cases.push(Case {
                scheme,
                grade: column.grades[k],
                ratio: ratio(error, column.bounds[k]),
                floor: column.bounds[k].is_some_and(|bound| bound < 1e-12 * size),
                text: format!(
                    "{text}: {} at {time}: error {error:e}, bound {:?}",
                    column.name, column.bounds[k]
                ),
            });
        }
    }
    cases
}

/// True error over bound.
fn ratio(error: f64, bound: Option<f64>) -> f64 {
    match bound {
        Some(bound) if bound > 0.0 => error / bound,
        _ if error == 0.0 => 0.0,
        _ => f64::INFINITY,
    }
}
