//! The rates of a run: a compiled program with its parameters and the branch of every switch.

use crate::model::graph::{Graph, NodeId};
use crate::model::program::{Program, Registers};
use crate::scheme::rates::Rates;

/// A program with its registers: values of some nodes at `(t, y)`.
#[derive(Debug)]
pub struct Values {
    program: Program,
    registers: Registers,
    /// Number of outputs.
    pub outputs: usize,
}

impl Values {
    /// Compiles `nodes` of the graph for these parameters.
    pub fn new(graph: &Graph, nodes: &[NodeId], parameters: &[f64]) -> Self {
        let program = Program::compile(graph, nodes);
        let registers = program.registers(parameters);
        Values { program, registers, outputs: nodes.len() }
    }
    /// Writes the values to `out`, one a node.
    pub fn at(&mut self, t: f64, y: &[f64], modes: &[i8], out: &mut [f64]) {
        self.program.evaluate(&mut self.registers, t, y, modes, out);
    }
}

/// The rates of a run under the present modes.
#[derive(Debug)]
pub struct System {
    values: Values,
    /// The branch of every switch of the graph: +1 or -1 for those that the run watches, else 0.
    pub modes: Vec<i8>,
    /// Evaluations of all the rates so far.
    pub evaluations: u64,
}

impl System {
    /// The rates of the graph, all switches free.
    pub fn new(graph: &Graph, rates: &[NodeId], parameters: &[f64]) -> Self {
        System {
            values: Values::new(graph, rates, parameters),
            modes: vec![0; graph.switches().len()],
            evaluations: 0,
        }
    }
}

impl Rates for System {
    fn states(&self) -> usize {
        self.values.outputs
    }
    fn rates(&mut self, t: f64, y: &[f64], out: &mut [f64]) {
        self.evaluations += 1;
        self.values.at(t, y, &self.modes, out);
    }
}
