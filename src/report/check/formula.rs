//! Assembled formulas as text.
//!
//! The words of a formula are those of [`expr::print`](crate::expr::print); this adds signed sums and the raised digits
//! and dots of a screen that has them. Names need no cleansing, since a formula only holds identifiers.

use crate::diag::Span;
use crate::expr::ast::{BinaryOp, Expr, ExprKind};

/// Which characters a text may use.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    /// Raised digits and a middle dot for products.
    Unicode,
    /// ASCII, as the model file writes it.
    Ascii,
}

/// A term of a sum.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Signed {
    /// Whether it is subtracted.
    pub(super) is_negative: bool,
    /// What is added or subtracted.
    pub(super) expr: Expr,
}

impl Style {
    /// A formula as text.
    pub(super) fn formula(self, expr: &Expr) -> String {
        self.dress(&expr.to_string())
    }

    /// The terms of a sum, each with its sign; `0` where there is none.
    pub(super) fn sum(self, terms: &[Signed]) -> Vec<String> {
        let written = terms.iter().enumerate().map(|(place, term)| match (place, term.is_negative) {
            (0, false) => term.expr.to_string(),
            (0, true) => format!("-{}", after(BinaryOp::Sub, &term.expr)),
            (_, false) => format!("+ {}", after(BinaryOp::Add, &term.expr)),
            (_, true) => format!("- {}", after(BinaryOp::Sub, &term.expr)),
        });
        let written: Vec<String> = written.map(|text| self.dress(&text)).collect();
        if written.is_empty() { vec!["0".to_owned()] } else { written }
    }

    /// The sign between factors.
    pub(super) fn times(self) -> char {
        match self {
            Style::Unicode => '·',
            Style::Ascii => '*',
        }
    }

    fn dress(self, ascii: &str) -> String {
        if self == Style::Ascii {
            return ascii.to_owned();
        }
        let mut dressed = String::with_capacity(ascii.len() + 8);
        let mut rest = ascii;
        while let Some(c) = rest.chars().next() {
            let (written, taken) = match (c, raised(rest)) {
                ('*', _) => (self.times(), 1),
                (_, Some(digit)) => (digit, 2),
                _ => (c, c.len_utf8()),
            };
            dressed.push(written);
            rest = &rest[taken..];
        }
        dressed
    }
}

/// The raised digit that `^2` or `^3` becomes, where no further digits follow.
fn raised(text: &str) -> Option<char> {
    let mut next = text.chars();
    let digit = match (next.next(), next.next()) {
        (Some('^'), Some('2')) => '²',
        (Some('^'), Some('3')) => '³',
        _ => return None,
    };
    next.next().is_none_or(|c| !c.is_ascii_digit() && !matches!(c, '.' | 'e' | 'E' | '^')).then_some(digit)
}

/// `expr` as it is written to the right of an operator of sums.
fn after(operator: BinaryOp, expr: &Expr) -> String {
    let zero = node(ExprKind::Number(0.0));
    let whole = node(ExprKind::Binary(operator, Box::new(zero), Box::new(expr.clone()))).to_string();
    whole.splitn(3, ' ').nth(2).unwrap_or_default().to_owned()
}

/// The shortest text that reads back as `x`; a power of ten where zeros would have to be counted.
pub(super) fn number(x: f64) -> String {
    let size = x.abs();
    if size == 0.0 || (1e-4..1e7).contains(&size) { format!("{}", x + 0.0) } else { format!("{x:e}") }
}

/// A node that stands nowhere in a file.
pub(super) fn node(kind: ExprKind) -> Expr {
    Expr { kind, span: Span::default() }
}

/// a ∘ b, with factors of one left out.
pub(super) fn binary(operator: BinaryOp, a: Expr, b: Expr) -> Expr {
    match (operator, &a.kind, &b.kind) {
        (BinaryOp::Mul, ExprKind::Number(1.0), _) => b,
        (BinaryOp::Mul | BinaryOp::Div, _, ExprKind::Number(1.0)) => a,
        _ => node(ExprKind::Binary(operator, Box::new(a), Box::new(b))),
    }
}
