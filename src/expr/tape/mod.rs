//! Flat tapes: a graph's outputs as one list of operations, run over any [`Number`](number::Number).
//!
//! The *fixed* part (constants, parameters and what depends on them alone) runs once per set of parameters, the *moving*
//! part once per state; so a scenario or a draw never recompiles. Operations are in single-assignment form: operation k
//! writes register k. `number` says what a type must offer, `run` evaluates over f64 and intervals, `gradient` adds forward
//! gradients, `jet` Taylor coefficients along a curve, `lanes` whole batches of points or of parameter vectors.

use std::sync::Arc;

use super::graph::{Graph, NodeId, Operation};

pub mod gradient;
pub mod jet;
pub mod lanes;
pub mod number;
pub mod run;

/// Index of a register: of the operation that writes it.
pub type Register = u32;

/// A matrix block as a tape holds it.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Block {
    pub(crate) order: usize,
    /// Row by row; 0 where a formula stands.
    pub(crate) numbers: Vec<f64>,
    /// For each row, columns with the register that holds their entry.
    pub(crate) formulas: Vec<Vec<(usize, Register)>>,
}

/// A list of operations that computes some nodes of a graph.
#[derive(Clone, Debug)]
pub struct Tape {
    states: usize,
    parameters: usize,
    /// Registers 0 … : constants, parameters, and what depends on them alone.
    fixed: Vec<Operation<Register>>,
    /// The registers after: first every state, then what depends on them.
    moving: Vec<Operation<Register>>,
    /// For each moving operation, bit i is set where it depends on state i; all set beyond 64 states.
    dependence: Vec<u64>,
    outputs: Vec<Register>,
    blocks: Arc<Vec<Block>>,
}

impl Tape {
    /// Compiles the given nodes; the tape's outputs are theirs, in order.
    pub fn new(graph: &Graph, outputs: &[NodeId]) -> Self {
        let needed = graph.reachable(outputs);
        let is_fixed = |node: &&NodeId| !graph.facts(**node).state_dependent;
        let is_moving = |node: &&NodeId| {
            graph.facts(**node).state_dependent && !matches!(graph.operation(**node), Operation::State(_))
        };
        let mut registers = vec![Register::MAX; graph.len()];
        let fixed: Vec<_> = needed.iter().filter(is_fixed).map(|&node| (node, graph.operation(node))).collect();
        let fixed = place(&mut registers, &fixed, 0);
        let first_state = fixed.len();
        let mut moving: Vec<Operation<Register>> = (0..graph.states()).map(Operation::State).collect();
        for &node in &needed {
            if let Operation::State(i) = graph.operation(node) {
                registers[node.index()] = (first_state + i) as Register;
            }
        }
        let rest: Vec<_> = needed.iter().filter(is_moving).map(|&node| (node, graph.operation(node))).collect();
        moving.extend(place(&mut registers, &rest, first_state + graph.states()));
        let blocks = graph.matrices().iter().map(|matrix| Block {
            order: matrix.order,
            numbers: matrix.numbers.clone(),
            formulas: matrix
                .formulas
                .iter()
                .map(|row| row.iter().map(|&(j, entry)| (j, registers[entry.index()])).collect())
                .collect(),
        });
        let dependence = dependence(&moving, first_state, graph.states());
        Self {
            states: graph.states(),
            parameters: graph.parameters().len(),
            outputs: outputs.iter().map(|node| registers[node.index()]).collect(),
            blocks: Arc::new(blocks.collect()),
            fixed,
            moving,
            dependence,
        }
    }

    /// How many states it takes.
    pub fn states(&self) -> usize {
        self.states
    }

    /// How many parameters it takes.
    pub fn parameters(&self) -> usize {
        self.parameters
    }

    /// How many outputs it has.
    pub fn outputs(&self) -> usize {
        self.outputs.len()
    }

    /// How many operations run at every state.
    pub fn operations(&self) -> usize {
        self.moving.len() - self.states
    }

    fn first_state(&self) -> usize {
        self.fixed.len()
    }
}

/// Gives the nodes the next registers, and returns their operations on registers.
fn place(registers: &mut [Register], nodes: &[(NodeId, Operation<NodeId>)], first: usize) -> Vec<Operation<Register>> {
    for (position, (node, _)) in nodes.iter().enumerate() {
        registers[node.index()] = (first + position) as Register;
    }
    nodes.iter().map(|(_, operation)| operation.map(|operand| registers[operand.index()])).collect()
}

fn dependence(moving: &[Operation<Register>], first_state: usize, states: usize) -> Vec<u64> {
    if states > 64 {
        return vec![u64::MAX; moving.len()];
    }
    let mut masks: Vec<u64> = Vec::with_capacity(moving.len());
    for operation in moving {
        let mask = match operation {
            Operation::State(i) => 1 << i,
            Operation::Interaction { .. } => u64::MAX >> (64 - states),
            _ => operation
                .operands()
                .into_iter()
                .flatten()
                .filter_map(|operand| (operand as usize).checked_sub(first_state))
                .fold(0, |all, position| all | masks[position]),
        };
        masks.push(mask);
    }
    masks
}
