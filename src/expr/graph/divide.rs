//! A row at x = 0, and the row divided by x: per-capita rates, exactly.
//!
//! For a function f that is 0 at x = 0, the per-capita form is the divided difference (f(x) − f(0))/x. It is built
//! structurally, rule by rule, with a quotient primitive wherever a plain formula would be 0/0 (slopes: Krawczyk &
//! Neumaier 1985; computational divided differencing: Reps & Rall 2003; from memory). [`Graph::at_zero`] answers "what is
//! this at x = 0?" by continuity, with all other states strictly positive, so that x ln(K/x) is 0 there and x·(1/x) is not.

use std::collections::HashMap;

use super::{Graph, NodeId, Operation};
use crate::expr::function::{Function, Quotient};

/// What a node is at x = 0, all other states being positive.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AtZero {
    /// It goes to this.
    Is(NodeId),
    /// It grows no faster than a logarithm of x.
    GrowsAsLogarithm,
    /// Nothing is known: it may grow without bound, or have no limit.
    Unknown,
}

/// What is known of a node near x = 0.
#[derive(Clone, Copy)]
pub(super) struct Near {
    pub(super) zero: AtZero,
    /// It goes to 0 at least as fast as some positive power of x.
    vanishes: bool,
    /// It is a power of x other than the zeroth, times something that stays away from 0 and ∞.
    power: bool,
    /// (f(x) − f(0))/x, where it could be built.
    pub(super) slope: Option<NodeId>,
}

/// Whether divided differences are wanted too.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Slopes {
    Built,
    LeftOut,
}

/// A row split at x = 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Division {
    /// What the row is at x = 0.
    pub zero: AtZero,
    /// The row divided by x: present only where the row vanishes at x = 0.
    pub quotient: Option<NodeId>,
}

impl Graph {
    /// What `node` is where state `i` is 0, and its quotient by that state.
    pub fn divide(&mut self, node: NodeId, i: usize) -> Division {
        let near = self.near_zero(&[node], i, Slopes::Built)[&node];
        let quotient = if near.zero == AtZero::Is(self.zero()) { near.slope } else { None };
        Division { zero: near.zero, quotient }
    }

    /// What `node` is where state `i` is 0, by continuity.
    pub fn at_zero(&mut self, node: NodeId, i: usize) -> AtZero {
        self.restrict(&[node], i)[0]
    }

    /// What each of some nodes is where state `i` is 0, by continuity.
    pub fn restrict(&mut self, nodes: &[NodeId], i: usize) -> Vec<AtZero> {
        let known = self.near_zero(nodes, i, Slopes::LeftOut);
        nodes.iter().map(|node| known[node].zero).collect()
    }

    /// Whether `node` vanishes identically where state `i` is 0.
    pub fn vanishes_at_zero(&mut self, node: NodeId, i: usize) -> bool {
        self.at_zero(node, i) == AtZero::Is(self.zero())
    }

    fn near_zero(&mut self, nodes: &[NodeId], i: usize, slopes: Slopes) -> HashMap<NodeId, Near> {
        let mut known: HashMap<NodeId, Near> = HashMap::new();
        for inner in self.reachable(nodes) {
            let near = if self.depends_on(inner, i) {
                self.near_of(inner, i, slopes, &known)
            } else {
                Near { zero: AtZero::Is(inner), vanishes: self.is(inner, 0.0), power: false, slope: Some(self.zero()) }
            };
            known.insert(inner, near);
        }
        known
    }

    /// An interaction row counts as independent of x: where x is absent the state that it is evaluated at says so.
    fn depends_on(&self, node: NodeId, i: usize) -> bool {
        self.facts(node).may_depend_on(i) && !matches!(self.operation(node), Operation::Interaction { .. })
    }

    fn near_of(&mut self, node: NodeId, i: usize, slopes: Slopes, known: &HashMap<NodeId, Near>) -> Near {
        let operation = self.operation(node);
        let operands: Vec<Near> = operation.operands().into_iter().flatten().map(|operand| known[&operand]).collect();
        if let Operation::State(_) = operation {
            return Near { zero: AtZero::Is(self.zero()), vanishes: true, power: true, slope: Some(self.one()) };
        }
        let zero = self.zero_of(operation, &operands);
        let is_zero = zero == AtZero::Is(self.zero());
        let slope = match slopes {
            Slopes::Built => self.slope_of(operation, &operands, i),
            Slopes::LeftOut => None,
        };
        let power = self.is_power(operation, &operands);
        Near { zero, vanishes: is_zero && self.vanishes(operation, &operands), power, slope }
    }

    /// Whether it is a power of x times something that stays away from 0 and ∞.
    fn is_power(&self, operation: Operation<NodeId>, near: &[Near]) -> bool {
        let steady = |n: &Near| n.value().is_some_and(|value| self.facts(value).inside.nonzero());
        match operation {
            Operation::Neg(_) | Operation::PowInt(..) | Operation::Apply(Function::Sqrt, _) => near[0].power,
            Operation::Mul(..) | Operation::Div(..) => {
                (near[0].power && steady(&near[1])) || (steady(&near[0]) && near[1].power)
            }
            _ => false,
        }
    }

    pub(super) fn zero_of(&mut self, operation: Operation<NodeId>, near: &[Near]) -> AtZero {
        if let Operation::Apply(Function::Ln | Function::Log10, _) = operation
            && near[0].power
        {
            return AtZero::GrowsAsLogarithm;
        }
        if let Some(values) = near.iter().map(Near::value).collect::<Option<Vec<NodeId>>>() {
            return self.continued(operation, &values);
        }
        let at_most_logarithmic = near.iter().all(|n| n.zero != AtZero::Unknown);
        match operation {
            Operation::Mul(..) if at_most_logarithmic && near.iter().any(|n| n.vanishes) => AtZero::Is(self.zero()),
            Operation::Mul(a, b) if at_most_logarithmic => {
                // A bounded factor leaves a logarithm a logarithm; two of them are no longer one.
                let both = near[0].value().is_none() && near[1].value().is_none();
                let bounded = |node: NodeId, near: &Near| near.value().is_none() || self.facts(node).total_inside;
                if !both && bounded(a, &near[0]) && bounded(b, &near[1]) {
                    AtZero::GrowsAsLogarithm
                } else {
                    AtZero::Unknown
                }
            }
            Operation::Add(..) | Operation::Sub(..) | Operation::Neg(_) if at_most_logarithmic => {
                AtZero::GrowsAsLogarithm
            }
            _ => AtZero::Unknown,
        }
    }

    /// The operation on values that are known at x = 0, continued where a plain evaluation would be 0·∞ or 0/0.
    fn continued(&mut self, operation: Operation<NodeId>, values: &[NodeId]) -> AtZero {
        let zero = self.zero();
        let is_zero = |node: NodeId| node == zero;
        let inside = |graph: &Self, node: NodeId| *graph.facts(node);
        let mut operands = values.iter().copied();
        let operation = operation.map(|_| operands.next().unwrap_or(zero));
        match operation {
            Operation::Mul(a, b) if is_zero(a) && inside(self, b).total_inside => AtZero::Is(zero),
            Operation::Mul(a, b) if is_zero(b) && inside(self, a).total_inside => AtZero::Is(zero),
            Operation::Div(_, b) if is_zero(b) => AtZero::Unknown,
            Operation::Div(a, b) if is_zero(a) && inside(self, b).inside.nonzero() => AtZero::Is(zero),
            Operation::Div(a, b) if a == b && inside(self, a).inside.nonzero() => AtZero::Is(self.one()),
            Operation::PowInt(a, n) if is_zero(a) && n < 0 => AtZero::Unknown,
            Operation::Pow(a, p) if is_zero(a) => {
                if inside(self, p).inside.strictly_positive() {
                    AtZero::Is(zero)
                } else {
                    AtZero::Unknown
                }
            }
            Operation::Apply(Function::Ln | Function::Log10, a) if is_zero(a) => AtZero::Unknown,
            Operation::Saturation([s, _, v]) if is_zero(s) && inside(self, v).inside.nonzero() => AtZero::Is(zero),
            Operation::Saturation([s, c, v]) if is_zero(v) && inside(self, s).inside.nonzero() => {
                let one = self.one();
                AtZero::Is(self.div(one, c))
            }
            Operation::Saturation([s, c, v]) => {
                let grown = self.mul(c, s);
                let den = self.add(v, grown);
                if is_zero(den) { AtZero::Unknown } else { AtZero::Is(self.saturation(s, c, v)) }
            }
            other => AtZero::Is(self.rebuild(other)),
        }
    }

    /// The node of an operation through the simplifying constructors.
    pub fn rebuild(&mut self, operation: Operation<NodeId>) -> NodeId {
        match operation {
            Operation::Neg(a) => self.neg(a),
            Operation::Add(a, b) => self.add(a, b),
            Operation::Sub(a, b) => self.sub(a, b),
            Operation::Mul(a, b) => self.mul(a, b),
            Operation::Div(a, b) => self.div(a, b),
            Operation::PowInt(a, n) => self.powi(a, n),
            Operation::Pow(a, b) => self.pow(a, b),
            Operation::Apply(function, a) => self.apply(function, a),
            Operation::Min(a, b) => self.min(a, b),
            Operation::Max(a, b) => self.max(a, b),
            Operation::Select([a, b, x, y]) => self.select(a, b, x, y),
            Operation::Saturation([s, c, v]) => self.saturation(s, c, v),
            Operation::Quotient(quotient, k, u) => self.quotient(quotient, k, u),
            Operation::PowerQuotient(k, u, p) => self.power_quotient(k, u, p),
            leaf => self.intern(leaf),
        }
    }

    /// The k-th derivative of f(u)/u.
    pub fn quotient(&mut self, quotient: Quotient, k: u8, u: NodeId) -> NodeId {
        if k == 0 && self.is(u, 0.0) {
            return self.one();
        }
        self.intern(Operation::Quotient(quotient, k, u))
    }

    /// The k-th derivative in u of ((1 + u)^p − 1)/u.
    pub fn power_quotient(&mut self, k: u8, u: NodeId, p: NodeId) -> NodeId {
        match k {
            0 if self.is(u, 0.0) || self.is(p, 1.0) => p,
            _ => self.intern(Operation::PowerQuotient(k, u, p)),
        }
    }

    /// Whether something that is 0 at x = 0 goes there as fast as a power of x.
    fn vanishes(&self, operation: Operation<NodeId>, near: &[Near]) -> bool {
        match operation {
            Operation::Mul(..) => near.iter().any(|n| n.vanishes),
            Operation::Div(..) | Operation::Saturation(_) | Operation::Apply(..) | Operation::PowInt(..) => {
                near[0].vanishes
            }
            Operation::Pow(_, p) => {
                // A power of x to an exponent that may come arbitrarily near 0 is no power of x.
                near[0].vanishes && self.facts(p).range.lo() > 0.0
            }
            Operation::Neg(_) | Operation::Add(..) | Operation::Sub(..) | Operation::Min(..) | Operation::Max(..) => {
                near.iter().all(|n| n.vanishes)
            }
            Operation::Select(_) => near[2].vanishes && near[3].vanishes,
            _ => false,
        }
    }
}

impl Near {
    /// Nothing known but the value and the slope.
    pub(super) fn plain(zero: AtZero, slope: Option<NodeId>) -> Self {
        Self { zero, vanishes: false, power: false, slope }
    }

    pub(super) fn value(&self) -> Option<NodeId> {
        match self.zero {
            AtZero::Is(node) => Some(node),
            _ => None,
        }
    }
}
