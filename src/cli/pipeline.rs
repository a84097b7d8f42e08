//! Calls the stages one after the other: text to study, models, plan and outcome.

use crate::bound::{self, Outcome};
use crate::fault::{Faults, FileId, Sources, show};
use crate::model::{self, Model};
use crate::plan::{self, Plan};
use crate::study::{self, Study};

/// A study that passed every check which needs no integration.
#[derive(Debug)]
pub struct Checked {
    /// The study.
    pub study: Study,
    /// Its models, in the order of its blocks.
    pub models: Vec<Model>,
    /// What to execute.
    pub plan: Plan,
}

/// Reads, checks and plans a study. `limit` is the largest number of steps of a run, where given.
///
/// All faults that can be found are added to `faults`; `None` where one of them is an error.
pub fn check(sources: &Sources, file: FileId, limit: Option<u64>, faults: &mut Faults) -> Option<Checked> {
    let study = study::read(sources, file, faults)?;
    let models: Vec<Option<Model>> =
        study.blocks.models.iter().map(|block| model::check(block, faults)).collect();
    let plan = plan::lay_out(&study, &models, limit, faults);
    if faults.any_error() {
        return None;
    }
    let models: Option<Vec<Model>> = models.into_iter().collect();
    Some(Checked { study, models: models?, plan: plan? })
}

/// Executes a checked study. `done` is told of each run that ends.
pub fn execute(checked: &Checked, faults: &mut Faults, done: &(dyn Fn(&str) + Sync)) -> Option<Outcome> {
    bound::execute(&checked.study, &checked.models, &checked.plan, faults, done)
}

/// Reads and executes the text of a study.
///
/// # Errors
/// The faults as text, where the study has an error.
pub fn evaluate(name: &str, text: &str) -> Result<(Checked, Outcome), String> {
    let mut sources = Sources::default();
    let file = sources.add(name, text);
    let mut faults = Faults::new();
    let outcome = check(&sources, file, None, &mut faults).and_then(|checked| {
        let outcome = execute(&checked, &mut faults, &|_| ())?;
        Some((checked, outcome))
    });
    outcome.ok_or_else(|| show(&faults, &sources, 20, false))
}
