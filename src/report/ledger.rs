//! The ledger: scheme, step, bound, grade and cost of every run and quantity.

use super::drawings::{self, Drawing};
use super::number::{align, parts};
use super::view::{DrawingView, DriftView, LedgerView, MeshView, QuantityView};
use crate::bound::{Mesh, Quantity, RunOutcome, Steps};
use crate::figure::digits::{plain, size};
use crate::model::Model;

/// The id of a quantity's ledger line.
pub(super) fn quantity_id(run: &str, quantity: &str) -> String {
    format!("q-{run}-{quantity}")
}

/// The ledger of a run. `cites` gives the ids of the places that quote a quantity.
pub(super) fn ledger(run: &RunOutcome, model: &Model, cites: &dyn Fn(&str) -> Vec<String>) -> LedgerView {
    let unit = run.time_unit.as_deref();
    let labels = ["the run itself", "every step halved", "halved again"];
    let mut quantities: Vec<QuantityView> =
        run.quantities.iter().map(|quantity| line(run, quantity, cites)).collect();
    let mut values: Vec<&mut String> = Vec::new();
    let mut bounds: Vec<&mut String> = Vec::new();
    for quantity in &mut quantities {
        values.push(&mut quantity.value);
        bounds.push(&mut quantity.bound);
    }
    align(&mut values);
    align(&mut bounds);
    let drawing = |drawing: Drawing| DrawingView { svg: drawing.svg, note: drawing.note };
    LedgerView {
        id: format!("run-{}", run.name),
        name: run.name.clone(),
        model: model.name.value.clone(),
        scheme: run.scheme.name.to_owned(),
        order: run.scheme.order,
        source: run.scheme.source.to_owned(),
        steps: steps_text(run),
        span: span_text(run),
        overrides: overrides(run),
        scales: match &run.steps {
            Steps::Adaptive { scales, .. } => {
                let states = model.states.iter().zip(scales);
                states.map(|(state, scale)| format!("{} {}", state.entry.name.value, size(*scale))).collect()
            }
            _ => Vec::new(),
        },
        meshes: run.meshes.iter().zip(labels).map(|(mesh, label)| mesh_view(mesh, label, unit)).collect(),
        companion: run.companion.as_ref().map_or_else(String::new, |cost| {
            format!("{} steps, {} evaluations of the rates", cost.steps, cost.evaluations)
        }),
        caps: run.caps.clone(),
        remarks: run.remarks.clone(),
        quantities,
        invariants: run
            .invariants
            .iter()
            .map(|drift| DriftView {
                name: drift.name.clone(),
                expression: drift.expression.clone(),
                start: size_with(drift.start, 6),
                largest: size(drift.largest),
                at_end: size(drift.at_end),
            })
            .collect(),
        exact: run
            .exact
            .iter()
            .map(|error| {
                let time = with_unit(&size_with(error.time, 4), unit);
                format!(
                    "{}: largest true error at step ends {} at t = {time}",
                    error.state,
                    size(error.largest)
                )
            })
            .collect(),
        data: run.rows.as_ref().map_or_else(String::new, |_| format!("data/{}.csv", run.name)),
        convergence: drawings::run_convergence(run).map(drawing),
        stability: Some(drawing(drawings::run_stability(run))),
    }
}

/// A quantity's line.
pub(super) fn line(
    run: &RunOutcome,
    quantity: &Quantity,
    cites: &dyn Fn(&str) -> Vec<String>,
) -> QuantityView {
    let estimates = &quantity.estimates;
    let number = parts(quantity.value, quantity.bound, quantity.whole, quantity.unit.as_deref());
    let estimate = |value: Option<f64>| value.map_or_else(|| "\u{2013}".to_owned(), size);
    let name = format!("{}.{}", run.name, quantity.name);
    QuantityView {
        id: quantity_id(&run.name, &quantity.name),
        cites: cites(&name),
        name,
        text: quantity.text.clone(),
        about: quantity.about.clone().unwrap_or_default(),
        value: number.value,
        bound: number.bound,
        unit: number.unit,
        grade: quantity.grade.word().to_owned(),
        why: quantity.why.clone(),
        order: match estimates.observed_order {
            Some(order) => format!("{order:.2} of {}", estimates.formal_order),
            None => format!("\u{2013} of {}", estimates.formal_order),
        },
        meshes: estimates
            .values
            .iter()
            .map(|value| value.map_or_else(|| "\u{2013}".to_owned(), plain))
            .collect(),
        halving: estimate(estimates.halving),
        companion: estimate(estimates.companion),
        safety: plain(estimates.safety),
        truncation: size(estimates.truncation),
        interpolation: size(estimates.interpolation),
        rounding: size(estimates.rounding),
        time: quantity
            .time
            .map_or_else(String::new, |time| with_unit(&size_with(time, 4), run.time_unit.as_deref())),
        true_error: quantity.true_error.map_or_else(String::new, size),
    }
}

fn mesh_view(mesh: &Mesh, label: &str, unit: Option<&str>) -> MeshView {
    MeshView {
        label: label.to_owned(),
        steps: mesh.accepted,
        smallest: with_unit(&size_with(mesh.smallest, 3), unit),
        largest: with_unit(&size_with(mesh.largest, 3), unit),
        rejected_error: mesh.rejected.local_error,
        rejected_not_finite: mesh.rejected.not_finite,
        switches: mesh.switches,
        evaluations: mesh.evaluations,
    }
}

/// How the steps of a run came about, in words.
pub(super) fn steps_text(run: &RunOutcome) -> String {
    let unit = run.time_unit.as_deref();
    match &run.steps {
        Steps::Fixed { step } => format!("fixed step {}", with_unit(&plain(*step), unit)),
        Steps::Adaptive { tolerance, .. } => format!("steps chosen for tolerance {}", plain(*tolerance)),
        Steps::Aimed { step, aims, trials } => format!(
            "step {}, the largest with two digits whose bounds meet {} (found in {trials} trials)",
            with_unit(&plain(*step), unit),
            aims.join(", ")
        ),
    }
}

/// The span of a run in words.
pub(super) fn span_text(run: &RunOutcome) -> String {
    format!("{} to {}", plain(run.span.0), with_unit(&plain(run.span.1), run.time_unit.as_deref()))
}

/// The overrides of a run: `k = 0.4 s^2/m`.
pub(super) fn overrides(run: &RunOutcome) -> Vec<String> {
    run.overrides.iter().map(|(name, value)| format!("{name} = {value}")).collect()
}

fn with_unit(text: &str, unit: Option<&str>) -> String {
    unit.map_or_else(|| text.to_owned(), |unit| format!("{text} {unit}"))
}

/// A number that is no result (a step, a time of something) to so many significant digits.
fn size_with(value: f64, digits: usize) -> String {
    let short: f64 = format!("{value:.*e}", digits - 1).parse().unwrap_or(value);
    plain(short)
}
