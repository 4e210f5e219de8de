//! Any formula at any point: the simplified graph, and the divided row times x, equal the formula as it was written.
//!
//! Both are enclosed in intervals; enclosures of one real number must meet wherever both are defined.
#![no_main]

use libfuzzer_sys::fuzz_target;
use restpoint::diag::Span;
use restpoint::expr::ast::{BinaryOp, Builtin, Expr, ExprKind};
use restpoint::expr::builtin::BUILTINS;
use restpoint::expr::graph::Graph;
use restpoint::expr::tape::Tape;
use restpoint::num::interval::Interval;

const NAMES: [&str; 4] = ["x", "y", "a", "b"];

/// Reads a tree and a point off the bytes.
struct Bytes<'b>(&'b [u8]);

impl Bytes<'_> {
    fn next(&mut self) -> u8 {
        let Some((&first, rest)) = self.0.split_first() else { return 0 };
        self.0 = rest;
        first
    }

    /// Small whole numbers and halves often, now and then anything.
    fn number(&mut self) -> f64 {
        match self.next() % 8 {
            0..=3 => f64::from(self.next() % 5),
            4 => 0.5,
            5 => f64::from(self.next()) / 16.0,
            6 => f64::from(self.next()) * 1e-9,
            _ => f64::from(self.next()) * 1e6,
        }
    }

    fn tree(&mut self, depth: usize) -> Expr {
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

/// The formula as written, in intervals.
fn direct(expr: &Expr, values: &[Interval; 4], ok: &mut bool) -> Interval {
    let mut at = |expr: &Expr| direct(expr, values, ok);
    match &expr.kind {
        ExprKind::Number(value) => Interval::point(*value),
        ExprKind::Name(name) => values[NAMES.iter().position(|known| known == name).unwrap_or(0)],
        ExprKind::Neg(a) => -at(a),
        ExprKind::Binary(op, a, b) => {
            let (a, b) = (at(a), at(b));
            match op {
                BinaryOp::Add => a + b,
                BinaryOp::Sub => a - b,
                BinaryOp::Mul => a * b,
                BinaryOp::Div => a.div(b, ok),
                BinaryOp::Pow => power(a, b, ok),
            }
        }
        ExprKind::Call(builtin, arguments) => {
            let arguments: Vec<Interval> = arguments.iter().map(at).collect();
            call(*builtin, &arguments, ok)
        }
        ExprKind::Hole => Interval::EMPTY,
    }
}

fn power(a: Interval, b: Interval, ok: &mut bool) -> Interval {
    if b.is_point() && b.lo().fract() == 0.0 && b.lo().abs() <= 64.0 {
        return a.powi(b.lo() as i32, ok);
    }
    a.pow(b, ok)
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

fuzz_target!(|bytes: &[u8]| {
    let mut bytes = Bytes(bytes);
    let point: [f64; 4] = std::array::from_fn(|_| bytes.number());
    let expr = bytes.tree(4);
    let values = point.map(Interval::point);
    let mut written_ok = true;
    let written = direct(&expr, &values, &mut written_ok);
    let mut graph = Graph::new(2, values[2..].to_vec());
    let row = graph.read(&expr, &mut |graph, name| match name {
        "x" => graph.state(0),
        "y" => graph.state(1),
        "a" => graph.parameter(0),
        _ => graph.parameter(1),
    });
    let tape = Tape::new(&graph, &[row]);
    let mut run = tape.start(&values[2..]);
    let defined = run.at(&values[..2]).defined;
    let simplified = *run.output(0);
    if written_ok && defined {
        assert!(!written.intersect(simplified).is_empty(), "{expr} at {point:?}: {written:?} and {simplified:?}");
    }
    let Some(quotient) = graph.divide(row, 0).quotient else { return };
    let tape = Tape::new(&graph, &[quotient]);
    let mut run = tape.start(&values[2..]);
    let quotient_defined = run.at(&values[..2]).defined;
    let product = *run.output(0) * values[0];
    // Limits are taken with every other state positive.
    if written_ok && quotient_defined && point[0] > 0.0 && point[1] > 0.0 {
        assert!(!written.intersect(product).is_empty(), "{expr} divided by x at {point:?}: {written:?} and {product:?}");
    }
});
