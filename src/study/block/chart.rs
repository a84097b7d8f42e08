//! The block `chart NAME`.

use crate::fault::{Fault, Faults, Span, clip};
use crate::study::Text;
use crate::study::fields::{Fields, each, expression, items, text};
use crate::study::name::{check_quantity, is_name, run_and_rest};
use crate::study::node::{Content, Node};

/// A chart as written.
#[derive(Clone, Debug, PartialEq)]
pub struct ChartBlock {
    /// Its name.
    pub name: Text,
    /// `title`
    pub title: Option<Text>,
    /// What it shows.
    pub shows: Shows,
    /// `x axis`: the title of the horizontal axis, where the default does not serve.
    pub x_axis: Option<Text>,
    /// `y axis`: the title of the vertical axis.
    pub y_axis: Option<Text>,
}

/// What a chart shows.
#[derive(Clone, Debug, PartialEq)]
pub enum Shows {
    /// `lines` and `points` over `against`.
    Curves {
        /// `lines`: curves from the dense output.
        lines: Vec<Trace>,
        /// `points`: the rows of a run as markers.
        points: Vec<Trace>,
        /// `against`: an expression in each trace's own model; `t` where it is left out.
        against: Option<Text>,
    },
    /// `convergence: [reject.z_max]`: error against step.
    Convergence(Vec<Text>),
    /// `stability: reject`: the scheme's region and step times eigenvalue along the run.
    Stability(Text),
}

/// A trace: `reject.z`, or a mapping with `run` and `of`.
#[derive(Clone, Debug, PartialEq)]
pub struct Trace {
    /// The run.
    pub run: Text,
    /// The expression in that run's model.
    pub expression: Text,
    /// `label`
    pub label: Option<Text>,
}

const KEYS: [&str; 8] =
    ["title", "lines", "points", "against", "convergence", "stability", "x axis", "y axis"];

/// Reads the body of a chart block. `at` is marked where a key is missing.
pub(in crate::study) fn read(name: Text, at: Span, body: &Node, faults: &mut Faults) -> Option<ChartBlock> {
    let fields = Fields::open(body, "a chart", at, &KEYS, faults)?;
    let shows = shows(&fields, at, faults);
    let title = fields.text("title", faults);
    let (x_axis, y_axis) = (fields.text("x axis", faults), fields.text("y axis", faults));
    Some(ChartBlock { name, title, shows: shows?, x_axis, y_axis })
}

/// Curves, a convergence plot or a stability plot: exactly one of them.
fn shows(fields: &Fields<'_>, at: Span, faults: &mut Faults) -> Option<Shows> {
    let curves = ["lines", "points"].into_iter().find_map(|key| Some((key, fields.get(key)?)));
    let convergence = fields.get("convergence").map(|node| ("convergence", node));
    let stability = fields.get("stability").map(|node| ("stability", node));
    let given: Vec<(&str, &Node)> = [curves, convergence, stability].into_iter().flatten().collect();
    if let [(first, first_node), (second, second_node), ..] = given[..] {
        faults.add(
            Fault::error("one-of", second_node.at, format!("a chart has both `{first}` and `{second}`"))
                .also(first_node.at, format!("`{first}`"))
                .help("make two charts of it"),
        );
        return None;
    }
    let Some(&(key, node)) = given.first() else {
        faults.add(
            Fault::error("one-of", at, "a chart lacks `lines`, `points`, `convergence` or `stability`")
                .help("say what it shows: `lines: [RUN.EXPRESSION]`"),
        );
        return None;
    };
    let against = fields.get("against");
    if let (Some(against), "convergence" | "stability") = (against, key) {
        faults.add(
            Fault::error("unknown-key", against.at, format!("a chart with `{key}` takes no `against`"))
                .help("remove the line"),
        );
    }
    match key {
        "convergence" => quantities(node, "`convergence`", faults).map(Shows::Convergence),
        "stability" => text(node, "`stability`", faults).map(Shows::Stability),
        _ => {
            let lines = fields.get("lines").map_or(Some(Vec::new()), |node| traces(node, "`lines`", faults));
            let points =
                fields.get("points").map_or(Some(Vec::new()), |node| traces(node, "`points`", faults));
            let against = against.and_then(|node| expression(node, "`against`", faults));
            Some(Shows::Curves { lines: lines?, points: points?, against })
        }
    }
}

/// A list of `RUN.QUANTITY`; `None` with faults where one of them is not.
pub(in crate::study) fn quantities(node: &Node, what: &str, faults: &mut Faults) -> Option<Vec<Text>> {
    let list = items(node, what, faults)?;
    each(list, |item| expression(item, "a quantity", faults).filter(|text| check_quantity(text, faults)))
}

fn traces(node: &Node, what: &str, faults: &mut Faults) -> Option<Vec<Trace>> {
    let list = items(node, what, faults)?;
    each(list, |item| trace(item, faults))
}

fn trace(node: &Node, faults: &mut Faults) -> Option<Trace> {
    if let Content::Map(_) = node.content {
        let fields = Fields::open(node, "a line of a chart", node.at, &["run", "of", "label"], faults)?;
        let run = fields.need("run", faults).and_then(|node| text(node, "`run`", faults));
        let of = fields.need("of", faults).and_then(|node| expression(node, "`of`", faults));
        let label = fields.text("label", faults);
        return Some(Trace { run: run?, expression: of?, label });
    }
    let whole = expression(node, "a line of a chart", faults)?;
    match run_and_rest(&whole) {
        Some((run, rest)) if is_name(&run.value) && !rest.value.is_empty() => {
            Some(Trace { run, expression: rest, label: None })
        }
        _ => {
            let message = format!("`{}` does not name a run and an expression", clip(&whole.value));
            faults.add(
                Fault::error("bad-reference", whole.at, message)
                    .help("write `RUN.EXPRESSION`: `reject.z`, or `{run: reject, of: z}`"),
            );
            None
        }
    }
}
