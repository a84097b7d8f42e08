//! The expression language: precedence, places, faults.

use crate::fault::{Faults, FileId, Severity, Span};
use crate::model::graph::{Graph, NodeId};
use crate::model::program::Program;
use crate::study::Text;

use super::{Scope, lower};

/// States `x` and `y`, parameter `a`.
struct Names;

impl Scope for Names {
    fn look_up(&self, graph: &mut Graph, name: &str) -> Option<NodeId> {
        match name {
            "x" => Some(graph.state(0)),
            "y" => Some(graph.state(1)),
            "a" => Some(graph.parameter(0)),
            "t" => Some(graph.time()),
            _ => None,
        }
    }
    fn names(&self) -> Vec<&str> {
        vec!["a", "t", "x", "y"]
    }
    fn not_here(&self, _name: &str) -> Option<String> {
        None
    }
}

fn text(source: &str) -> Text {
    Text { value: source.to_owned(), at: Span::new(FileId(0), 100, 100 + source.len()), exact: true }
}

/// The value at t = 2, x = 3, y = -5, a = 7.
fn value(source: &str) -> f64 {
    let mut graph = Graph::default();
    let mut faults = Faults::new();
    let node = lower(&text(source), &mut graph, &Names, &mut faults);
    let node = node.unwrap_or_else(|| panic!("{source}: {faults:?}"));
    let program = Program::compile(&graph, &[node]);
    let mut out = [0.0];
    program.evaluate(&mut program.registers(&[7.0]), 2.0, &[3.0, -5.0], &[], &mut out);
    out[0]
}

/// Code and bytes of the one fault.
fn fault(source: &str) -> (&'static str, usize, usize) {
    let mut faults = Faults::new();
    let node = lower(&text(source), &mut Graph::default(), &Names, &mut faults);
    assert!(node.is_none(), "{source}");
    let sorted = faults.sorted();
    assert_eq!(sorted.len(), 1, "{source}: {sorted:?}");
    assert_eq!(sorted[0].severity, Severity::Error);
    (sorted[0].code, sorted[0].at.start - 100, sorted[0].at.end - 100)
}

#[test]
fn precedence_is_the_usual_one() {
    for (source, expected) in [
        ("-2^2", -4.0),
        ("2^-2", 0.25),
        ("2^3^2", 512.0),
        ("2^-3*4", 0.5),
        ("--2", 2.0),
        ("2--2", 4.0),
        ("1e-3", 0.001),
        ("1.", 1.0),
        ("6/2/3", 1.0),
        ("7-2-1", 4.0),
        ("5%3", 2.0),
        ("2*(3+4)", 14.0),
        ("-x^2", -9.0),
        ("x*y + a", -8.0),
        ("max(1, x, 2)", 3.0),
        ("min(1, x, y)", -5.0),
        ("abs(y)", 5.0),
        ("signum(y)", -1.0),
        ("signum(0*x)", 0.0),
        ("x^0.5*x^0.5", 1.7320508075688772 * 1.7320508075688772),
        ("atan2(0, -1)", std::f64::consts::PI),
        ("ln(e)", 1.0),
        ("((x))", 3.0),
        ("sqrt ( x + 6 )", 3.0),
    ] {
        assert_eq!(value(source), expected, "{source}");
    }
}

#[test]
fn faults_point_at_the_smallest_wrong_text() {
    for (source, expected) in [
        ("x + z", ("unknown-name", 4, 5)),
        ("x + 2y", ("missing-operator", 4, 6)),
        ("2(x)", ("missing-operator", 0, 2)),
        ("x < 2", ("foreign-character", 2, 3)),
        (".5*x", ("foreign-character", 0, 1)),
        ("x + (y", ("parenthesis", 4, 5)),
        ("x + y)", ("parenthesis", 5, 6)),
        ("x + 1e400", ("number-too-large", 4, 9)),
        ("x + 1e-400", ("number-too-small", 4, 10)),
        ("x + log(y)", ("unknown-function", 4, 7)),
        ("1 + atan2(x)", ("wrong-arguments", 4, 12)),
        ("sin(x, y)*2", ("wrong-arguments", 0, 9)),
        ("x +", ("syntax", 2, 3)),
        ("   ", ("empty-expression", 0, 3)),
        ("x \u{3b1}", ("foreign-character", 2, 4)),
    ] {
        assert_eq!(fault(source), expected, "{source}");
    }
}

#[test]
fn every_part_knows_its_text() {
    let source = "a*(x + y)/max(x, (y - 1)*2) - sin(-(x))";
    let mut graph = Graph::default();
    let node = lower(&text(source), &mut graph, &Names, &mut Faults::new()).unwrap();
    let mut parts: Vec<&str> = graph
        .reachable(&[node])
        .iter()
        .filter_map(|id| graph.origin(*id))
        .map(|(_, text)| text.as_str())
        .collect();
    parts.sort_unstable();
    for part in ["a*(x + y)", "x + y", "max(x, (y - 1)*2)", "(y - 1)*2", "y - 1", "sin(-(x))", "-(x)", source]
    {
        assert!(parts.contains(&part), "{part} is not among {parts:?}");
    }
}

#[test]
fn huge_expressions_end_soon() {
    let deep = format!("{}x{}", "(".repeat(30_000), ")".repeat(30_000));
    assert_eq!(value(&deep), 3.0);
    let long = format!("x{}", " + x".repeat(15_000));
    assert_eq!(value(&long), 3.0 * 15_001.0);
    let minus = format!("{}x", "-".repeat(60_000));
    assert_eq!(value(&minus), 3.0);
    assert_eq!(fault(&"(".repeat(1_000_000)).0, "long-expression");
}
