//! Derivatives against difference quotients, programs against evaluation node by node.

use super::{Binary, Graph, NodeId, Unary, Wrt};
use crate::fault::Span;
use crate::model::program::Program;

/// Random numbers by counting, for the examples.
struct Counter(u64);

impl Counter {
    fn below(&mut self, count: u64) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        (z ^ (z >> 31)) % count
    }
}

/// A random smooth expression of two states, a parameter and time.
fn random(graph: &mut Graph, counter: &mut Counter, depth: u32) -> NodeId {
    if depth == 0 {
        return match counter.below(5) {
            0 => graph.state(0),
            1 => graph.state(1),
            2 => graph.parameter(0),
            3 => graph.time(),
            _ => graph.constant(1.5),
        };
    }
    let a = random(graph, counter, depth - 1);
    let b = random(graph, counter, depth - 1);
    match counter.below(12) {
        0 => graph.binary(Binary::Add, a, b),
        1 => graph.binary(Binary::Subtract, a, b),
        2 | 3 => graph.binary(Binary::Multiply, a, b),
        4 => {
            // A denominator away from zero.
            let two = graph.constant(2.0);
            let square = graph.binary(Binary::Power, b, two);
            let below = graph.binary(Binary::Add, square, two);
            graph.binary(Binary::Divide, a, below)
        }
        5 => graph.unary(Unary::Sin, a),
        6 => graph.unary(Unary::Cos, a),
        7 => graph.unary(Unary::Tanh, a),
        8 => graph.unary(Unary::Atan, a),
        9 => {
            let minus = graph.unary(Unary::Negate, a);
            graph.pick(a, a, minus, Span::default())
        }
        10 => graph.binary(Binary::Atan2, a, b),
        _ => {
            let three = graph.constant(3.0);
            let tanh = graph.unary(Unary::Tanh, a);
            graph.binary(Binary::Power, tanh, three)
        }
    }
}

fn value(graph: &Graph, node: NodeId, t: f64, y: [f64; 2]) -> f64 {
    let program = Program::compile(graph, &[node]);
    let mut out = [0.0];
    program.evaluate(&mut program.registers(&[0.7]), t, &y, &[], &mut out);
    out[0]
}

#[test]
fn derivatives_match_difference_quotients() {
    let mut counter = Counter(1);
    let mut compared = 0;
    for _ in 0..400 {
        let mut graph = Graph::default();
        let node = random(&mut graph, &mut counter, 3);
        let (t, y) = (0.31, [0.83, -0.57]);
        for wrt in [Wrt::Time, Wrt::State(0), Wrt::State(1)] {
            let exact = graph.derivative(node, wrt);
            let exact = value(&graph, exact, t, y);
            let side = |h: f64| match wrt {
                Wrt::Time => value(&graph, node, t + h, y),
                Wrt::State(0) => value(&graph, node, t, [y[0] + h, y[1]]),
                Wrt::State(_) => value(&graph, node, t, [y[0], y[1] + h]),
            };
            // The error of a central difference is about h^2 and rounding over h.
            let difference = (side(1e-5) - side(-1e-5)) / 2e-5;
            let wider = (side(2e-5) - side(-2e-5)) / 4e-5;
            if (difference - wider).abs() > 1e-6 * (1.0 + exact.abs()) {
                // A kink lies between the points.
                continue;
            }
            assert!((exact - difference).abs() <= 1e-6 * (1.0 + exact.abs()), "{exact} {difference}");
            compared += 1;
        }
    }
    assert!(compared > 1_000, "{compared}");
}

#[test]
fn a_program_of_many_outputs_gives_the_bits_of_programs_of_one() {
    let mut counter = Counter(2);
    let mut graph = Graph::default();
    let nodes: Vec<NodeId> = (0..60).map(|_| random(&mut graph, &mut counter, 4)).collect();
    let program = Program::compile(&graph, &nodes);
    let mut registers = program.registers(&[0.7]);
    let mut out = vec![0.0; nodes.len()];
    for k in 0..10 {
        let (t, y) = (0.1 * f64::from(k), [0.83 - 0.2 * f64::from(k), -0.57]);
        program.evaluate(&mut registers, t, &y, &[], &mut out);
        for (node, out) in nodes.iter().zip(&out) {
            assert_eq!(value(&graph, *node, t, y).to_bits(), out.to_bits());
        }
    }
}

#[test]
fn a_locked_switch_keeps_its_branch() {
    let mut graph = Graph::default();
    let x = graph.state(0);
    let minus = graph.unary(Unary::Negate, x);
    let abs = graph.pick(x, x, minus, Span::default());
    let sign = graph.sign(x, Span::default());
    assert_eq!(graph.switches().len(), 1);
    let program = Program::compile(&graph, &[abs, sign]);
    let mut registers = program.registers(&[]);
    let mut at = |x: f64, modes: &[i8]| {
        let mut out = [0.0; 2];
        program.evaluate(&mut registers, 0.0, &[x], modes, &mut out);
        out
    };
    assert_eq!(at(-2.0, &[]), [2.0, -1.0]);
    assert_eq!(at(-2.0, &[1]), [-2.0, 1.0]);
    assert_eq!(at(3.0, &[-1]), [-3.0, -1.0]);
    assert_eq!(at(0.0, &[0]), [0.0, 0.0]);
    assert!(at(f64::NAN, &[0])[0].is_nan());
}

#[test]
fn powers_fold_to_the_bits_that_run_time_gives() {
    let mut graph = Graph::default();
    let (x, base, n) = (graph.state(0), graph.constant(1.1), graph.constant(13.0));
    let live = graph.binary(Binary::Power, x, n);
    let folded = graph.binary(Binary::Power, base, n);
    assert_eq!(
        value(&graph, live, 0.0, [1.1, 0.0]).to_bits(),
        graph.constant_value(folded).unwrap().to_bits()
    );
}
