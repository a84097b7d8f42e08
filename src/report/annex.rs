//! The annexes behind the ledger: convergence and stability, inputs, the study's text, digests.

use super::ReportError;
use super::citation::Citations;
use super::number::{typeset, with_unit};
use super::page::Page;
use super::summary::grade;
use super::view::{
    ChartView, Digest, InputRow, Inputs, ModelInputs, OrderRow, OverrideRow, RunConvergence, StudyText,
    TextLine,
};
use crate::model::{Model, State};
use crate::study::block::model::{ParameterEntry, Start};
use crate::unit::Value;

/// Observed orders and the charts of every run.
pub(super) fn convergence(
    page: &mut Page<'_>,
    citations: &Citations,
) -> Result<Vec<RunConvergence>, ReportError> {
    let inputs = page.inputs;
    let mut runs = Vec::new();
    let mut number = 0;
    for (i, run) in inputs.outcome.runs.iter().enumerate() {
        let mut orders = Vec::new();
        for quantity in &run.quantities {
            let name = format!("{}.{}", run.name, quantity.name);
            orders.push(OrderRow {
                line: citations.line(&name)?.to_owned(),
                name,
                observed: quantity
                    .estimates
                    .observed_order
                    .filter(|order| order.is_finite())
                    .map(|order| typeset(&format!("{order:.2}"))),
                formal: quantity.estimates.formal_order,
                grade: grade(quantity.grade),
            });
        }
        let figures = inputs.figures.runs.get(i);
        let both = [
            ("convergence", figures.and_then(|f| f.convergence.as_ref())),
            ("stability", figures.and_then(|f| f.stability.as_ref())),
        ];
        let mut charts = Vec::new();
        for (kind, figure) in both {
            let Some(figure) = figure else { continue };
            number += 1;
            charts.push(ChartView {
                id: page.ids.take(&format!("{kind}-{}", run.name)),
                label: format!("Figure B{number}"),
                svg: figure.svg.clone(),
                caption: figure.caption.clone(),
                note: figure.note.clone(),
            });
        }
        runs.push(RunConvergence { name: run.name.clone(), ledger: page.run_ids[i].clone(), orders, charts });
    }
    Ok(runs)
}

/// Every input with its source.
pub(super) fn inputs(page: &Page<'_>) -> Result<Inputs, ReportError> {
    let mut overrides = Vec::new();
    for (i, run) in page.inputs.outcome.runs.iter().enumerate() {
        let model = super::ledger::model(page, run)?;
        for (name, value) in &run.overrides {
            overrides.push(OverrideRow {
                run: run.name.clone(),
                ledger: page.run_ids[i].clone(),
                name: name.clone(),
                model_value: value_in(model, name),
                value: value.clone(),
            });
        }
    }
    let models: Vec<ModelInputs> = page
        .inputs
        .models
        .iter()
        .map(|model| ModelInputs {
            name: model.name.value.clone(),
            parameters: model.parameters.iter().map(|entry| parameter(page, entry)).collect(),
            starts: model.states.iter().map(|state| start(page, state)).collect(),
        })
        .collect();
    let rows = || models.iter().flat_map(|model| model.parameters.iter().chain(&model.starts));
    // A start that is an expression follows from parameters, whose sources count.
    let needs_source = || rows().filter(|row| !row.is_expression);
    Ok(Inputs {
        count: needs_source().count(),
        without_source: needs_source().filter(|row| row.source.is_none()).count(),
        overrides,
        models,
    })
}

/// A parameter as an input.
pub(super) fn parameter(page: &Page<'_>, entry: &ParameterEntry) -> InputRow {
    InputRow {
        name: entry.name.value.clone(),
        value: typeset(&entry.value.digits),
        is_expression: false,
        unit: entry.value.unit.clone(),
        plusminus: entry.plusminus.as_ref().map(written),
        sd: entry.sd.as_ref().map(written),
        scale: None,
        source: entry.source.as_ref().map(|text| text.value.clone()),
        about: entry.about.as_ref().map(|text| text.value.clone()),
        at: page.line(entry.name.at),
    }
}

/// A start value as an input.
pub(super) fn start(page: &Page<'_>, state: &State) -> InputRow {
    let (value, is_expression) = match &state.entry.start {
        Start::Value(value) => (typeset(&value.digits), false),
        Start::Expression(text) => (text.value.clone(), true),
    };
    InputRow {
        name: state.entry.name.value.clone(),
        value,
        is_expression,
        unit: state.unit.clone(),
        plusminus: None,
        sd: None,
        scale: state.entry.scale.as_ref().map(written),
        source: state.entry.source.as_ref().map(|text| text.value.clone()),
        about: state.entry.about.as_ref().map(|text| text.value.clone()),
        at: page.line(state.entry.name.at),
    }
}

/// The study's text, line by line.
pub(super) fn study_text(page: &Page<'_>) -> StudyText {
    let lines = page.inputs.text.lines().zip(&page.line_ids);
    StudyText {
        name: page.inputs.text_name.to_owned(),
        lines: lines
            .enumerate()
            .map(|(i, (text, id))| TextLine { number: i + 1, id: id.clone(), text: text.to_owned() })
            .collect(),
    }
}

/// The digests.
pub(super) fn digests(page: &Page<'_>) -> Vec<Digest> {
    let of = |(path, sha256): &(String, String)| Digest { path: path.clone(), sha256: sha256.clone() };
    page.inputs.digests.iter().map(of).collect()
}

fn value_in(model: &Model, name: &str) -> Option<String> {
    let parameter = model.parameters.iter().find(|entry| entry.name.value == name);
    let state = model.states.iter().find(|state| state.entry.name.value == name);
    parameter.map(|entry| written(&entry.value)).or_else(|| {
        state.map(|state| match &state.entry.start {
            Start::Value(value) => written(value),
            Start::Expression(text) => text.value.clone(),
        })
    })
}

fn written(value: &Value) -> String {
    with_unit(&typeset(&value.digits), value.unit.as_deref())
}
