//! The table of functions that a formula can call.
//!
//! To add one, add a variant to [`Builtin`], a row here, and either a row in [`super::function::FUNCTIONS`] (a new
//! elementary function with its derivative, interval extension and domain) or an expansion into what exists. Parser,
//! printer, help and tests iterate over the table.

use super::ast::Builtin;
use super::function::Function;
use super::graph::{Graph, NodeId};

/// One function of the formula language.
pub struct Row {
    /// Which it is.
    pub builtin: Builtin,
    /// What formulas call it by.
    pub name: &'static str,
    /// Names of its arguments, in order.
    pub arguments: &'static [&'static str],
    /// What it is, in a few words.
    pub help: &'static str,
    /// Where it is defined, in words; empty for everywhere.
    pub domain: &'static str,
    /// Builds it in the graph from as many nodes as it has arguments.
    pub build: fn(&mut Graph, &[NodeId]) -> NodeId,
}

/// Every function, in the order of [`Builtin`].
pub const BUILTINS: &[Row] = &[
    row(Builtin::Exp, "exp", &["x"], "e to the power x", "", |g, a| g.apply(Function::Exp, a[0])),
    row(Builtin::Ln, "ln", &["x"], "natural logarithm", "x > 0", |g, a| g.apply(Function::Ln, a[0])),
    row(Builtin::Log10, "log10", &["x"], "decimal logarithm", "x > 0", |g, a| g.apply(Function::Log10, a[0])),
    row(Builtin::Expm1, "expm1", &["x"], "exp(x) - 1, accurate near 0", "", |g, a| g.apply(Function::Expm1, a[0])),
    row(Builtin::Log1p, "log1p", &["x"], "ln(1 + x), accurate near 0", "x > -1", |g, a| g.apply(Function::Log1p, a[0])),
    row(Builtin::Sqrt, "sqrt", &["x"], "square root", "x >= 0", |g, a| g.apply(Function::Sqrt, a[0])),
    row(Builtin::Abs, "abs", &["x"], "absolute value", "", |g, a| g.apply(Function::Abs, a[0])),
    row(Builtin::Min, "min", &["a", "b"], "the smaller of two", "", |g, a| g.min(a[0], a[1])),
    row(Builtin::Max, "max", &["a", "b"], "the larger of two", "", |g, a| g.max(a[0], a[1])),
    row(Builtin::Tanh, "tanh", &["x"], "hyperbolic tangent", "", |g, a| g.apply(Function::Tanh, a[0])),
    row(Builtin::Clamp, "clamp", &["x", "lo", "hi"], "x held between lo and hi", "lo <= hi", |g, a| {
        let low = g.max(a[0], a[1]);
        g.min(low, a[2])
    }),
    row(Builtin::Ramp, "ramp", &["x", "lo", "hi"], "0 below lo, 1 above hi, linear between", "lo < hi", ramp),
    row(Builtin::Logistic, "logistic", &["N", "r", "K"], "r*N*(1 - N/K)", "K not 0", |g, a| {
        let (used, one) = (g.div(a[0], a[2]), g.one());
        let free = g.sub(one, used);
        let growth = g.mul(a[1], a[0]);
        g.mul(growth, free)
    }),
    row(Builtin::Holling1, "holling1", &["N", "a"], "a*N", "", |g, a| g.mul(a[1], a[0])),
    row(Builtin::Holling2, "holling2", &["N", "a", "h"], "a*N/(1 + a*h*N)", "1 + a*h*N not 0", |g, a| {
        saturating(g, a[0], a[1], a[2])
    }),
    row(Builtin::Holling3, "holling3", &["N", "a", "h"], "a*N^2/(1 + a*h*N^2)", "1 + a*h*N^2 not 0", |g, a| {
        let square = g.powi(a[0], 2);
        saturating(g, square, a[1], a[2])
    }),
];

const fn row(
    builtin: Builtin,
    name: &'static str,
    arguments: &'static [&'static str],
    help: &'static str,
    domain: &'static str,
    build: fn(&mut Graph, &[NodeId]) -> NodeId,
) -> Row {
    Row { builtin, name, arguments, help, domain, build }
}

impl Builtin {
    /// Its row in the table.
    pub fn row(self) -> &'static Row {
        &BUILTINS[self as usize]
    }

    /// The function of that name.
    pub fn by_name(name: &str) -> Option<Self> {
        BUILTINS.iter().find(|row| row.name == name).map(|row| row.builtin)
    }
}

/// (clamp(x, lo, hi) − lo)/(hi − lo): written so that both ends come out as exactly 0 and 1.
fn ramp(g: &mut Graph, a: &[NodeId]) -> NodeId {
    let (rise, run) = (g.sub(a[0], a[1]), g.sub(a[2], a[1]));
    let share = g.div(rise, run);
    let (zero, one) = (g.zero(), g.one());
    let floored = g.max(share, zero);
    g.min(floored, one)
}

/// a s / (1 + a h s), Holling (1959).
fn saturating(g: &mut Graph, s: NodeId, a: NodeId, h: NodeId) -> NodeId {
    let one = g.one();
    let taken = g.mul(a, s);
    let slope = g.mul(a, h);
    let busy = g.mul(slope, s);
    let handling = g.add(one, busy);
    g.div(taken, handling)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rows_stand_in_the_order_of_the_enum_and_names_are_distinct() {
        for (index, row) in BUILTINS.iter().enumerate() {
            assert_eq!(row.builtin as usize, index, "{}", row.name);
            assert_eq!(Builtin::by_name(row.name), Some(row.builtin));
            assert!(!row.help.is_empty() && !row.arguments.is_empty());
        }
    }
}
