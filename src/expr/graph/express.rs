//! Back from the graph to a syntax tree, for people to read.

use super::{Graph, NodeId, Operation, Variable};
use crate::diag::Span;
use crate::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use crate::expr::function::Function;

/// A tree larger than this says nothing to a reader any more.
const MOST_PARTS: usize = 2_000;

impl Graph {
    /// The node as a formula over the given names; `None` where it would be too large to read, or where it holds a
    /// derivative of a quotient, which formulas have no word for.
    pub fn express(&self, node: NodeId, name: &dyn Fn(Variable) -> String) -> Option<Expr> {
        let mut budget = MOST_PARTS;
        self.expression(node, name, &mut budget)
    }

    fn expression(&self, node: NodeId, name: &dyn Fn(Variable) -> String, budget: &mut usize) -> Option<Expr> {
        *budget = budget.checked_sub(1)?;
        let mut part = |operand: NodeId| self.expression(operand, name, budget);
        Some(match self.operation(node) {
            Operation::Constant(value) => number(value.get()),
            Operation::State(i) => named(name(Variable::State(i))),
            Operation::Parameter(i) => named(name(Variable::Parameter(i))),
            Operation::Neg(a) => negated(part(a)?),
            Operation::Add(a, b) => binary(BinaryOp::Add, part(a)?, part(b)?),
            Operation::Sub(a, b) => binary(BinaryOp::Sub, part(a)?, part(b)?),
            Operation::Mul(a, b) => binary(BinaryOp::Mul, part(a)?, part(b)?),
            Operation::Div(a, b) => binary(BinaryOp::Div, part(a)?, part(b)?),
            Operation::PowInt(a, n) => binary(BinaryOp::Pow, part(a)?, number(f64::from(n))),
            Operation::Pow(a, b) => binary(BinaryOp::Pow, part(a)?, part(b)?),
            Operation::Apply(function, a) => call(surface(function), vec![part(a)?]),
            Operation::Min(a, b) => call(Builtin::Min, vec![part(a)?, part(b)?]),
            Operation::Max(a, b) => call(Builtin::Max, vec![part(a)?, part(b)?]),
            Operation::Saturation([s, c, v]) => {
                let (s, c, v) = (part(s)?, part(c)?, part(v)?);
                let grown = if c.kind == ExprKind::Number(1.0) { s.clone() } else { product(c, s.clone()) };
                binary(BinaryOp::Div, s, binary(BinaryOp::Add, v, grown))
            }
            Operation::Quotient(quotient, 0, u) => {
                let u = part(u)?;
                binary(BinaryOp::Div, call(surface(quotient.function()), vec![u.clone()]), u)
            }
            Operation::PowerQuotient(0, u, p) => {
                let (u, p) = (part(u)?, part(p)?);
                let power = binary(BinaryOp::Pow, binary(BinaryOp::Add, number(1.0), u.clone()), p);
                binary(BinaryOp::Div, binary(BinaryOp::Sub, power, number(1.0)), u)
            }
            Operation::Interaction { block, row } => self.interaction_sum(block, row, name, budget)?,
            Operation::Quotient(..) | Operation::PowerQuotient(..) | Operation::Select(_) => return None,
        })
    }

    fn interaction_sum(
        &self,
        block: usize,
        row: usize,
        name: &dyn Fn(Variable) -> String,
        budget: &mut usize,
    ) -> Option<Expr> {
        let matrix = &self.matrices[block];
        let mut sum: Option<Expr> = None;
        for column in 0..matrix.order {
            let coefficient = match matrix.formulas[row].iter().find(|(j, _)| *j == column) {
                Some(&(_, entry)) => self.expression(entry, name, budget)?,
                None => number(matrix.numbers[row * matrix.order + column]),
            };
            if coefficient.kind == ExprKind::Number(0.0) {
                continue;
            }
            *budget = budget.checked_sub(2)?;
            let x = named(name(Variable::State(column)));
            sum = Some(match (sum, coefficient.kind) {
                (None, kind) => product(bare(kind), x),
                (Some(sum), ExprKind::Neg(inner)) => binary(BinaryOp::Sub, sum, product(*inner, x)),
                (Some(sum), kind) => binary(BinaryOp::Add, sum, product(bare(kind), x)),
            });
        }
        Some(sum.unwrap_or_else(|| number(0.0)))
    }
}

/// The function of the formula language that an elementary function is.
fn surface(function: Function) -> Builtin {
    match function {
        Function::Exp => Builtin::Exp,
        Function::Ln => Builtin::Ln,
        Function::Log10 => Builtin::Log10,
        Function::Expm1 => Builtin::Expm1,
        Function::Log1p => Builtin::Log1p,
        Function::Sqrt => Builtin::Sqrt,
        Function::Abs => Builtin::Abs,
        Function::Tanh => Builtin::Tanh,
    }
}

fn bare(kind: ExprKind) -> Expr {
    Expr { kind, span: Span::default() }
}

fn number(value: f64) -> Expr {
    if value < 0.0 { negated(number(-value)) } else { bare(ExprKind::Number(value)) }
}

fn named(name: String) -> Expr {
    bare(ExprKind::Name(name))
}

fn negated(expr: Expr) -> Expr {
    bare(ExprKind::Neg(Box::new(expr)))
}

fn call(builtin: Builtin, arguments: Vec<Expr>) -> Expr {
    bare(ExprKind::Call(builtin, arguments))
}

fn binary(op: BinaryOp, a: Expr, b: Expr) -> Expr {
    bare(ExprKind::Binary(op, Box::new(a), Box::new(b)))
}

/// A product whose left-associated text needs no parentheses: c·(a·b) as (c·a)·b. Equal as numbers; only for reading.
fn product(left: Expr, right: Expr) -> Expr {
    match right.kind {
        ExprKind::Binary(BinaryOp::Mul, a, b) => binary(BinaryOp::Mul, product(left, *a), *b),
        kind => binary(BinaryOp::Mul, left, bare(kind)),
    }
}
