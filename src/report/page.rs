//! Composes the page.

use super::drawings;
use super::ledger::ledger;
use super::prose::Prose;
use super::templates::{TemplateError, Templates};
use super::view::{DigestView, Field, InputView, InputsView, LineView, PageView, VerdictView};
use crate::bound::{Grade, Outcome};
use crate::model::Model;
use crate::study::Study;
use crate::study::block::criteria::Verdict;
use crate::study::block::model::{ParameterEntry, Start};

/// All that a report is made of.
#[derive(Clone, Copy, Debug)]
pub struct ReportInputs<'a> {
    /// The study.
    pub study: &'a Study,
    /// Its models, in the order of its blocks.
    pub models: &'a [Model],
    /// What came of its runs.
    pub outcome: &'a Outcome,
    /// Its text.
    pub text: &'a str,
    /// Files with their digests: path, `read` or `written`, SHA-256.
    pub digests: &'a [(String, String, String)],
    /// Name and version of the tool, and the version of the numerical definitions.
    pub tool: &'a str,
}

/// Writes the report as HTML.
///
/// # Errors
/// [`TemplateError`] where a template cannot be filled.
pub fn compose(inputs: &ReportInputs<'_>, templates: &Templates) -> Result<String, TemplateError> {
    let ReportInputs { study, models, outcome, .. } = *inputs;
    let prose = Prose { study, models, outcome, templates, charts: drawings::charts(study, outcome) };
    let (body, cites) = prose.render()?;
    let cites_of = |name: &str| cites.get(name).cloned().unwrap_or_default();
    let labels = [
        ("number", "Number"),
        ("revision", "Revision"),
        ("date", "Date"),
        ("client", "Client"),
        ("prepared", "Prepared"),
        ("checked", "Checked"),
        ("approved", "Approved"),
    ];
    let fields = labels.iter().filter_map(|(key, label)| {
        Some(Field { label: (*label).to_owned(), text: study.front.get(key)?.to_owned() })
    });
    let view = PageView {
        title: study.front.title.value.clone(),
        fields: fields.collect(),
        caution: study.front.get("caution").map(str::to_owned),
        verdict: verdict(outcome),
        body,
        ledger: outcome.runs.iter().map(|run| ledger(run, &models[run.model], &cites_of)).collect(),
        inputs: models.iter().map(inputs_of).collect(),
        lines: inputs
            .text
            .lines()
            .enumerate()
            .map(|(i, line)| LineView { number: i + 1, text: line.to_owned() })
            .collect(),
        digests: inputs
            .digests
            .iter()
            .map(|(path, was, sha256)| DigestView {
                path: path.clone(),
                was: was.clone(),
                sha256: sha256.clone(),
            })
            .collect(),
        tool: inputs.tool.to_owned(),
    };
    templates.render("report.html", &view)
}

fn verdict(outcome: &Outcome) -> VerdictView {
    let count = |verdict| outcome.criteria.iter().filter(|criterion| criterion.verdict == verdict).count();
    let weakest = outcome.weakest_grade();
    VerdictView {
        total: outcome.criteria.len(),
        met: count(Verdict::Met),
        not_met: count(Verdict::NotMet),
        undecided: count(Verdict::Undecided),
        out_of_order: outcome.criteria.iter().filter(|criterion| !criterion.is_in_order()).count(),
        expected: outcome
            .criteria
            .iter()
            .filter(|criterion| criterion.verdict != Verdict::Met && criterion.is_in_order())
            .count(),
        quantities: outcome.runs.iter().map(|run| run.quantities.len()).sum(),
        weakest: weakest.map_or_else(String::new, |grade| grade.word().to_owned()),
        meaning: weakest.map_or_else(String::new, |grade| meaning(grade).to_owned()),
    }
}

/// What a grade means, for a reader who has not met it.
fn meaning(grade: Grade) -> &'static str {
    match grade {
        Grade::Corroborated => "every bound rests on two independent estimates that agree",
        Grade::Converged => {
            "every bound rests on three meshes that converge at the order of the scheme, or agree to rounding"
        }
        Grade::Indicated => {
            "some bounds are wide indications: the meshes approach each other, but not as theory says"
        }
        Grade::Unbounded => "some numbers have no bound: the ledger says why",
    }
}

fn inputs_of(model: &Model) -> InputsView {
    let mut rows: Vec<InputView> = model.parameters.iter().map(parameter).collect();
    for state in &model.states {
        let text =
            |text: &Option<crate::study::Text>| text.as_ref().map_or_else(String::new, |t| t.value.clone());
        rows.push(InputView {
            name: state.entry.name.value.clone(),
            kind: "start value".to_owned(),
            value: match &state.entry.start {
                Start::Value(value) => value.digits.clone(),
                Start::Expression(text) => text.value.clone(),
            },
            unit: state.unit.clone().unwrap_or_default(),
            uncertainty: String::new(),
            source: match (&state.entry.start, &state.entry.source) {
                (Start::Expression(_), None) => "from parameters".to_owned(),
                (_, source) => text(source),
            },
            about: text(&state.entry.about),
        });
    }
    InputsView { model: model.name.value.clone(), rows }
}

fn parameter(entry: &ParameterEntry) -> InputView {
    let text =
        |text: &Option<crate::study::Text>| text.as_ref().map_or_else(String::new, |t| t.value.clone());
    let with_unit = |value: &crate::unit::Value| match &value.unit {
        Some(unit) => format!("{} {unit}", value.digits),
        None => value.digits.clone(),
    };
    let uncertainty = match (&entry.plusminus, &entry.sd) {
        (Some(half), _) => format!("± {} (uniform)", with_unit(half)),
        (None, Some(sd)) => format!("standard {}", with_unit(sd)),
        _ => String::new(),
    };
    InputView {
        name: entry.name.value.clone(),
        kind: "parameter".to_owned(),
        value: entry.value.digits.clone(),
        unit: entry.value.unit.clone().unwrap_or_default(),
        uncertainty,
        source: text(&entry.source),
        about: text(&entry.about),
    }
}
