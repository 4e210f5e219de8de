//! Divided differences (f(x) − f(0))/x, rule by rule, from those of the operands.
//!
//! `None` where a rule is missing or would need a value that does not exist at x = 0.

use super::divide::Near;
use super::{Graph, NodeId, Operation};
use crate::expr::function::{Function, Quotient};

/// Sums of powers of up to this many terms are written out.
const WRITTEN_OUT: i32 = 16;

impl Graph {
    /// (f(x) − f(0))/x from the same of the operands.
    pub(super) fn slope_of(&mut self, operation: Operation<NodeId>, near: &[Near], i: usize) -> Option<NodeId> {
        let slope = |index: usize| near[index].slope;
        match operation {
            Operation::Neg(_) => Some(self.neg(slope(0)?)),
            Operation::Add(..) => Some(self.add(slope(0)?, slope(1)?)),
            Operation::Sub(..) => Some(self.sub(slope(0)?, slope(1)?)),
            Operation::Mul(a, b) => self.slope_of_product([a, b], near),
            Operation::Div(_, b) => self.slope_of_quotient(b, near),
            Operation::PowInt(a, n) => self.slope_of_whole_power(a, n, &near[0]),
            Operation::Pow(a, p) => self.slope_of_power([a, p], near, i),
            Operation::Apply(function, u) => self.slope_of_function(function, u, &near[0], i),
            Operation::Min(..) if near[0].value()? == near[1].value()? => Some(self.min(slope(0)?, slope(1)?)),
            Operation::Max(..) if near[0].value()? == near[1].value()? => Some(self.max(slope(0)?, slope(1)?)),
            Operation::Select([a, b, ..]) if near[2].value()? == near[3].value()? => {
                Some(self.select(a, b, slope(2)?, slope(3)?))
            }
            Operation::Saturation([s, c, v]) => self.slope_of_saturation([s, c, v], near),
            _ => None,
        }
    }

    /// f g: where g is 0 at x = 0, f (g/x); likewise the other way; else D f g + f(0) D g.
    fn slope_of_product(&mut self, [a, b]: [NodeId; 2], near: &[Near]) -> Option<NodeId> {
        let zero = Some(self.zero());
        if near[0].value() == zero {
            return Some(self.mul(near[0].slope?, b));
        }
        if near[1].value() == zero {
            return Some(self.mul(a, near[1].slope?));
        }
        let left = self.mul(near[0].slope?, b);
        let right = self.mul(near[0].value()?, near[1].slope?);
        Some(self.add(left, right))
    }

    /// (D f − (f(0)/g(0)) D g)/g, where g(0) is not 0.
    fn slope_of_quotient(&mut self, b: NodeId, near: &[Near]) -> Option<NodeId> {
        let zero = self.zero();
        let slope = near[0].slope?;
        if near[0].value()? == zero || near[1].slope? == zero {
            return Some(self.div(slope, b));
        }
        let start = near[1].value().filter(|&start| start != zero)?;
        let ratio = self.div(near[0].value()?, start);
        let shift = self.mul(ratio, near[1].slope?);
        let rise = self.sub(slope, shift);
        Some(self.div(rise, b))
    }

    /// aⁿ − a₀ⁿ = (a − a₀) Σ aᵏ a₀ⁿ⁻¹⁻ᵏ, and 1/aⁿ − 1/a₀ⁿ from it.
    fn slope_of_whole_power(&mut self, a: NodeId, n: i32, near: &Near) -> Option<NodeId> {
        let start = near.value()?;
        let zero = self.zero();
        if n < 0 {
            let inner = self.slope_of_whole_power(a, n.checked_neg()?, near).filter(|_| start != zero)?;
            let scale = self.powi(a, n);
            let scale_at_start = self.powi(start, n);
            let scale = self.mul(scale, scale_at_start);
            let scaled = self.mul(inner, scale);
            return Some(self.neg(scaled));
        }
        if start == zero {
            let lower = self.powi(a, n - 1);
            return Some(self.mul(near.slope?, lower));
        }
        let sum = self.power_sum(a, start, n);
        Some(self.mul(near.slope?, sum))
    }

    /// Σ aᵏ bⁿ⁻¹⁻ᵏ over k < n, for n ≥ 1: written out while that is short, since even powers of their own enclose more
    /// tightly; beyond, by halves, so that its size is that of the digits of n.
    fn power_sum(&mut self, a: NodeId, b: NodeId, n: i32) -> NodeId {
        if n <= WRITTEN_OUT {
            let mut sum = self.zero();
            for k in 0..n {
                let (high, low) = (self.powi(a, k), self.powi(b, n - 1 - k));
                let part = self.mul(high, low);
                sum = self.add(sum, part);
            }
            return sum;
        }
        let half = n / 2;
        let sum = self.power_sum(a, b, half);
        let (high, low) = (self.powi(a, half), self.powi(b, half));
        let ends = self.add(high, low);
        let even = self.mul(sum, ends);
        if n % 2 == 0 {
            return even;
        }
        let (grown, last) = (self.mul(a, even), self.powi(b, n - 1));
        self.add(grown, last)
    }

    /// With a = a₀ (1 + w): a^p − a₀^p = a₀^p ((1 + w)^p − 1), w = x D a/a₀.
    fn slope_of_power(&mut self, [a, p]: [NodeId; 2], near: &[Near], i: usize) -> Option<NodeId> {
        let (zero, one) = (self.zero(), self.one());
        if near[1].slope? != zero {
            return None;
        }
        let (start, slope) = (near[0].value()?, near[0].slope?);
        if start == zero {
            let below = self.sub(p, one);
            let lower = self.pow(a, below);
            return Some(self.mul(slope, lower));
        }
        let relative = self.div(slope, start);
        let w = self.times_state(relative, i);
        let quotient = self.power_quotient(0, w, p);
        let scale = self.pow(start, p);
        let inner = self.mul(quotient, relative);
        Some(self.mul(scale, inner))
    }

    fn slope_of_function(&mut self, function: Function, u: NodeId, near: &Near, i: usize) -> Option<NodeId> {
        let (start, slope) = (near.value()?, near.slope?);
        match function {
            Function::Exp | Function::Expm1 => {
                let rise = self.times_state(slope, i);
                let quotient = self.quotient(Quotient::Expm1, 0, rise);
                let scale = self.apply(Function::Exp, start);
                let inner = self.mul(quotient, slope);
                Some(self.mul(scale, inner))
            }
            Function::Ln => self.slope_of_logarithm(slope, start, i),
            Function::Log10 => {
                let natural = self.slope_of_logarithm(slope, start, i)?;
                let ten = self.constant(10.0);
                let scale = self.apply(Function::Ln, ten);
                Some(self.div(natural, scale))
            }
            Function::Log1p => {
                let one = self.one();
                let shifted = self.add(one, start);
                self.slope_of_logarithm(slope, shifted, i)
            }
            Function::Sqrt => {
                let (root, root_at_start) = (self.apply(function, u), self.apply(function, start));
                let sum = self.add(root, root_at_start);
                Some(self.div(slope, sum))
            }
            Function::Abs if start == self.zero() => Some(self.apply(Function::Abs, slope)),
            Function::Abs => None,
            Function::Tanh => Some(self.slope_of_tanh(u, start, slope, i)),
        }
    }

    /// ln(a/a₀)/x = L(x D a/a₀) D a/a₀ with L(w) = ln(1 + w)/w.
    fn slope_of_logarithm(&mut self, slope: NodeId, start: NodeId, i: usize) -> Option<NodeId> {
        if self.is(start, 0.0) {
            return None;
        }
        let relative = self.div(slope, start);
        let w = self.times_state(relative, i);
        let quotient = self.quotient(Quotient::Log1p, 0, w);
        Some(self.mul(quotient, relative))
    }

    /// tanh u − tanh u₀ = tanh(u − u₀) (1 − tanh u tanh u₀).
    fn slope_of_tanh(&mut self, u: NodeId, start: NodeId, slope: NodeId, i: usize) -> NodeId {
        let rise = self.times_state(slope, i);
        let quotient = self.quotient(Quotient::Tanh, 0, rise);
        let steep = self.mul(quotient, slope);
        let (end, begin) = (self.apply(Function::Tanh, u), self.apply(Function::Tanh, start));
        let product = self.mul(end, begin);
        let one = self.one();
        let flattening = self.sub(one, product);
        self.mul(steep, flattening)
    }

    /// s/(v + c s): where s is 0 at x = 0, (s/x)/(v + c s); else as a quotient.
    fn slope_of_saturation(&mut self, [s, c, v]: [NodeId; 3], near: &[Near]) -> Option<NodeId> {
        let grown = self.mul(c, s);
        let den = self.add(v, grown);
        if near[0].value()? == self.zero() {
            return Some(self.div(near[0].slope?, den));
        }
        let product = Operation::Mul(c, s);
        let pair = [near[1], near[0]];
        let grown_near = Near::plain(self.zero_of(product, &pair), self.slope_of_product([c, s], &pair));
        let pair = [near[2], grown_near];
        let sum = Operation::Add(v, grown);
        let den_slope = self.add(near[2].slope?, grown_near.slope?);
        let den_near = Near::plain(self.zero_of(sum, &pair), Some(den_slope));
        self.slope_of_quotient(den, &[near[0], den_near])
    }

    fn times_state(&mut self, slope: NodeId, i: usize) -> NodeId {
        let x = self.state(i);
        self.mul(slope, x)
    }
}
