//! Syntax tree → canonical text: parse ∘ print is the identity on trees.
//!
//! Parentheses stand only where precedence needs them; `+` and `-` between terms get spaces, tighter operators none.

use std::fmt::{self, Display, Formatter};

use super::ast::{BinaryOp, Expr, ExprKind};

/// How tightly a form binds; what binds less needs parentheses inside what binds more.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Binding {
    Sum,
    Product,
    Sign,
    Power,
    Atom,
}

impl Display for Expr {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match &self.kind {
            ExprKind::Number(value) => f.write_str(&number(*value)),
            ExprKind::Name(name) => f.write_str(name),
            ExprKind::Neg(a) => {
                f.write_str("-")?;
                inside(f, a, Binding::Sign)
            }
            ExprKind::Binary(op, a, b) => binary(f, *op, a, b),
            ExprKind::Call(builtin, arguments) => {
                f.write_str(builtin.row().name)?;
                let texts: Vec<String> = arguments.iter().map(Expr::to_string).collect();
                write!(f, "({})", texts.join(", "))
            }
            ExprKind::Hole => f.write_str("?"),
        }
    }
}

fn binary(f: &mut Formatter<'_>, op: BinaryOp, a: &Expr, b: &Expr) -> fmt::Result {
    let (sign, left, right) = match op {
        BinaryOp::Add => (" + ", Binding::Sum, Binding::Product),
        BinaryOp::Sub => (" - ", Binding::Sum, Binding::Product),
        BinaryOp::Mul => ("*", Binding::Product, Binding::Sign),
        BinaryOp::Div => ("/", Binding::Product, Binding::Sign),
        BinaryOp::Pow => ("^", Binding::Atom, Binding::Sign),
    };
    inside(f, a, left)?;
    f.write_str(sign)?;
    inside(f, b, right)
}

fn inside(f: &mut Formatter<'_>, expr: &Expr, at_least: Binding) -> fmt::Result {
    if binding(expr) < at_least { write!(f, "({expr})") } else { write!(f, "{expr}") }
}

fn binding(expr: &Expr) -> Binding {
    match &expr.kind {
        ExprKind::Binary(BinaryOp::Add | BinaryOp::Sub, ..) => Binding::Sum,
        ExprKind::Binary(BinaryOp::Mul | BinaryOp::Div, ..) => Binding::Product,
        ExprKind::Neg(_) => Binding::Sign,
        ExprKind::Binary(BinaryOp::Pow, ..) => Binding::Power,
        _ => Binding::Atom,
    }
}

/// The shortest text that reads back as the same number; powers of ten where zeros would fill the line.
pub fn number(value: f64) -> String {
    let plain = value == 0.0 || (1e-5..1e16).contains(&value.abs());
    if plain { format!("{value}") } else { format!("{value:e}") }
}
