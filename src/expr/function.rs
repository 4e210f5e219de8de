//! The table of elementary functions of one argument, and of their quotients f(u)/u.
//!
//! A row holds the value, its extensions to intervals and to doubles, and the derivative as a graph. To add a function: a variant
//! of [`Function`], a row in [`FUNCTIONS`], its numeric derivatives in [`Function::derivatives`].

use super::graph::{Graph, NodeId};
use super::tape::number::{Domain, Number};
use crate::num::{self, double::Double, elementary as el, interval::Interval};

/// Elementary functions of one argument.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Function {
    /// e^u
    Exp,
    /// natural logarithm
    Ln,
    /// decimal logarithm
    Log10,
    /// e^u − 1
    Expm1,
    /// ln(1 + u)
    Log1p,
    /// square root
    Sqrt,
    /// absolute value
    Abs,
    /// hyperbolic tangent
    Tanh,
}

/// One elementary function.
pub struct FunctionRow {
    /// Which it is.
    pub function: Function,
    /// What formulas call it by.
    pub name: &'static str,
    /// Correctly rounded value; NaN or infinite outside the domain.
    pub value: fn(f64) -> f64,
    /// Enclosure of the values; clears the flag where it is not defined and continuous on the whole argument.
    pub interval: fn(Interval, &mut bool) -> Interval,
    /// The same of a number of some 32 digits.
    pub double: fn(Double, &mut bool) -> Double,
    /// The derivative at `u`, given the function's own node.
    pub derivative: fn(&mut Graph, u: NodeId, own: NodeId) -> NodeId,
    /// Values at which the function is exactly this: arguments and results.
    pub exact: &'static [(f64, f64)],
}

/// Every elementary function, in the order of [`Function`].
pub const FUNCTIONS: &[FunctionRow] = &[
    FunctionRow {
        function: Function::Exp,
        name: "exp",
        value: el::exp,
        interval: |u, _| u.exp(),
        double: |u, _| u.exp(),
        derivative: |_, _, own| own,
        exact: &[(0.0, 1.0)],
    },
    FunctionRow {
        function: Function::Ln,
        name: "ln",
        value: el::ln,
        interval: |u, defined| u.ln(defined),
        double: |u, defined| u.ln(defined),
        derivative: |g, u, _| {
            let one = g.one();
            g.div(one, u)
        },
        exact: &[(1.0, 0.0)],
    },
    FunctionRow {
        function: Function::Log10,
        name: "log10",
        value: el::log10,
        interval: |u, defined| u.log10(defined),
        double: |u, defined| u.log10(defined),
        derivative: |g, u, _| {
            let (one, ten) = (g.one(), g.constant(10.0));
            let scale = g.apply(Function::Ln, ten);
            let scaled = g.mul(u, scale);
            g.div(one, scaled)
        },
        exact: &[(1.0, 0.0), (10.0, 1.0), (100.0, 2.0), (1000.0, 3.0)],
    },
    FunctionRow {
        function: Function::Expm1,
        name: "expm1",
        value: el::expm1,
        interval: |u, _| u.expm1(),
        double: |u, _| u.expm1(),
        derivative: |g, u, _| g.apply(Function::Exp, u),
        exact: &[(0.0, 0.0)],
    },
    FunctionRow {
        function: Function::Log1p,
        name: "log1p",
        value: el::log1p,
        interval: |u, defined| u.log1p(defined),
        double: |u, defined| u.log1p(defined),
        derivative: |g, u, _| {
            let one = g.one();
            let shifted = g.add(one, u);
            g.div(one, shifted)
        },
        exact: &[(0.0, 0.0)],
    },
    FunctionRow {
        function: Function::Sqrt,
        name: "sqrt",
        value: f64::sqrt,
        interval: |u, defined| u.sqrt(defined),
        double: |u, defined| u.sqrt(defined),
        derivative: |g, _, own| {
            let (one, two) = (g.one(), g.constant(2.0));
            let doubled = g.mul(two, own);
            g.div(one, doubled)
        },
        exact: &[(0.0, 0.0), (1.0, 1.0), (4.0, 2.0), (9.0, 3.0)],
    },
    FunctionRow {
        function: Function::Abs,
        name: "abs",
        value: f64::abs,
        interval: |u, _| u.abs(),
        double: |u, _| u.abs(),
        derivative: |g, u, _| {
            let (zero, one) = (g.zero(), g.one());
            let minus = g.neg(one);
            g.select(u, zero, minus, one)
        },
        exact: &[(0.0, 0.0)],
    },
    FunctionRow {
        function: Function::Tanh,
        name: "tanh",
        value: el::tanh,
        interval: |u, _| u.tanh(),
        double: |u, _| u.tanh(),
        derivative: |g, _, own| {
            let one = g.one();
            let square = g.powi(own, 2);
            g.sub(one, square)
        },
        exact: &[(0.0, 0.0)],
    },
];

impl Function {
    /// Its row in the table.
    pub fn row(self) -> &'static FunctionRow {
        &FUNCTIONS[self as usize]
    }

    /// Correctly rounded value; NaN or infinite outside the domain.
    pub fn value(self, u: f64) -> f64 {
        (self.row().value)(u)
    }

    /// Enclosure of the values; clears the flag where it is not defined and continuous on the whole argument.
    pub fn interval(self, u: Interval, defined: &mut bool) -> Interval {
        (self.row().interval)(u, defined)
    }

    /// Whether f(u) has the sign of u, zero included.
    pub fn keeps_sign(self) -> bool {
        matches!(self, Self::Expm1 | Self::Log1p | Self::Tanh | Self::Sqrt)
    }

    /// Value and first three derivatives at `u`, for jets; the first derivative also for gradients.
    pub fn derivatives<T: Number>(self, u: &T, domain: &mut Domain) -> [T; 4] {
        let one = T::constant(1.0);
        let value = u.apply(self, domain);
        match self {
            Self::Exp => [value.clone(), value.clone(), value.clone(), value],
            Self::Expm1 => {
                let e = u.apply(Self::Exp, domain);
                [value, e.clone(), e.clone(), e]
            }
            Self::Ln => logarithmic(value, &one.div(u, domain)),
            Self::Log1p => logarithmic(value, &one.div(&one.add(u), domain)),
            Self::Log10 => {
                let scale = one.div(&T::constant(10.0).apply(Self::Ln, domain), domain);
                let [_, d1, d2, d3] = logarithmic(one.clone(), &one.div(u, domain));
                [value, d1.mul(&scale), d2.mul(&scale), d3.mul(&scale)]
            }
            Self::Sqrt => {
                let d1 = T::constant(0.5).div(&value, domain);
                let d2 = T::constant(-0.5).mul(&d1).div(u, domain);
                let d3 = T::constant(-1.5).mul(&d2).div(u, domain);
                [value, d1, d2, d3]
            }
            Self::Abs => {
                let zero = T::constant(0.0);
                let sign = T::select([u, &zero, &T::constant(-1.0), &one], domain);
                [value, sign, zero.clone(), zero]
            }
            Self::Tanh => {
                let square = value.mul(&value);
                let d1 = one.sub(&square);
                let d2 = T::constant(-2.0).mul(&value).mul(&d1);
                let d3 = d1.mul(&T::constant(6.0).mul(&square).sub(&T::constant(2.0)));
                [value, d1, d2, d3]
            }
        }
    }
}

/// A logarithm's value and its derivatives r, −r², 2r³ where r = 1/argument.
fn logarithmic<T: Number>(value: T, r: &T) -> [T; 4] {
    let square = r.mul(r);
    let cube = square.mul(r);
    [value, r.clone(), square.neg(), cube.add(&cube)]
}

/// Functions with f(0) = 0 whose quotient f(u)/u, continued to u = 0, is an operation of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Quotient {
    /// (e^u − 1)/u
    Expm1,
    /// ln(1 + u)/u
    Log1p,
    /// tanh(u)/u
    Tanh,
}

impl Quotient {
    /// The function whose quotient it is.
    pub fn function(self) -> Function {
        match self {
            Self::Expm1 => Function::Expm1,
            Self::Log1p => Function::Log1p,
            Self::Tanh => Function::Tanh,
        }
    }

    fn kind(self) -> num::quotient::Quotient {
        match self {
            Self::Expm1 => num::quotient::Quotient::Expm1,
            Self::Log1p => num::quotient::Quotient::Log1p,
            Self::Tanh => num::quotient::Quotient::Tanh,
        }
    }

    /// The k-th derivative of f(u)/u, k ≤ 3.
    pub fn value(self, k: u8, u: f64) -> f64 {
        num::quotient::quotient_f64(self.kind(), u32::from(k), u, 0.0)
    }

    /// Enclosure of the k-th derivative of f(u)/u, k ≤ 3.
    pub fn interval(self, k: u8, u: Interval, defined: &mut bool) -> Interval {
        num::quotient::quotient(self.kind(), u32::from(k), u, Interval::ZERO, defined)
    }
}
