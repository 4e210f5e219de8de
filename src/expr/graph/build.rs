//! Constructors of nodes, with the simplifications that are always right.
//!
//! A rule is kept only if its result equals the original and is defined and continuous at exactly the same states ≥ 0.
//! So 0·e becomes 0 only where e is [total](super::facts::Facts::total), e/e becomes 1 only where e is never 0, and
//! constants fold only where the f64 result is the exact one: 1/3 stays a quotient of two exact numbers, which an
//! interval tape encloses.

use super::{Exact, Graph, NodeId, Operation, fold};
use crate::expr::function::Function;

impl Graph {
    /// An exact number.
    ///
    /// # Panics
    /// If it is not finite.
    pub fn constant(&mut self, value: f64) -> NodeId {
        self.intern(Operation::Constant(Exact::new(value)))
    }

    /// 0
    pub fn zero(&mut self) -> NodeId {
        self.constant(0.0)
    }

    /// 1
    pub fn one(&mut self) -> NodeId {
        self.constant(1.0)
    }

    /// The abundance of species i.
    ///
    /// # Panics
    /// If there is no such species.
    pub fn state(&mut self, i: usize) -> NodeId {
        assert!(i < self.states, "state {i} of {}", self.states);
        self.intern(Operation::State(i))
    }

    /// The value of parameter i.
    ///
    /// # Panics
    /// If there is no such parameter.
    pub fn parameter(&mut self, i: usize) -> NodeId {
        assert!(i < self.parameters.len(), "parameter {i} of {}", self.parameters.len());
        self.intern(Operation::Parameter(i))
    }

    /// Row `row` of a matrix block times the state.
    ///
    /// # Panics
    /// If there is no such block or row.
    pub fn interaction(&mut self, block: usize, row: usize) -> NodeId {
        assert!(row < self.matrices[block].order, "row {row} of block {block}");
        self.intern(Operation::Interaction { block, row })
    }

    /// −a
    pub fn neg(&mut self, a: NodeId) -> NodeId {
        match self.operation(a) {
            Operation::Constant(value) => self.constant(-value.get()),
            Operation::Neg(inner) => inner,
            Operation::Sub(x, y) => self.sub(y, x),
            _ => self.intern(Operation::Neg(a)),
        }
    }

    /// a + b
    pub fn add(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if let Some(folded) = self.fold(a, b, fold::exact_sum) {
            return folded;
        }
        match (self.operation(a), self.operation(b)) {
            _ if self.is(a, 0.0) => b,
            _ if self.is(b, 0.0) => a,
            (_, Operation::Neg(inner)) => self.sub(a, inner),
            (Operation::Neg(inner), _) => self.sub(b, inner),
            (Operation::Apply(Function::Exp, u), _) if self.is(b, -1.0) => self.apply(Function::Expm1, u),
            (_, Operation::Apply(Function::Exp, u)) if self.is(a, -1.0) => self.apply(Function::Expm1, u),
            _ => self.intern(Operation::Add(a, b)),
        }
    }

    /// a − b
    pub fn sub(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if let Some(folded) = self.fold(a, b, |x, y| fold::exact_sum(x, -y)) {
            return folded;
        }
        match (self.operation(a), self.operation(b)) {
            _ if a == b && self.facts(a).total => self.zero(),
            _ if self.is(a, 0.0) => self.neg(b),
            _ if self.is(b, 0.0) => a,
            (_, Operation::Neg(inner)) => self.add(a, inner),
            (Operation::Apply(Function::Exp, u), _) if self.is(b, 1.0) => self.apply(Function::Expm1, u),
            (_, Operation::Apply(Function::Exp, u)) if self.is(a, 1.0) => {
                let shifted = self.apply(Function::Expm1, u);
                self.neg(shifted)
            }
            // What is left after a share is taken, and after all above a floor is.
            (_, Operation::Mul(c, x)) if x == a => self.share_left(a, c),
            (_, Operation::Mul(x, c)) if x == a => self.share_left(a, c),
            (_, Operation::Sub(x, rest)) if x == a && self.facts(a).total => rest,
            (_, Operation::Max(x, y)) if self.is(x, 0.0) && self.excess(y, a).is_some() => {
                let floor = self.excess(y, a).unwrap_or(a);
                self.min(a, floor)
            }
            (_, Operation::Max(y, x)) if self.is(x, 0.0) && self.excess(y, a).is_some() => {
                let floor = self.excess(y, a).unwrap_or(a);
                self.min(a, floor)
            }
            _ => self.intern(Operation::Sub(a, b)),
        }
    }

    /// a − c a = (1 − c) a
    fn share_left(&mut self, a: NodeId, c: NodeId) -> NodeId {
        let one = self.one();
        let share = self.sub(one, c);
        self.mul(share, a)
    }

    /// e, where the node is a − e: then a − max(0, a − e) = min(a, e).
    fn excess(&self, node: NodeId, a: NodeId) -> Option<NodeId> {
        match self.operation(node) {
            Operation::Sub(x, floor) if x == a => Some(floor),
            _ => None,
        }
    }

    /// a b
    pub fn mul(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if let Some(folded) = self.fold(a, b, fold::exact_product) {
            return folded;
        }
        match (self.operation(a), self.operation(b)) {
            _ if self.is(a, 1.0) => b,
            _ if self.is(b, 1.0) => a,
            _ if self.is(a, 0.0) && self.facts(b).total => a,
            _ if self.is(b, 0.0) && self.facts(a).total => b,
            _ if self.is(a, -1.0) => self.neg(b),
            _ if self.is(b, -1.0) => self.neg(a),
            (Operation::Neg(x), _) => {
                let product = self.mul(x, b);
                self.neg(product)
            }
            (_, Operation::Neg(y)) => {
                let product = self.mul(a, y);
                self.neg(product)
            }
            _ if a == b => self.powi(a, 2),
            (Operation::PowInt(x, n), _) if x == b && (1..i32::MAX).contains(&n) => self.powi(b, n + 1),
            (_, Operation::PowInt(y, n)) if y == a && (1..i32::MAX).contains(&n) => self.powi(a, n + 1),
            (Operation::PowInt(x, n), Operation::PowInt(y, m))
                if x == y && n > 0 && m > 0 && n.checked_add(m).is_some() =>
            {
                self.powi(x, n + m)
            }
            _ => self.intern(Operation::Mul(a, b)),
        }
    }

    /// a / b
    pub fn div(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if let Some(folded) = self.fold(a, b, fold::exact_quotient) {
            return folded;
        }
        match (self.operation(a), self.operation(b)) {
            _ if self.is(b, 1.0) => a,
            _ if self.is(b, -1.0) => self.neg(a),
            _ if self.is(a, 0.0) && self.facts(b).nonzero() && self.facts(b).total => a,
            _ if a == b && self.facts(a).nonzero() && self.facts(a).total => self.one(),
            (Operation::Neg(x), _) => {
                let quotient = self.div(x, b);
                self.neg(quotient)
            }
            (_, Operation::Neg(y)) => {
                let quotient = self.div(a, y);
                self.neg(quotient)
            }
            _ => match self.saturating(a, b) {
                Some(node) => node,
                None => self.intern(Operation::Div(a, b)),
            },
        }
    }

    /// aⁿ
    pub fn powi(&mut self, a: NodeId, n: i32) -> NodeId {
        if let Some(power) = self.constant_value(a).and_then(|value| fold::exact_power(value, n)) {
            return self.constant(power);
        }
        match self.operation(a) {
            _ if n == 1 => a,
            _ if n == 0 && self.facts(a).total => self.one(),
            Operation::PowInt(x, m) if m > 0 && n > 0 && m.checked_mul(n).is_some() => self.powi(x, m * n),
            Operation::Neg(x) if n % 2 == 0 => self.powi(x, n),
            _ => self.intern(Operation::PowInt(a, n)),
        }
    }

    /// a^b; an exponent that is a small whole constant becomes a whole power, ½ a square root.
    pub fn pow(&mut self, a: NodeId, b: NodeId) -> NodeId {
        if self.is(a, 1.0) && self.facts(b).total {
            return a;
        }
        match self.constant_value(b) {
            Some(0.5) => self.apply(Function::Sqrt, a),
            // Beyond this a whole power gains nothing over the real one.
            Some(n) if n.fract() == 0.0 && n.abs() <= 64.0 => self.powi(a, n as i32),
            _ => self.intern(Operation::Pow(a, b)),
        }
    }

    /// f(a)
    pub fn apply(&mut self, function: Function, a: NodeId) -> NodeId {
        if let Some(value) = self.constant_value(a)
            && let Some(&(_, result)) = function.row().exact.iter().find(|(argument, _)| *argument == value)
        {
            return self.constant(result);
        }
        match (function, self.operation(a)) {
            (Function::Ln, Operation::Apply(Function::Exp, u)) => u,
            (Function::Ln, Operation::Add(x, y)) if self.is(x, 1.0) => self.apply(Function::Log1p, y),
            (Function::Ln, Operation::Add(x, y)) if self.is(y, 1.0) => self.apply(Function::Log1p, x),
            (Function::Abs, Operation::Constant(value)) => self.constant(value.get().abs()),
            (Function::Abs, _) if self.facts(a).range.lo() >= 0.0 => a,
            _ => self.intern(Operation::Apply(function, a)),
        }
    }

    /// The smaller of two.
    pub fn min(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.constant_value(a), self.constant_value(b)) {
            (Some(x), Some(y)) => self.constant(x.min(y)),
            _ if a == b || self.never_above(a, b) => a,
            _ if self.never_above(b, a) => b,
            _ => self.intern(Operation::Min(a, b)),
        }
    }

    /// The larger of two.
    pub fn max(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.constant_value(a), self.constant_value(b)) {
            (Some(x), Some(y)) => self.constant(x.max(y)),
            _ if a == b || self.never_above(b, a) => a,
            _ if self.never_above(a, b) => b,
            _ => self.intern(Operation::Max(a, b)),
        }
    }

    /// Whether a ≤ b wherever both are defined, which is everywhere.
    fn never_above(&self, a: NodeId, b: NodeId) -> bool {
        let (a, b) = (self.facts(a), self.facts(b));
        a.total && b.total && a.range.hi() <= b.range.lo()
    }

    /// x where a ≤ b, y elsewhere.
    pub fn select(&mut self, a: NodeId, b: NodeId, x: NodeId, y: NodeId) -> NodeId {
        match (self.constant_value(a), self.constant_value(b)) {
            // The branch not taken must not have carried the places where it is undefined.
            (Some(p), Some(q)) if p <= q && self.facts(y).total => x,
            (Some(p), Some(q)) if p > q && self.facts(x).total => y,
            _ if x == y && self.facts(a).total && self.facts(b).total => x,
            _ => self.intern(Operation::Select([a, b, x, y])),
        }
    }

    /// Whether a node is this constant.
    pub(super) fn is(&self, node: NodeId, value: f64) -> bool {
        self.constant_value(node) == Some(value)
    }

    fn fold(&mut self, a: NodeId, b: NodeId, exact: impl Fn(f64, f64) -> Option<f64>) -> Option<NodeId> {
        let folded = exact(self.constant_value(a)?, self.constant_value(b)?)?;
        Some(self.constant(folded))
    }
}
