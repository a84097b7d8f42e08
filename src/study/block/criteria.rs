//! The block `criteria`.

use crate::fault::{Fault, Faults, Span, clip, nearest};
use crate::study::Text;
use crate::study::fields::{Fields, expression, items, text};
use crate::study::name::{check_name, check_quantity};
use crate::study::node::{Content, Node};
use crate::unit::{Value, is_value, read_value};

/// A list of acceptance criteria.
#[derive(Clone, Debug, PartialEq)]
pub struct CriteriaBlock {
    /// The name of the block, where it has one.
    pub name: Option<Text>,
    /// Where the block stands.
    pub at: Span,
    /// The criteria in the order of the file.
    pub criteria: Vec<CriterionEntry>,
}

/// A criterion: `- freeboard: reject.z_max <= 12.5 m`, or a mapping with `holds`.
#[derive(Clone, Debug, PartialEq)]
pub struct CriterionEntry {
    /// Its name.
    pub name: Text,
    /// The criterion as text.
    pub text: Text,
    /// `reject.z_max`
    pub quantity: Text,
    /// The comparison.
    pub relation: Relation,
    /// The limit.
    pub limit: Value,
    /// `expect`: a verdict that the study shows on purpose, with its reason from `because`.
    pub expect: Option<(Verdict, Text)>,
}

/// The comparison of a criterion.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Relation {
    /// `<`
    Less,
    /// `<=`
    LessOrEqual,
    /// `>`
    Greater,
    /// `>=`
    GreaterOrEqual,
}

/// What came of a criterion.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// The value and its bound lie on the right side of the limit.
    Met,
    /// The limit lies within the bound, or the quantity has none.
    Undecided,
    /// The value and its bound lie on the wrong side.
    NotMet,
}

impl Verdict {
    /// The words for it: `met`, `undecided`, `not met`.
    pub fn words(self) -> &'static str {
        match self {
            Verdict::Met => "met",
            Verdict::Undecided => "undecided",
            Verdict::NotMet => "not met",
        }
    }
}

/// What to write, for the help of a fault.
const FORM: &str = "write `- NAME: RUN.QUANTITY <= VALUE`: `- freeboard: reject.z_max <= 12.5 m`";

/// Reads the body of a criteria block.
pub(in crate::study) fn read(
    name: Option<Text>,
    at: Span,
    body: &Node,
    faults: &mut Faults,
) -> Option<CriteriaBlock> {
    if let Content::Map(_) = body.content {
        faults.add(Fault::error("wrong-type", body.at, "criteria are a list, not a mapping").help(FORM));
        return None;
    }
    let criteria =
        items(body, "the list of criteria", faults)?.iter().filter_map(|item| entry(item, faults)).collect();
    Some(CriteriaBlock { name, at, criteria })
}

fn entry(node: &Node, faults: &mut Faults) -> Option<CriterionEntry> {
    let map = match &node.content {
        Content::Map(map) => map,
        Content::Scalar(_) | Content::List(_) => {
            faults.add(Fault::error("bad-criterion", node.at, "a criterion has a name").help(FORM));
            return None;
        }
    };
    if let [_, (key, _), ..] = &map[..] {
        faults.add(
            Fault::error("bad-criterion", key.at, "an item of the list holds one criterion")
                .help("start each criterion with `- `; `expect` and `because` go into `- NAME: {holds: ..., expect: ...}`"),
        );
        return None;
    }
    let (key, value) = map.first()?;
    let name = text(key, "a name", faults).filter(|name| check_name(name, "a criterion", faults));
    if let Content::Map(_) = value.content {
        let what = "a criterion";
        let fields = Fields::open(value, what, key.at, &["holds", "expect", "because"], faults)?;
        let holds = fields.need("holds", faults).and_then(|node| expression(node, "`holds`", faults));
        let holds = holds.and_then(|text| Some((criterion(&text, faults)?, text)));
        let expect = expect(&fields, faults);
        let ((quantity, relation, limit), text) = holds?;
        return Some(CriterionEntry { name: name?, text, quantity, relation, limit, expect });
    }
    let text = expression(value, "a criterion", faults)?;
    let (quantity, relation, limit) = criterion(&text, faults)?;
    Some(CriterionEntry { name: name?, text, quantity, relation, limit, expect: None })
}

/// `expect` and `because`: both or neither.
fn expect(fields: &Fields<'_>, faults: &mut Faults) -> Option<(Verdict, Text)> {
    let node = match (fields.get("expect"), fields.get("because")) {
        (None, None) => return None,
        (None, Some(because)) => {
            faults.add(
                Fault::error("missing-key", because.at, "`because` stands without `expect`")
                    .help("write `expect: undecided` or `expect: not met`, or remove the reason"),
            );
            return None;
        }
        (Some(expect), None) => {
            faults.add(
                Fault::error("missing-key", expect.at, "`expect` lacks its reason")
                    .help("add `because: ...`: the report prints it"),
            );
            return None;
        }
        (Some(expect), Some(_)) => expect,
    };
    let because = fields.text("because", faults);
    let word = text(node, "`expect`", faults)?;
    let verdict = match word.value.split_ascii_whitespace().collect::<Vec<_>>().join(" ").as_str() {
        "undecided" => Verdict::Undecided,
        "not met" => Verdict::NotMet,
        other => {
            let help = match (other, nearest(other, ["undecided", "not met"]).first()) {
                ("met", _) => "remove `expect`: a criterion is expected to be met".to_string(),
                (_, Some(near)) => format!("write `{near}`"),
                (_, None) => "write `undecided` or `not met`".to_string(),
            };
            let message = format!("`expect` cannot be `{}`", clip(other));
            faults.add(Fault::error("bad-criterion", word.at, message).help(help));
            return None;
        }
    };
    Some((verdict, because?))
}

/// `RUN.QUANTITY <= VALUE`
fn criterion(text: &Text, faults: &mut Faults) -> Option<(Text, Relation, Value)> {
    let sign_at = text.value.find(['<', '>', '=', '≤', '≥', '≠']);
    let Some(start) = sign_at else {
        let message = format!("`{}` compares nothing", clip(&text.value));
        faults.add(Fault::error("bad-criterion", text.at, message).help(FORM));
        return None;
    };
    let rest = &text.value[start..];
    let sign = &rest[..rest.len() - rest.trim_start_matches(['<', '>', '=', '≤', '≥', '≠']).len()];
    let end = start + sign.len();
    let relation = match sign {
        "<" => Relation::Less,
        "<=" => Relation::LessOrEqual,
        ">" => Relation::Greater,
        ">=" => Relation::GreaterOrEqual,
        _ => {
            let help = match sign {
                "=<" | "≤" => "write `<=`",
                "=>" | "≥" => "write `>=`",
                _ => {
                    "a computed number is compared by `<`, `<=`, `>` or `>=`: write two criteria for a range"
                }
            };
            let message = format!("`{}` is no comparison of a criterion", clip(sign));
            faults.add(Fault::error("bad-criterion", text.part(start, end), message).help(help));
            return None;
        }
    };
    let (left, right) = (text.cut(0, start), text.cut(end, text.value.len()));
    if is_value(&left.value) && right.value.contains('.') && !is_value(&right.value) {
        faults.add(
            Fault::error("bad-criterion", text.at, "the quantity of a criterion stands on the left")
                .help(FORM),
        );
        return None;
    }
    let fine = check_quantity(&left, faults);
    let limit = read_value(&right.value, right.at, right.exact, faults)?;
    fine.then_some((left, relation, limit))
}
