//! The ledger: scheme, steps, cost and bounds of every run.

use super::ReportError;
use super::citation::Citations;
use super::number::{brief, count, exact, with_unit};
use super::page::Page;
use super::summary::grade;
use super::view::{
    CompanionView, DriftRow, ExactRow, Ledger, LedgerLine, MeshRow, MeshValue, NamedText, Parts, RunFacts,
    RunLedger, ScaleRow, SchemeView,
};
use crate::bound::{Grade, Mesh, Quantity, RunOutcome, Steps};
use crate::model::Model;

/// The ledger of all runs.
pub(super) fn ledger(page: &Page<'_>, citations: &Citations) -> Result<Ledger, ReportError> {
    let outcome = page.inputs.outcome;
    let mut runs = Vec::new();
    for (i, run) in outcome.runs.iter().enumerate() {
        runs.push(of_run(page, citations, run, page.run_ids[i].clone())?);
    }
    let occurs =
        |wanted: Grade| outcome.runs.iter().flat_map(|run| &run.quantities).any(|q| q.grade == wanted);
    let grades = [Grade::Corroborated, Grade::Converged, Grade::Indicated, Grade::Unbounded];
    Ok(Ledger {
        runs,
        grades: grades.into_iter().filter(|g| occurs(*g)).map(grade).collect(),
        norm: page.inputs.norm.to_owned(),
    })
}

/// What a run is, for its block and for the ledger.
pub(super) fn facts(page: &Page<'_>, run: &RunOutcome) -> Result<RunFacts, ReportError> {
    let time = run.time_unit.as_deref();
    let (control, control_value, aims, trials) = match &run.steps {
        Steps::Fixed { step } => ("fixed", with_unit(&exact(*step), time), Vec::new(), None),
        Steps::Adaptive { tolerance, .. } => ("adaptive", exact(*tolerance), Vec::new(), None),
        Steps::Aimed { step, aims, trials } => {
            ("aimed", with_unit(&exact(*step), time), aims.clone(), Some(count(u64::from(*trials))))
        }
    };
    let scheme = run.scheme;
    Ok(RunFacts {
        model: model(page, run)?.name.value.clone(),
        model_id: page.model_ids.get(run.model).cloned().flatten(),
        scheme: SchemeView {
            key: scheme.key,
            name: scheme.name,
            source: scheme.source,
            order: scheme.order,
            embedded_order: scheme.embedded_order,
            stages: scheme.tableau.b.len(),
        },
        control,
        control_value,
        aims,
        trials,
        from: with_unit(&exact(run.span.0), time),
        until: with_unit(&exact(run.span.1), time),
        overrides: run
            .overrides
            .iter()
            .map(|(name, text)| NamedText { name: name.clone(), text: text.clone() })
            .collect(),
        steps: run.meshes.first().map(|mesh| count(mesh.accepted)),
    })
}

/// The model of a run.
pub(super) fn model<'a>(page: &Page<'a>, run: &RunOutcome) -> Result<&'a Model, ReportError> {
    let models = page.inputs.models;
    models.get(run.model).ok_or_else(|| ReportError::Missing(format!("the model of the run `{}`", run.name)))
}

fn of_run(
    page: &Page<'_>,
    citations: &Citations,
    run: &RunOutcome,
    id: String,
) -> Result<RunLedger, ReportError> {
    let time = run.time_unit.as_deref();
    let states = &model(page, run)?.states;
    let unit_of = |state: &str| {
        states.iter().find(|s| s.entry.name.value == state).and_then(|s| s.unit.as_deref()).map(str::to_owned)
    };
    let scales = match &run.steps {
        Steps::Adaptive { tolerance, scales } => states
            .iter()
            .zip(scales)
            .map(|(state, scale)| ScaleRow {
                state: state.entry.name.value.clone(),
                scale: with_unit(&exact(*scale), state.unit.as_deref()),
                tolerance: with_unit(&brief(tolerance * scale), state.unit.as_deref()),
            })
            .collect(),
        Steps::Fixed { .. } | Steps::Aimed { .. } => Vec::new(),
    };
    let mut lines = Vec::new();
    for quantity in &run.quantities {
        lines.push(line(page, citations, run, quantity)?);
    }
    let evaluations = run.meshes.iter().map(|mesh| mesh.evaluations).sum::<u64>()
        + run.companion.as_ref().map_or(0, |companion| companion.evaluations);
    Ok(RunLedger {
        id,
        name: run.name.clone(),
        facts: facts(page, run)?,
        scales,
        meshes: run.meshes.iter().zip(MESHES).map(|(mesh, label)| mesh_row(mesh, label, time)).collect(),
        companion: run
            .companion
            .as_ref()
            .map(|c| CompanionView { steps: count(c.steps), evaluations: count(c.evaluations) }),
        evaluations: count(evaluations),
        caps: run.caps.clone(),
        remarks: run.remarks.clone(),
        invariants: run
            .invariants
            .iter()
            .map(|drift| DriftRow {
                name: drift.name.clone(),
                expression: drift.expression.clone(),
                start: exact(drift.start),
                largest: brief(drift.largest),
                at_end: brief(drift.at_end),
            })
            .collect(),
        exact: run
            .exact
            .iter()
            .map(|error| ExactRow {
                state: error.state.clone(),
                largest: with_unit(&brief(error.largest), unit_of(&error.state).as_deref()),
                time: with_unit(&brief(error.time), time),
            })
            .collect(),
        lines,
    })
}

fn line(
    page: &Page<'_>,
    citations: &Citations,
    run: &RunOutcome,
    quantity: &Quantity,
) -> Result<LedgerLine, ReportError> {
    let name = format!("{}.{}", run.name, quantity.name);
    let unit = quantity.unit.as_deref();
    let shown = quantity.value.map(|_| (page.inputs.show)(quantity));
    let estimates = &quantity.estimates;
    Ok(LedgerLine {
        id: citations.line(&name)?.to_owned(),
        text: quantity.text.clone(),
        about: quantity.about.clone(),
        has_value: shown.is_some(),
        bound: shown.as_ref().and_then(|shown| shown.bound.as_deref()).map(|bound| with_unit(bound, unit)),
        shown: shown.map(|shown| shown.joined).unwrap_or_default(),
        grade: grade(quantity.grade),
        why: quantity.why.clone(),
        at: page.line(quantity.at),
        time: quantity.time.map(|t| with_unit(&exact(t), run.time_unit.as_deref())),
        values: estimates
            .values
            .iter()
            .zip(MESHES)
            .map(|(value, label)| MeshValue { label, value: value.map(|v| with_unit(&exact(v), unit)) })
            .collect(),
        observed_order: estimates.observed_order.map(|order| {
            if order.is_finite() { super::number::typeset(&format!("{order:.2}")) } else { exact(order) }
        }),
        formal_order: estimates.formal_order,
        halving: estimates.halving.map(|x| with_unit(&brief(x), unit)),
        companion: estimates.companion.map(|x| with_unit(&brief(x), unit)),
        parts: quantity.bound.map(|_| Parts {
            safety: exact(estimates.safety),
            truncation: with_unit(&brief(estimates.truncation), unit),
            interpolation: with_unit(&brief(estimates.interpolation), unit),
            rounding: with_unit(&brief(estimates.rounding), unit),
        }),
        true_error: quantity.true_error.map(|x| with_unit(&brief(x), unit)),
        holds: quantity.true_error.zip(quantity.bound).map(|(error, bound)| error.abs() <= bound),
        cited: citations.of(&name),
        name,
    })
}

fn mesh_row(mesh: &Mesh, label: &'static str, time: Option<&str>) -> MeshRow {
    MeshRow {
        label,
        accepted: count(mesh.accepted),
        smallest: with_unit(&brief(mesh.smallest), time),
        largest: with_unit(&brief(mesh.largest), time),
        local_error: count(mesh.rejected.local_error),
        not_finite: count(mesh.rejected.not_finite),
        switch: count(mesh.rejected.switch),
        switches: count(mesh.switches),
        evaluations: count(mesh.evaluations),
    }
}

/// The run itself and its two refinements.
const MESHES: [&str; 3] = ["as named", "halved", "halved twice"];
