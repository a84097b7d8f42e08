//! From a model block to a checked model: symbols, one graph of all expressions, compiled programs.
//!
//! Enters: a [`ModelBlock`](crate::study::block::model::ModelBlock). Leaves: a [`Model`]. This stage knows
//! nothing of schemes and runs.

pub mod graph;
pub mod program;

use crate::study::Text;
use crate::study::block::model::{ParameterEntry, StateEntry};
use graph::{Graph, NodeId};

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
