//! Flat tapes: a graph's outputs as one list of operations, run over any [`Number`](number::Number).
//!
//! The *fixed* part (constants, parameters and what depends on them alone) runs once per set of parameters, the *moving*
//! part once per state; so a scenario or a draw never recompiles. Operations are in single-assignment form: operation k
//! writes register k. `number` says what a type must offer, `run` evaluates over f64, intervals and, through `double` and
//! `written`, numbers of 32 digits, `gradient` adds forward gradients, `jet` Taylor coefficients along a curve, `lanes` whole batches of points or of parameter vectors.

use std::sync::Arc;

use super::graph::{Graph, Matrix, NodeId, Operation};

mod double;
pub mod gradient;
pub mod jet;
pub mod lanes;
pub mod number;
pub mod propagate;
pub mod run;
pub mod written;

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
    /// Compiles the given nodes over all states; the tape's outputs are theirs, in order.
    pub fn new(graph: &Graph, outputs: &[NodeId]) -> Self {
        let all: Vec<usize> = (0..graph.states()).collect();
        Self::over(graph, outputs, &all)
    }

    /// Compiles the given nodes over some of the states, in that order; the others are 0.
    ///
    /// # Panics
    /// If a node depends on another state, other than through a matrix block.
    pub fn over(graph: &Graph, outputs: &[NodeId], variables: &[usize]) -> Self {
        let needed = graph.reachable(outputs);
        let is_state = |node: NodeId| matches!(graph.operation(node), Operation::State(_));
        let operations = |keep: &dyn Fn(NodeId) -> bool| -> Vec<(NodeId, Operation<NodeId>)> {
            let operation = |&node: &NodeId| (node, renumbered(graph.operation(node), variables));
            needed.iter().filter(|&&node| keep(node)).map(operation).collect()
        };
        let mut registers = vec![Register::MAX; needed.last().map_or(0, |node| node.index() + 1)];
        let fixed = operations(&|node| !graph.facts(node).state_dependent);
        let fixed = place(&mut registers, &fixed, 0);
        let first_state = fixed.len();
        for &node in &needed {
            if let Operation::State(i) = graph.operation(node) {
                let position = variables.iter().position(|&variable| variable == i);
                let position = position.unwrap_or_else(|| unreachable!("state {i} is not a variable"));
                registers[node.index()] = (first_state + position) as Register;
            }
        }
        let rest = operations(&|node| graph.facts(node).state_dependent && !is_state(node));
        let mut moving: Vec<Operation<Register>> = (0..variables.len()).map(Operation::State).collect();
        moving.extend(place(&mut registers, &rest, first_state + variables.len()));
        let blocks = graph.matrices().iter().map(|matrix| block(matrix, variables, &registers)).collect();
        let dependence = dependence(&moving, first_state, variables.len());
        Self {
            states: variables.len(),
            parameters: graph.parameters().len(),
            outputs: outputs.iter().map(|node| registers[node.index()]).collect(),
            blocks: Arc::new(blocks),
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

/// A row of a matrix block by its place among the variables.
fn renumbered(operation: Operation<NodeId>, variables: &[usize]) -> Operation<NodeId> {
    match operation {
        Operation::Interaction { block, row } => {
            let position = variables.iter().position(|&variable| variable == row);
            let row = position.unwrap_or_else(|| unreachable!("row {row} is not a variable's"));
            Operation::Interaction { block, row }
        }
        other => other,
    }
}

/// The part of a matrix between the variables; empty where no row of it is needed.
fn block(matrix: &Matrix, variables: &[usize], registers: &[Register]) -> Block {
    let register = |node: NodeId| registers.get(node.index()).copied().filter(|&register| register != Register::MAX);
    let numbers = variables.iter().flat_map(|&i| variables.iter().map(move |&j| matrix.numbers[i * matrix.order + j]));
    let row = |&i: &usize| {
        let entry = |&(j, node): &(usize, NodeId)| {
            Some((variables.iter().position(|&variable| variable == j)?, register(node)?))
        };
        matrix.formulas[i].iter().filter_map(entry).collect()
    };
    Block { order: variables.len(), numbers: numbers.collect(), formulas: variables.iter().map(row).collect() }
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
