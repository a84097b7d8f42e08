//! The blocks of a study where they stand in its prose: models, runs, charts, tables, criteria.

use super::citation::Citations;
use super::page::Page;
use super::summary::{class, grade};
use super::view::{
    Backlink, CellView, ChartView, ColumnView, CriteriaView, CriterionRow, EquationGroup, EquationRow,
    ModelView, NamedText, QuoteView, RunView, TableView,
};
use super::{ReportError, annex, ledger};
use crate::bound::{CriterionOutcome, Quantity};
use crate::model::{Expression, Model};
use crate::study::BlockRef;
use crate::study::block::criteria::Relation;
use crate::study::block::model::Start;

/// How many figures and tables the body has so far.
#[derive(Debug, Default)]
pub(super) struct Numbering {
    figures: usize,
    tables: usize,
}

/// A block as markup.
pub(super) fn render(
    block: BlockRef,
    page: &mut Page<'_>,
    citations: &mut Citations,
    numbering: &mut Numbering,
) -> Result<String, ReportError> {
    match block {
        BlockRef::Model(i) => page.templates.render("block-model.html", &model(page, i)?),
        BlockRef::Run(i) => {
            let view = run(page, i)?;
            page.templates.render("block-run.html", &view)
        }
        BlockRef::Chart(i) => {
            let view = chart(page, i, numbering)?;
            page.templates.render("block-chart.html", &view)
        }
        BlockRef::Table(i) => {
            let view = table(page, citations, i, numbering)?;
            page.templates.render("block-table.html", &view)
        }
        BlockRef::Criteria(i) => {
            let view = criteria(page, citations, i)?;
            page.templates.render("block-criteria.html", &view)
        }
    }
}

/// A quantity where it is quoted.
pub(super) fn quote(
    page: &mut Page<'_>,
    citations: &mut Citations,
    name: &str,
    place: &str,
    plain: bool,
) -> Result<QuoteView, ReportError> {
    let inputs = page.inputs;
    let (_, quantity) = inputs
        .outcome
        .quantity(name)
        .ok_or_else(|| ReportError::Missing(format!("the quantity `{name}`")))?;
    let citation = citations.cite(name, place, &mut page.ids)?;
    Ok(QuoteView {
        id: citation.id,
        line: citation.line,
        name: name.to_owned(),
        text: text(page, quantity, plain),
        has_value: quantity.value.is_some(),
        has_bound: quantity.bound.is_some(),
        linked: true,
        grade: grade(quantity.grade),
        why: quantity.why.clone(),
    })
}

/// A quantity as text; empty where it has no value.
pub(super) fn text(page: &Page<'_>, quantity: &Quantity, plain: bool) -> String {
    if quantity.value.is_none() {
        return String::new();
    }
    let shown = (page.inputs.show)(quantity);
    if plain { shown.plain } else { shown.joined }
}

fn model(page: &Page<'_>, i: usize) -> Result<ModelView, ReportError> {
    let model = page.inputs.models.get(i).ok_or_else(|| missing("model", i))?;
    let id = page.model_ids.get(i).cloned().flatten().ok_or_else(|| missing("model", i))?;
    Ok(ModelView {
        id,
        name: model.name.value.clone(),
        about: model.about.as_ref().map(|text| text.value.clone()),
        groups: equations(model).into_iter().filter(|group| !group.rows.is_empty()).collect(),
        parameters: model.parameters.iter().map(|entry| annex::parameter(page, entry)).collect(),
    })
}

fn equations(model: &Model) -> [EquationGroup; 5] {
    let named = |expression: &Expression| EquationRow {
        name: expression.name.value.clone(),
        text: expression.text.value.clone(),
        unit: expression.unit.clone(),
        about: expression.about.as_ref().map(|text| text.value.clone()),
    };
    let of_states = |text: &dyn Fn(&crate::model::State) -> Option<String>, about: bool| {
        let rows = model.states.iter().filter_map(|state| {
            Some(EquationRow {
                name: state.entry.name.value.clone(),
                text: text(state)?,
                unit: state.unit.clone(),
                about: state.entry.about.as_ref().filter(|_| about).map(|text| text.value.clone()),
            })
        });
        rows.collect::<Vec<_>>()
    };
    let start = |state: &crate::model::State| match &state.entry.start {
        Start::Value(value) => Some(super::number::typeset(&value.digits)),
        Start::Expression(text) => Some(text.value.clone()),
    };
    let rates = of_states(&|state| Some(state.rate_text.value.clone()), true)
        .into_iter()
        // A rate has the unit of its state per unit of time, which the study does not spell out.
        .map(|row| EquationRow { unit: None, ..row })
        .collect();
    [
        EquationGroup { kind: "rate", title: "Rates", rows: rates },
        EquationGroup { kind: "start", title: "Start values", rows: of_states(&start, false) },
        EquationGroup {
            kind: "derived",
            title: "Derived quantities",
            rows: model.derived.iter().map(named).collect(),
        },
        EquationGroup {
            kind: "invariant",
            title: "Invariants, which should stay constant",
            rows: model.invariants.iter().map(named).collect(),
        },
        EquationGroup {
            kind: "exact",
            title: "Closed forms, for the true error",
            rows: of_states(&|state| state.exact.as_ref().map(|(text, _)| text.value.clone()), false),
        },
    ]
}

fn run(page: &mut Page<'_>, i: usize) -> Result<RunView, ReportError> {
    let run = page.inputs.outcome.runs.get(i).ok_or_else(|| missing("run", i))?;
    Ok(RunView {
        id: page.ids.take(&format!("run-{}", run.name)),
        name: run.name.clone(),
        ledger: page.run_ids[i].clone(),
        facts: ledger::facts(page, run)?,
        weakest: run.quantities.iter().map(|quantity| quantity.grade).max().map(grade),
    })
}

fn chart(page: &mut Page<'_>, i: usize, numbering: &mut Numbering) -> Result<ChartView, ReportError> {
    let figure = page.inputs.figures.charts.get(i).ok_or_else(|| missing("chart", i))?;
    numbering.figures += 1;
    Ok(ChartView {
        id: page.ids.take(&format!("figure-{}", figure.name)),
        label: format!("Figure {}", numbering.figures),
        svg: figure.svg.clone(),
        caption: figure.caption.clone(),
        note: figure.note.clone(),
    })
}

fn table(
    page: &mut Page<'_>,
    citations: &mut Citations,
    i: usize,
    numbering: &mut Numbering,
) -> Result<TableView, ReportError> {
    let figure = page.inputs.figures.tables.get(i).ok_or_else(|| missing("table", i))?;
    numbering.tables += 1;
    let label = format!("Table {}", numbering.tables);
    let id = page.ids.take(&format!("table-{}", figure.name));
    let mut rows = Vec::new();
    for row in &figure.rows {
        let mut cells = Vec::new();
        for (cell, column) in row.iter().zip(&figure.columns) {
            let link = match &cell.quantity {
                None => None,
                Some(name) => {
                    let citation = citations.cite(name, &label, &mut page.ids)?;
                    Some(Backlink { id: citation.id, place: citation.line })
                }
            };
            cells.push(CellView {
                text: cell.text.clone(),
                number: column.number,
                link,
                unbounded: cell.unbounded.clone(),
            });
        }
        rows.push(cells);
    }
    let columns = figure
        .columns
        .iter()
        .map(|column| ColumnView {
            name: column.name.clone(),
            unit: column.unit.clone(),
            number: column.number,
        })
        .collect();
    Ok(TableView { id, label, caption: figure.caption.clone(), note: figure.note.clone(), columns, rows })
}

fn criteria(page: &mut Page<'_>, citations: &mut Citations, i: usize) -> Result<CriteriaView, ReportError> {
    let blocks = &page.inputs.study.blocks.criteria;
    let block = blocks.get(i).ok_or_else(|| missing("criteria block", i))?;
    let first: usize = blocks[..i].iter().map(|block| block.criteria.len()).sum();
    let outcomes = &page.inputs.outcome.criteria[first..first + block.criteria.len()];
    let mut rows = Vec::new();
    for outcome in outcomes {
        rows.push(criterion(page, citations, outcome)?);
    }
    let name = block.name.as_ref().map(|name| name.value.clone());
    let id = page.ids.take(&format!("criteria-{}", name.as_deref().unwrap_or(&(i + 1).to_string())));
    Ok(CriteriaView { id, name, rows })
}

fn criterion(
    page: &mut Page<'_>,
    citations: &mut Citations,
    outcome: &CriterionOutcome,
) -> Result<CriterionRow, ReportError> {
    let place = format!("criterion {}", outcome.name);
    let quantity = quote(page, citations, &outcome.quantity, &place, false)?;
    // The margin carries the bound of the value, so it is rounded in the same place.
    let margin =
        page.inputs.outcome.quantity(&outcome.quantity).zip(outcome.margin).map(|((_, of), margin)| {
            let margin = Quantity { value: Some(margin), whole: false, ..of.clone() };
            text(page, &margin, true)
        });
    Ok(CriterionRow {
        name: outcome.name.clone(),
        text: outcome.text.clone(),
        quantity,
        relation: match outcome.relation {
            Relation::Less => "<",
            Relation::LessOrEqual => "≤",
            Relation::Greater => ">",
            Relation::GreaterOrEqual => "≥",
        },
        limit: outcome.limit_text.replace(' ', "\u{a0}"),
        margin,
        verdict: outcome.verdict.words(),
        class: class(outcome.verdict),
        expected: outcome
            .expect
            .as_ref()
            .map(|(verdict, because)| NamedText { name: verdict.words().to_owned(), text: because.clone() }),
        in_order: outcome.is_in_order(),
    })
}

fn missing(kind: &str, i: usize) -> ReportError {
    ReportError::Missing(format!("{kind} {}", i + 1))
}
