//! The block `run NAME`, and the grammar of quantities.

use std::collections::BTreeSet;

use super::quantity::read_quantity;
use crate::fault::{Fault, Faults, Span, nearest};
use crate::study::Text;
use crate::study::fields::{Fields, expression, list, named, text, value};
use crate::study::name::{check_name, check_symbol, near_help};
use crate::study::node::{Content, Node};
use crate::unit::Value;

/// A run as written.
#[derive(Clone, Debug, PartialEq)]
pub struct RunBlock {
    /// Its name.
    pub name: Text,
    /// `model`
    pub model: Text,
    /// `scheme`
    pub scheme: Text,
    /// `step`, `tolerance` or `aim`: exactly one of them.
    pub control: Control,
    /// `from`: where time starts; 0 where it is left out.
    pub from: Option<Value>,
    /// `until`
    pub until: Value,
    /// `with`: overrides of parameters and of start values.
    pub with: Vec<(Text, Value)>,
    /// `rows`: the interval of the tabulated output, from `rows: every 1 s`.
    pub rows: Option<Value>,
    /// `quantities`, in the order of the file.
    pub quantities: Vec<QuantityEntry>,
    /// `bound`
    pub bound: BoundAsked,
    /// `limit`: the largest number of steps of the run, 100 million where it is left out.
    pub limit: Option<Value>,
}

/// How the steps are chosen.
#[derive(Clone, Debug, PartialEq)]
pub enum Control {
    /// `step: 0.5 s`
    Step(Value),
    /// `tolerance: 1e-6`: relative, for an adaptive pair.
    Tolerance(Value),
    /// `aim: 0.01 m` or `aim: {z_max: 0.01 m, t_max: 0.1 s}`: the largest step whose bounds meet it.
    Aim(Vec<Aim>),
}

/// What a bound should be at most.
#[derive(Clone, Debug, PartialEq)]
pub struct Aim {
    /// The quantity; `None` means every quantity of the same unit.
    pub quantity: Option<Text>,
    /// The wanted bound.
    pub bound: Value,
}

/// `bound`: which estimates a run makes.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum BoundAsked {
    /// `bound: halving and companion`, and where the entry is left out.
    #[default]
    HalvingAndCompanion,
    /// `bound: halving`
    Halving,
    /// `bound: none`
    None,
}

/// An entry of `quantities`: `highest z`, or a mapping with `take`.
#[derive(Clone, Debug, PartialEq)]
pub struct QuantityEntry {
    /// Its name.
    pub name: Text,
    /// The text that says what is read from the run: `time when z falls through 2 m`.
    pub text: Text,
    /// That text, taken apart.
    pub reading: Reading,
    /// `unit`, where it does not follow from the expression.
    pub unit: Option<Text>,
    /// `about`
    pub about: Option<Text>,
}

/// What is read from a run.
#[derive(Clone, Debug, PartialEq)]
pub enum Reading {
    /// `final EXPRESSION`
    Final(Text),
    /// `highest EXPRESSION`
    Highest(Text),
    /// `lowest EXPRESSION`
    Lowest(Text),
    /// `mean EXPRESSION`
    Mean(Text),
    /// `integral of EXPRESSION`
    Integral(Text),
    /// `EXPRESSION at 35 s`
    At(Text, Value),
    /// `time of highest EXPRESSION`
    TimeOfHighest(Text),
    /// `time of lowest EXPRESSION`
    TimeOfLowest(Text),
    /// `time when EXPRESSION falls through LEVEL`, `last time when ...`, `3rd time when ...`
    TimeWhen(Occurrence, Passage),
    /// `count of EXPRESSION falls through LEVEL`
    Count(Passage),
}

/// Which of several passages.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Occurrence {
    /// The nth, from 1.
    Nth(u32),
    /// The last.
    Last,
}

/// `EXPRESSION falls through LEVEL`
#[derive(Clone, Debug, PartialEq)]
pub struct Passage {
    /// What passes.
    pub expression: Text,
    /// In which direction.
    pub direction: Direction,
    /// The level.
    pub level: Level,
}

/// The direction of a passage.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// `falls through`
    Falls,
    /// `rises through`
    Rises,
    /// `crosses`
    Crosses,
}

/// The level that is passed.
#[derive(Clone, Debug, PartialEq)]
pub enum Level {
    /// `2 m`
    Value(Value),
    /// An expression of parameters.
    Expression(Text),
}

const KEYS: [&str; 12] = [
    "model",
    "scheme",
    "step",
    "tolerance",
    "aim",
    "from",
    "until",
    "with",
    "rows",
    "quantities",
    "bound",
    "limit",
];

/// Reads the body of a run block. `at` is marked where a key is missing.
pub(in crate::study) fn read(name: Text, at: Span, body: &Node, faults: &mut Faults) -> Option<RunBlock> {
    let fields = Fields::open(body, "a run", at, &KEYS, faults)?;
    let model = needed_text(&fields, "model", faults);
    let scheme = needed_text(&fields, "scheme", faults);
    let control = control(&fields, at, faults);
    let from = fields.value("from", faults);
    fields.need("until", faults);
    let until = fields.value("until", faults);
    let with = with(&fields, faults);
    let rows = fields.get("rows").and_then(|node| rows(node, faults));
    let quantities = quantities(&fields, faults);
    let bound = fields.get("bound").map_or(Some(BoundAsked::default()), |node| bound(node, faults));
    let limit = fields.get("limit").and_then(|node| limit(node, faults));
    let run = RunBlock {
        name,
        model: model?,
        scheme: scheme?,
        control: control?,
        from,
        until: until?,
        with,
        rows,
        quantities,
        bound: bound?,
        limit,
    };
    check_aims(&run, faults);
    check_times(&run, faults);
    Some(run)
}

fn needed_text(fields: &Fields<'_>, key: &str, faults: &mut Faults) -> Option<Text> {
    fields.need(key, faults).and_then(|node| text(node, &format!("`{key}`"), faults))
}

/// Exactly one of `step`, `tolerance` and `aim`.
fn control(fields: &Fields<'_>, at: Span, faults: &mut Faults) -> Option<Control> {
    let given: Vec<(&str, &Node)> =
        ["step", "tolerance", "aim"].into_iter().filter_map(|key| Some((key, fields.get(key)?))).collect();
    match given[..] {
        [] => {
            faults.add(
                Fault::error("one-of", at, "a run lacks `step`, `tolerance` or `aim`")
                    .help("say how its steps are chosen: `step: 0.5 s`, `tolerance: 1e-6` or `aim: 0.01 m`"),
            );
            None
        }
        [(key, node)] => match key {
            "step" => positive(node, "`step`", faults).map(Control::Step),
            "tolerance" => {
                let value = positive(node, "`tolerance`", faults)?;
                without_unit(value, "`tolerance`", "it is relative to the size of the states", faults)
                    .map(Control::Tolerance)
            }
            _ => aims(node, faults).map(Control::Aim),
        },
        [(first, first_node), (second, second_node), ..] => {
            faults.add(
                Fault::error("one-of", second_node.at, format!("a run has both `{first}` and `{second}`"))
                    .also(first_node.at, format!("`{first}`"))
                    .help("keep one of `step`, `tolerance` and `aim`"),
            );
            None
        }
    }
}

fn aims(node: &Node, faults: &mut Faults) -> Option<Vec<Aim>> {
    let Content::Map(_) = node.content else {
        return Some(vec![Aim { quantity: None, bound: positive(node, "`aim`", faults)? }]);
    };
    let check = |name: &Text, faults: &mut Faults| check_name(name, "a quantity", faults);
    let aims: Vec<Aim> = named(Some(node), "`aim`", check, faults)
        .into_iter()
        .filter_map(|(name, node)| {
            let bound = positive(node, &format!("the aim for `{}`", name.value), faults)?;
            Some(Aim { quantity: Some(name), bound })
        })
        .collect();
    if matches!(&node.content, Content::Map(map) if map.is_empty()) {
        faults.add(Fault::error("missing-value", node.at, "`aim` is empty").help("write `aim: 0.01 m`"));
    }
    (!aims.is_empty()).then_some(aims)
}

fn with(fields: &Fields<'_>, faults: &mut Faults) -> Vec<(Text, Value)> {
    let check = |name: &Text, faults: &mut Faults| check_symbol(name, "a parameter or state", faults);
    named(fields.get("with"), "`with`", check, faults)
        .into_iter()
        .filter_map(|(name, node)| {
            let value = value(node, &format!("`{}`", name.value), faults)?;
            Some((name, value))
        })
        .collect()
}

/// `every 1 s`
fn rows(node: &Node, faults: &mut Faults) -> Option<Value> {
    let whole = text(node, "`rows`", faults)?;
    let Some(rest) = whole.value.strip_prefix("every").filter(|rest| rest.starts_with([' ', '\t'])) else {
        faults.add(
            Fault::error("bad-rows", whole.at, "`rows` does not say how often")
                .help("write `rows: every 1 s`"),
        );
        return None;
    };
    let interval = whole.cut(whole.value.len() - rest.len(), whole.value.len());
    let value = crate::unit::read_value(&interval.value, interval.at, interval.exact, faults)?;
    check_positive(value, "the interval of `rows`", faults)
}

fn quantities(fields: &Fields<'_>, faults: &mut Faults) -> Vec<QuantityEntry> {
    let check = |name: &Text, faults: &mut Faults| check_name(name, "a quantity", faults);
    named(fields.get("quantities"), "`quantities`", check, faults)
        .into_iter()
        .filter_map(|(name, node)| quantity(name, node, faults))
        .collect()
}

fn quantity(name: Text, node: &Node, faults: &mut Faults) -> Option<QuantityEntry> {
    let what = format!("the quantity `{}`", name.value);
    if !matches!(node.content, Content::Map(_)) {
        let text = expression(node, &what, faults)?;
        let reading = read_quantity(&text, faults)?;
        return Some(QuantityEntry { name, text, reading, unit: None, about: None });
    }
    let fields = Fields::open(node, &what, name.at, &["take", "unit", "about"], faults)?;
    let (unit, about) = (fields.text("unit", faults), fields.text("about", faults));
    let text = expression(fields.need("take", faults)?, &what, faults)?;
    let reading = read_quantity(&text, faults)?;
    Some(QuantityEntry { name, text, reading, unit, about })
}

fn bound(node: &Node, faults: &mut Faults) -> Option<BoundAsked> {
    const WORDS: [&str; 3] = ["halving and companion", "halving", "none"];
    let text = text(node, "`bound`", faults)?;
    let words = text.value.split_ascii_whitespace().collect::<Vec<_>>().join(" ");
    match words.as_str() {
        "halving and companion" => Some(BoundAsked::HalvingAndCompanion),
        "halving" => Some(BoundAsked::Halving),
        "none" => Some(BoundAsked::None),
        _ => {
            let near = nearest(&words, WORDS);
            let help = near
                .first()
                .map_or_else(|| format!("write one of {}", list(&WORDS)), |word| format!("write `{word}`"));
            faults.add(
                Fault::error("bad-bound", text.at, "`bound` does not name estimates that a run makes")
                    .help(help),
            );
            None
        }
    }
}

fn limit(node: &Node, faults: &mut Faults) -> Option<Value> {
    let value = without_unit(positive(node, "`limit`", faults)?, "`limit`", "it counts steps", faults)?;
    if value.number.fract() != 0.0 {
        faults.add(
            Fault::error("out-of-range", value.at, "`limit` is no whole number")
                .help("write a number of steps"),
        );
        return None;
    }
    Some(value)
}

fn positive(node: &Node, what: &str, faults: &mut Faults) -> Option<Value> {
    check_positive(value(node, what, faults)?, what, faults)
}

fn check_positive(value: Value, what: &str, faults: &mut Faults) -> Option<Value> {
    if value.number > 0.0 {
        return Some(value);
    }
    let message = format!("{what} is not positive");
    faults.add(Fault::error("out-of-range", value.at, message).help("write a number above zero"));
    None
}

fn without_unit(value: Value, what: &str, why: &str, faults: &mut Faults) -> Option<Value> {
    if value.unit.is_none() {
        return Some(value);
    }
    let message = format!("{what} takes no unit: {why}");
    faults.add(Fault::error("unit-not-taken", value.at, message).help(format!("write `{}`", value.digits)));
    None
}

/// Aims name quantities of the run.
fn check_aims(run: &RunBlock, faults: &mut Faults) {
    let Control::Aim(aims) = &run.control else { return };
    let known: BTreeSet<&str> = run.quantities.iter().map(|entry| entry.name.value.as_str()).collect();
    for name in aims.iter().filter_map(|aim| aim.quantity.as_ref()) {
        if !known.contains(name.value.as_str()) {
            let message = format!("the run has no quantity `{}`", name.value);
            let help = near_help(&name.value, known.iter().copied(), faults)
                .unwrap_or_else(|| "add it to `quantities`".to_string());
            faults.add(Fault::error("unknown-quantity", name.at, message).help(help));
        }
    }
}

/// All times of a run carry the same unit as text, or none at all: units are not converted yet.
fn check_times(run: &RunBlock, faults: &mut Faults) {
    let unit = run.until.unit.as_deref();
    let mut times: Vec<(&str, &Value)> = Vec::new();
    times.extend(run.from.as_ref().map(|value| ("from", value)));
    if let Control::Step(value) = &run.control {
        times.push(("step", value));
    }
    times.extend(run.rows.as_ref().map(|value| ("rows", value)));
    times.extend(run.quantities.iter().filter_map(|entry| match &entry.reading {
        Reading::At(_, time) => Some(("at", time)),
        _ => None,
    }));
    for (key, value) in times {
        if value.unit.as_deref() == unit {
            continue;
        }
        let (message, help) = match (value.unit.as_deref(), unit) {
            (Some(own), Some(unit)) => (
                format!("`{key}` is in `{own}` where `until` is in `{unit}`"),
                format!("convert it to `{unit}`"),
            ),
            (None, Some(unit)) => (
                format!("`{key}` has no unit where `until` is in `{unit}`"),
                format!("write `{} {unit}`", value.digits),
            ),
            (Some(own), None) => (
                format!("`{key}` is in `{own}` where `until` has no unit"),
                format!("write `until: {} {own}`", run.until.digits),
            ),
            (None, None) => continue,
        };
        faults.add(Fault::error("time-unit", value.at, message).also(run.until.at, "`until`").help(help));
    }
    let from = run.from.as_ref().map_or(0.0, |value| value.number);
    if run.until.number <= from && run.from.as_ref().is_none_or(|value| value.unit.as_deref() == unit) {
        let fault = Fault::error("empty-span", run.until.at, "`until` does not lie after the start of time");
        let fault = match &run.from {
            Some(value) => fault.also(value.at, "`from`"),
            None => fault,
        };
        faults.add(fault.help("time runs from `from` (0 where it is left out) up to `until`"));
    }
}
