//! References between the blocks of a study, and from its prose to them.
//!
//! A reference to a block that has a fault of its own is no fault: that one is reported already.

use std::collections::{BTreeMap, BTreeSet};

use super::block::Blocks;
use super::block::chart::Shows;
use super::block::model::ModelBlock;
use super::block::run::RunBlock;
use super::block::table::Lists;
use super::fence::Kind;
use super::name::{near_help, run_and_rest};
use super::prose::Body;
use super::{Part, Text};
use crate::fault::{Fault, Faults, clip};

/// Checks all references of a body.
pub(super) fn check(body: &Body, faults: &mut Faults) {
    let known = Known::of(body);
    for run in &body.blocks.runs {
        known.check_run(run, faults);
    }
    check_charts(&body.blocks, &known, faults);
    check_tables(&body.blocks, &known, faults);
    check_criteria(&body.blocks, &known, faults);
    for part in &body.parts {
        if let Part::Quote(quote) = part {
            known.quantity(&quote.quantity, faults);
        }
    }
}

/// Everything that can be referred to.
struct Known<'a> {
    models: BTreeMap<&'a str, &'a ModelBlock>,
    runs: BTreeMap<&'a str, &'a RunBlock>,
    /// Model, and the name of a parameter or state.
    symbols: BTreeSet<(&'a str, &'a str)>,
    /// Run and quantity.
    quantities: BTreeSet<(&'a str, &'a str)>,
    broken: &'a BTreeSet<(Kind, String)>,
}

impl<'a> Known<'a> {
    fn of(body: &'a Body) -> Self {
        let blocks = &body.blocks;
        let symbols = blocks.models.iter().flat_map(|model| {
            let parameters = model.parameters.iter().map(|entry| &entry.name);
            let names = parameters.chain(model.states.iter().map(|entry| &entry.name));
            names.map(|name| (model.name.value.as_str(), name.value.as_str()))
        });
        let quantities = blocks.runs.iter().flat_map(|run| {
            run.quantities.iter().map(|entry| (run.name.value.as_str(), entry.name.value.as_str()))
        });
        Known {
            models: blocks.models.iter().map(|model| (model.name.value.as_str(), model)).collect(),
            runs: blocks.runs.iter().map(|run| (run.name.value.as_str(), run)).collect(),
            symbols: symbols.collect(),
            quantities: quantities.collect(),
            broken: &body.broken,
        }
    }

    /// The model of that name; a fault where there is none.
    fn model(&self, name: &Text, faults: &mut Faults) -> Option<&'a ModelBlock> {
        let found = self.models.get(name.value.as_str()).copied();
        if found.is_none() {
            self.missing(Kind::Model, name, self.models.keys().copied(), faults);
        }
        found
    }

    /// The run of that name; a fault where there is none.
    fn run(&self, name: &Text, faults: &mut Faults) -> Option<&'a RunBlock> {
        let found = self.runs.get(name.value.as_str()).copied();
        if found.is_none() {
            self.missing(Kind::Run, name, self.runs.keys().copied(), faults);
        }
        found
    }

    fn missing<'n>(
        &'n self,
        kind: Kind,
        name: &Text,
        good: impl Iterator<Item = &'n str>,
        faults: &mut Faults,
    ) {
        if self.broken.contains(&(kind, name.value.clone())) {
            return;
        }
        let broken = self.broken.iter().filter(|(other, _)| *other == kind).map(|(_, name)| name.as_str());
        let word = kind.word();
        let help = near_help(&name.value, good.chain(broken), faults)
            .unwrap_or_else(|| format!("add a block that starts with `{word} {}`", clip(&name.value)));
        let code = if kind == Kind::Model { "unknown-model" } else { "unknown-run" };
        let message = format!("the study has no {word} `{}`", clip(&name.value));
        faults.add(Fault::error(code, name.at, message).help(help));
    }

    fn quantity(&self, text: &Text, faults: &mut Faults) {
        let Some((run_name, name)) = run_and_rest(text) else { return };
        let Some(run) = self.run(&run_name, faults) else { return };
        if self.quantities.contains(&(run_name.value.as_str(), name.value.as_str())) {
            return;
        }
        let names = run.quantities.iter().map(|entry| entry.name.value.as_str());
        let message = format!("the run `{}` has no quantity `{}`", run_name.value, name.value);
        let help = near_help(&name.value, names, faults)
            .unwrap_or_else(|| format!("add it to `quantities` of the run: `{}: final ...`", name.value));
        faults
            .add(Fault::error("unknown-quantity", name.at, message).also(run.name.at, "the run").help(help));
    }

    fn check_run(&self, run: &RunBlock, faults: &mut Faults) {
        let Some(model) = self.model(&run.model, faults) else { return };
        let model_name = model.name.value.as_str();
        for (name, _) in &run.with {
            if self.symbols.contains(&(model_name, name.value.as_str())) {
                continue;
            }
            let names = self.symbols.range((model_name, "")..).take_while(|(model, _)| *model == model_name);
            let message = format!("the model `{model_name}` has no parameter or state `{}`", name.value);
            let help = near_help(&name.value, names.map(|(_, name)| *name), faults)
                .unwrap_or_else(|| "`with` sets parameters and start values of the model".to_string());
            faults.add(
                Fault::error("unknown-name", name.at, message).also(model.name.at, "the model").help(help),
            );
        }
    }

    /// The run of that name, which must have rows.
    fn run_with_rows(&self, name: &Text, faults: &mut Faults) {
        let Some(run) = self.run(name, faults) else { return };
        if run.rows.is_none() {
            let message = format!("the run `{}` has no rows", name.value);
            faults.add(
                Fault::error("no-rows", name.at, message)
                    .also(run.name.at, "the run")
                    .help("add `rows: every INTERVAL` to the run"),
            );
        }
    }
}

fn check_charts(blocks: &Blocks, known: &Known<'_>, faults: &mut Faults) {
    for chart in &blocks.charts {
        match &chart.shows {
            Shows::Curves { lines, points, .. } => {
                for line in lines {
                    known.run(&line.run, faults);
                }
                for point in points {
                    known.run_with_rows(&point.run, faults);
                }
            }
            Shows::Convergence(quantities) => {
                for quantity in quantities {
                    known.quantity(quantity, faults);
                }
            }
            Shows::Stability(run) => {
                known.run(run, faults);
            }
        }
    }
}

fn check_tables(blocks: &Blocks, known: &Known<'_>, faults: &mut Faults) {
    for table in &blocks.tables {
        match &table.lists {
            Lists::Quantities(quantities) => {
                for quantity in quantities {
                    known.quantity(quantity, faults);
                }
            }
            Lists::Rows { run, .. } => known.run_with_rows(run, faults),
        }
    }
}

fn check_criteria(blocks: &Blocks, known: &Known<'_>, faults: &mut Faults) {
    let mut seen: BTreeMap<&str, &Text> = BTreeMap::new();
    for entry in blocks.criteria.iter().flat_map(|block| &block.criteria) {
        known.quantity(&entry.quantity, faults);
        if let Some(first) = seen.get(entry.name.value.as_str()) {
            let message = format!("the criterion `{}` stands twice", entry.name.value);
            faults.add(
                Fault::error("duplicate-name", entry.name.at, message)
                    .label("again here")
                    .also(first.at, "first here")
                    .help("give one of them another name"),
            );
        } else {
            seen.insert(&entry.name.value, &entry.name);
        }
    }
}
