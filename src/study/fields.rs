//! The entries of a mapping, read strictly: every key is known, every value has its type, and every fault is
//! reported rather than the first alone.

use super::Text;
use super::name::near_help;
use super::node::{Content, Node, Scalar, Sort};
use crate::fault::{Fault, Faults, Span, clip};
use crate::unit::{Value, read_value};

/// What to do about a text that was cut at a comma.
const COMMA: &str = "inside brackets a comma ends a text: put a text that contains one in quotes, and write numbers with a point";

/// The entries of a mapping whose keys are known.
pub(super) struct Fields<'a> {
    what: &'a str,
    at: Span,
    entries: Vec<(&'a str, &'a Node)>,
}

impl<'a> Fields<'a> {
    /// Opens a mapping. `what` names it in messages (`a run`), `at` is marked where a key is missing. Unknown
    /// keys are faults; the rest can be read.
    pub(super) fn open(
        node: &'a Node,
        what: &'a str,
        at: Span,
        known: &[&str],
        faults: &mut Faults,
    ) -> Option<Self> {
        let mut entries = Vec::new();
        let mut before = None;
        for (key, value) in mapping(node, what, faults)? {
            let cut = before.replace(value).filter(|before| is_rest(before, value));
            let Content::Scalar(scalar) = &key.content else { continue };
            if known.contains(&scalar.text.as_str()) {
                entries.push((scalar.text.as_str(), value));
            } else {
                let fault =
                    cut.map_or_else(|| unknown_key(key, scalar, value, what, known, faults), cut_fault);
                faults.add(fault);
            }
        }
        Some(Fields { what, at, entries })
    }

    /// The value of a key.
    pub(super) fn get(&self, key: &str) -> Option<&'a Node> {
        self.entries.iter().find(|(name, _)| *name == key).map(|(_, node)| *node)
    }

    /// The value of a key that must be there.
    pub(super) fn need(&self, key: &str, faults: &mut Faults) -> Option<&'a Node> {
        let found = self.get(key);
        if found.is_none() {
            let message = format!("{} lacks the key `{key}`", self.what);
            faults
                .add(Fault::error("missing-key", self.at, message).help(format!("add a line `{key}: ...`")));
        }
        found
    }

    /// The text of a key, where it is there.
    pub(super) fn text(&self, key: &str, faults: &mut Faults) -> Option<Text> {
        self.get(key).and_then(|node| text(node, &format!("`{key}`"), faults))
    }

    /// The value of a key, where it is there.
    pub(super) fn value(&self, key: &str, faults: &mut Faults) -> Option<Value> {
        self.get(key).and_then(|node| value(node, &format!("`{key}`"), faults))
    }
}

fn unknown_key(
    key: &Node,
    scalar: &Scalar,
    value: &Node,
    what: &str,
    known: &[&str],
    faults: &Faults,
) -> Fault {
    let name = scalar.text.as_str();
    let fault = Fault::error("unknown-key", key.at, format!("{what} has no key `{}`", clip(name)));
    if scalar.in_flow && is_nothing(value) {
        return fault.help(COMMA);
    }
    let near = near_help(name, known.iter().copied(), faults);
    fault.help(near.unwrap_or_else(|| format!("the keys are {}", list(known))))
}

/// `a`, `b` and `c` for a message.
pub(super) fn list(names: &[&str]) -> String {
    names.iter().map(|name| format!("`{name}`")).collect::<Vec<_>>().join(", ")
}

/// The entries of a mapping; a fault where the node is none.
pub(super) fn mapping<'a>(node: &'a Node, what: &str, faults: &mut Faults) -> Option<&'a [(Node, Node)]> {
    match &node.content {
        Content::Map(map) => Some(map),
        Content::Scalar(_) | Content::List(_) => {
            let message = format!("{what} is a mapping, not {}", sort_name(node));
            faults.add(Fault::error("wrong-type", node.at, message).help("write `KEY: VALUE` lines"));
            None
        }
    }
}

/// The named entries of a mapping such as `parameters`: names that pass `check`, and their nodes.
pub(super) fn named<'a>(
    node: Option<&'a Node>,
    what: &str,
    check: impl Fn(&Text, &mut Faults) -> bool,
    faults: &mut Faults,
) -> Vec<(Text, &'a Node)> {
    let Some(map) = node.and_then(|node| mapping(node, what, faults)) else { return Vec::new() };
    let mut before = None;
    map.iter()
        .filter_map(|(key, value)| {
            if let Some(cut) = before.replace(value).filter(|before| is_rest(before, value)) {
                faults.add(cut_fault(cut));
                return None;
            }
            let name = text(key, "a name", faults)?;
            check(&name, faults).then_some((name, value))
        })
        .collect()
}

/// The items of a list; a fault where the node is none.
pub(super) fn items<'a>(node: &'a Node, what: &str, faults: &mut Faults) -> Option<&'a [Node]> {
    match &node.content {
        Content::List(list) if list.is_empty() => {
            faults.add(
                Fault::error("missing-value", node.at, format!("{what} is empty")).help("list at least one"),
            );
            None
        }
        Content::List(list) => Some(list),
        Content::Scalar(_) | Content::Map(_) => {
            let message = format!("{what} is a list, not {}", sort_name(node));
            faults.add(
                Fault::error("wrong-type", node.at, message)
                    .help("write `[FIRST, SECOND]`, or `- ITEM` lines"),
            );
            None
        }
    }
}

/// The text of a scalar; a fault where it is none or says nothing.
pub(super) fn text(node: &Node, what: &str, faults: &mut Faults) -> Option<Text> {
    let Content::Scalar(scalar) = &node.content else {
        let message = format!("{what} is a text, not {}", sort_name(node));
        faults.add(
            Fault::error("wrong-type", node.at, message)
                .help("put a text that starts with a bracket in quotes"),
        );
        return None;
    };
    if scalar.text.trim().is_empty() || scalar.plain && scalar.sort == Sort::Null {
        faults.add(
            Fault::error("missing-value", node.at, format!("{what} has no value"))
                .help("write it behind the colon"),
        );
        return None;
    }
    Some(Text { value: scalar.text.clone(), at: node.at, exact: scalar.exact })
}

/// A text that is an expression, or holds one: what cuts it short is a fault.
pub(super) fn expression(node: &Node, what: &str, faults: &mut Faults) -> Option<Text> {
    let text = text(node, what, faults)?;
    let Content::Scalar(scalar) = &node.content else { return None };
    if let Some(comment) = scalar.comment {
        faults.add(
            Fault::warning("comment-after-expression", comment, format!("the comment is no part of {what}"))
                .label("left out")
                .help(
                    "put the comment on a line of its own; put the text in quotes if the `#` belongs to it",
                ),
        );
    }
    if is_cut(node) {
        faults.add(cut_fault(node));
        return None;
    }
    Some(text)
}

/// Whether a text without quotes inside brackets ends at a comma in the middle of its parentheses.
fn is_cut(node: &Node) -> bool {
    let Content::Scalar(scalar) = &node.content else { return false };
    let count = |sign: char| scalar.text.matches(sign).count();
    scalar.plain && scalar.in_flow && count('(') > count(')')
}

/// Whether an entry is what a comma cut from the one before: `{start: max(a, b)}` leaves a key `b)` without a
/// value.
fn is_rest(before: &Node, value: &Node) -> bool {
    is_cut(before) && is_nothing(value)
}

fn is_nothing(node: &Node) -> bool {
    matches!(&node.content, Content::Scalar(scalar) if scalar.plain && scalar.sort == Sort::Null)
}

fn cut_fault(node: &Node) -> Fault {
    let text = match &node.content {
        Content::Scalar(scalar) => clip(&scalar.text),
        Content::List(_) | Content::Map(_) => String::new(),
    };
    Fault::error("cut-expression", node.at, format!("the text `{text}` is cut at a comma")).help(COMMA)
}

/// Reads each item of a list; `None` where one of them is wrong. All are read, for all their faults, but those
/// behind one that is cut at a comma: they are its other part.
pub(super) fn each<T>(items: &[Node], mut read: impl FnMut(&Node) -> Option<T>) -> Option<Vec<T>> {
    let mut out = Vec::with_capacity(items.len());
    for item in items {
        out.push(read(item));
        if is_cut(item) {
            break;
        }
    }
    out.into_iter().collect()
}

/// A value.
pub(super) fn value(node: &Node, what: &str, faults: &mut Faults) -> Option<Value> {
    let text = text(node, what, faults)?;
    read_value(&text.value, text.at, text.exact, faults)
}

/// What a node is, in words.
fn sort_name(node: &Node) -> &'static str {
    match &node.content {
        Content::List(_) => "a list",
        Content::Map(_) => "a mapping",
        Content::Scalar(scalar) => match scalar.sort {
            Sort::Null => "nothing",
            Sort::Bool => "yes or no",
            Sort::Number => "a number",
            Sort::Text => "a text",
        },
    }
}
