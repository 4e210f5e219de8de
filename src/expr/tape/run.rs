//! Evaluates a tape over one number type, one state at a time.

use super::number::{Domain, Number};
use super::{Block, Register, Tape};
use crate::expr::graph::Operation;

/// A tape with its parameters set, ready for one state after another.
#[derive(Clone, Debug)]
pub struct Run<'t, T> {
    pub(super) tape: &'t Tape,
    pub(super) registers: Vec<T>,
    pub(super) fixed_domain: Domain,
}

impl Tape {
    /// Runs the fixed part for these parameters.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn start<T: Number>(&self, parameters: &[T]) -> Run<'_, T> {
        assert_eq!(parameters.len(), self.parameters, "parameters");
        let registers = vec![T::constant(0.0); self.fixed.len() + self.moving.len()];
        let mut run = Run { tape: self, registers, fixed_domain: Domain::CLEAN };
        run.set_parameters(parameters);
        run
    }
}

impl<T: Number> Run<'_, T> {
    /// Runs the fixed part again for other parameters.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn set_parameters(&mut self, parameters: &[T]) {
        assert_eq!(parameters.len(), self.tape.parameters, "parameters");
        self.fixed_domain = Domain::CLEAN;
        for (register, operation) in self.tape.fixed.iter().enumerate() {
            let value = match *operation {
                Operation::Parameter(i) => parameters[i].clone(),
                _ => perform(operation, &self.registers, &[], &self.tape.blocks, &mut self.fixed_domain),
            };
            self.registers[register] = value;
        }
    }

    /// Runs the moving part at a state of one value a species; the outputs are then there to be read.
    ///
    /// # Panics
    /// If there are not as many values as the tape has states.
    pub fn at(&mut self, state: &[T]) -> Domain {
        let first = self.tape.first_state();
        assert_eq!(state.len(), self.tape.states, "states");
        let states = first..first + self.tape.states;
        self.registers[states.clone()].clone_from_slice(state);
        let mut domain = self.fixed_domain;
        let rest = self.tape.moving[self.tape.states..].iter();
        for (register, operation) in (states.end..).zip(rest) {
            let known = &self.registers[..register];
            let value = perform(operation, known, &known[states.clone()], &self.tape.blocks, &mut domain);
            self.registers[register] = value;
        }
        domain
    }

    /// An output, after [`Run::at`].
    pub fn output(&self, index: usize) -> &T {
        &self.registers[self.tape.outputs[index] as usize]
    }

    /// All outputs, after [`Run::at`].
    pub fn outputs(&self) -> impl Iterator<Item = &T> {
        self.tape.outputs.iter().map(|&register| &self.registers[register as usize])
    }
}

/// One operation on registers that hold their values already.
#[inline]
pub(super) fn perform<T: Number>(
    operation: &Operation<Register>,
    registers: &[T],
    states: &[T],
    blocks: &[Block],
    domain: &mut Domain,
) -> T {
    let r = |register: Register| &registers[register as usize];
    match *operation {
        Operation::Constant(value) => T::constant(value.get()),
        Operation::Neg(a) => r(a).neg(),
        Operation::Add(a, b) => r(a).add(r(b)),
        Operation::Sub(a, b) => r(a).sub(r(b)),
        Operation::Mul(a, b) => r(a).mul(r(b)),
        Operation::Div(a, b) => r(a).div(r(b), domain),
        Operation::PowInt(a, n) => r(a).powi(n, domain),
        Operation::Pow(a, b) => r(a).pow(r(b), domain),
        Operation::Apply(function, a) => r(a).apply(function, domain),
        Operation::Min(a, b) => r(a).min(r(b), domain),
        Operation::Max(a, b) => r(a).max(r(b), domain),
        Operation::Select([a, b, x, y]) => T::select([r(a), r(b), r(x), r(y)], domain),
        Operation::Saturation([s, c, v]) => T::saturation([r(s), r(c), r(v)], domain),
        Operation::Quotient(quotient, k, u) => r(u).quotient(quotient, k, domain),
        Operation::PowerQuotient(k, u, p) => r(u).power_quotient(k, r(p), domain),
        Operation::Interaction { block, row } => interaction(&blocks[block], row, registers, states),
        // States and parameters are written before any operation runs.
        Operation::State(i) => states[i].clone(),
        Operation::Parameter(_) => T::constant(0.0),
    }
}

/// Σ_j m_ij x_j, terms in the order of columns; then the entries that are formulas.
fn interaction<T: Number>(block: &Block, row: usize, registers: &[T], states: &[T]) -> T {
    let numbers = &block.numbers[row * block.order..(row + 1) * block.order];
    let mut sum = T::dot(numbers, states);
    for &(column, register) in &block.formulas[row] {
        sum = sum.add(&registers[register as usize].mul(&states[column]));
    }
    sum
}
