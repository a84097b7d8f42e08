//! A small study with its outcome, for the tests of this folder.

use crate::bound::{CriterionOutcome, Estimates, Grade, Mesh, Outcome, Quantity, RunOutcome, Steps};
use crate::fault::{Faults, Span};
use crate::model::{self, Model};
use crate::run::Rejections;
use crate::scheme;
use crate::study::block::criteria::{Relation, Verdict};
use crate::study::block::model::{ModelBlock, ParameterEntry, Start, StateEntry};
use crate::study::{FrontMatter, Study, Text};
use crate::unit::Value;

fn text(value: &str) -> Text {
    Text { value: value.to_owned(), at: Span::default(), exact: true }
}

fn value(number: f64, digits: &str, unit: &str) -> Value {
    Value { number, digits: digits.to_owned(), unit: Some(unit.to_owned()), at: Span::default() }
}

/// A study with a number and nothing else.
pub(crate) fn study() -> Study {
    let front = FrontMatter { title: text("A study"), entries: vec![(text("number"), text("HS-1"))] };
    Study { front, body: Vec::new(), blocks: crate::study::block::Blocks::default() }
}

/// One model with one parameter and one state; its block begins at the first byte of the first file.
pub(crate) fn models() -> Vec<Model> {
    let block = ModelBlock {
        name: text("shaft"),
        about: None,
        parameters: vec![ParameterEntry {
            name: text("L"),
            value: value(3200.0, "3200", "m"),
            plusminus: Some(value(50.0, "50", "m")),
            sd: None,
            source: Some(text("survey sheet 4")),
            about: None,
        }],
        states: vec![StateEntry {
            name: text("z"),
            start: Start::Value(value(-1.5, "-1.5", "m")),
            unit: None,
            scale: None,
            source: None,
            about: None,
        }],
        derived: Vec::new(),
        rates: vec![(text("z"), text("-z/L"))],
        invariants: Vec::new(),
        exact: Vec::new(),
    };
    model::check(&block, &mut Faults::new()).into_iter().collect()
}

/// One run with one quantity, one criterion on it.
pub(crate) fn outcome() -> Outcome {
    let mesh = |accepted, switch| Mesh {
        accepted,
        smallest: 0.25,
        largest: 0.5,
        rejected: Rejections { switch, ..Rejections::default() },
        evaluations: accepted,
        switches: 0,
    };
    Outcome {
        runs: vec![RunOutcome {
            name: "reject".to_owned(),
            model: 0,
            scheme: &scheme::all()[0],
            steps: Steps::Fixed { step: 0.5 },
            span: (0.0, 1.0),
            time_unit: Some("s".to_owned()),
            parameters: vec![3200.0],
            start: vec![-1.5],
            overrides: Vec::new(),
            meshes: vec![mesh(1, 1), mesh(2, 0), mesh(4, 0)],
            companion: None,
            quantities: vec![Quantity {
                name: "z_end".to_owned(),
                text: "final z".to_owned(),
                about: None,
                unit: Some("m".to_owned()),
                whole: false,
                value: Some(0.1),
                bound: Some(0.5),
                grade: Grade::Converged,
                why: "three meshes".to_owned(),
                estimates: Estimates {
                    values: vec![Some(0.1), Some(0.3), Some(0.5)],
                    observed_order: Some(0.98),
                    formal_order: 1,
                    ..Estimates::default()
                },
                time: None,
                true_error: None,
                at: Span::default(),
            }],
            rows: None,
            curves: Vec::new(),
            invariants: Vec::new(),
            exact: Vec::new(),
            spectrum: Vec::new(),
            caps: Vec::new(),
            remarks: Vec::new(),
        }],
        criteria: vec![CriterionOutcome {
            name: "freeboard".to_owned(),
            text: "reject.z_end <= 12.5 m".to_owned(),
            quantity: "reject.z_end".to_owned(),
            relation: Relation::LessOrEqual,
            limit: 12.5,
            limit_text: "12.5 m".to_owned(),
            verdict: Verdict::Met,
            margin: Some(1e21),
            expect: None,
        }],
    }
}
