//! A tape over a whole batch: 64 points, or 64 parameter vectors, at a time.
//!
//! Each operation is read once and done for all lanes, over plain arrays that the compiler vectorises; lanes equal scalar
//! runs bit for bit. `allocate` shares slots between values that do not live together, `perform` does one operation,
//! `dispatch` picks the widest vector instructions of the processor at hand.

use super::number::Number;
use super::{Block, Register, Tape};
use crate::expr::graph::Operation;

mod allocate;
mod dispatch;
mod perform;

/// How many lanes run at once.
pub const WIDTH: usize = 64;

/// One value in each lane.
pub(crate) type Lane = [f64; WIDTH];

/// Boxed, so that a slot can be taken out and put back by its pointer while others are read.
type Slots = Vec<Box<Lane>>;

/// An operation on slots, and the slot that it writes.
#[derive(Clone, Copy, Debug)]
struct Step {
    operation: Operation<Register>,
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
    /// Not 0 in lanes where an operation was not defined.
    undefined: Box<Lane>,
    fixed_undefined: bool,
}

impl Tape {
    /// For many points under one set of parameters; inputs of [`Lanes::run`] are the states.
    ///
    /// # Panics
    /// If there are not as many parameters as the tape takes.
    pub fn lanes_of_points(&self, parameters: &[f64]) -> Lanes {
        let run = self.start(parameters);
        let plan = allocate::plan(&self.moving, self.first_state(), self.states, &self.outputs, &self.blocks);
        let mut slots = vec![Box::new([0.0; WIDTH]); plan.slots];
        for &(register, slot) in &plan.pinned {
            *slots[slot] = [run.registers[register as usize]; WIDTH];
        }
        Self::lanes(plan, slots, !run.fixed_domain.defined)
    }

    /// For many parameter vectors, each with its own state; inputs of [`Lanes::run`] are the states, then the parameters.
    pub fn lanes_of_draws(&self) -> Lanes {
        let all: Vec<_> = self.fixed.iter().chain(&self.moving).copied().collect();
        let plan = allocate::plan(&all, 0, self.states, &self.outputs, &self.blocks);
        let slots = vec![Box::new([0.0; WIDTH]); plan.slots];
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
            undefined: Box::new([0.0; WIDTH]),
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
        let mut all_defined = true;
        for from in (0..points).step_by(WIDTH) {
            let count = WIDTH.min(points - from);
            for (&slot, column) in self.inputs.iter().zip(inputs) {
                self.slots[slot][..count].copy_from_slice(&column[from..from + count]);
            }
            self.undefined.fill(0.0);
            dispatch::execute(self);
            all_defined &= !self.fixed_undefined && self.undefined[..count].iter().all(|&u| u == 0.0);
            for (&slot, column) in self.outputs.iter().zip(outputs.iter_mut()) {
                column[from..from + count].copy_from_slice(&self.slots[slot][..count]);
            }
        }
        all_defined
    }

    /// For each of the first 64 points of the latest batch, whether every operation was defined there.
    pub fn defined(&self) -> [bool; WIDTH] {
        self.undefined.map(|u| u == 0.0 && !self.fixed_undefined)
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
