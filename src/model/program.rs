//! A graph compiled to a list of instructions over registers.
//!
//! What no output needs is dropped, shared parts are computed once, registers are reused when their last reader
//! is done. The bits are those of evaluating the graph node by node.

use std::collections::BTreeMap;

use super::graph::{Binary, Graph, Node, NodeId, Unary, apply, apply_unary, pick, sign};
use crate::arithmetic::elementary::power;

/// One instruction: computes a register from registers.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Instruction {
    Unary(Unary, u32, u32),
    Binary(Binary, u32, u32, u32),
    Power(u32, u32, u32),
    Sign { out: u32, on: u32, switch: u32 },
    Pick { out: u32, on: u32, positive: u32, negative: u32, switch: u32 },
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
            if node.inputs()[0].is_none() {
                continue;
            }
            let at = |id: NodeId| place[&id];
            let reads: Vec<u32> = node.inputs().into_iter().flatten().map(at).collect();
            // The output register is never one that the same instruction reads.
            let out = free.pop().unwrap_or_else(|| program.fresh());
            program.instructions.push(match node {
                Node::Unary(function, _) => Instruction::Unary(function, out, reads[0]),
                Node::Binary(operation, ..) => Instruction::Binary(operation, out, reads[0], reads[1]),
                Node::Power(_, n) => Instruction::Power(out, reads[0], n),
                Node::Sign { switch, .. } => Instruction::Sign { out, on: reads[0], switch },
                Node::Pick { switch, .. } => {
                    Instruction::Pick { out, on: reads[0], positive: reads[1], negative: reads[2], switch }
                }
                Node::Constant(_) | Node::Time | Node::State(_) | Node::Parameter(_) => continue,
            });
            place.insert(*id, out);
            for input in node.inputs().into_iter().flatten() {
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
        for instruction in &self.instructions {
            match *instruction {
                Instruction::Unary(function, out, a) => {
                    r[out as usize] = apply_unary(function, r[a as usize]);
                }
                Instruction::Binary(operation, out, a, b) => {
                    r[out as usize] = apply(operation, r[a as usize], r[b as usize]);
                }
                Instruction::Power(out, a, n) => r[out as usize] = power(r[a as usize], n),
                Instruction::Sign { out, on, switch } => r[out as usize] = sign(r[on as usize], mode(switch)),
                Instruction::Pick { out, on, positive, negative, switch } => {
                    r[out as usize] =
                        pick(r[on as usize], r[positive as usize], r[negative as usize], mode(switch));
                }
            }
        }
        for (value, register) in out.iter_mut().zip(&self.outputs) {
            *value = r[*register as usize];
        }
    }
}
