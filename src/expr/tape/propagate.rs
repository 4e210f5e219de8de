//! Constraint propagation over a tape: what every row being 0 leaves of a box of states.
//!
//! One sweep evaluates all operations forwards over the box, then goes backwards and cuts each operand to what its result
//! still allows (HC4-revise over the whole graph: Benhamou, Goualard, Granvilliers & Puget 1999; Schichl & Neumaier 2005;
//! from memory). Shared operations meet the cuts of all their users. No point of the box at which all outputs are defined
//! and 0 is ever lost.

use super::number::Domain;
use super::run::Run;
use super::{Register, Tape};
use crate::expr::function::Function;
use crate::expr::graph::Operation;
use crate::num::interval::Interval;

/// What a sweep left.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sweep {
    /// No point of the box is a common zero.
    Empty,
    /// The box may have shrunk; whether all operations were defined and continuous on what it was before.
    Left(Domain),
}

/// A tape with its parameters set, ready to cut boxes.
#[derive(Clone, Debug)]
pub struct Propagation<'t> {
    run: Run<'t, Interval>,
}

impl Tape {
    /// Runs the fixed part for these parameters.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn start_propagation(&self, parameters: &[Interval]) -> Propagation<'_> {
        Propagation { run: self.start(parameters) }
    }
}

impl Propagation<'_> {
    /// Cuts a box, one interval a state, by one sweep.
    ///
    /// # Panics
    /// If there are not as many intervals as the tape has states.
    pub fn sweep(&mut self, state: &mut [Interval]) -> Sweep {
        let domain = self.run.at(state);
        let tape = self.run.tape;
        for &output in &tape.outputs {
            if !self.cut(output, Interval::ZERO) {
                return Sweep::Empty;
            }
        }
        let first = tape.first_state();
        for (position, operation) in tape.moving.iter().enumerate().skip(tape.states).rev() {
            if !self.backwards(operation, (first + position) as Register) {
                return Sweep::Empty;
            }
        }
        state.copy_from_slice(&self.run.registers[first..first + tape.states]);
        Sweep::Left(domain)
    }

    fn value(&self, register: Register) -> Interval {
        self.run.registers[register as usize]
    }

    /// Cuts a register to an enclosure of its values; false where nothing is left. Fixed registers keep their value.
    fn cut(&mut self, register: Register, allowed: Interval) -> bool {
        let left = self.value(register).intersect(allowed);
        if left.is_empty() {
            return false;
        }
        if register as usize >= self.run.tape.first_state() {
            self.run.registers[register as usize] = left;
        }
        true
    }

    /// Cuts the operands of one operation to what its result allows; false where nothing is left.
    fn backwards(&mut self, operation: &Operation<Register>, own: Register) -> bool {
        let z = self.value(own);
        let v = |register: Register| self.value(register);
        match *operation {
            Operation::Neg(a) => self.cut(a, -z),
            Operation::Add(a, b) => {
                let for_a = z - v(b);
                self.cut(a, for_a) && self.cut(b, z - self.value(a))
            }
            Operation::Sub(a, b) => {
                let for_a = z + v(b);
                self.cut(a, for_a) && self.cut(b, self.value(a) - z)
            }
            Operation::Mul(a, b) => self.cut_quotient(a, z, v(b)) && self.cut_quotient(b, z, self.value(a)),
            Operation::Div(a, b) => {
                let for_a = z * v(b);
                self.cut(a, for_a) && self.cut_quotient(b, self.value(a), z)
            }
            Operation::PowInt(a, n) => self.cut_whole_root(a, n, z),
            Operation::Pow(a, b) => {
                let inverse = Interval::ONE.div(v(b), &mut true);
                let root = z.intersect(Interval::NONNEGATIVE).pow(inverse, &mut true);
                // At exponents around 0 every base gives about 1: nothing to cut.
                v(b).contains_zero() || self.cut(a, root)
            }
            Operation::Apply(function, a) => self.cut_inverse(function, a, z),
            Operation::Min(a, b) => self.cut_smaller(a, b, z),
            Operation::Max(a, b) => self.cut_larger(a, b, z),
            Operation::Saturation(operands) => self.cut_saturation(operands, z),
            Operation::Interaction { block, row } => self.cut_interaction(block, row, z),
            _ => true,
        }
    }

    /// Cuts to every x with x · divisor in `product`.
    fn cut_quotient(&mut self, register: Register, product: Interval, divisor: Interval) -> bool {
        let (first, second) = product.div_pieces(divisor);
        let old = self.value(register);
        let pieces = old.intersect(first).hull(second.map_or(Interval::EMPTY, |second| old.intersect(second)));
        self.cut(register, pieces)
    }

    fn cut_whole_root(&mut self, a: Register, n: i32, z: Interval) -> bool {
        let old = self.value(a);
        let z = if n < 0 { Interval::ONE.div(z, &mut true) } else { z };
        let inverse = Interval::ONE.div(Interval::point(f64::from(n).abs()), &mut true);
        let root = |of: Interval| of.intersect(Interval::NONNEGATIVE).pow(inverse, &mut true);
        let positive = old.intersect(root(z));
        let negative = if n % 2 == 0 { old.intersect(-root(z)) } else { old.intersect(-root(-z)) };
        self.cut(a, positive.hull(negative))
    }

    fn cut_inverse(&mut self, function: Function, a: Register, z: Interval) -> bool {
        let inverse = match function {
            Function::Exp => z.ln(&mut true),
            Function::Ln => z.exp(),
            Function::Log10 => (z * Interval::point(10.0).ln(&mut true)).exp(),
            Function::Expm1 => z.log1p(&mut true),
            Function::Log1p => z.expm1(),
            Function::Sqrt => z.intersect(Interval::NONNEGATIVE).square(),
            Function::Abs => {
                let z = z.intersect(Interval::NONNEGATIVE);
                let old = self.value(a);
                old.intersect(z).hull(old.intersect(-z))
            }
            // artanh z = ½ (ln(1 + z) − ln(1 − z))
            Function::Tanh => (z.log1p(&mut true) - (-z).log1p(&mut true)) * Interval::point(0.5),
        };
        self.cut(a, inverse)
    }

    fn cut_smaller(&mut self, a: Register, b: Register, z: Interval) -> bool {
        let (old_a, old_b) = (self.value(a), self.value(b));
        let at_least = Interval::new(z.lo(), f64::INFINITY);
        let (only_a, only_b) = (old_b.lo() > z.hi(), old_a.lo() > z.hi());
        self.cut(a, if only_a { z } else { at_least }) && self.cut(b, if only_b { z } else { at_least })
    }

    fn cut_larger(&mut self, a: Register, b: Register, z: Interval) -> bool {
        let (old_a, old_b) = (self.value(a), self.value(b));
        let at_most = Interval::new(f64::NEG_INFINITY, z.hi());
        let (only_a, only_b) = (old_b.hi() < z.lo(), old_a.hi() < z.lo());
        self.cut(a, if only_a { z } else { at_most }) && self.cut(b, if only_b { z } else { at_most })
    }

    /// w = s/(v + c s): s = w v/(1 − c w), v = s/w − c s.
    fn cut_saturation(&mut self, [s, c, v]: [Register; 3], w: Interval) -> bool {
        let (old_c, old_v) = (self.value(c), self.value(v));
        let free = Interval::ONE - old_c * w;
        if !self.cut_quotient(s, w * old_v, free) {
            return false;
        }
        let s = self.value(s);
        let (first, second) = s.div_pieces(w);
        let whole = first.hull(second.unwrap_or(Interval::EMPTY));
        self.cut(v, whole - old_c * s)
    }

    /// Σ m_j x_j = z: each x_j against all the others, by sums from both ends.
    fn cut_interaction(&mut self, block: usize, row: usize, z: Interval) -> bool {
        let tape = self.run.tape;
        let (block, first, n) = (&tape.blocks[block], tape.first_state(), tape.states);
        let mut entries: Vec<Interval> =
            block.numbers[row * n..(row + 1) * n].iter().map(|&m| Interval::point(m)).collect();
        for &(column, register) in &block.formulas[row] {
            entries[column] = self.value(register);
        }
        let part = |j: usize| entries[j] * self.run.registers[first + j];
        let mut after = vec![Interval::ZERO; n + 1];
        for j in (0..n).rev() {
            after[j] = after[j + 1] + part(j);
        }
        let mut before = Interval::ZERO;
        for (j, &entry) in entries.iter().enumerate() {
            if entry == Interval::ZERO {
                continue;
            }
            if !self.cut_quotient((first + j) as Register, z - before - after[j + 1], entry) {
                return false;
            }
            before += entry * self.run.registers[first + j];
        }
        true
    }
}
