//! Checks a model block and builds its graph.

use std::collections::BTreeMap;

use super::expression::{Scope, is_function, lower};
use super::graph::{Graph, NodeId};
use super::{Expression, Model, Names, State};
use crate::fault::{Fault, Faults, Span, nearest};
use crate::study::Text;
use crate::study::block::model::{ModelBlock, Start};

/// What a name means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Symbol {
    Parameter(usize),
    State(usize),
    Derived(NodeId),
    /// A derived quantity that has faults of its own, or is not yet known.
    Faulty,
}

/// The names of a model.
#[derive(Clone, Debug, Default)]
pub(crate) struct Symbols(BTreeMap<String, Symbol>);

/// The names of a model as an expression may use them.
pub(super) struct NameScope<'a> {
    pub(super) symbols: &'a Symbols,
    pub(super) names: Names,
}

impl Scope for NameScope<'_> {
    fn look_up(&self, graph: &mut Graph, name: &str) -> Option<NodeId> {
        if name == "t" {
            return (self.names != Names::Parameters).then(|| graph.time());
        }
        match (self.symbols.0.get(name)?, self.names) {
            (Symbol::Parameter(i), _) => Some(graph.parameter(*i)),
            (Symbol::State(i), Names::All) => Some(graph.state(*i)),
            (Symbol::Derived(node), Names::All) => Some(*node),
            // Its own fault has been told; no other is made of it.
            (Symbol::Faulty, Names::All) => Some(graph.constant(1.0)),
            _ => None,
        }
    }
    fn names(&self) -> Vec<&str> {
        let usable = self
            .symbols
            .0
            .iter()
            .filter(|(_, symbol)| self.names == Names::All || matches!(symbol, Symbol::Parameter(_)));
        let time = (self.names != Names::Parameters).then_some("t");
        usable.map(|(name, _)| name.as_str()).chain(time).collect()
    }
    fn not_here(&self, name: &str) -> Option<String> {
        (name == "t" || self.symbols.0.contains_key(name)).then(|| match self.names {
            Names::Parameters => "only parameters and numbers may stand here".to_owned(),
            _ => "only `t`, parameters and numbers may stand here".to_owned(),
        })
    }
}

/// Checks a model block. All faults are added; `None` where one of them is an error.
pub fn check(block: &ModelBlock, faults: &mut Faults) -> Option<Model> {
    let before = faults.errors();
    let mut symbols = collect_names(block, faults);
    let mut graph = Graph::default();
    if block.states.is_empty() {
        faults.add(
            Fault::error(
                "no-states",
                block.name.at,
                format!("the model `{}` has no states", block.name.value),
            )
            .help("list them under `states`, each with its start value"),
        );
    }
    derived(block, &mut graph, &mut symbols, faults);
    let mut states = Vec::new();
    for entry in &block.states {
        let start = match &entry.start {
            Start::Value(value) => Some(graph.constant(value.number)),
            Start::Expression(text) => {
                let scope = NameScope { symbols: &symbols, names: Names::Parameters };
                lower(text, &mut graph, &scope, faults)
            }
        };
        let own_unit = match &entry.start {
            Start::Value(value) => value.unit.clone(),
            Start::Expression(_) => None,
        };
        let stated = entry.unit.as_ref().map(|unit| unit.value.clone());
        if let (Some(own), Some(unit)) = (&own_unit, &entry.unit)
            && *own != unit.value
        {
            faults.add(
                Fault::error("unit-differs", unit.at, format!("the start value carries `{own}`"))
                    .help("leave `unit` out, or write it as the start value does"),
            );
        }
        let scope = NameScope { symbols: &symbols, names: Names::All };
        let rate = block.rates.iter().find(|(name, _)| name.value == entry.name.value);
        let Some((_, rate_text)) = rate else {
            faults.add(
                Fault::error(
                    "no-rate",
                    entry.name.at,
                    format!("the state `{}` has no rate", entry.name.value),
                )
                .help(format!(
                    "add it under `rates`: `{}: ...`; write 0 for a state that stays",
                    entry.name.value
                )),
            );
            continue;
        };
        let rate = lower(rate_text, &mut graph, &scope, faults);
        let exact =
            block.exact.iter().find(|(name, _)| name.value == entry.name.value).and_then(|(_, text)| {
                let scope = NameScope { symbols: &symbols, names: Names::TimeAndParameters };
                // Closed forms may be built from derived quantities of time alone.
                Some((text.clone(), lower(text, &mut graph, &scope, faults)?))
            });
        if let (Some(start), Some(rate)) = (start, rate) {
            states.push(State {
                entry: entry.clone(),
                unit: own_unit.or(stated),
                start,
                rate_text: rate_text.clone(),
                rate,
                exact,
            });
        }
    }
    stray(&block.rates, block, "rate", faults);
    stray(&block.exact, block, "closed form", faults);
    let mut list = Vec::new();
    for entry in &block.derived {
        if let Some(Symbol::Derived(node)) = symbols.0.get(&entry.name.value) {
            list.push(Expression {
                name: entry.name.clone(),
                text: entry.expression.clone(),
                unit: entry.unit.as_ref().map(|unit| unit.value.clone()),
                about: entry.about.clone(),
                node: *node,
            });
        }
    }
    let mut invariants = Vec::new();
    for (name, text) in &block.invariants {
        let scope = NameScope { symbols: &symbols, names: Names::All };
        if let Some(node) = lower(text, &mut graph, &scope, faults) {
            invariants.push(Expression {
                name: name.clone(),
                text: text.clone(),
                unit: None,
                about: None,
                node,
            });
        }
    }
    (faults.errors() == before).then(|| Model {
        name: block.name.clone(),
        about: block.about.clone(),
        parameters: block.parameters.clone(),
        states,
        derived: list,
        invariants,
        graph,
        symbols,
    })
}

fn collect_names(block: &ModelBlock, faults: &mut Faults) -> Symbols {
    let mut symbols = Symbols::default();
    let mut places: BTreeMap<&str, Span> = BTreeMap::new();
    let parameters =
        block.parameters.iter().enumerate().map(|(i, entry)| (&entry.name, Symbol::Parameter(i)));
    let states = block.states.iter().enumerate().map(|(i, entry)| (&entry.name, Symbol::State(i)));
    let derived = block.derived.iter().map(|entry| (&entry.name, Symbol::Faulty));
    for (name, symbol) in parameters.chain(states).chain(derived) {
        let text = name.value.as_str();
        if text == "t" || is_function(text) {
            let what = if text == "t" { "the time" } else { "a function" };
            faults.add(
                Fault::error("reserved-name", name.at, format!("`{text}` is the name of {what}"))
                    .help("choose another name"),
            );
            continue;
        }
        if text == "e" || text == "pi" {
            faults.add(
                Fault::note(
                    "shadowed-constant",
                    name.at,
                    format!("`{text}` now means this, not the number {}", number(text)),
                )
                .help("all expressions of this model use it so"),
            );
        }
        if let Some(first) = places.get(text) {
            faults.add(
                Fault::error("duplicate-name", name.at, format!("`{text}` is defined twice in this model"))
                    .also(*first, "first defined here"),
            );
            continue;
        }
        places.insert(text, name.at);
        symbols.0.insert(text.to_owned(), symbol);
    }
    symbols
}

fn number(name: &str) -> &'static str {
    if name == "e" { "2.71828..." } else { "3.14159..." }
}

/// Lowers derived quantities in the order in which they need each other; circles are faults that name their members.
fn derived(block: &ModelBlock, graph: &mut Graph, symbols: &mut Symbols, faults: &mut Faults) {
    let index: BTreeMap<&str, usize> =
        block.derived.iter().enumerate().map(|(i, entry)| (entry.name.value.as_str(), i)).collect();
    let needs: Vec<Vec<usize>> = block
        .derived
        .iter()
        .map(|entry| {
            let words = entry.expression.value.split(|c: char| !(c.is_ascii_alphanumeric() || c == '_'));
            let mut list: Vec<usize> = words.filter_map(|word| index.get(word).copied()).collect();
            list.sort_unstable();
            list.dedup();
            list
        })
        .collect();
    // Depth first without recursion; `trail` is the way to the entry in work.
    let mut done = vec![false; needs.len()];
    for start in 0..needs.len() {
        let mut trail: Vec<(usize, usize)> = vec![(start, 0)];
        while let Some((i, next)) = trail.last().copied() {
            if done[i] {
                trail.pop();
                continue;
            }
            if let Some(need) = needs[i].get(next) {
                if let Some(last) = trail.last_mut() {
                    last.1 += 1;
                }
                if let Some(place) = trail.iter().position(|(entry, _)| entry == need) {
                    let circle: Vec<usize> = trail[place..].iter().map(|(entry, _)| *entry).collect();
                    circle_fault(block, &circle, faults);
                    for member in circle {
                        done[member] = true;
                    }
                } else if !done[*need] {
                    trail.push((*need, 0));
                }
                continue;
            }
            let entry = &block.derived[i];
            let scope = NameScope { symbols, names: Names::All };
            if let Some(node) = lower(&entry.expression, graph, &scope, faults) {
                symbols.0.insert(entry.name.value.clone(), Symbol::Derived(node));
            }
            done[i] = true;
            trail.pop();
        }
    }
}

fn circle_fault(block: &ModelBlock, circle: &[usize], faults: &mut Faults) {
    let names: Vec<&str> = circle.iter().map(|i| block.derived[*i].name.value.as_str()).collect();
    let first = &block.derived[circle[0]];
    let way = format!("{} -> {}", names.join(" -> "), names[0]);
    let mut fault = Fault::error(
        "circle",
        first.name.at,
        format!("derived quantities need each other in a circle: {way}"),
    )
    .help("break the circle: make one of them a state, or solve it by hand");
    for i in &circle[1..] {
        fault = fault.also(block.derived[*i].name.at, "also in the circle");
    }
    faults.add(fault);
}

/// Rates or closed forms of what is no state.
fn stray(list: &[(Text, Text)], block: &ModelBlock, what: &str, faults: &mut Faults) {
    let known = || block.states.iter().map(|entry| entry.name.value.as_str());
    for (name, _) in list {
        if known().all(|state| state != name.value) {
            let near = nearest(&name.value, known());
            let help = near.first().map_or_else(
                || "add it under `states` with its start value".to_owned(),
                |near| format!("did you mean `{near}`?"),
            );
            faults.add(
                Fault::error(
                    "no-state",
                    name.at,
                    format!("a {what} is given for `{}`, which is no state", name.value),
                )
                .help(help),
            );
        }
    }
}
