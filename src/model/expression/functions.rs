//! The functions of the expression language.

use crate::fault::Span;
use crate::model::graph::{Binary, Graph, NodeId, Unary};

/// Name, smallest and largest number of arguments.
pub const FUNCTIONS: [(&str, usize, usize); 25] = [
    ("sqrt", 1, 1),
    ("cbrt", 1, 1),
    ("exp", 1, 1),
    ("ln", 1, 1),
    ("log10", 1, 1),
    ("abs", 1, 1),
    ("signum", 1, 1),
    ("sin", 1, 1),
    ("cos", 1, 1),
    ("tan", 1, 1),
    ("asin", 1, 1),
    ("acos", 1, 1),
    ("atan", 1, 1),
    ("atan2", 2, 2),
    ("sinh", 1, 1),
    ("cosh", 1, 1),
    ("tanh", 1, 1),
    ("asinh", 1, 1),
    ("acosh", 1, 1),
    ("atanh", 1, 1),
    ("floor", 1, 1),
    ("ceil", 1, 1),
    ("round", 1, 1),
    ("max", 1, 64),
    ("min", 1, 64),
];

/// Whether a name is that of a function.
pub fn is_function(name: &str) -> bool {
    FUNCTIONS.iter().any(|(function, ..)| *function == name)
}

/// The node of a function of these arguments, whose number has been checked.
pub(super) fn call(graph: &mut Graph, name: &str, arguments: &[NodeId], at: Span) -> Option<NodeId> {
    let first = *arguments.first()?;
    let unary = match name {
        "sqrt" => Unary::Sqrt,
        "cbrt" => Unary::Cbrt,
        "exp" => Unary::Exp,
        "ln" => Unary::Ln,
        "log10" => Unary::Log10,
        "sin" => Unary::Sin,
        "cos" => Unary::Cos,
        "tan" => Unary::Tan,
        "asin" => Unary::Asin,
        "acos" => Unary::Acos,
        "atan" => Unary::Atan,
        "sinh" => Unary::Sinh,
        "cosh" => Unary::Cosh,
        "tanh" => Unary::Tanh,
        "asinh" => Unary::Asinh,
        "acosh" => Unary::Acosh,
        "atanh" => Unary::Atanh,
        "floor" => Unary::Floor,
        "ceil" => Unary::Ceil,
        "round" => Unary::Round,
        "abs" => {
            let minus = graph.unary(Unary::Negate, first);
            return Some(graph.pick(first, first, minus, at));
        }
        "signum" => return Some(graph.sign(first, at)),
        "atan2" => return Some(graph.binary(Binary::Atan2, first, *arguments.get(1)?)),
        "max" | "min" => {
            let mut result = first;
            for other in &arguments[1..] {
                let on = graph.binary(Binary::Subtract, result, *other);
                result = if name == "max" {
                    graph.pick(on, result, *other, at)
                } else {
                    graph.pick(on, *other, result, at)
                };
            }
            return Some(result);
        }
        _ => return None,
    };
    Some(graph.unary(unary, first))
}
