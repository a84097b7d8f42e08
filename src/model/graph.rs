//! The graph of all expressions of a model.

/// A node of a [`Graph`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct NodeId(pub u32);

/// Expressions with their common parts shared.
#[derive(Clone, Debug, Default)]
pub struct Graph {}
