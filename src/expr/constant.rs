//! The value of a formula, straight from its syntax tree.
//!
//! For formulas that are worked out once, such as a scenario's values. Whatever is evaluated often goes through
//! [`super::tape`], which agrees with this to rounding. To add a function, add its arm to `call`.

use super::ast::{BinaryOp, Builtin, Expr, ExprKind};

/// The formula's value, with `value` giving that of each name; `None` where it holds an unknown name or a hole. Follows
/// IEEE 754 where the formula is not defined: the result may be infinite or NaN.
pub fn evaluate(expr: &Expr, value: &impl Fn(&str) -> Option<f64>) -> Option<f64> {
    Some(match &expr.kind {
        ExprKind::Number(number) => *number,
        ExprKind::Name(name) => value(name)?,
        ExprKind::Neg(a) => -evaluate(a, value)?,
        ExprKind::Binary(op, a, b) => binary(*op, evaluate(a, value)?, evaluate(b, value)?),
        ExprKind::Call(builtin, arguments) => {
            let mut values = [f64::NAN; 3];
            for (slot, argument) in values.iter_mut().zip(arguments) {
                *slot = evaluate(argument, value)?;
            }
            call(*builtin, values)
        }
        ExprKind::Hole => return None,
    })
}

fn binary(op: BinaryOp, a: f64, b: f64) -> f64 {
    match op {
        BinaryOp::Add => a + b,
        BinaryOp::Sub => a - b,
        BinaryOp::Mul => a * b,
        BinaryOp::Div => a / b,
        BinaryOp::Pow => a.powf(b),
    }
}

/// A function of up to three arguments; those it does not take are ignored. NaN stays NaN, in `min` and `max` too.
fn call(builtin: Builtin, [x, y, z]: [f64; 3]) -> f64 {
    match builtin {
        Builtin::Exp => x.exp(),
        Builtin::Ln => x.ln(),
        Builtin::Log10 => x.log10(),
        Builtin::Expm1 => x.exp_m1(),
        Builtin::Log1p => x.ln_1p(),
        Builtin::Sqrt => x.sqrt(),
        Builtin::Abs => x.abs(),
        Builtin::Min => lesser(x, y),
        Builtin::Max => greater(x, y),
        Builtin::Tanh => x.tanh(),
        Builtin::Clamp => lesser(greater(x, y), z),
        Builtin::Ramp => lesser(greater((x - y) / (z - y), 0.0), 1.0),
        Builtin::Logistic => y * x * (1.0 - x / z),
        Builtin::Holling1 => y * x,
        Builtin::Holling2 => y * x / (1.0 + y * z * x),
        Builtin::Holling3 => y * (x * x) / (1.0 + y * z * (x * x)),
    }
}

fn lesser(a: f64, b: f64) -> f64 {
    if a.is_nan() || b.is_nan() { f64::NAN } else { a.min(b) }
}

fn greater(a: f64, b: f64) -> f64 {
    if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b) }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::expr::parse::parse;

    fn check(text: &str, expected: f64) {
        let (expr, slips) = parse(text);
        assert_eq!(slips, [], "{text}");
        let value = |name: &str| [("N", 2.0), ("K", 8.0)].into_iter().find(|(known, _)| *known == name).map(|(_, v)| v);
        assert_eq!(evaluate(&expr, &value), Some(expected), "{text}");
    }

    #[test]
    fn formulas_have_the_value_worked_out_by_hand() {
        check("-N^2", -4.0);
        check("2^3^2", 512.0);
        check("1 - 2*N/K", 0.5);
        check("exp(0) + ln(1) + log10(100) + expm1(0) + log1p(0)", 3.0);
        check("sqrt(K*N) + abs(-1) + tanh(0)", 5.0);
        check("min(N, K) + max(N, K)", 10.0);
        check("clamp(K, 0, 3) + clamp(-1, 0, 3) + clamp(N, 0, 3)", 5.0);
        check("ramp(N, 0, K) + ramp(9, 0, 1) + ramp(-9, 0, 1)", 1.25);
        check("logistic(N, 0.5, K)", 0.75);
        check("holling1(N, 3)", 6.0);
        check("holling2(N, 3, 0.5)", 1.5);
        check("holling3(N, 3, 0.25)", 3.0);
    }

    #[test]
    fn what_is_not_known_or_not_defined_has_no_finite_value() {
        let none = |_: &str| None;
        assert_eq!(evaluate(&parse("Q + 1").0, &none), None);
        assert_eq!(evaluate(&parse("1 +").0, &none), None);
        for text in ["1/0", "0/0", "ln(-1)", "min(0/0, 1)", "max(1, 0/0)", "clamp(0/0, 0, 1)", "ramp(1, 1, 1)"] {
            assert!(!evaluate(&parse(text).0, &none).is_some_and(f64::is_finite), "{text}");
        }
    }
}
