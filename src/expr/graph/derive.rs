//! Exact derivatives as nodes of the same graph.
//!
//! The derivative of min, max, abs and select is that of the branch taken (Clarke 1983: an interval that meets both gets
//! the hull). Second derivatives are derivatives of derivatives; third ones come from jets over the tape.

use super::{Graph, NodeId, Operation, Variable};
use crate::expr::function::Function;

impl Graph {
    /// ∂node/∂variable.
    ///
    /// # Panics
    /// Beyond the third derivative of a quotient f(u)/u.
    pub fn derivative(&mut self, node: NodeId, variable: Variable) -> NodeId {
        if !self.derivatives.contains_key(&(node, variable)) {
            let needed = self.reachable(&[node]);
            self.derive(&needed, variable);
        }
        self.known(node, variable)
    }

    /// The Jacobian of rows with respect to all states, row by row.
    pub fn jacobian(&mut self, rows: &[NodeId]) -> Vec<NodeId> {
        let mut entries = Vec::with_capacity(rows.len() * self.states);
        for &row in rows {
            // Once a row, since finding out takes a walk over the whole graph.
            let needed = self.reachable(&[row]);
            for i in 0..self.states {
                self.derive(&needed, Variable::State(i));
                entries.push(self.known(row, Variable::State(i)));
            }
        }
        entries
    }

    /// The derivatives of all these; operands come first, so no recursion is needed, however deep the formula.
    fn derive(&mut self, needed: &[NodeId], variable: Variable) {
        for &inner in needed {
            if !self.derivatives.contains_key(&(inner, variable)) {
                let derivative = self.derivative_of(inner, variable);
                self.derivatives.insert((inner, variable), derivative);
            }
        }
    }

    fn known(&self, node: NodeId, variable: Variable) -> NodeId {
        self.derivatives[&(node, variable)]
    }

    fn derivative_of(&mut self, node: NodeId, variable: Variable) -> NodeId {
        if let Variable::State(i) = variable
            && !self.facts(node).may_depend_on(i)
        {
            return self.zero();
        }
        let operation = self.operation(node);
        let d = |graph: &Self, operand: NodeId| graph.known(operand, variable);
        match operation {
            Operation::Constant(_) => self.zero(),
            Operation::State(i) => self.constant(f64::from(u8::from(variable == Variable::State(i)))),
            Operation::Parameter(i) => self.constant(f64::from(u8::from(variable == Variable::Parameter(i)))),
            Operation::Neg(a) => {
                let da = d(self, a);
                self.neg(da)
            }
            Operation::Add(a, b) => self.add(d(self, a), d(self, b)),
            Operation::Sub(a, b) => self.sub(d(self, a), d(self, b)),
            Operation::Mul(a, b) => {
                let (left, right) = (self.mul(d(self, a), b), self.mul(a, d(self, b)));
                self.add(left, right)
            }
            Operation::Div(a, b) => self.quotient_rule(node, d(self, a), b, d(self, b)),
            Operation::PowInt(a, n) => self.whole_power_rule(a, n, d(self, a)),
            Operation::Pow(a, b) => self.power_rule(node, [a, b], [d(self, a), d(self, b)]),
            Operation::Apply(function, a) => self.chain_rule(function, a, node, d(self, a)),
            Operation::Min(a, b) => self.select(a, b, d(self, a), d(self, b)),
            Operation::Max(a, b) => self.select(a, b, d(self, b), d(self, a)),
            Operation::Select([a, b, x, y]) => self.select(a, b, d(self, x), d(self, y)),
            Operation::Saturation(operands) => {
                self.saturation_rule(node, operands, operands.map(|operand| d(self, operand)))
            }
            Operation::Quotient(quotient, k, u) => {
                let outer = self.intern(Operation::Quotient(quotient, next_order(k), u));
                self.mul(outer, d(self, u))
            }
            Operation::PowerQuotient(k, u, p) => self.power_quotient_rule(k, [u, p], [d(self, u), d(self, p)]),
            Operation::Interaction { block, row } => self.interaction_rule(block, row, variable),
        }
    }

    /// (a' − (a/b) b')/b
    fn quotient_rule(&mut self, quotient: NodeId, da: NodeId, b: NodeId, db: NodeId) -> NodeId {
        if self.is(db, 0.0) {
            return if self.is(da, 0.0) { da } else { self.div(da, b) };
        }
        let shift = self.mul(quotient, db);
        let rise = self.sub(da, shift);
        self.div(rise, b)
    }

    fn whole_power_rule(&mut self, a: NodeId, n: i32, da: NodeId) -> NodeId {
        let scale = self.constant(f64::from(n));
        let lower = self.powi(a, n - 1);
        let outer = self.mul(scale, lower);
        self.mul(outer, da)
    }

    /// b a^(b−1) a' + a^b ln(a) b'
    fn power_rule(&mut self, power: NodeId, [a, b]: [NodeId; 2], [da, db]: [NodeId; 2]) -> NodeId {
        let one = self.one();
        let below = self.sub(b, one);
        let lower = self.pow(a, below);
        let outer = self.mul(b, lower);
        let through_base = self.mul(outer, da);
        if self.is(db, 0.0) {
            return through_base;
        }
        let log = self.apply(Function::Ln, a);
        let grown = self.mul(power, log);
        let through_exponent = self.mul(grown, db);
        self.add(through_base, through_exponent)
    }

    fn chain_rule(&mut self, function: Function, u: NodeId, own: NodeId, du: NodeId) -> NodeId {
        if self.is(du, 0.0) {
            return du;
        }
        let outer = (function.row().derivative)(self, u, own);
        self.mul(outer, du)
    }

    /// With w = s/D, D = v + c s: w' = s' (v/D)/D − v' w/D − c' w².
    fn saturation_rule(&mut self, w: NodeId, [s, c, v]: [NodeId; 3], [ds, dc, dv]: [NodeId; 3]) -> NodeId {
        let grown = self.mul(c, s);
        let den = self.add(v, grown);
        let mut sum = self.zero();
        if !self.is(ds, 0.0) {
            let one = self.one();
            let free = self.saturation(v, one, grown);
            let slope = self.div(free, den);
            let part = self.mul(ds, slope);
            sum = self.add(sum, part);
        }
        if !self.is(dv, 0.0) {
            let slope = self.div(w, den);
            let part = self.mul(dv, slope);
            sum = self.sub(sum, part);
        }
        if !self.is(dc, 0.0) {
            let square = self.powi(w, 2);
            let part = self.mul(dc, square);
            sum = self.sub(sum, part);
        }
        sum
    }

    /// Through u: the next order. Through p: the k-th u-derivative of (1 + u)^p L(u), L(u) = ln(1 + u)/u, by Leibniz.
    fn power_quotient_rule(&mut self, k: u8, [u, p]: [NodeId; 2], [du, dp]: [NodeId; 2]) -> NodeId {
        let mut sum = self.zero();
        if !self.is(du, 0.0) {
            let outer = self.intern(Operation::PowerQuotient(next_order(k), u, p));
            sum = self.mul(outer, du);
        }
        if !self.is(dp, 0.0) {
            let mut through = self.zero();
            for j in 0..=k {
                let binomial = self.constant(f64::from(binomial(k, j)));
                let power = self.shifted_power_derivative(u, p, k - j);
                let log = self.intern(Operation::Quotient(crate::expr::function::Quotient::Log1p, j, u));
                let product = self.mul(power, log);
                let part = self.mul(binomial, product);
                through = self.add(through, part);
            }
            let part = self.mul(through, dp);
            sum = self.add(sum, part);
        }
        sum
    }

    /// d^m/du^m (1 + u)^p = p (p − 1) … (p − m + 1) (1 + u)^(p − m).
    fn shifted_power_derivative(&mut self, u: NodeId, p: NodeId, m: u8) -> NodeId {
        let one = self.one();
        let mut scale = one;
        let mut exponent = p;
        for _ in 0..m {
            scale = self.mul(scale, exponent);
            exponent = self.sub(exponent, one);
        }
        let base = self.add(one, u);
        let power = self.pow(base, exponent);
        self.mul(scale, power)
    }

    fn interaction_rule(&mut self, block: usize, row: usize, variable: Variable) -> NodeId {
        if let Variable::State(column) = variable {
            return self.matrix_entry(block, row, column);
        }
        let entries = self.matrices[block].formulas[row].clone();
        let mut sum = self.zero();
        for (column, entry) in entries {
            let (slope, x) = (self.known(entry, variable), self.state(column));
            let part = self.mul(slope, x);
            sum = self.add(sum, part);
        }
        sum
    }
}

/// Quotients have operations up to their third derivative: two by the graph, one more by a jet over it.
fn next_order(k: u8) -> u8 {
    assert!(k < 3, "derivative {} of a quotient", k + 1);
    k + 1
}

/// n over k, for n ≤ 3.
fn binomial(n: u8, k: u8) -> u8 {
    const ROWS: [[u8; 4]; 4] = [[1, 0, 0, 0], [1, 1, 0, 0], [1, 2, 1, 0], [1, 3, 3, 1]];
    ROWS[usize::from(n)][usize::from(k)]
}
