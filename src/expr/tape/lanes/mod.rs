//! A tape over a whole batch: 64 points, or 64 parameter vectors, at a time.
//!
//! Each operation is read once and done for all lanes, over plain arrays that the compiler vectorises; lanes equal scalar
//! runs bit for bit. `allocate` shares slots between values that do not live together, `perform` does one operation,
//! [`wide`] picks the widest vector instructions of the processor at hand.

use super::number::Number;
use super::{Block, Register, Tape};
use crate::expr::graph::Operation;
use crate::num::wide;

mod allocate;
mod fuse;
mod perform;

/// How many lanes run at once.
pub const WIDTH: usize = 64;

/// One value in each lane; aligned so that no vector load or store straddles two cache lines.
#[derive(Clone, Copy, Debug)]
#[repr(align(64))]
struct Lane([f64; WIDTH]);

impl Lane {
    const ZERO: Self = Self([0.0; WIDTH]);
}

/// Boxed, so that a slot can be taken out and put back by its pointer while others are read.
type Slots = Vec<Box<Lane>>;

/// What is done with which slots, and the slot that it writes.
#[derive(Clone, Copy, Debug)]
struct Step {
    kernel: fuse::Kernel,
    to: usize,
}

/// A tape made ready for batches.
#[derive(Clone, Debug)]
pub struct Lanes {
    blocks: Vec<Block>,
    steps: Vec<Step>,
    /// Slots that take the inputs: states first, then, for draws, parameters.
    inputs: Vec<usize>,
    outputs: Vec<usize>,
    /// Where the states stand, for interaction rows.
    states: Vec<usize>,
    slots: Slots,
    /// Holds what a step writes while its slot is taken out.
    spare: Box<Lane>,
    /// Not 0 in lanes where an operation was not defined.
    undefined: Box<Lane>,
    /// For each point of the latest run, whether every operation was defined there.
    defined: Vec<bool>,
    fixed_undefined: bool,
}

impl Tape {
    /// For many points under one set of parameters; inputs of [`Lanes::run`] are the states.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn lanes_of_points(&self, parameters: &[f64]) -> Lanes {
        let run = self.start(parameters);
        let first = self.first_state();
        let safe = |register: Register| run.registers.get(register as usize).is_some_and(|value| *value != 0.0);
        let plan = allocate::plan(&self.moving, first, self.states, &self.outputs, &self.blocks, &safe);
        let mut slots = vec![Box::new(Lane::ZERO); plan.slots];
        for &(register, slot) in &plan.pinned {
            slots[slot].0.fill(run.registers[register as usize]);
        }
        Self::lanes(plan, slots, !run.fixed_domain.defined)
    }

    /// For many parameter vectors, each with its own state; inputs of [`Lanes::run`] are the states, then the parameters.
    pub fn lanes_of_draws(&self) -> Lanes {
        let all: Vec<_> = self.fixed.iter().chain(&self.moving).copied().collect();
        let plan = allocate::plan(&all, 0, self.states, &self.outputs, &self.blocks, &|_| false);
        let slots = vec![Box::new(Lane::ZERO); plan.slots];
        let parameters = plan.parameters(self.parameters);
        let mut lanes = Self::lanes(plan, slots, false);
        lanes.inputs.extend(parameters);
        lanes
    }

    fn lanes(plan: allocate::Plan, slots: Slots, fixed_undefined: bool) -> Lanes {
        Lanes {
            blocks: plan.blocks,
            inputs: plan.states.clone(),
            states: plan.states,
            steps: plan.steps,
            outputs: plan.outputs,
            slots,
            spare: Box::new(Lane::ZERO),
            undefined: Box::new(Lane::ZERO),
            defined: Vec::new(),
            fixed_undefined,
        }
    }
}

impl Lanes {
    /// Evaluates every output at every point: one column an input, one column an output, all of the same length.
    ///
    /// Returns whether every operation was defined everywhere; see [`Lanes::defined`] for which points.
    ///
    /// # Panics
    /// If the number of columns is not that of inputs or outputs, or their lengths differ.
    pub fn run(&mut self, inputs: &[&[f64]], outputs: &mut [&mut [f64]]) -> bool {
        let points = self.check(inputs, outputs);
        self.defined.clear();
        self.defined.resize(points, !self.fixed_undefined);
        for from in (0..points).step_by(WIDTH) {
            let count = WIDTH.min(points - from);
            for (&slot, column) in self.inputs.iter().zip(inputs) {
                self.slots[slot].0[..count].copy_from_slice(&column[from..from + count]);
            }
            wide::execute(perform::Steps(self));
            self.note_undefined(from, count);
            for (&slot, column) in self.outputs.iter().zip(outputs.iter_mut()) {
                column[from..from + count].copy_from_slice(&self.slots[slot].0[..count]);
            }
        }
        self.defined.iter().all(|&defined| defined)
    }

    /// For each point of the latest run, whether every operation was defined there.
    pub fn defined(&self) -> &[bool] {
        &self.defined
    }

    fn note_undefined(&mut self, from: usize, count: usize) {
        // Marks are never negative, so a bit in any of them is one that is not 0.
        if self.undefined.0.iter().fold(0, |bits, mark| bits | mark.to_bits()) != 0 {
            for (defined, &undefined) in self.defined[from..from + count].iter_mut().zip(self.undefined.0.iter()) {
                *defined &= undefined == 0.0;
            }
            self.undefined.0.fill(0.0);
        }
    }

    fn check(&self, inputs: &[&[f64]], outputs: &[&mut [f64]]) -> usize {
        assert_eq!(inputs.len(), self.inputs.len(), "input columns");
        assert_eq!(outputs.len(), self.outputs.len(), "output columns");
        let points = inputs.first().map_or(0, |column| column.len());
        assert!(inputs.iter().all(|column| column.len() == points), "input columns of different lengths");
        assert!(outputs.iter().all(|column| column.len() == points), "output columns of different lengths");
        points
    }
}
