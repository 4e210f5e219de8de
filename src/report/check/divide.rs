//! A formula divided by a species' abundance, where it visibly is a multiple of it.
//!
//! Only for showing the per-capita form: `r*S*(1 - S/K)` becomes `r*(1 - S/K)`. Shorthands are written out where their
//! body is what can be divided. What is not visibly a multiple is left alone; nothing is simplified further. The graph's
//! own division finds more, but knows no shorthand and no order of terms, so that its quotients read like no line of the
//! file.

use super::formula::{binary, node};
use crate::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use crate::model::{Model, Name};

/// Most nodes that are looked at: shorthands of shorthands can stand for very long formulas.
const MOST_NODES: usize = 2_000;

/// `expr` divided by the abundance called `symbol`.
pub(super) fn divide(model: &Model, expr: &Expr, symbol: &str) -> Option<Expr> {
    Division { model, symbol, nodes_left: MOST_NODES }.of(expr)
}

struct Division<'m> {
    model: &'m Model,
    symbol: &'m str,
    nodes_left: usize,
}

impl Division<'_> {
    fn of(&mut self, expr: &Expr) -> Option<Expr> {
        self.nodes_left = self.nodes_left.checked_sub(1)?;
        match &expr.kind {
            ExprKind::Number(0.0) => Some(expr.clone()),
            ExprKind::Name(name) => self.of_name(name),
            ExprKind::Neg(a) => Some(node(ExprKind::Neg(Box::new(self.of(a)?)))),
            ExprKind::Binary(operator, a, b) => self.of_binary(*operator, a, b),
            ExprKind::Call(function, arguments) => self.of_call(*function, arguments),
            ExprKind::Number(_) | ExprKind::Hole => None,
        }
    }

    fn of_name(&mut self, name: &str) -> Option<Expr> {
        if name == self.symbol {
            return Some(one());
        }
        let Some(Name::Shorthand(id)) = self.model.names.get(name) else { return None };
        let body = &self.model.shorthand.get(id.0)?.formula.expr;
        self.of(body)
    }

    fn of_binary(&mut self, operator: BinaryOp, a: &Expr, b: &Expr) -> Option<Expr> {
        match operator {
            BinaryOp::Add | BinaryOp::Sub => Some(binary(operator, self.of(a)?, self.of(b)?)),
            BinaryOp::Mul => match self.of(a) {
                Some(quotient) => Some(binary(operator, quotient, b.clone())),
                None => Some(binary(operator, a.clone(), self.of(b)?)),
            },
            BinaryOp::Div => Some(binary(operator, self.of(a)?, b.clone())),
            BinaryOp::Pow => self.of_power(a, b),
        }
    }

    /// xⁿ/x = xⁿ⁻¹ for a literal n of at least one.
    fn of_power(&self, base: &Expr, exponent: &Expr) -> Option<Expr> {
        match (&base.kind, &exponent.kind) {
            (ExprKind::Name(name), ExprKind::Number(1.0)) if name == self.symbol => Some(one()),
            (ExprKind::Name(name), ExprKind::Number(2.0)) if name == self.symbol => Some(base.clone()),
            (ExprKind::Name(name), ExprKind::Number(n)) if name == self.symbol && *n > 2.0 => {
                Some(binary(BinaryOp::Pow, base.clone(), node(ExprKind::Number(n - 1.0))))
            }
            _ => None,
        }
    }

    /// By the definitions in the contract of formulas; min and max because an abundance is never negative.
    fn of_call(&mut self, function: Builtin, arguments: &[Expr]) -> Option<Expr> {
        let times = |a: Expr, b: &Expr| binary(BinaryOp::Mul, a, b.clone());
        let ratio = |a: Expr, b: Expr| binary(BinaryOp::Div, a, b);
        let one_and = |operator, b: Expr| binary(operator, one(), b);
        match (function, arguments) {
            (Builtin::Min | Builtin::Max, [a, b]) => {
                Some(node(ExprKind::Call(function, vec![self.of(a)?, self.of(b)?])))
            }
            (Builtin::Logistic, [n, r, k]) => {
                let quotient = times(self.of(n)?, r);
                Some(times(quotient, &one_and(BinaryOp::Sub, ratio(n.clone(), k.clone()))))
            }
            (Builtin::Holling1, [n, a]) => Some(times(self.of(n)?, a)),
            (Builtin::Holling2, [n, a, h]) => {
                let handled = times(times(a.clone(), h), n);
                Some(ratio(times(self.of(n)?, a), one_and(BinaryOp::Add, handled)))
            }
            (Builtin::Holling3, [n, a, h]) => {
                let square = binary(BinaryOp::Pow, n.clone(), node(ExprKind::Number(2.0)));
                let handled = times(times(a.clone(), h), &square);
                Some(ratio(times(times(self.of(n)?, a), n), one_and(BinaryOp::Add, handled)))
            }
            _ => None,
        }
    }
}

fn one() -> Expr {
    node(ExprKind::Number(1.0))
}
