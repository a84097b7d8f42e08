//! The graph of all expressions of a model, common parts shared.
//!
//! Only changes that keep every bit are made while it is built: equal parts are shared, `+` and `*` are put into
//! a canonical order of their operands, constants are folded by the functions that run time uses, where the
//! result is finite. Nothing is reassociated.

mod derivative;
mod explain;
mod value;

pub use derivative::Wrt;
pub use explain::{NotFinite, explain_not_finite};
pub use value::{apply, apply_unary, pick, sign};

use std::collections::{BTreeMap, BTreeSet};

use crate::arithmetic::elementary::power;
use crate::fault::Span;

/// Longest text kept of the origin of a node.
const LONGEST_ORIGIN: usize = 120;

/// A node of a [`Graph`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct NodeId(pub u32);

/// Functions of one argument.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
#[expect(missing_docs, reason = "the functions by their usual names")]
pub enum Unary {
    Negate,
    Sqrt,
    Cbrt,
    Exp,
    Ln,
    Log10,
    Sin,
    Cos,
    Tan,
    Asin,
    Acos,
    Atan,
    Sinh,
    Cosh,
    Tanh,
    Asinh,
    Acosh,
    Atanh,
    Floor,
    Ceil,
    Round,
}

/// Functions of two arguments.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
#[expect(missing_docs, reason = "the operations by their usual names")]
pub enum Binary {
    Add,
    Subtract,
    Multiply,
    Divide,
    Remainder,
    Power,
    Atan2,
}

/// What a node computes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Node {
    /// A constant, by its bits.
    Constant(u64),
    /// The time.
    Time,
    /// A state.
    State(u32),
    /// A parameter.
    Parameter(u32),
    /// A function of one argument.
    Unary(Unary, NodeId),
    /// A function of two arguments.
    Binary(Binary, NodeId, NodeId),
    /// A power with a whole exponent from 2 to 64, by the multiplication chain of
    /// [`power`].
    Power(NodeId, u32),
    /// -1, 0 or 1 by the sign of `on`; the branch of its switch where that is locked.
    Sign {
        /// Whose sign.
        on: NodeId,
        /// The switch.
        switch: u32,
    },
    /// `positive` where `on >= 0`, `negative` where it is below; the branch of its switch where that is locked.
    Pick {
        /// What decides.
        on: NodeId,
        /// One branch.
        positive: NodeId,
        /// The other.
        negative: NodeId,
        /// The switch.
        switch: u32,
    },
}

impl Node {
    /// The nodes it is computed from.
    pub fn inputs(self) -> [Option<NodeId>; 3] {
        match self {
            Node::Constant(_) | Node::Time | Node::State(_) | Node::Parameter(_) => [None; 3],
            Node::Unary(_, a) | Node::Power(a, _) | Node::Sign { on: a, .. } => [Some(a), None, None],
            Node::Binary(_, a, b) => [Some(a), Some(b), None],
            Node::Pick { on, positive, negative, .. } => [Some(on), Some(positive), Some(negative)],
        }
    }
}

/// A place where the rates may bend or jump: they do so where `on` is zero.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Switch {
    /// What changes sign.
    pub on: NodeId,
    /// The text that made it.
    pub at: Span,
}

/// Expressions with their common parts shared.
#[derive(Clone, Debug, Default)]
pub struct Graph {
    nodes: Vec<Node>,
    index: BTreeMap<Node, NodeId>,
    /// The text that first made a node.
    origins: Vec<Option<(Span, String)>>,
    switches: Vec<Switch>,
}

impl Graph {
    /// The node of that number.
    pub fn node(&self, id: NodeId) -> Node {
        self.nodes[id.0 as usize]
    }
    /// Number of nodes.
    pub fn len(&self) -> usize {
        self.nodes.len()
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.nodes.is_empty()
    }
    /// The switches, in the order in which they were made.
    pub fn switches(&self) -> &[Switch] {
        &self.switches
    }
    /// The text that first made a node, with its place.
    pub fn origin(&self, id: NodeId) -> Option<&(Span, String)> {
        self.origins[id.0 as usize].as_ref()
    }
    /// Says which text made a node; the first says it.
    pub fn set_origin(&mut self, id: NodeId, at: Span, text: &str) {
        let origin = &mut self.origins[id.0 as usize];
        if origin.is_none() {
            // Cut short: a long sum has as many parts as terms, and each of them is as long as the sum.
            let mut end = text.len().min(LONGEST_ORIGIN);
            while !text.is_char_boundary(end) {
                end -= 1;
            }
            let more = if end < text.len() { "..." } else { "" };
            *origin = Some((at, format!("{}{more}", &text[..end])));
        }
    }

    fn intern(&mut self, node: Node) -> NodeId {
        if let Some(id) = self.index.get(&node) {
            return *id;
        }
        #[expect(clippy::cast_possible_truncation, reason = "the size of a study limits the number of nodes")]
        let id = NodeId(self.nodes.len() as u32);
        self.nodes.push(node);
        self.origins.push(None);
        self.index.insert(node, id);
        id
    }

    /// The constant, where a node is one.
    pub fn constant_value(&self, id: NodeId) -> Option<f64> {
        match self.node(id) {
            Node::Constant(bits) => Some(f64::from_bits(bits)),
            _ => None,
        }
    }

    /// A constant.
    pub fn constant(&mut self, value: f64) -> NodeId {
        self.intern(Node::Constant(value.to_bits()))
    }
    /// The time.
    pub fn time(&mut self) -> NodeId {
        self.intern(Node::Time)
    }
    /// State `i`.
    #[expect(clippy::cast_possible_truncation, reason = "the size of a study limits the number of states")]
    pub fn state(&mut self, i: usize) -> NodeId {
        self.intern(Node::State(i as u32))
    }
    /// Parameter `i`.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "the size of a study limits the number of parameters"
    )]
    pub fn parameter(&mut self, i: usize) -> NodeId {
        self.intern(Node::Parameter(i as u32))
    }
    /// A function of one argument.
    pub fn unary(&mut self, function: Unary, a: NodeId) -> NodeId {
        if let Some(x) = self.constant_value(a) {
            let value = apply_unary(function, x);
            if value.is_finite() {
                return self.constant(value);
            }
        }
        self.intern(Node::Unary(function, a))
    }
    /// A function of two arguments.
    pub fn binary(&mut self, operation: Binary, a: NodeId, b: NodeId) -> NodeId {
        if operation == Binary::Power {
            return self.power(a, b);
        }
        if let (Some(x), Some(y)) = (self.constant_value(a), self.constant_value(b)) {
            let value = apply(operation, x, y);
            if value.is_finite() {
                return self.constant(value);
            }
        }
        match operation {
            Binary::Add | Binary::Multiply if b < a => self.intern(Node::Binary(operation, b, a)),
            _ => self.intern(Node::Binary(operation, a, b)),
        }
    }
    fn power(&mut self, a: NodeId, b: NodeId) -> NodeId {
        let exponent = self.constant_value(b);
        if let Some(exponent) = exponent
            && exponent.fract() == 0.0
            && (1.0..=64.0).contains(&exponent.abs())
        {
            #[expect(
                clippy::cast_possible_truncation,
                clippy::cast_sign_loss,
                reason = "whole, from 1 to 64"
            )]
            let n = exponent.abs() as u32;
            let folded = self.constant_value(a).map(|x| power(x, n)).filter(|value| value.is_finite());
            let whole = match folded {
                Some(value) => self.constant(value),
                None if n == 1 => a,
                None => self.intern(Node::Power(a, n)),
            };
            if exponent < 0.0 {
                let one = self.constant(1.0);
                return self.binary(Binary::Divide, one, whole);
            }
            return whole;
        }
        if let (Some(x), Some(y)) = (self.constant_value(a), exponent) {
            let value = apply(Binary::Power, x, y);
            if value.is_finite() {
                return self.constant(value);
            }
        }
        self.intern(Node::Binary(Binary::Power, a, b))
    }
    fn switch(&mut self, on: NodeId, at: Span) -> u32 {
        let place = self.switches.iter().position(|switch| switch.on == on).unwrap_or_else(|| {
            self.switches.push(Switch { on, at });
            self.switches.len() - 1
        });
        #[expect(
            clippy::cast_possible_truncation,
            reason = "the size of a study limits the number of switches"
        )]
        let place = place as u32;
        place
    }
    /// The sign of `on`.
    pub fn sign(&mut self, on: NodeId, at: Span) -> NodeId {
        let switch = self.switch(on, at);
        self.intern(Node::Sign { on, switch })
    }
    /// `positive` where `on >= 0`, else `negative`.
    pub fn pick(&mut self, on: NodeId, positive: NodeId, negative: NodeId, at: Span) -> NodeId {
        let switch = self.switch(on, at);
        self.intern(Node::Pick { on, positive, negative, switch })
    }

    /// All nodes that these are computed from, themselves included.
    pub fn reachable(&self, from: &[NodeId]) -> BTreeSet<NodeId> {
        let mut seen = BTreeSet::new();
        let mut open: Vec<NodeId> = from.to_vec();
        while let Some(id) = open.pop() {
            if seen.insert(id) {
                open.extend(self.node(id).inputs().into_iter().flatten());
            }
        }
        seen
    }

    /// Whether a node depends on time, and on which states.
    pub fn depends(&self, id: NodeId) -> (bool, Vec<usize>) {
        let mut time = false;
        let mut states = Vec::new();
        for node in self.reachable(&[id]) {
            match self.node(node) {
                Node::Time => time = true,
                Node::State(i) => states.push(i as usize),
                _ => {}
            }
        }
        states.sort_unstable();
        (time, states)
    }

    /// The functions that jump where no switch watches and that these nodes need: place and name. Those whose
    /// argument depends on neither time nor state do not count.
    pub fn jumps(&self, outputs: &[NodeId]) -> Vec<(Span, &'static str)> {
        let mut list = Vec::new();
        for id in self.reachable(outputs) {
            let name = match self.node(id) {
                Node::Unary(Unary::Floor, _) => "floor",
                Node::Unary(Unary::Ceil, _) => "ceil",
                Node::Unary(Unary::Round, _) => "round",
                Node::Binary(Binary::Remainder, ..) => "%",
                _ => continue,
            };
            let (time, states) = self.depends(id);
            if time || !states.is_empty() {
                list.push((self.origin(id).map_or_else(Span::default, |(at, _)| *at), name));
            }
        }
        list
    }
}

#[cfg(test)]
mod tests;
