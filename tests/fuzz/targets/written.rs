//! Formulas read off the fuzzer's bytes, and their value by the definitions alone: no graph, no simplification.
//!
//! Start at [`Bytes::tree`] and [`Written::of`]. To cover a new function, give its definition in [`call`].

use restpoint::diag::Span;
use restpoint::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use restpoint::expr::builtin::BUILTINS;
use restpoint::num::interval::Interval;

/// Two states, then two parameters.
pub const NAMES: [&str; 4] = ["x", "y", "a", "b"];

/// Reads trees and numbers off the bytes; zeros follow the last.
pub struct Bytes<'b>(pub &'b [u8]);

impl Bytes<'_> {
    pub fn next(&mut self) -> u8 {
        let Some((&first, rest)) = self.0.split_first() else { return 0 };
        self.0 = rest;
        first
    }

    /// Small whole numbers and halves often, now and then anything that is not negative.
    pub fn number(&mut self) -> f64 {
        match self.next() % 9 {
            0..=3 => f64::from(self.next() % 5),
            4 => 0.5,
            5 => f64::from(self.next()) / 16.0,
            6 => f64::from(self.next()) * 1e-9,
            7 => f64::from(self.next() % 70),
            _ => f64::from(self.next()) * 1e6,
        }
    }

    /// What a parameter may be: its value alone, a range around it, or any positive number.
    pub fn domain(&mut self, value: f64) -> Interval {
        match self.next() % 3 {
            0 => Interval::point(value),
            1 => Interval::new(value / 2.0, 2.0 * value + 1.0),
            _ => Interval::new(value.min(f64::MIN_POSITIVE), f64::MAX),
        }
    }

    pub fn tree(&mut self, depth: usize) -> Expr {
        let choice = if depth == 0 { self.next() % 2 } else { self.next() % 12 };
        let kind = match choice {
            0 => ExprKind::Number(self.number()),
            1 => ExprKind::Name(NAMES[usize::from(self.next()) % 4].into()),
            2 => ExprKind::Neg(Box::new(self.tree(depth - 1))),
            3..=8 => {
                let op = [BinaryOp::Add, BinaryOp::Sub, BinaryOp::Mul, BinaryOp::Div, BinaryOp::Pow, BinaryOp::Mul];
                let (a, b) = (self.tree(depth - 1), self.tree(depth - 1));
                ExprKind::Binary(op[usize::from(choice) - 3], Box::new(a), Box::new(b))
            }
            _ => {
                let row = &BUILTINS[usize::from(self.next()) % BUILTINS.len()];
                let arguments = row.arguments.iter().map(|_| self.tree(depth - 1)).collect();
                ExprKind::Call(row.builtin, arguments)
            }
        };
        Expr { kind, span: Span::default() }
    }
}

/// A formula's value at a point, as it was written.
pub struct Written {
    /// Encloses the value.
    pub value: Interval,
    /// It is defined there for certain.
    pub defined: bool,
    /// Some part of it is undefined there for certain.
    pub undefined: bool,
}

impl Written {
    /// The value at x, y, a, b.
    pub fn of(expr: &Expr, values: &[Interval; 4]) -> Self {
        let mut written = Self { value: Interval::EMPTY, defined: true, undefined: false };
        written.value = written.part(expr, values);
        written
    }

    fn part(&mut self, expr: &Expr, values: &[Interval; 4]) -> Interval {
        let mut at = |expr: &Expr| self.part(expr, values);
        let (value, holds_empty) = match &expr.kind {
            ExprKind::Number(value) => (Interval::point(*value), false),
            ExprKind::Name(name) => (values[NAMES.iter().position(|known| known == name).unwrap_or_default()], false),
            ExprKind::Neg(a) => {
                let a = at(a);
                (-a, a.is_empty())
            }
            ExprKind::Binary(op, a, b) => {
                let (a, b) = (at(a), at(b));
                (binary(*op, a, b, &mut self.defined), a.is_empty() || b.is_empty())
            }
            ExprKind::Call(builtin, arguments) => {
                let arguments: Vec<Interval> = arguments.iter().map(at).collect();
                (call(*builtin, &arguments, &mut self.defined), arguments.iter().any(|a| a.is_empty()))
            }
            ExprKind::Hole => (Interval::EMPTY, false),
        };
        self.undefined |= value.is_empty() && !holds_empty;
        value
    }
}

fn binary(op: BinaryOp, a: Interval, b: Interval, ok: &mut bool) -> Interval {
    match op {
        BinaryOp::Add => a + b,
        BinaryOp::Sub => a - b,
        BinaryOp::Mul => a * b,
        BinaryOp::Div => a.div(b, ok),
        BinaryOp::Pow => a.pow(b, ok),
    }
}

fn call(builtin: Builtin, a: &[Interval], ok: &mut bool) -> Interval {
    let one = Interval::ONE;
    match builtin {
        Builtin::Exp => a[0].exp(),
        Builtin::Ln => a[0].ln(ok),
        Builtin::Log10 => a[0].log10(ok),
        Builtin::Expm1 => a[0].expm1(),
        Builtin::Log1p => a[0].log1p(ok),
        Builtin::Sqrt => a[0].sqrt(ok),
        Builtin::Abs => a[0].abs(),
        Builtin::Min => a[0].min(a[1]),
        Builtin::Max => a[0].max(a[1]),
        Builtin::Tanh => a[0].tanh(),
        Builtin::Clamp => a[0].max(a[1]).min(a[2]),
        Builtin::Ramp => (a[0] - a[1]).div(a[2] - a[1], ok).max(Interval::ZERO).min(one),
        Builtin::Logistic => a[1] * a[0] * (one - a[0].div(a[2], ok)),
        Builtin::Holling1 => a[1] * a[0],
        Builtin::Holling2 => (a[1] * a[0]).div(one + a[1] * a[2] * a[0], ok),
        Builtin::Holling3 => {
            let square = a[0].powi(2, ok);
            (a[1] * square).div(one + a[1] * a[2] * square, ok)
        }
    }
}
