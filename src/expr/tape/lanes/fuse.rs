//! Joins two operations into one step where the first one's result is read once only, by the second.
//!
//! A joined step keeps the value between them in a processor register instead of storing and loading a whole lane. Both
//! operations are still rounded one by one, so results stay the same bit for bit.

use super::Block;
use crate::expr::graph::Operation;
use crate::expr::tape::Register;

/// The first of two joined operations, on `a` and `b`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum First {
    Add,
    Sub,
    Mul,
    /// By a divisor that is fixed and not 0.
    Div,
}

/// The second of two joined operations, on the first one's result `t` and on `c`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Second {
    /// t + c
    Add,
    /// t − c
    Minus,
    /// c − t
    From,
    /// t c
    Mul,
}

/// What one step does.
#[derive(Clone, Copy, Debug)]
pub(super) enum Kernel {
    /// One operation of the tape.
    One(Operation<Register>),
    /// a / b for a divisor that is fixed and not 0, so that no lane needs to be looked at.
    DivByFixed([Register; 2]),
    /// Two operations on `[a, b, c]`.
    Two(First, Second, [Register; 3]),
}

impl Kernel {
    /// The registers that it reads.
    pub(super) fn operands(&self) -> impl Iterator<Item = Register> {
        let operands = match *self {
            Self::One(operation) => operation.operands(),
            Self::DivByFixed([a, b]) => [Some(a), Some(b), None, None],
            Self::Two(_, _, [a, b, c]) => [Some(a), Some(b), Some(c), None],
        };
        operands.into_iter().flatten()
    }

    /// The same on other registers.
    pub(super) fn map(&self, f: impl FnMut(Register) -> Register) -> Self {
        match *self {
            Self::One(operation) => Self::One(operation.map(f)),
            Self::DivByFixed(operands) => Self::DivByFixed(operands.map(f)),
            Self::Two(first, second, operands) => Self::Two(first, second, operands.map(f)),
        }
    }
}

/// The steps of a tape whose first operation writes register `first`, each with the register that it writes; `safe` says
/// of a register that it is fixed and not 0.
pub(super) fn fuse(
    operations: &[Operation<Register>],
    first: usize,
    outputs: &[Register],
    blocks: &[Block],
    safe: &dyn Fn(Register) -> bool,
) -> Vec<(Register, Kernel)> {
    let uses = uses(operations, first, outputs, blocks);
    let mut kernels: Vec<Option<Kernel>> = Vec::with_capacity(operations.len());
    for &operation in operations {
        let plain = match operation {
            Operation::Div(a, b) if safe(b) => Kernel::DivByFixed([a, b]),
            _ => Kernel::One(operation),
        };
        let inner = |register: Register| {
            let position = (register as usize).checked_sub(first).filter(|_| uses[register as usize] == 1)?;
            Some((position, kernels[position].as_ref().and_then(as_first)?))
        };
        let kernel = match join(operation, &inner) {
            Some((position, kernel)) => {
                kernels[position] = None;
                kernel
            }
            None => plain,
        };
        kernels.push(Some(kernel));
    }
    let numbered = kernels.into_iter().enumerate();
    numbered.filter_map(|(position, kernel)| Some(((first + position) as Register, kernel?))).collect()
}

/// A first operation, where it stands, and what it reads.
type Inner = (usize, (First, [Register; 2]));

/// An operation joined with the one that makes one of its operands, and where that one stood.
fn join(operation: Operation<Register>, inner: &dyn Fn(Register) -> Option<Inner>) -> Option<(usize, Kernel)> {
    let (left, right, on_left, on_right) = match operation {
        Operation::Add(a, b) => (a, b, Second::Add, Second::Add),
        Operation::Sub(a, b) => (a, b, Second::Minus, Second::From),
        Operation::Mul(a, b) => (a, b, Second::Mul, Second::Mul),
        _ => return None,
    };
    let joined = |(position, (first, [a, b])): Inner, second, c| (position, Kernel::Two(first, second, [a, b, c]));
    match (inner(left), inner(right)) {
        (Some(found), _) => Some(joined(found, on_left, right)),
        (None, Some(found)) => Some(joined(found, on_right, left)),
        (None, None) => None,
    }
}

fn as_first(kernel: &Kernel) -> Option<(First, [Register; 2])> {
    match *kernel {
        Kernel::One(Operation::Add(a, b)) => Some((First::Add, [a, b])),
        Kernel::One(Operation::Sub(a, b)) => Some((First::Sub, [a, b])),
        Kernel::One(Operation::Mul(a, b)) => Some((First::Mul, [a, b])),
        Kernel::DivByFixed(operands) => Some((First::Div, operands)),
        _ => None,
    }
}

/// How often each register is read; an output, or an entry of a block, counts as read twice, so that it stays.
fn uses(operations: &[Operation<Register>], first: usize, outputs: &[Register], blocks: &[Block]) -> Vec<usize> {
    let mut uses = vec![0; first + operations.len()];
    for operand in operations.iter().flat_map(|operation| operation.operands().into_iter().flatten()) {
        uses[operand as usize] += 1;
    }
    let entries = blocks.iter().flat_map(|block| block.formulas.iter().flatten().map(|&(_, register)| register));
    for register in outputs.iter().copied().chain(entries) {
        uses[register as usize] += 2;
    }
    uses
}
