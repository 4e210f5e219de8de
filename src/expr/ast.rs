//! The syntax tree of a formula, as it was written.

use crate::diag::Span;

/// A formula or a part of one, with the bytes of the formula's text that it came from.
#[derive(Clone, Debug, PartialEq)]
pub struct Expr {
    /// What it is.
    pub kind: ExprKind,
    /// Where it stands in the formula's text.
    pub span: Span,
}

/// The forms a formula can take.
#[derive(Clone, Debug, PartialEq)]
pub enum ExprKind {
    /// A literal, taken as the nearest f64; never negative, always finite.
    Number(f64),
    /// A species' symbol, a parameter or a shorthand, in NFC.
    Name(String),
    /// −a.
    Neg(Box<Expr>),
    /// a ∘ b.
    Binary(BinaryOp, Box<Expr>, Box<Expr>),
    /// f(a, …) with as many arguments as the function takes.
    Call(Builtin, Vec<Expr>),
    /// Nothing sensible stood here; a message says why.
    Hole,
}

/// The operators that stand between two operands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum BinaryOp {
    /// `a + b`
    Add,
    /// `a - b`
    Sub,
    /// `a * b`
    Mul,
    /// `a / b`
    Div,
    /// `a ^ b`
    Pow,
}

/// The functions that a formula can call; names and arity stand in [`super::builtin::BUILTINS`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Builtin {
    /// e^x
    Exp,
    /// natural logarithm
    Ln,
    /// decimal logarithm
    Log10,
    /// e^x − 1
    Expm1,
    /// ln(1 + x)
    Log1p,
    /// square root
    Sqrt,
    /// absolute value
    Abs,
    /// the smaller of two
    Min,
    /// the larger of two
    Max,
    /// hyperbolic tangent
    Tanh,
    /// x held between lo and hi
    Clamp,
    /// 0 below lo, 1 above hi, linear between
    Ramp,
    /// r N (1 − N/K)
    Logistic,
    /// a N
    Holling1,
    /// a N / (1 + a h N)
    Holling2,
    /// a N² / (1 + a h N²)
    Holling3,
}

impl Expr {
    /// Calls `visit` on this node and every node below it, parents first.
    pub fn walk<'e>(&'e self, visit: &mut impl FnMut(&'e Expr)) {
        visit(self);
        match &self.kind {
            ExprKind::Neg(a) => a.walk(visit),
            ExprKind::Binary(_, a, b) => {
                a.walk(visit);
                b.walk(visit);
            }
            ExprKind::Call(_, arguments) => arguments.iter().for_each(|a| a.walk(visit)),
            ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Hole => {}
        }
    }
}
