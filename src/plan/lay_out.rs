//! Lays out a plan: looks every name up, evaluates start values and levels, adds the expressions of quantities,
//! curves and columns to the model's graph.

use super::check;
use super::{
    AimPlan, ColumnPlan, CurvePlan, DEFAULT_LIMIT, Measure, Plan, QuantityPlan, ROWS_LIMIT, RunPlan,
};
use crate::fault::{Fault, Faults, nearest};
use crate::model::graph::{Graph, NodeId};
use crate::model::program::Program;
use crate::model::{Model, Names};
use crate::scheme;
use crate::study::block::chart::{Shows, Trace};
use crate::study::block::model::Start;
use crate::study::block::run::{Control, Level, Passage, Reading, RunBlock};
use crate::study::block::table::Lists;
use crate::study::{Study, Text};

/// Lays out the runs of a study. `models` holds the checked models in the order of the study's blocks, `None`
/// where a model has faults of its own. `limit` is the largest number of steps of a run that does not say its own.
///
/// Faults are added to `faults`; `None` where a run could not be laid out.
pub fn lay_out(
    study: &Study,
    models: &[Option<Model>],
    limit: Option<u64>,
    faults: &mut Faults,
) -> Option<Plan> {
    let before = faults.errors();
    let mut runs = Vec::new();
    for block in &study.blocks.runs {
        let index = study.blocks.models.iter().position(|model| model.name.value == block.model.value);
        if let Some(index) = index
            && let Some(Some(model)) = models.get(index)
        {
            runs.extend(lay_out_run(study, block, index, model, limit, faults));
        }
    }
    if faults.errors() > before || runs.len() != study.blocks.runs.len() {
        return None;
    }
    let plan = Plan { runs };
    check::criteria(study, &plan, faults);
    (faults.errors() == before).then_some(plan)
}

fn lay_out_run(
    study: &Study,
    block: &RunBlock,
    index: usize,
    model: &Model,
    limit: Option<u64>,
    faults: &mut Faults,
) -> Option<RunPlan> {
    let scheme = find_scheme(&block.scheme, faults);
    let (from, until) = (block.from.as_ref().map_or(0.0, |from| from.number), block.until.number);
    if until <= from {
        faults.add(
            Fault::error(
                "empty-span",
                block.until.at,
                format!("the run ends at {until}, not after its start at {from}"),
            )
            .help("`until` must lie after `from` (0 where it is left out)"),
        );
    }
    let mut graph = model.graph.clone();
    let time_unit = check::time_unit(block);
    let Constants { parameters, start, overrides } = constants(block, model, &graph, faults)?;
    let quantities = quantities(block, model, &mut graph, &parameters, time_unit.as_ref(), faults);
    let curves = curves(study, block, model, &mut graph, time_unit.as_ref(), faults);
    let columns = columns(study, block, model, &mut graph, faults);
    let own_limit = block.limit.as_ref().and_then(|value| whole_limit(value, faults));
    let limit = own_limit.or(limit).unwrap_or(DEFAULT_LIMIT);
    let steps = scheme.and_then(|scheme| {
        check::steps(block, model, scheme, (from, until), limit, quantities.as_deref(), faults)
    });
    let rows = block.rows.as_ref().map(|rows| {
        let unit = rows.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
        let count = (until - from) / rows.number;
        if rows.number <= 0.0 {
            faults.add(Fault::error("rows-interval", rows.at, "the interval of the rows must be positive"));
        } else if count > ROWS_LIMIT as f64 {
            faults.add(
                Fault::error("too-many-rows", rows.at, format!("{count:.0} rows are asked for"))
                    .help(format!("at most {ROWS_LIMIT} are written: take a longer interval")),
            );
        }
        (rows.number, format!("{}{unit}", rows.digits))
    });
    let rates = model.rates();
    let jacobian = model.jacobian(&mut graph);
    let mut caps = Vec::new();
    for (at, function) in graph.jumps(&rates) {
        faults.add(
            Fault::warning("jump-in-rates", at, format!("`{function}` makes the rates jump where no mesh point marks it"))
                .help("bounds of this run are at most `indicated`; write the jump with `signum`, `abs`, `min` or `max`, which are located"),
        );
        caps.push(format!("`{function}` makes the rates jump where no mesh point marks it"));
    }
    let exact = model.states.iter().enumerate();
    Some(RunPlan {
        name: block.name.value.clone(),
        at: block.name.at,
        model: index,
        scheme: scheme?,
        steps: steps?,
        from,
        until,
        time_unit,
        parameters,
        start,
        rates,
        exact: exact.filter_map(|(i, state)| state.exact.as_ref().map(|(_, node)| (i, *node))).collect(),
        overrides,
        rows,
        columns,
        quantities: quantities?,
        curves: curves?,
        invariants: (model.invariants.iter())
            .map(|invariant| (invariant.name.value.clone(), invariant.text.value.clone(), invariant.node))
            .collect(),
        jacobian,
        bound: block.bound,
        limit,
        caps,
        graph,
    })
}

fn find_scheme(name: &Text, faults: &mut Faults) -> Option<&'static scheme::Scheme> {
    let found = scheme::find(&name.value);
    if found.is_none() {
        let near = nearest(&name.value, scheme::all().iter().map(|scheme| scheme.key));
        let help = match near.first() {
            Some(near) => format!("did you mean `{near}`? `halfstep schemes` lists them all"),
            None => "`halfstep schemes` lists them all".to_owned(),
        };
        faults.add(
            Fault::error("unknown-scheme", name.at, format!("there is no scheme `{}`", name.value))
                .help(help),
        );
    }
    found
}

fn whole_limit(value: &crate::unit::Value, faults: &mut Faults) -> Option<u64> {
    if value.number >= 1.0 && value.number <= 1e15 && value.number.fract() == 0.0 && value.unit.is_none() {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "a whole number below 1e15"
        )]
        return Some(value.number as u64);
    }
    faults.add(Fault::error(
        "wrong-limit",
        value.at,
        "`limit` must be a whole number of steps from 1 to 1e15",
    ));
    None
}

struct Constants {
    parameters: Vec<f64>,
    start: Vec<f64>,
    overrides: Vec<(String, String)>,
}

/// Values of the parameters and start values, overrides applied.
fn constants(block: &RunBlock, model: &Model, graph: &Graph, faults: &mut Faults) -> Option<Constants> {
    let mut parameters: Vec<f64> = model.parameters.iter().map(|entry| entry.value.number).collect();
    let mut overrides = Vec::new();
    let mut starts: Vec<Option<f64>> = vec![None; model.states.len()];
    for (name, value) in &block.with {
        let unit = value.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
        overrides.push((name.value.clone(), format!("{}{unit}", value.digits)));
        let parameter = model.parameters.iter().position(|entry| entry.name.value == name.value);
        let state = model.states.iter().position(|state| state.entry.name.value == name.value);
        let known = match (parameter, state) {
            (Some(i), _) => {
                parameters[i] = value.number;
                model.parameters[i].value.unit.as_ref()
            }
            (None, Some(i)) => {
                starts[i] = Some(value.number);
                model.states[i].unit.as_ref()
            }
            (None, None) => {
                let known = model.parameters.iter().map(|entry| entry.name.value.as_str());
                let states = model.states.iter().map(|state| state.entry.name.value.as_str());
                let near = nearest(&name.value, known.chain(states));
                let help = near.first().map_or_else(
                    || format!("`with` sets parameters and start values of the model `{}`", model.name.value),
                    |near| format!("did you mean `{near}`?"),
                );
                faults.add(
                    Fault::error(
                        "unknown-name",
                        name.at,
                        format!(
                            "the model `{}` has no parameter or state `{}`",
                            model.name.value, name.value
                        ),
                    )
                    .help(help),
                );
                continue;
            }
        };
        if known != value.unit.as_ref() {
            faults.add(check::unit_differs(value, known, &format!("`{}`", name.value)));
        }
    }
    let nodes: Vec<NodeId> = model.states.iter().map(|state| state.start).collect();
    let program = Program::compile(graph, &nodes);
    let mut registers = program.registers(&parameters);
    let mut start = vec![0.0; nodes.len()];
    program.evaluate(&mut registers, 0.0, &[], &[], &mut start);
    let mut good = true;
    for (i, value) in start.iter_mut().enumerate() {
        if let Some(given) = starts[i] {
            *value = given;
        }
        if !value.is_finite() {
            good = false;
            let entry = &model.states[i].entry;
            let at = match &entry.start {
                Start::Value(value) => value.at,
                Start::Expression(text) => text.at,
            };
            faults.add(
                Fault::error(
                    "not-finite",
                    at,
                    format!("the start value of `{}` is not finite", entry.name.value),
                )
                .also(block.name.at, "in this run"),
            );
        }
    }
    good.then_some(Constants { parameters, start, overrides })
}

fn quantities(
    block: &RunBlock,
    model: &Model,
    graph: &mut Graph,
    parameters: &[f64],
    time_unit: Option<&String>,
    faults: &mut Faults,
) -> Option<Vec<QuantityPlan>> {
    let (from, until) = (block.from.as_ref().map_or(0.0, |from| from.number), block.until.number);
    let mut list = Vec::new();
    for entry in &block.quantities {
        let stated = entry.unit.as_ref().map(|unit| unit.value.clone());
        let mut express = |text: &Text, faults: &mut Faults| {
            model.express(graph, text, Names::All, faults).map(|node| (text.clone(), node))
        };
        let time = || time_unit.cloned();
        let found = match &entry.reading {
            Reading::Final(text) => {
                express(text, faults).map(|(t, node)| (node, Measure::Final, model.unit_of(&t.value)))
            }
            Reading::Highest(text) => {
                express(text, faults).map(|(t, node)| (node, Measure::Highest, model.unit_of(&t.value)))
            }
            Reading::Lowest(text) => {
                express(text, faults).map(|(t, node)| (node, Measure::Lowest, model.unit_of(&t.value)))
            }
            Reading::Mean(text) => {
                express(text, faults).map(|(t, node)| (node, Measure::Mean, model.unit_of(&t.value)))
            }
            Reading::Integral(text) => express(text, faults).map(|(_, node)| (node, Measure::Integral, None)),
            Reading::At(text, at) => {
                if at.number < from || at.number > until {
                    faults.add(
                        Fault::error(
                            "time-outside-run",
                            at.at,
                            format!("{} lies outside the run", at.digits),
                        )
                        .help(format!("the run goes from {from} to {until}")),
                    );
                }
                express(text, faults).map(|(t, node)| (node, Measure::At(at.number), model.unit_of(&t.value)))
            }
            Reading::TimeOfHighest(text) => {
                express(text, faults).map(|(_, node)| (node, Measure::TimeOfHighest, time()))
            }
            Reading::TimeOfLowest(text) => {
                express(text, faults).map(|(_, node)| (node, Measure::TimeOfLowest, time()))
            }
            Reading::TimeWhen(which, passage) => {
                let level = level(passage, model, graph, parameters, faults);
                let node = model.express(graph, &passage.expression, Names::All, faults);
                node.zip(level).map(|(node, level)| {
                    (node, Measure::TimeWhen { level, direction: passage.direction, which: *which }, time())
                })
            }
            Reading::Count(passage) => {
                let level = level(passage, model, graph, parameters, faults);
                let node = model.express(graph, &passage.expression, Names::All, faults);
                node.zip(level)
                    .map(|(node, level)| (node, Measure::Count { level, direction: passage.direction }, None))
            }
        };
        if let Some((node, measure, unit)) = found {
            list.push(QuantityPlan {
                name: entry.name.value.clone(),
                text: entry.text.value.clone(),
                about: entry.about.as_ref().map(|about| about.value.clone()),
                unit: stated.or(unit),
                at: entry.text.at,
                node,
                measure,
            });
        }
    }
    (list.len() == block.quantities.len()).then_some(list)
}

/// The number of a level; its unit must be that of the expression where both are known.
fn level(
    passage: &Passage,
    model: &Model,
    graph: &mut Graph,
    parameters: &[f64],
    faults: &mut Faults,
) -> Option<f64> {
    match &passage.level {
        Level::Value(value) => {
            if let Some(known) = model.unit_of(&passage.expression.value)
                && value.unit.as_ref() != Some(&known)
            {
                faults.add(check::unit_differs(
                    value,
                    Some(&known),
                    &format!("`{}`", passage.expression.value),
                ));
            }
            Some(value.number)
        }
        Level::Expression(text) => {
            let node = model.express(graph, text, Names::Parameters, faults)?;
            let program = Program::compile(graph, &[node]);
            let mut out = [0.0];
            program.evaluate(&mut program.registers(parameters), 0.0, &[], &[], &mut out);
            if out[0].is_finite() {
                return Some(out[0]);
            }
            faults.add(Fault::error("not-finite", text.at, "this level is not finite"));
            None
        }
    }
}

fn curves(
    study: &Study,
    block: &RunBlock,
    model: &Model,
    graph: &mut Graph,
    time_unit: Option<&String>,
    faults: &mut Faults,
) -> Option<Vec<CurvePlan>> {
    let mut list: Vec<CurvePlan> = Vec::new();
    let mut good = true;
    for chart in &study.blocks.charts {
        let Shows::Curves { lines, against, .. } = &chart.shows else {
            continue;
        };
        let mine = |trace: &&Trace| trace.run.value == block.name.value;
        for trace in lines.iter().filter(mine) {
            let node = model.express(graph, &trace.expression, Names::All, faults);
            let (against_text, against_node, against_unit) = match against {
                Some(text) if text.value != "t" => (
                    text.value.clone(),
                    model.express(graph, text, Names::All, faults),
                    model.unit_of(&text.value),
                ),
                _ => ("t".to_owned(), Some(graph.time()), time_unit.cloned()),
            };
            let Some((node, against_node)) = node.zip(against_node) else {
                good = false;
                continue;
            };
            let curve = CurvePlan {
                expression: trace.expression.value.clone(),
                unit: model.unit_of(&trace.expression.value),
                node,
                against: against_text,
                against_unit,
                against_node,
            };
            if !list.contains(&curve) {
                list.push(curve);
            }
        }
    }
    good.then_some(list)
}

/// States and derived quantities first, then what tables and point charts ask for beside them.
fn columns(
    study: &Study,
    block: &RunBlock,
    model: &Model,
    graph: &mut Graph,
    faults: &mut Faults,
) -> Vec<ColumnPlan> {
    let mut list: Vec<ColumnPlan> = Vec::new();
    for (i, state) in model.states.iter().enumerate() {
        list.push(ColumnPlan {
            name: state.entry.name.value.clone(),
            unit: state.unit.clone(),
            node: graph.state(i),
        });
    }
    for derived in &model.derived {
        list.push(ColumnPlan {
            name: derived.name.value.clone(),
            unit: derived.unit.clone(),
            node: derived.node,
        });
    }
    let mut wanted: Vec<&Text> = Vec::new();
    for table in &study.blocks.tables {
        if let Lists::Rows { run, columns } = &table.lists
            && run.value == block.name.value
        {
            wanted.extend(columns);
        }
    }
    for chart in &study.blocks.charts {
        if let Shows::Curves { points, against, .. } = &chart.shows {
            let mut any = false;
            for trace in points.iter().filter(|trace| trace.run.value == block.name.value) {
                wanted.push(&trace.expression);
                any = true;
            }
            if any {
                wanted.extend(against.iter().filter(|text| text.value != "t"));
            }
        }
    }
    for text in wanted {
        if text.value == "t" || list.iter().any(|column| column.name == text.value) {
            continue;
        }
        if let Some(node) = model.express(graph, text, Names::All, faults) {
            list.push(ColumnPlan { name: text.value.clone(), unit: model.unit_of(&text.value), node });
        }
    }
    list
}

/// The plan of an aim on every quantity it names.
pub(super) fn aims(
    block: &RunBlock,
    quantities: &[QuantityPlan],
    faults: &mut Faults,
) -> Option<Vec<AimPlan>> {
    let Control::Aim(aims) = &block.control else {
        return None;
    };
    let mut list = Vec::new();
    for aim in aims {
        let unit = aim.bound.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
        if aim.bound.number <= 0.0 {
            faults.add(Fault::error("aim-not-positive", aim.bound.at, "an aim must be above zero"));
            continue;
        }
        let mut matched = false;
        for (i, quantity) in quantities.iter().enumerate() {
            let wanted = match &aim.quantity {
                Some(name) => name.value == quantity.name,
                None => quantity.unit == aim.bound.unit,
            };
            if wanted {
                matched = true;
                if quantity.unit.is_some() && quantity.unit != aim.bound.unit {
                    faults.add(check::unit_differs(
                        &aim.bound,
                        quantity.unit.as_ref(),
                        &format!("`{}`", quantity.name),
                    ));
                }
                let text = format!("{}: {}{unit}", quantity.name, aim.bound.digits);
                list.push(AimPlan { quantity: i, bound: aim.bound.number, text });
            }
        }
        if !matched {
            let (at, message) = match &aim.quantity {
                Some(name) => (name.at, format!("the run has no quantity `{}` to aim at", name.value)),
                None => (aim.bound.at, "no quantity of the run carries the unit of this aim".to_owned()),
            };
            faults.add(Fault::error("aim-without-quantity", at, message).help(
                "name it: `aim: {QUANTITY: 0.01 m}`, and give the quantity a `unit` where it has none",
            ));
        }
    }
    Some(list)
}
