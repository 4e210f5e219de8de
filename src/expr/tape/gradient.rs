//! Forward gradients of a tape over any number type.
//!
//! Beside each value runs its gradient with respect to the states, only in the components that it depends on. Over
//! intervals the gradient is an enclosure of all derivatives (and, at kinks, of both branches: Clarke 1983).

use super::number::{Domain, Number};
use super::run::{Run, perform};
use super::{Register, Tape};
use crate::expr::function::Quotient;
use crate::expr::graph::Operation;

/// Components of gradients between two questions whether to go on: a millisecond's work or so over intervals.
const COMPONENTS_UNASKED: usize = 50_000;

/// A tape with its parameters set, giving values and gradients.
#[derive(Clone, Debug)]
pub struct GradientRun<'t, T> {
    run: Run<'t, T>,
    /// One row of `states` components for each moving register.
    slopes: Vec<T>,
}

impl Tape {
    /// Runs the fixed part for these parameters, and makes room for gradients.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn start_gradient<T: Number>(&self, parameters: &[T]) -> GradientRun<'_, T> {
        let run = self.start(parameters);
        let mut slopes = vec![T::constant(0.0); self.moving.len() * self.states];
        for i in 0..self.states {
            slopes[i * self.states + i] = T::constant(1.0);
        }
        GradientRun { run, slopes }
    }
}

impl<T: Number> GradientRun<'_, T> {
    /// Values and gradients at a state of one value a species.
    ///
    /// # Panics
    /// If there are not as many values as the tape has states.
    pub fn at(&mut self, state: &[T]) -> Domain {
        self.begin(state);
        let tape = self.run.tape;
        self.perform(tape.states..tape.moving.len(), self.run.fixed_domain)
    }

    /// As [`GradientRun::at`]; `None`, the outputs then meaning nothing, where `stop` says so on the way.
    ///
    /// # Panics
    /// If there are not as many values as the tape has states.
    pub fn at_unless(&mut self, state: &[T], stop: &dyn Fn() -> bool) -> Option<Domain> {
        self.begin(state);
        let tape = self.run.tape;
        let mut domain = self.run.fixed_domain;
        let few = (COMPONENTS_UNASKED / tape.states.max(1)).max(1);
        for from in (tape.states..tape.moving.len()).step_by(few) {
            if stop() {
                return None;
            }
            domain = self.perform(from..(from + few).min(tape.moving.len()), domain);
        }
        Some(domain)
    }

    fn begin(&mut self, state: &[T]) {
        let (first, n) = (self.run.tape.first_state(), self.run.tape.states);
        assert_eq!(state.len(), n, "states");
        self.run.registers[first..first + n].clone_from_slice(state);
    }

    /// Some of the moving operations in their order, and what they and those before them met.
    fn perform(&mut self, operations: std::ops::Range<usize>, mut domain: Domain) -> Domain {
        let tape = self.run.tape;
        let (first, n) = (tape.first_state(), tape.states);
        for position in operations {
            let operation = &tape.moving[position];
            let registers = &self.run.registers;
            let states = &registers[first..first + n];
            let value = perform(operation, registers, states, &tape.blocks, &mut domain);
            let (before, from_here) = self.slopes.split_at_mut(position * n);
            let known = Known { tape, registers, slopes: before };
            known.slope(operation, &value, tape.dependence[position], &mut from_here[..n], &mut domain);
            self.run.registers[first + position] = value;
        }
        domain
    }

    /// An output's value, after [`GradientRun::at`].
    pub fn output(&self, index: usize) -> &T {
        self.run.output(index)
    }

    /// An output's gradient: one component a state; `None` where it does not depend on any.
    pub fn gradient(&self, index: usize) -> Option<&[T]> {
        let tape = self.run.tape;
        let position = (tape.outputs[index] as usize).checked_sub(tape.first_state())?;
        Some(&self.slopes[position * tape.states..(position + 1) * tape.states])
    }
}

/// What is known when an operation's gradient is due.
struct Known<'k, T> {
    tape: &'k Tape,
    registers: &'k [T],
    slopes: &'k [T],
}

impl<T: Number> Known<'_, T> {
    fn value(&self, register: Register) -> &T {
        &self.registers[register as usize]
    }

    /// The gradient of an operand and the components that it has; none for what does not move.
    fn of(&self, register: Register) -> (&[T], u64) {
        let n = self.tape.states;
        match (register as usize).checked_sub(self.tape.first_state()) {
            Some(position) => (&self.slopes[position * n..(position + 1) * n], self.tape.dependence[position]),
            None => (&[], 0),
        }
    }

    fn slope(&self, operation: &Operation<Register>, own: &T, mask: u64, out: &mut [T], domain: &mut Domain) {
        let one = || T::constant(1.0);
        match *operation {
            Operation::Neg(a) => self.each(mask, out, |j| self.component(a, j).map(T::neg)),
            Operation::Add(a, b) => self.each(mask, out, |j| self.sum(a, b, j, T::add, T::clone)),
            Operation::Sub(a, b) => self.each(mask, out, |j| self.sum(a, b, j, T::sub, T::neg)),
            Operation::Mul(a, b) => self.linear(mask, out, [(a, self.value(b)), (b, self.value(a))]),
            Operation::Div(_, b) if self.of(b).1 == 0 => self.each(mask, out, |j| {
                let slope = self.component(operation.operands()[0]?, j)?;
                Some(slope.div(self.value(b), domain))
            }),
            Operation::Div(a, b) => {
                let reciprocal = one().div(self.value(b), domain);
                let shift = own.mul(&reciprocal).neg();
                self.linear(mask, out, [(a, &reciprocal), (b, &shift)]);
            }
            Operation::PowInt(a, n) => {
                let outer = T::constant(f64::from(n)).mul(&self.value(a).whole_power(n - 1, domain));
                self.linear(mask, out, [(a, &outer)]);
            }
            Operation::Pow(a, b) => self.power(a, b, own, mask, out, domain),
            Operation::Apply(function, a) => {
                let [_, outer, ..] = function.derivatives(self.value(a), domain);
                self.linear(mask, out, [(a, &outer)]);
            }
            Operation::Min(a, b) => self.switch([a, b, a, b], mask, out, domain),
            Operation::Max(a, b) => self.switch([a, b, b, a], mask, out, domain),
            Operation::Select(operands) => self.switch(operands, mask, out, domain),
            Operation::Saturation(operands) => self.saturation(operands, own, mask, out, domain),
            Operation::Quotient(quotient, k, u) => {
                let outer = self.value(u).quotient(quotient, k + 1, domain);
                self.linear(mask, out, [(u, &outer)]);
            }
            Operation::PowerQuotient(k, u, p) => {
                let outer = self.value(u).power_quotient(k + 1, self.value(p), domain);
                if self.of(p).1 == 0 {
                    return self.linear(mask, out, [(u, &outer)]);
                }
                // An exponent moves only where a parameter does, as a control that is followed.
                let through = through_exponent(k, self.value(u), self.value(p), domain);
                self.linear(mask, out, [(u, &outer), (p, &through)]);
            }
            Operation::Interaction { block, row } => self.interaction(block, row, out),
            Operation::Constant(_) | Operation::State(_) | Operation::Parameter(_) => {}
        }
    }

    /// Writes each component of the mask; one that has no contribution is 0.
    fn each(&self, mask: u64, out: &mut [T], mut component: impl FnMut(usize) -> Option<T>) {
        let all = self.tape.states > 64;
        for (j, slot) in out.iter_mut().enumerate() {
            if all || mask & (1 << j) != 0 {
                *slot = component(j).unwrap_or_else(|| T::constant(0.0));
            }
        }
    }

    fn component(&self, register: Register, j: usize) -> Option<&T> {
        let (slopes, mask) = self.of(register);
        let there = mask != 0 && (self.tape.states > 64 || mask & (1 << j) != 0);
        if there { slopes.get(j) } else { None }
    }

    fn sum(
        &self,
        a: Register,
        b: Register,
        j: usize,
        both: impl Fn(&T, &T) -> T,
        second: impl Fn(&T) -> T,
    ) -> Option<T> {
        match (self.component(a, j), self.component(b, j)) {
            (Some(a), Some(b)) => Some(both(a, b)),
            (Some(a), None) => Some(a.clone()),
            (None, Some(b)) => Some(second(b)),
            (None, None) => None,
        }
    }

    /// Σ coefficient · gradient.
    fn linear<const N: usize>(&self, mask: u64, out: &mut [T], parts: [(Register, &T); N]) {
        self.each(mask, out, |j| {
            let mut sum: Option<T> = None;
            for (register, coefficient) in parts {
                if let Some(slope) = self.component(register, j) {
                    let part = slope.mul(coefficient);
                    sum = Some(match sum {
                        Some(sum) => sum.add(&part),
                        None => part,
                    });
                }
            }
            sum
        });
    }

    fn power(&self, a: Register, b: Register, own: &T, mask: u64, out: &mut [T], domain: &mut Domain) {
        let (base, exponent) = (self.value(a), self.value(b));
        let outer = exponent.mul(&base.pow(&exponent.sub(&T::constant(1.0)), domain));
        if self.of(b).1 == 0 {
            return self.linear(mask, out, [(a, &outer)]);
        }
        let through_exponent = own.mul(&base.apply(crate::expr::function::Function::Ln, domain));
        self.linear(mask, out, [(a, &outer), (b, &through_exponent)]);
    }

    /// The branch taken, component by component, so that equal branches give their common slope.
    fn switch(&self, [a, b, x, y]: [Register; 4], mask: u64, out: &mut [T], domain: &mut Domain) {
        let zero = T::constant(0.0);
        self.each(mask, out, |j| {
            let branches = [self.component(x, j).unwrap_or(&zero), self.component(y, j).unwrap_or(&zero)];
            Some(T::select([self.value(a), self.value(b), branches[0], branches[1]], domain))
        });
    }

    /// s' (v/D)/D − v' w/D − c' w², D = v + c s, w = s/D.
    fn saturation(&self, [s, c, v]: [Register; 3], own: &T, mask: u64, out: &mut [T], domain: &mut Domain) {
        let grown = self.value(c).mul(self.value(s));
        let den = self.value(v).add(&grown);
        let free = T::saturation([self.value(v), &T::constant(1.0), &grown], domain);
        let rising = free.div(&den, domain);
        if self.of(v).1 == 0 && self.of(c).1 == 0 {
            return self.linear(mask, out, [(s, &rising)]);
        }
        let crowding = own.div(&den, domain).neg();
        let steepening = own.mul(own).neg();
        self.linear(mask, out, [(s, &rising), (v, &crowding), (c, &steepening)]);
    }

    fn interaction(&self, block: usize, row: usize, out: &mut [T]) {
        let block = &self.tape.blocks[block];
        let numbers = &block.numbers[row * block.order..(row + 1) * block.order];
        for (slot, &m) in out.iter_mut().zip(numbers) {
            *slot = T::constant(m);
        }
        for &(column, register) in &block.formulas[row] {
            out[column] = self.value(register).clone();
        }
    }
}

/// The k-th derivative in u of (1 + u)^p ln(1 + u)/u, which is what an exponent adds to ((1 + u)^p − 1)/u; by Leibniz.
fn through_exponent<T: Number>(k: u8, u: &T, p: &T, domain: &mut Domain) -> T {
    let base = T::constant(1.0).add(u);
    let mut sum = T::constant(0.0);
    let mut binomial = 1.0;
    for j in 0..=k {
        // The power's derivative of order k − j times the logarithm's of order j.
        let mut power = T::constant(binomial);
        let mut exponent = p.clone();
        for _ in j..k {
            power = power.mul(&exponent);
            exponent = exponent.sub(&T::constant(1.0));
        }
        let power = power.mul(&base.pow(&exponent, domain));
        sum = sum.add(&power.mul(&u.quotient(Quotient::Log1p, j, domain)));
        binomial *= f64::from(k - j) / f64::from(j + 1);
    }
    sum
}

#[cfg(test)]
mod tests {
    use crate::expr::graph::{Graph, Variable};
    use crate::expr::tape::Tape;

    #[test]
    fn an_exponent_that_moves_has_a_slope() {
        // x ((1 + x)^p − 1)/x, divided by x as rows are, and its derivatives by x, over x and p.
        let mut graph = Graph::new(2, Vec::new());
        let (x, p, one) = (graph.state(0), graph.state(1), graph.one());
        let base = graph.add(one, x);
        let power = graph.pow(base, p);
        let row = graph.sub(power, one);
        let mut node = graph.divide(row, 0).quotient.unwrap_or(row);
        let (u, e) = (0.75f64, 1.6f64);
        let (power, log) = ((1.0 + u).powf(e), (1.0 + u).ln());
        // By hand: d/dp of ((1+u)^p − 1)/u and of its first u-derivative p (1+u)^(p−1)/u − ((1+u)^p − 1)/u².
        let lower = power / (1.0 + u);
        let expected = [power * log / u, (lower + e * lower * log) / u - power * log / (u * u)];
        for expected in expected {
            let tape = Tape::new(&graph, &[node]);
            let mut run = tape.start_gradient::<f64>(&[]);
            run.at(&[u, e]);
            let found = run.gradient(0).map_or(f64::NAN, |slopes| slopes[1]);
            assert!((found - expected).abs() <= 1e-13 * expected.abs(), "{found} for {expected}");
            node = graph.derivative(node, Variable::State(0));
        }
    }
}
