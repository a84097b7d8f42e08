//! An invented study with everything that a report can show, for tests.

mod outcome;
mod prose;
mod surge;

pub(super) use outcome::{quantity, run};
pub(super) use prose::body;

use super::{Figures, ReportInputs, ShownText, Templates, compose};
use crate::bound::{Outcome, Quantity};
use crate::fault::Span;
use crate::model::Model;
use crate::study::block::Blocks;
use crate::study::{FrontMatter, Study, Text};

/// The inputs of a report, owned.
#[derive(Clone)]
pub(super) struct Sample {
    pub(super) study: Study,
    pub(super) models: Vec<Model>,
    pub(super) outcome: Outcome,
    pub(super) figures: Figures,
    pub(super) text: String,
    pub(super) digests: Vec<(String, String)>,
}

impl Sample {
    /// The page by the built-in templates.
    pub(super) fn page(&self) -> String {
        self.try_page().unwrap()
    }

    pub(super) fn try_page(&self) -> Result<String, super::ReportError> {
        let inputs = ReportInputs {
            study: &self.study,
            models: &self.models,
            outcome: &self.outcome,
            figures: &self.figures,
            text: &self.text,
            text_name: "studies/surge/study.md",
            digests: &self.digests,
            tool: "halfstep 0.1.0, numerics 1",
            norm: "A step is accepted when, for every state, its local error estimate is at most the tolerance times the typical scale.",
            show: &show,
        };
        compose(&inputs, &Templates::builtin()?)
    }
}

/// A plain writer of quantities: bound to two digits, value to the same place.
pub(super) fn show(quantity: &Quantity) -> ShownText {
    let value = quantity.value.unwrap_or(f64::NAN);
    let unit = quantity.unit.as_ref().map_or_else(String::new, |unit| format!("\u{a0}{unit}"));
    let minus = |text: String| text.replace('-', "−");
    let Some(bound) = quantity.bound else {
        let value = minus(format!("{value:.2}"));
        let plain = format!("{value}{unit}");
        return ShownText { value, bound: None, joined: plain.clone(), plain };
    };
    let exponent: i32 = format!("{bound:.1e}").split_once('e').unwrap().1.parse().unwrap();
    let places = if quantity.whole { 0 } else { usize::try_from(1 - exponent).unwrap_or(0) };
    let (value, bound) = (minus(format!("{value:.places$}")), format!("{bound:.places$}"));
    ShownText {
        joined: format!("{value}\u{a0}±\u{a0}{bound}{unit}"),
        plain: format!("{value}{unit}"),
        value,
        bound: Some(bound),
    }
}

/// A sample without anything but a title and prose.
pub(super) fn bare(title: &str, prose: &str) -> Sample {
    let text_of = format!("---\nstudy: {title}\n---\n\n{prose}\n");
    Sample {
        study: Study {
            front: FrontMatter { title: text(title), entries: Vec::new() },
            body: body(prose),
            blocks: Blocks::default(),
        },
        models: Vec::new(),
        outcome: Outcome { runs: Vec::new(), criteria: Vec::new() },
        figures: Figures::default(),
        text: text_of,
        digests: Vec::new(),
    }
}

/// The surge study with all grades, verdicts and blocks.
pub(super) fn full() -> Sample {
    let source = STUDY.to_owned();
    let prose = source.split("---\n").nth(2).unwrap();
    let mut sample = bare("Level surge in the Corrie Dubh headrace after load rejection", prose);
    sample.text = source;
    let entries = [
        ("number", "HS-014"),
        ("revision", "B"),
        ("date", "2026-11-30"),
        ("prepared", "R. Example"),
        ("checked", "M. Sample"),
        ("client", "Corrie Dubh Hydro (invented)"),
        (
            "caution",
            "Screening study of an invented plant. Final design follows the local code and a licensed engineer.",
        ),
    ];
    sample.study.front.entries = entries.iter().map(|(key, value)| (text(key), text(value))).collect();
    sample.models = vec![surge::shaft()];
    sample.study.blocks = surge::blocks();
    sample.outcome = outcome::outcome();
    sample.figures = surge::figures();
    sample.digests = vec![
        (
            "studies/surge/study.md".into(),
            "9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08".into(),
        ),
        (
            "out/surge/record.json".into(),
            "60303ae22b998861bce3b28f33eec1be758a213c86c93c076dbe9f558c11c752".into(),
        ),
    ];
    sample
}

/// A text without a place of its own.
pub(super) fn text(value: &str) -> Text {
    Text { value: value.to_owned(), at: Span::default(), exact: false }
}

/// The text of the study; its blocks are handed on as `surge` has them.
const STUDY: &str = include_str!("surge.md");
