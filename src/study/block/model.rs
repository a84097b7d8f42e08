//! The block `model NAME`.

use std::collections::BTreeMap;

use crate::fault::{Fault, Faults, Span};
use crate::study::Text;
use crate::study::fields::{Fields, expression, named, value};
use crate::study::name::check_symbol;
use crate::study::node::{Content, Node};
use crate::unit::{Value, is_value};

/// A model as written.
#[derive(Clone, Debug, PartialEq)]
pub struct ModelBlock {
    /// Its name.
    pub name: Text,
    /// `about`
    pub about: Option<Text>,
    /// `parameters`, in the order of the file.
    pub parameters: Vec<ParameterEntry>,
    /// `states`, in the order of the file.
    pub states: Vec<StateEntry>,
    /// `derived`, in the order of the file.
    pub derived: Vec<DerivedEntry>,
    /// `rates`: name of the state and expression.
    pub rates: Vec<(Text, Text)>,
    /// `invariants`: name and expression of what should stay constant.
    pub invariants: Vec<(Text, Text)>,
    /// `exact`: name of the state and closed form in `t` and parameters.
    pub exact: Vec<(Text, Text)>,
}

/// An entry of `parameters`: `3200 m`, or a mapping with `value`.
#[derive(Clone, Debug, PartialEq)]
pub struct ParameterEntry {
    /// Its name.
    pub name: Text,
    /// `value`
    pub value: Value,
    /// `plusminus`: half width of a uniform distribution.
    pub plusminus: Option<Value>,
    /// `sd`: standard uncertainty.
    pub sd: Option<Value>,
    /// `source`
    pub source: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// The start value of a state.
#[derive(Clone, Debug, PartialEq)]
pub enum Start {
    /// `-1.5 m`
    Value(Value),
    /// An expression of parameters: `sqrt(2*g*H)`.
    Expression(Text),
}

/// An entry of `states`: `-1.5 m`, an expression of parameters, or a mapping with `start`.
#[derive(Clone, Debug, PartialEq)]
pub struct StateEntry {
    /// Its name.
    pub name: Text,
    /// `start`
    pub start: Start,
    /// `unit`, where the start is an expression or carries none.
    pub unit: Option<Text>,
    /// `scale`: a typical size, for the error norm of adaptive runs.
    pub scale: Option<Value>,
    /// `source`
    pub source: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// An entry of `derived`: an expression, or a mapping with `is`.
#[derive(Clone, Debug, PartialEq)]
pub struct DerivedEntry {
    /// Its name.
    pub name: Text,
    /// `is`: the expression.
    pub expression: Text,
    /// `unit`
    pub unit: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

const KEYS: [&str; 7] = ["about", "parameters", "states", "derived", "rates", "invariants", "exact"];

/// Reads the body of a model block. `at` is marked where a key is missing.
pub(in crate::study) fn read(name: Text, at: Span, body: &Node, faults: &mut Faults) -> Option<ModelBlock> {
    let fields = Fields::open(body, "a model", at, &KEYS, faults)?;
    let symbols =
        |what: &'static str| move |name: &Text, faults: &mut Faults| check_symbol(name, what, faults);
    let parameters: Vec<ParameterEntry> =
        named(fields.get("parameters"), "`parameters`", symbols("a parameter"), faults)
            .into_iter()
            .filter_map(|(name, node)| parameter(name, node, faults))
            .collect();
    let states_node = fields.need("states", faults);
    let states: Vec<StateEntry> = named(states_node, "`states`", symbols("a state"), faults)
        .into_iter()
        .filter_map(|(name, node)| state(name, node, faults))
        .collect();
    let derived: Vec<DerivedEntry> =
        named(fields.get("derived"), "`derived`", symbols("a derived quantity"), faults)
            .into_iter()
            .filter_map(|(name, node)| derived(name, node, faults))
            .collect();
    let rates_node = fields.need("rates", faults);
    let rates = expressions(rates_node, "`rates`", symbols("a state"), "the rate of", faults);
    let invariants = expressions(
        fields.get("invariants"),
        "`invariants`",
        symbols("an invariant"),
        "the invariant",
        faults,
    );
    let exact = expressions(fields.get("exact"), "`exact`", symbols("a state"), "the closed form of", faults);
    check_twice(&parameters, &states, &derived, faults);
    let about = fields.text("about", faults);
    states_node.and(rates_node)?;
    Some(ModelBlock { name, about, parameters, states, derived, rates, invariants, exact })
}

fn parameter(name: Text, node: &Node, faults: &mut Faults) -> Option<ParameterEntry> {
    let what = format!("the parameter `{}`", name.value);
    if !matches!(node.content, Content::Map(_)) {
        let value = value(node, &what, faults)?;
        return Some(ParameterEntry { name, value, plusminus: None, sd: None, source: None, about: None });
    }
    let fields =
        Fields::open(node, &what, name.at, &["value", "plusminus", "sd", "source", "about"], faults)?;
    fields.need("value", faults)?;
    let plusminus = fields.value("plusminus", faults);
    let sd = fields.value("sd", faults);
    for (key, width) in [("plusminus", &plusminus), ("sd", &sd)] {
        if let Some(width) = width.as_ref().filter(|width| width.number < 0.0) {
            let message = format!("`{key}` of {what} is negative");
            faults.add(Fault::error("out-of-range", width.at, message).help("write a width of zero or more"));
        }
    }
    if let (Some(first), Some(second)) = (&plusminus, &sd) {
        faults.add(
            Fault::error("one-of", second.at, format!("{what} has both `plusminus` and `sd`"))
                .also(first.at, "half width")
                .help("keep `plusminus` for a uniform distribution or `sd` for a standard uncertainty"),
        );
    }
    let (source, about) = (fields.text("source", faults), fields.text("about", faults));
    Some(ParameterEntry { name, value: fields.value("value", faults)?, plusminus, sd, source, about })
}

fn state(name: Text, node: &Node, faults: &mut Faults) -> Option<StateEntry> {
    let what = format!("the state `{}`", name.value);
    if !matches!(node.content, Content::Map(_)) {
        let start = start(node, &what, faults)?;
        return Some(StateEntry { name, start, unit: None, scale: None, source: None, about: None });
    }
    let fields = Fields::open(node, &what, name.at, &["start", "unit", "scale", "source", "about"], faults)?;
    let start = fields
        .need("start", faults)
        .and_then(|node| start(node, &format!("the start of `{}`", name.value), faults));
    let scale = fields.value("scale", faults);
    if let Some(scale) = scale.as_ref().filter(|scale| scale.number <= 0.0) {
        let message = format!("`scale` of {what} is not positive");
        faults.add(Fault::error("out-of-range", scale.at, message).help("write a typical size of the state"));
    }
    let unit = fields.text("unit", faults);
    let (source, about) = (fields.text("source", faults), fields.text("about", faults));
    Some(StateEntry { name, start: start?, unit, scale, source, about })
}

fn start(node: &Node, what: &str, faults: &mut Faults) -> Option<Start> {
    if matches!(&node.content, Content::Scalar(scalar) if is_value(&scalar.text)) {
        return value(node, what, faults).map(Start::Value);
    }
    expression(node, what, faults).map(Start::Expression)
}

fn derived(name: Text, node: &Node, faults: &mut Faults) -> Option<DerivedEntry> {
    let what = format!("the derived quantity `{}`", name.value);
    if !matches!(node.content, Content::Map(_)) {
        let expression = expression(node, &what, faults)?;
        return Some(DerivedEntry { name, expression, unit: None, about: None });
    }
    let fields = Fields::open(node, &what, name.at, &["is", "unit", "about"], faults)?;
    let is = fields.need("is", faults).and_then(|node| expression(node, &what, faults));
    let (unit, about) = (fields.text("unit", faults), fields.text("about", faults));
    Some(DerivedEntry { name, expression: is?, unit, about })
}

fn expressions(
    node: Option<&Node>,
    what: &str,
    check: impl Fn(&Text, &mut Faults) -> bool,
    each: &str,
    faults: &mut Faults,
) -> Vec<(Text, Text)> {
    named(node, what, check, faults)
        .into_iter()
        .filter_map(|(name, node)| {
            let text = expression(node, &format!("{each} `{}`", name.value), faults)?;
            Some((name, text))
        })
        .collect()
}

/// A symbol stands for one thing: a parameter, a state or a derived quantity.
fn check_twice(
    parameters: &[ParameterEntry],
    states: &[StateEntry],
    derived: &[DerivedEntry],
    faults: &mut Faults,
) {
    let mut seen: BTreeMap<&str, (&Text, &str)> = BTreeMap::new();
    let all = parameters
        .iter()
        .map(|entry| (&entry.name, "a parameter"))
        .chain(states.iter().map(|entry| (&entry.name, "a state")))
        .chain(derived.iter().map(|entry| (&entry.name, "a derived quantity")));
    for (name, sort) in all {
        if let Some((first, first_sort)) = seen.get(name.value.as_str()) {
            let message = format!("`{}` is {sort} and {first_sort}", name.value);
            faults.add(
                Fault::error("duplicate-name", name.at, message)
                    .label(sort)
                    .also(first.at, *first_sort)
                    .help("give one of them another name"),
            );
        } else {
            seen.insert(&name.value, (name, sort));
        }
    }
}
