//! Why a rate is not finite: the first part of it whose value is not, while everything it is computed from is.

use super::{Binary, Graph, Node, NodeId, Unary, apply, apply_unary, pick, sign};
use crate::arithmetic::elementary::power;
use crate::fault::Span;

/// Why an output is not finite.
#[derive(Clone, Debug, PartialEq)]
pub struct NotFinite {
    /// Index of the output.
    pub output: usize,
    /// Where the part stands in the study.
    pub at: Span,
    /// Its text.
    pub text: String,
    /// Why: `division by zero`.
    pub why: &'static str,
}

/// Finds the first part of the outputs that is not finite at `(t, y)`, in the order of evaluation; `None` where
/// all are finite, or the cause is a state that is not.
pub fn explain_not_finite(
    graph: &Graph,
    outputs: &[NodeId],
    parameters: &[f64],
    t: f64,
    y: &[f64],
    modes: &[i8],
) -> Option<NotFinite> {
    let mut values = vec![0.0; graph.len()];
    for (i, output) in outputs.iter().enumerate() {
        let needed = graph.reachable(&[*output]);
        for id in &needed {
            let of = |id: NodeId, values: &[f64]| values[id.0 as usize];
            let mode = |switch: u32| modes.get(switch as usize).copied().unwrap_or(0);
            let value = match graph.node(*id) {
                Node::Constant(bits) => f64::from_bits(bits),
                Node::Time => t,
                Node::State(i) => y[i as usize],
                Node::Parameter(i) => parameters[i as usize],
                Node::Unary(function, a) => apply_unary(function, of(a, &values)),
                Node::Binary(operation, a, b) => apply(operation, of(a, &values), of(b, &values)),
                Node::Power(a, n) => power(of(a, &values), n),
                Node::Sign { on, switch } => sign(of(on, &values), mode(switch)),
                Node::Pick { on, positive, negative, switch } => {
                    pick(of(on, &values), of(positive, &values), of(negative, &values), mode(switch))
                }
            };
            values[id.0 as usize] = value;
            if value.is_finite() {
                continue;
            }
            let inputs: Vec<f64> =
                graph.node(*id).inputs().into_iter().flatten().map(|input| of(input, &values)).collect();
            if inputs.iter().any(|input| !input.is_finite()) {
                continue;
            }
            let why = reason(graph.node(*id), &inputs);
            // The node itself, or the nearest one above it that a text made.
            let origin = needed.range(id..).find_map(|id| graph.origin(*id));
            let (at, text) = origin.cloned().unwrap_or_default();
            return Some(NotFinite { output: i, at, text, why });
        }
    }
    None
}

fn reason(node: Node, inputs: &[f64]) -> &'static str {
    let first = inputs.first().copied().unwrap_or(0.0);
    let second = inputs.get(1).copied().unwrap_or(0.0);
    match node {
        Node::State(_) => "a state that is not finite",
        Node::Binary(Binary::Divide | Binary::Remainder, ..) if second == 0.0 => "division by zero",
        Node::Binary(Binary::Power, ..) if first == 0.0 && second < 0.0 => "division by zero",
        Node::Binary(Binary::Power, ..) if first < 0.0 && second.fract() != 0.0 => {
            "a power of a negative number with a broken exponent"
        }
        Node::Unary(Unary::Sqrt, _) => "the square root of a negative number",
        Node::Unary(Unary::Ln | Unary::Log10, _) if first == 0.0 => "the logarithm of zero",
        Node::Unary(Unary::Ln | Unary::Log10, _) => "the logarithm of a negative number",
        Node::Unary(Unary::Asin | Unary::Acos, _) => "an inverse sine or cosine of a number beyond -1 to 1",
        Node::Unary(Unary::Acosh, _) => "an inverse hyperbolic cosine of a number below 1",
        Node::Unary(Unary::Atanh, _) => "an inverse hyperbolic tangent of a number not between -1 and 1",
        _ => "overflow",
    }
}
