//! `aim` in place of `step`: the largest step whose bounds meet the aims.

use super::outcome::{Grade, RunOutcome, Steps};
use super::settle::{Chosen, settle};
use crate::arithmetic::{elementary, larger};
use crate::plan::{AimPlan, RunPlan};
use crate::run::stop::Stop;

/// Number of steps over the span of the first trial.
const FIRST_STEPS: f64 = 20.0;
/// Trials after which the search gives up.
const MOST_TRIALS: u32 = 60;
/// Steps are tried on the grid of decimals with two digits: 90 of them a decade.
const PER_DECADE: i64 = 90;

/// Why no step was found.
#[derive(Clone, Debug, PartialEq)]
pub enum NoStep {
    /// A run ended early at every step tried, the last time so.
    Stopped(Stop),
    /// The bounds did not come down to the aims within the limit of steps; the text tells what was reached.
    OutOfReach(String),
}

/// The largest step with two significant digits whose bounds, of grade converged or better, meet all aims.
///
/// # Errors
/// [`NoStep`] where there is none within the limit of steps.
pub fn search(plan: &RunPlan, aims: &[AimPlan]) -> Result<RunOutcome, NoStep> {
    let span = plan.until - plan.from;
    let mut trials = 0;
    let mut last: Option<Result<RunOutcome, Stop>> = None;
    // The ratio of the worst bound to its aim; infinite where a bound is missing or too weak.
    let mut attempt = |grid: i64, last: &mut Option<Result<RunOutcome, Stop>>| -> f64 {
        trials += 1;
        let outcome = settle(plan, &Chosen::Step(step_of(grid)));
        let ratio = outcome.as_ref().map_or(f64::INFINITY, |outcome| excess(outcome, aims));
        *last = Some(outcome);
        ratio
    };
    let smallest = grid_below(span / plan.limit as f64) + 1;
    let largest = grid_below(span);
    // Down from a coarse step, by what the order promises, until the aims are met.
    let mut grid = grid_below(span / FIRST_STEPS).clamp(smallest, largest);
    let mut best: Option<(i64, RunOutcome)> = None;
    let mut above = largest + 1;
    for _ in 0..MOST_TRIALS {
        let ratio = attempt(grid, &mut last);
        if ratio <= 1.0 {
            if let Some(Ok(outcome)) = last.take() {
                best = Some((grid, outcome));
            }
        } else {
            above = above.min(grid);
        }
        if let Some((met, _)) = &best {
            if above - met <= 1 {
                break;
            }
            // Between the largest step that met the aims and the smallest that did not.
            grid = if above == largest + 1 && *met < largest {
                (met + (largest + 1 - met).min(PER_DECADE / 2)).min(largest)
            } else {
                met + (above - met) / 2
            };
        } else {
            if grid == smallest {
                break;
            }
            let factor = if ratio.is_finite() {
                0.9 * elementary::pow(ratio, -1.0 / f64::from(plan.scheme.order))
            } else {
                0.5
            };
            let factor = larger(factor, 0.1);
            grid = grid_below(step_of(grid) * factor).min(grid - 1).max(smallest);
        }
    }
    let Some((grid, mut outcome)) = best else {
        return Err(match last {
            Some(Err(stop)) => NoStep::Stopped(stop),
            Some(Ok(outcome)) => NoStep::OutOfReach(reached(&outcome, aims)),
            None => NoStep::OutOfReach("nothing was tried".to_owned()),
        });
    };
    outcome.steps =
        Steps::Aimed { step: step_of(grid), aims: aims.iter().map(|aim| aim.text.clone()).collect(), trials };
    Ok(outcome)
}

fn excess(outcome: &RunOutcome, aims: &[AimPlan]) -> f64 {
    let mut worst = 0.0;
    for aim in aims {
        let quantity = &outcome.quantities[aim.quantity];
        let ratio = match quantity.bound {
            Some(bound) if quantity.grade <= Grade::Converged => bound / aim.bound,
            _ => f64::INFINITY,
        };
        worst = larger(worst, ratio);
    }
    worst
}

fn reached(outcome: &RunOutcome, aims: &[AimPlan]) -> String {
    let step = match &outcome.steps {
        Steps::Fixed { step } | Steps::Aimed { step, .. } => *step,
        Steps::Adaptive { .. } => 0.0,
    };
    let list: Vec<String> = aims
        .iter()
        .map(|aim| {
            let quantity = &outcome.quantities[aim.quantity];
            let bound =
                quantity.bound.map_or_else(|| "no bound".to_owned(), |bound| format!("bound {bound:.1e}"));
            format!("{}: {bound}, {}, where {} is aimed at", quantity.name, quantity.grade.word(), aim.text)
        })
        .collect();
    format!("at a step of {step}: {}", list.join("; "))
}

/// Step number `grid` of the decimals with two significant digits.
fn step_of(grid: i64) -> f64 {
    let mantissa = 10 + grid.rem_euclid(PER_DECADE);
    let exponent = grid.div_euclid(PER_DECADE);
    // Read as decimal text, so that the step is the double nearest to what the report prints.
    format!("{mantissa}e{exponent}").parse().unwrap_or(f64::NAN)
}

/// The number of the largest such step that is not above `step`.
fn grid_below(step: f64) -> i64 {
    let text = format!("{step:e}");
    let exponent: i64 = text.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0);
    let mut grid = (exponent - 1) * PER_DECADE;
    let mut low = grid;
    let mut high = grid + PER_DECADE;
    while low <= high {
        let middle = low + (high - low) / 2;
        if step_of(middle) <= step {
            grid = middle;
            low = middle + 1;
        } else {
            high = middle - 1;
        }
    }
    grid
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_grid_has_two_significant_digits() {
        assert_eq!(step_of(grid_below(0.4876)), 0.48);
        assert_eq!(step_of(grid_below(0.48)), 0.48);
        assert_eq!(step_of(grid_below(1.0)), 1.0);
        assert_eq!(step_of(grid_below(0.999e-7)), 9.9e-8);
        assert_eq!(step_of(grid_below(600.0)), 600.0);
        assert_eq!(step_of(grid_below(1.0) - 1), 0.99);
    }
}
