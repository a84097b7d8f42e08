//! Executes a plan: every run with its bounds, then the criteria.

use super::aim::{NoStep, search};
use super::outcome::{Outcome, RunOutcome};
use super::settle::{Chosen, settle};
use super::verdict::decide;
use crate::fault::{Fault, Faults};
use crate::model::Model;
use crate::model::graph::explain_not_finite;
use crate::plan::{Plan, RunPlan, StepsPlan};
use crate::run::stop::Stop;
use crate::study::Study;

/// Executes all runs of a plan in the order of the study. `done` is told of each run that ends.
///
/// A run that stops early is a fault of the study: `None` is returned, and no number of it can be reported.
pub fn execute(
    study: &Study,
    models: &[Model],
    plan: &Plan,
    faults: &mut Faults,
    done: &(dyn Fn(&str) + Sync),
) -> Option<Outcome> {
    let mut runs = Vec::new();
    for run in &plan.runs {
        match carry_out(run) {
            Ok(outcome) => runs.push(outcome),
            Err(NoStep::Stopped(stop)) => faults.add(stopped(run, &models[run.model], &stop)),
            Err(NoStep::OutOfReach(reached)) => faults.add(
                Fault::error("aim-out-of-reach", run.at, "no step within the limit of steps meets the aim")
                    .label(reached)
                    .help("raise the aim, take a scheme of higher order, or raise `limit`"),
            ),
        }
        done(&run.name);
    }
    if runs.len() != plan.runs.len() {
        return None;
    }
    let mut outcome = Outcome { runs, criteria: Vec::new() };
    for block in &study.blocks.criteria {
        for entry in &block.criteria {
            if let Some((_, quantity)) = outcome.quantity(&entry.quantity.value) {
                let decided = decide(entry, quantity);
                outcome.criteria.push(decided);
            }
        }
    }
    Some(outcome)
}

fn carry_out(run: &RunPlan) -> Result<RunOutcome, NoStep> {
    match &run.steps {
        StepsPlan::Fixed(step) => settle(run, &Chosen::Step(*step)).map_err(NoStep::Stopped),
        StepsPlan::Adaptive { tolerance, scales } => {
            settle(run, &Chosen::Tolerance(*tolerance, scales.clone())).map_err(NoStep::Stopped)
        }
        StepsPlan::Aim(aims) => search(run, aims),
    }
}

/// The fault for a run that ended early: names time, state and expression.
fn stopped(run: &RunPlan, model: &Model, stop: &Stop) -> Fault {
    let unit = run.time_unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
    let name = &run.name;
    match stop {
        Stop::NotFinite(cause) => {
            let why = explain_not_finite(&run.graph, &run.rates, &run.parameters, cause.time, &cause.state, &[]);
            let at_time = format!("at t = {:.6}{unit}", cause.time);
            let state = state_text(model, &cause.state);
            match why {
                Some(why) => {
                    let rate = model.states.get(why.output).map_or("a state", |state| &state.entry.name.value);
                    Fault::error(
                        "not-finite",
                        why.at,
                        format!("run `{name}` stops {at_time}: {} in the rate of `{rate}`", why.why),
                    )
                    .label(format!("here {state}"))
                    .also(run.at, "in this run")
                    .help("end the run before that time, or mend the expression where it leaves its domain")
                }
                None => Fault::error("not-finite", run.at, format!("run `{name}` stops {at_time}: the solution grows without limit"))
                    .label(format!("reached {state}"))
                    .help("the solution blows up in finite time or the step is too large for this scheme: shorten the run or the step"),
            }
        }
        Stop::TooManySteps { limit, time } => {
            Fault::error("too-many-steps", run.at, format!("run `{name}` reaches its limit of {limit} steps at t = {time:.6}{unit}"))
                .help("raise `limit` in the run or `--limit`, or take a larger step or tolerance")
        }
        Stop::StepTooSmall { time, state } => Fault::error(
            "step-too-small",
            run.at,
            format!("run `{name}` stops at t = {time:.6}{unit}: the step falls to the rounding of time"),
        )
        .label(format!("reached {}", state_text(model, state)))
        .help("the solution ends or blows up there, or is stiff: shorten the run, or look at the rates near that time"),
        Stop::Chattering { time, switch } => {
            let at = run.graph.switches().get(*switch).map_or(run.at, |switch| switch.at);
            Fault::error("chattering", at, format!("run `{name}` stops at t = {time:.6}{unit}: a jump flips back and forth on the spot"))
                .also(run.at, "in this run")
                .help("give the jump a width, for example `tanh(v/v0)` in place of `signum(v)`")
        }
    }
}

/// Up to four states with their values: `z = 1.5, v = -2`.
fn state_text(model: &Model, values: &[f64]) -> String {
    let list: Vec<String> = model
        .states
        .iter()
        .zip(values)
        .take(4)
        .map(|(s, y)| format!("{} = {y:.6e}", s.entry.name.value))
        .collect();
    let more = if values.len() > 4 { ", ..." } else { "" };
    format!("{}{more}", list.join(", "))
}
