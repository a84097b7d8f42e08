//! The whole page: what enters it, and the order in which its parts are made.

use super::anchor::Ids;
use super::citation::Citations;
use super::view::{ContentsEntry, LineLink, ReportView};
use super::{Figures, ReportError, Show, Templates, annex, ledger, prose, summary};
use crate::bound::Outcome;
use crate::fault::Span;
use crate::model::Model;
use crate::study::block::Blocks;
use crate::study::{BlockRef, Part, Study};

/// What a report is made of.
#[derive(Clone, Copy)]
pub struct ReportInputs<'a> {
    /// The study.
    pub study: &'a Study,
    /// Its models, in the order of its blocks.
    pub models: &'a [Model],
    /// What came of it; its runs in the order of the blocks.
    pub outcome: &'a Outcome,
    /// Its charts and tables.
    pub figures: &'a Figures,
    /// The text of the study's file.
    pub text: &'a str,
    /// The name of that file, as the report should show it.
    pub text_name: &'a str,
    /// Path and SHA-256 of every file that the report rests on.
    pub digests: &'a [(String, String)],
    /// Which tool at which version, with the version of its numerical definitions.
    pub tool: &'a str,
    /// How an adaptive run measures a local error against its tolerance, as a sentence.
    pub norm: &'a str,
    /// How a quantity is written.
    pub show: Show<'a>,
}

/// The report as one HTML page.
///
/// # Errors
/// [`ReportError::Template`] where a template of the user's asks for what is not there,
/// [`ReportError::Missing`] where the inputs do not belong together.
pub fn compose(inputs: &ReportInputs<'_>, templates: &Templates) -> Result<String, ReportError> {
    let mut page = Page::new(inputs, templates)?;
    let mut citations = Citations::new(inputs.outcome, &mut page.ids);
    // The body comes first: the ledger leads back to the places that it makes.
    let body = prose::body(&mut page, &mut citations)?;
    let mut contents = body.contents;
    contents.extend(
        ANNEXES.iter().map(|(id, text)| ContentsEntry { id: (*id).to_owned(), text: (*text).to_owned() }),
    );
    let view = ReportView {
        sheet: summary::sheet(&inputs.study.front),
        verdict: summary::verdict(inputs.outcome, &citations)?,
        contents,
        body: body.html,
        ledger: ledger::ledger(&page, &citations)?,
        convergence: annex::convergence(&mut page, &citations)?,
        inputs: annex::inputs(&page)?,
        study_text: annex::study_text(&page),
        digests: annex::digests(&page),
        tool: inputs.tool.to_owned(),
    };
    templates.render("report.html", &view)
}

/// A page in the making.
pub(super) struct Page<'a> {
    pub(super) inputs: &'a ReportInputs<'a>,
    pub(super) templates: &'a Templates,
    pub(super) ids: Ids,
    /// The id of each run's part of the ledger.
    pub(super) run_ids: Vec<String>,
    /// The id of each model's block, where the body shows it.
    pub(super) model_ids: Vec<Option<String>>,
    /// The id of each line of the study's text.
    pub(super) line_ids: Vec<String>,
    /// The first byte of each of them.
    line_starts: Vec<usize>,
}

impl<'a> Page<'a> {
    fn new(inputs: &'a ReportInputs<'a>, templates: &'a Templates) -> Result<Self, ReportError> {
        agree(inputs)?;
        let mut ids = Ids::new();
        let figures = inputs.figures;
        let of_runs = figures.runs.iter().flat_map(|run| run.convergence.iter().chain(&run.stability));
        for chart in figures.charts.iter().chain(of_runs) {
            ids.reserve_of(&chart.svg);
        }
        let mut start = 0;
        let mut line_starts = Vec::new();
        let mut line_ids = Vec::new();
        for (i, line) in inputs.text.split_inclusive('\n').enumerate() {
            line_starts.push(start);
            line_ids.push(ids.take(&format!("line-{}", i + 1)));
            start += line.len();
        }
        let run_ids =
            inputs.outcome.runs.iter().map(|run| ids.take(&format!("ledger-{}", run.name))).collect();
        let mut model_ids = Vec::new();
        for (i, model) in inputs.models.iter().enumerate() {
            let shown = inputs.study.body.contains(&Part::Block(BlockRef::Model(i)));
            model_ids.push(shown.then(|| ids.take(&format!("model-{}", model.name.value))));
        }
        Ok(Page { inputs, templates, ids, run_ids, model_ids, line_ids, line_starts })
    }

    /// The line of the study where `span` starts.
    pub(super) fn line(&self, span: Span) -> Option<LineLink> {
        if span.file != self.inputs.study.front.title.at.file || span.start > self.inputs.text.len() {
            return None;
        }
        let number = self.line_starts.partition_point(|start| *start <= span.start);
        let id = self.line_ids.get(number.checked_sub(1)?)?;
        Some(LineLink { number, id: id.clone() })
    }
}

/// The lists that are read side by side have the same lengths.
fn agree(inputs: &ReportInputs<'_>) -> Result<(), ReportError> {
    let Blocks { models, runs, charts, tables, criteria } = &inputs.study.blocks;
    let pairs = [
        ("models", models.len(), inputs.models.len()),
        ("runs", runs.len(), inputs.outcome.runs.len()),
        ("charts", charts.len(), inputs.figures.charts.len()),
        ("tables", tables.len(), inputs.figures.tables.len()),
        ("criteria", criteria.iter().map(|block| block.criteria.len()).sum(), inputs.outcome.criteria.len()),
    ];
    match pairs.into_iter().find(|(_, written, made)| written != made) {
        None => Ok(()),
        Some((what, written, made)) => {
            Err(ReportError::Missing(format!("some {what}: the study has {written}, its outcome {made}")))
        }
    }
}

/// The annexes, with the ids that the templates give them.
const ANNEXES: [(&str, &str); 5] = [
    ("ledger", "Annex A: Ledger"),
    ("convergence", "Annex B: Convergence and stability"),
    ("inputs", "Annex C: Inputs"),
    ("study-text", "Annex D: Study text"),
    ("digests", "Annex E: Digests"),
];
