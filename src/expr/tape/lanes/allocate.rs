//! Which slot each value lives in: slots are reused once a value has been read for the last time.

use super::fuse::{Kernel, fuse};
use super::{Block, Register, Step};
use crate::expr::graph::Operation;

/// A tape laid out over slots.
pub(super) struct Plan {
    pub(super) steps: Vec<Step>,
    pub(super) slots: usize,
    /// Registers computed beforehand that some step reads, and the slots that hold them for good.
    pub(super) pinned: Vec<(Register, usize)>,
    /// The slot of each state.
    pub(super) states: Vec<usize>,
    /// The slot of each output.
    pub(super) outputs: Vec<usize>,
    /// The matrix blocks, their formulas in slots.
    pub(super) blocks: Vec<Block>,
    parameters: Vec<(usize, usize)>,
}

impl Plan {
    /// The slots of all parameters; one that nothing reads gets a slot of its own kind, the last.
    pub(super) fn parameters(&self, count: usize) -> Vec<usize> {
        let slot = |i: usize| self.parameters.iter().find(|(index, _)| *index == i).map(|(_, slot)| *slot);
        (0..count).map(|i| slot(i).unwrap_or(self.slots - 1)).collect()
    }
}

/// Lays out `operations`, the first of which writes register `first`; registers before it are computed beforehand, and
/// `safe` says of one that it is not 0.
pub(super) fn plan(
    operations: &[Operation<Register>],
    first: usize,
    states: usize,
    outputs: &[Register],
    blocks: &[Block],
    safe: &dyn Fn(Register) -> bool,
) -> Plan {
    let kernels = fuse(operations, first, outputs, blocks, safe);
    let mut layout = Layout::new(&kernels, first + operations.len(), first, outputs, blocks);
    let mut steps = Vec::new();
    let mut parameters = Vec::new();
    let mut state_slots = vec![0; states];
    // Inputs are written before any step runs, so they get their slots first, and keep them.
    for (register, kernel) in &kernels {
        match kernel {
            Kernel::One(Operation::State(i)) => state_slots[*i] = layout.pin(*register),
            Kernel::One(Operation::Parameter(i)) => parameters.push((*i, layout.pin(*register))),
            _ => {}
        }
    }
    for (position, (register, kernel)) in kernels.iter().enumerate() {
        if matches!(kernel, Kernel::One(Operation::State(_) | Operation::Parameter(_))) {
            continue;
        }
        let placed = kernel.map(|operand| layout.slot(operand) as Register);
        // The new slot is taken before the operands' are given back, so that no step reads what it writes.
        let to = layout.place(*register);
        steps.push(Step { kernel: placed, to });
        layout.release(kernel, position);
    }
    let outputs = outputs.iter().map(|&register| layout.slot(register)).collect();
    let blocks = blocks.iter().map(|block| layout.block(block)).collect();
    // One more slot takes inputs that nothing reads.
    Plan { steps, slots: layout.slots + 1, pinned: layout.pinned, states: state_slots, outputs, blocks, parameters }
}

struct Layout {
    first: usize,
    slot_of: Vec<Option<usize>>,
    last_use: Vec<usize>,
    free: Vec<usize>,
    slots: usize,
    pinned: Vec<(Register, usize)>,
}

impl Layout {
    fn new(
        kernels: &[(Register, Kernel)],
        registers: usize,
        first: usize,
        outputs: &[Register],
        blocks: &[Block],
    ) -> Self {
        let mut last_use = vec![0; registers];
        for (position, (_, kernel)) in kernels.iter().enumerate() {
            for operand in kernel.operands() {
                last_use[operand as usize] = position;
            }
        }
        let kept = blocks.iter().flat_map(|block| block.formulas.iter().flatten().map(|&(_, register)| register));
        for register in outputs.iter().copied().chain(kept) {
            last_use[register as usize] = usize::MAX;
        }
        Self { first, slot_of: vec![None; registers], last_use, free: Vec::new(), slots: 0, pinned: Vec::new() }
    }

    /// The slot of a register, which for one computed beforehand is made when it is first asked for.
    fn slot(&mut self, register: Register) -> usize {
        if let Some(slot) = self.slot_of[register as usize] {
            return slot;
        }
        let slot = self.fresh();
        self.slot_of[register as usize] = Some(slot);
        self.pinned.push((register, slot));
        slot
    }

    /// A slot that is never given back.
    fn pin(&mut self, register: Register) -> usize {
        let slot = self.fresh();
        self.slot_of[register as usize] = Some(slot);
        self.last_use[register as usize] = usize::MAX;
        slot
    }

    fn place(&mut self, register: Register) -> usize {
        let slot = self.free.pop().unwrap_or_else(|| self.fresh());
        self.slot_of[register as usize] = Some(slot);
        slot
    }

    /// A slot that no value has used: what is computed beforehand must not be written over.
    fn fresh(&mut self) -> usize {
        self.slots += 1;
        self.slots - 1
    }

    fn block(&mut self, block: &Block) -> Block {
        let mut row = |row: &Vec<(usize, Register)>| {
            row.iter().map(|&(column, register)| (column, self.slot(register) as Register)).collect()
        };
        Block { formulas: block.formulas.iter().map(&mut row).collect(), ..block.clone() }
    }

    fn release(&mut self, kernel: &Kernel, position: usize) {
        let mut given_back: Vec<usize> = Vec::new();
        for operand in kernel.operands() {
            let last = self.last_use[operand as usize] == position && operand as usize >= self.first;
            if let Some(slot) = self.slot_of[operand as usize].filter(|slot| last && !given_back.contains(slot)) {
                given_back.push(slot);
            }
        }
        self.free.extend(given_back);
    }
}
