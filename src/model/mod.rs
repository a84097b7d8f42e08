//! From a model block to a checked model: symbols, one graph of all expressions, compiled programs.
//!
//! Enters: a [`ModelBlock`](crate::study::block::model::ModelBlock). Leaves: a [`Model`]. This stage knows
//! nothing of schemes and runs.

mod check;
pub mod expression;
pub mod graph;
pub mod program;

pub use check::check;

use crate::fault::Faults;
use crate::study::Text;
use crate::study::block::model::{ParameterEntry, StateEntry};
use check::NameScope;
pub(crate) use check::Symbols;
use graph::{Graph, NodeId, Wrt};

/// A checked model.
#[derive(Clone, Debug)]
pub struct Model {
    /// Its name.
    pub name: Text,
    /// `about`
    pub about: Option<Text>,
    /// The parameters, in the order of the study. Parameter `i` is node `Parameter(i)` of the graph.
    pub parameters: Vec<ParameterEntry>,
    /// The states, in the order of the study. State `i` is node `State(i)` of the graph.
    pub states: Vec<State>,
    /// The derived quantities, in the order of the study.
    pub derived: Vec<Expression>,
    /// The invariants, in the order of the study.
    pub invariants: Vec<Expression>,
    /// All expressions, common parts shared.
    pub graph: Graph,
    pub(crate) symbols: Symbols,
}

/// Which names an expression may use.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Names {
    /// States, derived quantities, parameters and `t`.
    All,
    /// Parameters.
    Parameters,
    /// Parameters and `t`.
    TimeAndParameters,
}

impl Model {
    /// Adds an expression of this model's names to `graph`, which is the model's or a copy that grows. `None`
    /// with faults where it is wrong.
    pub fn express(
        &self,
        graph: &mut Graph,
        text: &Text,
        names: Names,
        faults: &mut Faults,
    ) -> Option<NodeId> {
        expression::lower(text, graph, &NameScope { symbols: &self.symbols, names }, faults)
    }

    /// The unit of an expression that is the bare name of a state, parameter or derived quantity, as text.
    pub fn unit_of(&self, expression: &str) -> Option<String> {
        let name = expression.trim();
        let parameter = self.parameters.iter().find(|entry| entry.name.value == name);
        let state = self.states.iter().find(|state| state.entry.name.value == name);
        let derived = self.derived.iter().find(|derived| derived.name.value == name);
        parameter
            .and_then(|entry| entry.value.unit.clone())
            .or_else(|| state.and_then(|state| state.unit.clone()))
            .or_else(|| derived.and_then(|derived| derived.unit.clone()))
    }

    /// The rate of every state.
    pub fn rates(&self) -> Vec<NodeId> {
        self.states.iter().map(|state| state.rate).collect()
    }

    /// The entries of the Jacobian that are not zero for every state: row, column, node added to `graph`.
    pub fn jacobian(&self, graph: &mut Graph) -> Vec<(usize, usize, NodeId)> {
        let mut entries = Vec::new();
        for (row, state) in self.states.iter().enumerate() {
            let (_, columns) = graph.depends(state.rate);
            for column in columns {
                let node = graph.derivative(state.rate, Wrt::State(column));
                if graph.constant_value(node) != Some(0.0) {
                    entries.push((row, column, node));
                }
            }
        }
        entries
    }
}

/// A state of a model.
#[derive(Clone, Debug)]
pub struct State {
    /// As written.
    pub entry: StateEntry,
    /// Its unit as text: of the start value, or the entry `unit`.
    pub unit: Option<String>,
    /// The start value, an expression of parameters.
    pub start: NodeId,
    /// Its rate as written.
    pub rate_text: Text,
    /// Its rate.
    pub rate: NodeId,
    /// Its closed form in `t` and parameters, as written and as a node, where the study gives one.
    pub exact: Option<(Text, NodeId)>,
}

/// A named expression of a model.
#[derive(Clone, Debug)]
pub struct Expression {
    /// Its name.
    pub name: Text,
    /// As written.
    pub text: Text,
    /// Its unit as text, where the study gives one.
    pub unit: Option<String>,
    /// `about`
    pub about: Option<Text>,
    /// The expression.
    pub node: NodeId,
}
