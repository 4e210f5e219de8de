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
struct Near {
    zero: AtZero,
    /// It goes to 0 at least as fast as some positive power of x.
    vanishes: bool,
    /// (f(x) − f(0))/x, where it could be built.
    slope: Option<NodeId>,
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
        let near = self.near_zero(node, i);
        let quotient = if near.zero == AtZero::Is(self.zero()) { near.slope } else { None };
        Division { zero: near.zero, quotient }
    }

    /// What `node` is where state `i` is 0, by continuity.
    pub fn at_zero(&mut self, node: NodeId, i: usize) -> AtZero {
        self.near_zero(node, i).zero
    }

    /// Whether `node` vanishes identically where state `i` is 0.
    pub fn vanishes_at_zero(&mut self, node: NodeId, i: usize) -> bool {
        self.at_zero(node, i) == AtZero::Is(self.zero())
    }

    fn near_zero(&mut self, node: NodeId, i: usize) -> Near {
        let mut known: HashMap<NodeId, Near> = HashMap::new();
        for inner in self.reachable(&[node]) {
            let near = if self.depends_on(inner, i) {
                self.near_of(inner, i, &known)
            } else {
                Near { zero: AtZero::Is(inner), vanishes: self.is(inner, 0.0), slope: Some(self.zero()) }
            };
            known.insert(inner, near);
        }
        known[&node]
    }

    /// An interaction row counts as independent of x: where x is absent the state that it is evaluated at says so.
    fn depends_on(&self, node: NodeId, i: usize) -> bool {
        self.facts(node).may_depend_on(i) && !matches!(self.operation(node), Operation::Interaction { .. })
    }

    fn near_of(&mut self, node: NodeId, i: usize, known: &HashMap<NodeId, Near>) -> Near {
        let operation = self.operation(node);
        let operands: Vec<Near> = operation.operands().into_iter().flatten().map(|operand| known[&operand]).collect();
        if let Operation::State(_) = operation {
            return Near { zero: AtZero::Is(self.zero()), vanishes: true, slope: Some(self.one()) };
        }
        let zero = self.zero_of(operation, &operands);
        let is_zero = zero == AtZero::Is(self.zero());
        let slope = self.slope_of(operation, &operands, i);
        Near { zero, vanishes: is_zero && self.vanishes(operation, &operands), slope }
    }

    fn zero_of(&mut self, operation: Operation<NodeId>, near: &[Near]) -> AtZero {
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
            Operation::Apply(Function::Ln | Function::Log10, a) if is_zero(a) => AtZero::GrowsAsLogarithm,
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

    /// (f(x) − f(0))/x from the same of the operands.
    fn slope_of(&mut self, operation: Operation<NodeId>, near: &[Near], i: usize) -> Option<NodeId> {
        let slope = |index: usize| near[index].slope;
        match operation {
            Operation::Neg(_) => Some(self.neg(slope(0)?)),
            Operation::Add(..) => Some(self.add(slope(0)?, slope(1)?)),
            Operation::Sub(..) => Some(self.sub(slope(0)?, slope(1)?)),
            Operation::Mul(a, b) => self.slope_of_product([a, b], near),
            Operation::Div(_, b) => self.slope_of_quotient(b, near),
            Operation::PowInt(a, n) => self.slope_of_whole_power(a, n, &near[0]),
            Operation::Pow(a, p) => self.slope_of_power([a, p], near, i),
            Operation::Apply(function, u) => self.slope_of_function(function, u, &near[0], i),
            Operation::Min(..) if near[0].value()? == near[1].value()? => Some(self.min(slope(0)?, slope(1)?)),
            Operation::Max(..) if near[0].value()? == near[1].value()? => Some(self.max(slope(0)?, slope(1)?)),
            Operation::Select([a, b, ..]) if near[2].value()? == near[3].value()? => {
                Some(self.select(a, b, slope(2)?, slope(3)?))
            }
            Operation::Saturation([s, c, v]) => self.slope_of_saturation([s, c, v], near),
            _ => None,
        }
    }

    /// f g: where g is 0 at x = 0, f (g/x); likewise the other way; else D f g + f(0) D g.
    fn slope_of_product(&mut self, [a, b]: [NodeId; 2], near: &[Near]) -> Option<NodeId> {
        let zero = Some(self.zero());
        if near[0].value() == zero {
            return Some(self.mul(near[0].slope?, b));
        }
        if near[1].value() == zero {
            return Some(self.mul(a, near[1].slope?));
        }
        let left = self.mul(near[0].slope?, b);
        let right = self.mul(near[0].value()?, near[1].slope?);
        Some(self.add(left, right))
    }

    /// (D f − (f(0)/g(0)) D g)/g, where g(0) is not 0.
    fn slope_of_quotient(&mut self, b: NodeId, near: &[Near]) -> Option<NodeId> {
        let zero = self.zero();
        let slope = near[0].slope?;
        if near[0].value()? == zero || near[1].slope? == zero {
            return Some(self.div(slope, b));
        }
        let start = near[1].value().filter(|&start| start != zero)?;
        let ratio = self.div(near[0].value()?, start);
        let shift = self.mul(ratio, near[1].slope?);
        let rise = self.sub(slope, shift);
        Some(self.div(rise, b))
    }

    /// aⁿ − a₀ⁿ = (a − a₀) Σ aᵏ a₀ⁿ⁻¹⁻ᵏ, and 1/aⁿ − 1/a₀ⁿ from it.
    fn slope_of_whole_power(&mut self, a: NodeId, n: i32, near: &Near) -> Option<NodeId> {
        let start = near.value()?;
        let zero = self.zero();
        if n < 0 {
            let inner = self.slope_of_whole_power(a, n.checked_neg()?, near).filter(|_| start != zero)?;
            let scale = self.powi(a, n);
            let scale_at_start = self.powi(start, n);
            let scale = self.mul(scale, scale_at_start);
            let scaled = self.mul(inner, scale);
            return Some(self.neg(scaled));
        }
        if start == zero {
            let lower = self.powi(a, n - 1);
            return Some(self.mul(near.slope?, lower));
        }
        let mut sum = zero;
        for k in 0..n {
            let (high, low) = (self.powi(a, k), self.powi(start, n - 1 - k));
            let part = self.mul(high, low);
            sum = self.add(sum, part);
        }
        Some(self.mul(near.slope?, sum))
    }

    /// With a = a₀ (1 + w): a^p − a₀^p = a₀^p ((1 + w)^p − 1), w = x D a/a₀.
    fn slope_of_power(&mut self, [a, p]: [NodeId; 2], near: &[Near], i: usize) -> Option<NodeId> {
        let (zero, one) = (self.zero(), self.one());
        if near[1].slope? != zero {
            return None;
        }
        let (start, slope) = (near[0].value()?, near[0].slope?);
        if start == zero {
            let below = self.sub(p, one);
            let lower = self.pow(a, below);
            return Some(self.mul(slope, lower));
        }
        let relative = self.div(slope, start);
        let w = self.times_state(relative, i);
        let quotient = self.power_quotient(0, w, p);
        let scale = self.pow(start, p);
        let inner = self.mul(quotient, relative);
        Some(self.mul(scale, inner))
    }

    fn slope_of_function(&mut self, function: Function, u: NodeId, near: &Near, i: usize) -> Option<NodeId> {
        let (start, slope) = (near.value()?, near.slope?);
        match function {
            Function::Exp | Function::Expm1 => {
                let rise = self.times_state(slope, i);
                let quotient = self.quotient(Quotient::Expm1, 0, rise);
                let scale = self.apply(Function::Exp, start);
                let inner = self.mul(quotient, slope);
                Some(self.mul(scale, inner))
            }
            Function::Ln => self.slope_of_logarithm(slope, start, i),
            Function::Log10 => {
                let natural = self.slope_of_logarithm(slope, start, i)?;
                let ten = self.constant(10.0);
                let scale = self.apply(Function::Ln, ten);
                Some(self.div(natural, scale))
            }
            Function::Log1p => {
                let one = self.one();
                let shifted = self.add(one, start);
                self.slope_of_logarithm(slope, shifted, i)
            }
            Function::Sqrt => {
                let (root, root_at_start) = (self.apply(function, u), self.apply(function, start));
                let sum = self.add(root, root_at_start);
                Some(self.div(slope, sum))
            }
            Function::Abs if start == self.zero() => Some(self.apply(Function::Abs, slope)),
            Function::Abs => None,
            Function::Tanh => Some(self.slope_of_tanh(u, start, slope, i)),
        }
    }

    /// ln(a/a₀)/x = L(x D a/a₀) D a/a₀ with L(w) = ln(1 + w)/w.
    fn slope_of_logarithm(&mut self, slope: NodeId, start: NodeId, i: usize) -> Option<NodeId> {
        if self.is(start, 0.0) {
            return None;
        }
        let relative = self.div(slope, start);
        let w = self.times_state(relative, i);
        let quotient = self.quotient(Quotient::Log1p, 0, w);
        Some(self.mul(quotient, relative))
    }

    /// tanh u − tanh u₀ = tanh(u − u₀) (1 − tanh u tanh u₀).
    fn slope_of_tanh(&mut self, u: NodeId, start: NodeId, slope: NodeId, i: usize) -> NodeId {
        let rise = self.times_state(slope, i);
        let quotient = self.quotient(Quotient::Tanh, 0, rise);
        let steep = self.mul(quotient, slope);
        let (end, begin) = (self.apply(Function::Tanh, u), self.apply(Function::Tanh, start));
        let product = self.mul(end, begin);
        let one = self.one();
        let flattening = self.sub(one, product);
        self.mul(steep, flattening)
    }

    /// s/(v + c s): where s is 0 at x = 0, (s/x)/(v + c s); else as a quotient.
    fn slope_of_saturation(&mut self, [s, c, v]: [NodeId; 3], near: &[Near]) -> Option<NodeId> {
        let grown = self.mul(c, s);
        let den = self.add(v, grown);
        if near[0].value()? == self.zero() {
            return Some(self.div(near[0].slope?, den));
        }
        let product = Operation::Mul(c, s);
        let pair = [near[1], near[0]];
        let grown_near =
            Near { zero: self.zero_of(product, &pair), vanishes: false, slope: self.slope_of_product([c, s], &pair) };
        let pair = [near[2], grown_near];
        let sum = Operation::Add(v, grown);
        let den_slope = self.add(near[2].slope?, grown_near.slope?);
        let den_near = Near { zero: self.zero_of(sum, &pair), vanishes: false, slope: Some(den_slope) };
        self.slope_of_quotient(den, &[near[0], den_near])
    }

    fn times_state(&mut self, slope: NodeId, i: usize) -> NodeId {
        let x = self.state(i);
        self.mul(slope, x)
    }
}

impl Near {
    fn value(&self) -> Option<NodeId> {
        match self.zero {
            AtZero::Is(node) => Some(node),
            _ => None,
        }
    }
}
