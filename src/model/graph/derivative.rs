//! Exact derivatives of expressions, as expressions.

use std::collections::BTreeMap;

use super::{Binary, Graph, Node, NodeId, Unary};

/// With respect to what.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Wrt {
    /// A state.
    State(usize),
    /// The time, states held.
    Time,
}

impl Graph {
    /// The derivative of a node. Where a switch flips, that of the branch.
    pub fn derivative(&mut self, of: NodeId, wrt: Wrt) -> NodeId {
        let mut done: BTreeMap<NodeId, NodeId> = BTreeMap::new();
        // Inputs come before what is computed from them, so ascending order meets every input first.
        for id in self.reachable(&[of]) {
            let derivative = self.step(id, wrt, &done);
            done.insert(id, derivative);
        }
        done[&of]
    }

    /// The rate of change of a node along a solution whose states have these rates.
    pub fn along(&mut self, of: NodeId, rates: &[NodeId]) -> NodeId {
        let (_, states) = self.depends(of);
        let mut sum = self.derivative(of, Wrt::Time);
        for state in states {
            let slope = self.derivative(of, Wrt::State(state));
            let part = self.times(slope, rates[state]);
            sum = self.plus(sum, part);
        }
        sum
    }

    fn is(&self, id: NodeId, value: f64) -> bool {
        self.constant_value(id).is_some_and(|constant| constant.to_bits() == value.to_bits())
    }
    fn plus(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if self.is(a, 0.0) {
            b
        } else if self.is(b, 0.0) {
            a
        } else {
            self.binary(Binary::Add, a, b)
        }
    }
    fn minus(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if self.is(b, 0.0) {
            a
        } else if self.is(a, 0.0) {
            self.unary(Unary::Negate, b)
        } else {
            self.binary(Binary::Subtract, a, b)
        }
    }
    fn times(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if self.is(a, 0.0) || self.is(b, 1.0) {
            a
        } else if self.is(b, 0.0) || self.is(a, 1.0) {
            b
        } else {
            self.binary(Binary::Multiply, a, b)
        }
    }
    fn over(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if self.is(a, 0.0) { a } else { self.binary(Binary::Divide, a, b) }
    }

    fn step(&mut self, id: NodeId, wrt: Wrt, done: &BTreeMap<NodeId, NodeId>) -> NodeId {
        let zero = self.constant(0.0);
        match self.node(id) {
            Node::Constant(_) | Node::Parameter(_) | Node::Sign { .. } => zero,
            Node::Time => {
                if wrt == Wrt::Time {
                    self.constant(1.0)
                } else {
                    zero
                }
            }
            Node::State(i) => {
                if wrt == Wrt::State(i as usize) {
                    self.constant(1.0)
                } else {
                    zero
                }
            }
            Node::Unary(function, a) => {
                let da = done[&a];
                if self.is(da, 0.0) {
                    return zero;
                }
                self.chain(id, function, a, da)
            }
            Node::Binary(operation, a, b) => self.binary_step(id, operation, (a, done[&a]), (b, done[&b])),
            Node::Power(a, n) => {
                let da = done[&a];
                if self.is(da, 0.0) {
                    return zero;
                }
                let factor = self.constant(f64::from(n));
                let exponent = self.constant(f64::from(n - 1));
                let lower = self.binary(Binary::Power, a, exponent);
                let outer = self.times(factor, lower);
                self.times(outer, da)
            }
            Node::Pick { on, positive, negative, switch } => {
                let (p, n) = (done[&positive], done[&negative]);
                if p == n {
                    return p;
                }
                let at = self.switches()[switch as usize].at;
                self.pick(on, p, n, at)
            }
        }
    }

    fn binary_step(
        &mut self,
        id: NodeId,
        operation: Binary,
        (a, da): (NodeId, NodeId),
        (b, db): (NodeId, NodeId),
    ) -> NodeId {
        let zero = self.constant(0.0);
        if self.is(da, 0.0) && self.is(db, 0.0) {
            return zero;
        }
        match operation {
            Binary::Add => self.plus(da, db),
            Binary::Subtract => self.minus(da, db),
            Binary::Multiply => {
                let first = self.times(da, b);
                let second = self.times(a, db);
                self.plus(first, second)
            }
            Binary::Divide => {
                // (da - (a/b) db) / b
                let part = self.times(id, db);
                let top = self.minus(da, part);
                self.over(top, b)
            }
            // d(a - b trunc(a/b)) = da - trunc(a/b) db; with a - r = b trunc(a/b).
            Binary::Remainder => {
                if self.is(db, 0.0) {
                    return da;
                }
                let whole = self.binary(Binary::Subtract, a, id);
                let count = self.over(whole, b);
                let part = self.times(count, db);
                self.minus(da, part)
            }
            Binary::Power => {
                let mut sum = zero;
                if !self.is(da, 0.0) {
                    let one = self.constant(1.0);
                    let less = self.binary(Binary::Subtract, b, one);
                    let lower = self.binary(Binary::Power, a, less);
                    let outer = self.times(b, lower);
                    sum = self.times(outer, da);
                }
                if !self.is(db, 0.0) {
                    let log = self.unary(Unary::Ln, a);
                    let outer = self.times(id, log);
                    let part = self.times(outer, db);
                    sum = self.plus(sum, part);
                }
                sum
            }
            // d atan2(a, b) = (b da - a db) / (a^2 + b^2)
            Binary::Atan2 => {
                let first = self.times(b, da);
                let second = self.times(a, db);
                let top = self.minus(first, second);
                let aa = self.binary(Binary::Multiply, a, a);
                let bb = self.binary(Binary::Multiply, b, b);
                let square = self.binary(Binary::Add, aa, bb);
                self.over(top, square)
            }
        }
    }

    /// The derivative of `function(a)`, which is node `id`, where that of `a` is `da`.
    fn chain(&mut self, id: NodeId, function: Unary, a: NodeId, da: NodeId) -> NodeId {
        let one = self.constant(1.0);
        let square = |graph: &mut Graph, x: NodeId| graph.binary(Binary::Multiply, x, x);
        match function {
            Unary::Negate => self.unary(Unary::Negate, da),
            Unary::Sqrt => {
                let two = self.constant(2.0);
                let twice = self.times(two, id);
                self.over(da, twice)
            }
            Unary::Cbrt => {
                let three = self.constant(3.0);
                let second = square(self, id);
                let bottom = self.times(three, second);
                self.over(da, bottom)
            }
            Unary::Exp => self.times(id, da),
            Unary::Ln => self.over(da, a),
            Unary::Log10 => {
                let log = self.constant(std::f64::consts::LN_10);
                let bottom = self.times(log, a);
                self.over(da, bottom)
            }
            Unary::Sin => {
                let cos = self.unary(Unary::Cos, a);
                self.times(cos, da)
            }
            Unary::Cos => {
                let sin = self.unary(Unary::Sin, a);
                let minus = self.unary(Unary::Negate, sin);
                self.times(minus, da)
            }
            Unary::Tan => {
                let second = square(self, id);
                let outer = self.plus(one, second);
                self.times(outer, da)
            }
            Unary::Asin | Unary::Acos => {
                let second = square(self, a);
                let rest = self.minus(one, second);
                let root = self.unary(Unary::Sqrt, rest);
                let part = self.over(da, root);
                if function == Unary::Asin { part } else { self.unary(Unary::Negate, part) }
            }
            Unary::Atan => {
                let second = square(self, a);
                let bottom = self.plus(one, second);
                self.over(da, bottom)
            }
            Unary::Sinh => {
                let cosh = self.unary(Unary::Cosh, a);
                self.times(cosh, da)
            }
            Unary::Cosh => {
                let sinh = self.unary(Unary::Sinh, a);
                self.times(sinh, da)
            }
            Unary::Tanh => {
                let second = square(self, id);
                let outer = self.minus(one, second);
                self.times(outer, da)
            }
            Unary::Asinh | Unary::Acosh => {
                let second = square(self, a);
                let under =
                    if function == Unary::Asinh { self.plus(second, one) } else { self.minus(second, one) };
                let root = self.unary(Unary::Sqrt, under);
                self.over(da, root)
            }
            Unary::Atanh => {
                let second = square(self, a);
                let bottom = self.minus(one, second);
                self.over(da, bottom)
            }
            Unary::Floor | Unary::Ceil | Unary::Round => self.constant(0.0),
        }
    }
}
