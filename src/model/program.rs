//! A graph compiled to a list of instructions over registers.
//!
//! What no output needs is dropped, shared parts are computed once, registers are reused when their last reader
//! is done. The bits are those of evaluating the graph node by node.

use std::collections::{BTreeMap, BTreeSet};

use super::graph::{Binary, Graph, Node, NodeId, Unary, apply, apply_unary, pick, sign};
use crate::arithmetic::elementary::power;

/// What an instruction computes, from registers `a`, `b` and `c`.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Operation {
    Add,
    Subtract,
    Multiply,
    Divide,
    /// `a * b + c`, rounded twice.
    MultiplyAdd,
    /// `a * b - c`, rounded twice.
    MultiplySubtract,
    /// `c - a * b`, rounded twice.
    SubtractProduct,
    Negate,
    Sqrt,
    Unary(Unary),
    Binary(Binary),
    /// `a` to the power `b`, a whole number and no register.
    Power,
    /// The sign of `a`; `b` is the switch.
    Sign,
    /// `b` or `c` by the sign of `a`.
    Pick {
        switch: u32,
    },
}

/// One instruction: computes register `out`.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Instruction {
    operation: Operation,
    out: u32,
    a: u32,
    b: u32,
    c: u32,
}

/// Values of some nodes as a function of time, states and parameters.
#[derive(Clone, Debug, PartialEq)]
pub struct Program {
    instructions: Vec<Instruction>,
    constants: Vec<(u32, f64)>,
    parameters: Vec<(u32, u32)>,
    time: Option<u32>,
    states: Vec<(u32, u32)>,
    outputs: Vec<u32>,
    registers: usize,
}

/// The registers of a program, parameters and constants loaded.
#[derive(Clone, Debug, PartialEq)]
pub struct Registers(Vec<f64>);

impl Program {
    /// Compiles `outputs` of a graph.
    pub fn compile(graph: &Graph, outputs: &[NodeId]) -> Program {
        let needed = graph.reachable(outputs);
        let mut readers: BTreeMap<NodeId, usize> = BTreeMap::new();
        for id in &needed {
            for input in graph.node(*id).inputs().into_iter().flatten() {
                *readers.entry(input).or_default() += 1;
            }
        }
        // An output is read once more, at the end, so that its register is never reused.
        for id in outputs {
            *readers.entry(*id).or_default() += 1;
        }
        let mut program = Program {
            instructions: Vec::new(),
            constants: Vec::new(),
            parameters: Vec::new(),
            time: None,
            states: Vec::new(),
            outputs: Vec::new(),
            registers: 0,
        };
        let products = products(graph, &needed, &readers);
        let mut place: BTreeMap<NodeId, u32> = BTreeMap::new();
        let mut free: Vec<u32> = Vec::new();
        // Leaves first: their registers hold throughout.
        for id in &needed {
            let node = graph.node(*id);
            if node.inputs()[0].is_none() {
                let register = program.fresh();
                place.insert(*id, register);
                match node {
                    Node::Constant(bits) => program.constants.push((register, f64::from_bits(bits))),
                    Node::Time => program.time = Some(register),
                    Node::State(i) => program.states.push((register, i)),
                    Node::Parameter(i) => program.parameters.push((register, i)),
                    _ => {}
                }
            }
        }
        for id in &needed {
            let node = graph.node(*id);
            if node.inputs()[0].is_none() || products.contains(id) {
                continue;
            }
            let (operation, reads) = operation(graph, node, &products);
            let at = |id: &NodeId| place[id];
            let register = |k: usize| reads.get(k).map_or(0, at);
            let (a, b, c) = (register(0), register(1), register(2));
            let (b, c) = match node {
                Node::Power(_, n) => (n, 0),
                Node::Sign { switch, .. } => (switch, 0),
                _ => (b, c),
            };
            // The output register is never one that the same instruction reads.
            let out = free.pop().unwrap_or_else(|| program.fresh());
            program.instructions.push(Instruction { operation, out, a, b, c });
            place.insert(*id, out);
            for input in reads {
                let left = readers.entry(input).or_default();
                *left -= 1;
                if *left == 0 && graph.node(input).inputs()[0].is_some() {
                    free.push(place[&input]);
                }
            }
        }
        program.outputs = outputs.iter().map(|id| place[id]).collect();
        program
    }

    fn fresh(&mut self) -> u32 {
        self.registers += 1;
        #[expect(
            clippy::cast_possible_truncation,
            reason = "the size of a study limits the number of registers"
        )]
        let register = (self.registers - 1) as u32;
        register
    }

    /// Registers with constants and these parameters loaded.
    pub fn registers(&self, parameters: &[f64]) -> Registers {
        let mut registers = vec![0.0; self.registers];
        for (register, value) in &self.constants {
            registers[*register as usize] = *value;
        }
        for (register, i) in &self.parameters {
            registers[*register as usize] = parameters[*i as usize];
        }
        Registers(registers)
    }

    /// Writes the outputs at `(t, y)` to `out`. `modes` holds the branch of every switch of the graph, 0 where it
    /// is free; missing ones are free.
    pub fn evaluate(&self, registers: &mut Registers, t: f64, y: &[f64], modes: &[i8], out: &mut [f64]) {
        let r = registers.0.as_mut_slice();
        if let Some(register) = self.time {
            r[register as usize] = t;
        }
        for (register, i) in &self.states {
            r[*register as usize] = y[*i as usize];
        }
        let mode = |switch: u32| modes.get(switch as usize).copied().unwrap_or(0);
        for Instruction { operation, out, a, b, c } in &self.instructions {
            let (a, b, c) = (*a as usize, *b as usize, *c as usize);
            r[*out as usize] = match *operation {
                Operation::Add => r[a] + r[b],
                Operation::Subtract => r[a] - r[b],
                Operation::Multiply => r[a] * r[b],
                Operation::Divide => r[a] / r[b],
                Operation::MultiplyAdd => r[a] * r[b] + r[c],
                Operation::MultiplySubtract => r[a] * r[b] - r[c],
                Operation::SubtractProduct => r[c] - r[a] * r[b],
                Operation::Negate => -r[a],
                Operation::Sqrt => r[a].sqrt(),
                Operation::Unary(function) => apply_unary(function, r[a]),
                Operation::Binary(operation) => apply(operation, r[a], r[b]),
                #[expect(clippy::cast_possible_truncation, reason = "it came from a u32")]
                Operation::Power => power(r[a], b as u32),
                #[expect(clippy::cast_possible_truncation, reason = "it came from a u32")]
                Operation::Sign => sign(r[a], mode(b as u32)),
                Operation::Pick { switch } => pick(r[a], r[b], r[c], mode(switch)),
            };
        }
        for (value, register) in out.iter_mut().zip(&self.outputs) {
            *value = r[*register as usize];
        }
    }
}

/// The products that are computed within the one sum or difference that reads them.
fn products(graph: &Graph, needed: &BTreeSet<NodeId>, readers: &BTreeMap<NodeId, usize>) -> BTreeSet<NodeId> {
    let mut within = BTreeSet::new();
    for id in needed {
        if let Node::Binary(Binary::Add | Binary::Subtract, a, b) = graph.node(*id) {
            let alone = |id: &NodeId| {
                matches!(graph.node(*id), Node::Binary(Binary::Multiply, ..)) && readers.get(id) == Some(&1)
            };
            // One product a sum; a square of the same node twice has two readers.
            within.extend([a, b].into_iter().find(alone));
        }
    }
    within
}

/// The operation of a node, and the nodes that it reads, products within it resolved.
fn operation(graph: &Graph, node: Node, products: &BTreeSet<NodeId>) -> (Operation, Vec<NodeId>) {
    let factors = |id: NodeId| match graph.node(id) {
        Node::Binary(Binary::Multiply, x, y) if products.contains(&id) => Some((x, y)),
        _ => None,
    };
    if let Node::Binary(kind @ (Binary::Add | Binary::Subtract), a, b) = node {
        let sum = kind == Binary::Add;
        if let Some((x, y)) = factors(a) {
            let operation = if sum { Operation::MultiplyAdd } else { Operation::MultiplySubtract };
            return (operation, vec![x, y, b]);
        }
        if let Some((x, y)) = factors(b) {
            let operation = if sum { Operation::MultiplyAdd } else { Operation::SubtractProduct };
            return (operation, vec![x, y, a]);
        }
    }
    let operation = match node {
        Node::Unary(Unary::Negate, _) => Operation::Negate,
        Node::Unary(Unary::Sqrt, _) => Operation::Sqrt,
        Node::Unary(function, _) => Operation::Unary(function),
        Node::Binary(Binary::Add, ..) => Operation::Add,
        Node::Binary(Binary::Subtract, ..) => Operation::Subtract,
        Node::Binary(Binary::Multiply, ..) => Operation::Multiply,
        Node::Binary(Binary::Divide, ..) => Operation::Divide,
        Node::Binary(operation, ..) => Operation::Binary(operation),
        Node::Power(..) => Operation::Power,
        Node::Pick { switch, .. } => Operation::Pick { switch },
        // Leaves are no operations and are not asked for.
        Node::Sign { .. } | Node::Constant(_) | Node::Time | Node::State(_) | Node::Parameter(_) => {
            Operation::Sign
        }
    };
    (operation, node.inputs().into_iter().flatten().collect())
}
