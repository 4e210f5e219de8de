//! The exact graph: shared sub-expressions over states and parameters, nothing rounded.
//!
//! Every node is an [`Operation`] on earlier nodes; equal operations are one node (hash-consing). Leaves are states,
//! parameters and f64 constants taken as exact numbers. Rules live in siblings, one job a file: `build` (constructors,
//! which simplify only where the result equals the original *and is defined at the same points*), `saturate` (the
//! monotone form s/(v + c s)), `facts` (signs and ranges that the rules rely on), `derive` (exact derivatives), `divide`
//! and `slope` (what a row is at x = 0, and the row divided by x), `express` (back to a syntax tree). To add an operation: a variant
//! here, then follow the compiler.

use std::collections::HashMap;

use super::function::{Function, Quotient};
use crate::num::interval::Interval;
use facts::Facts;

pub mod build;
pub mod derive;
pub mod divide;
pub mod express;
pub mod facts;
mod fold;
pub mod read;
pub mod saturate;
mod slope;
pub mod substitute;
pub mod widen;

/// Index of a node in its [`Graph`]; operands have smaller indices than what uses them.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct NodeId(u32);

impl NodeId {
    /// Position in the graph's order.
    pub const fn index(self) -> usize {
        self.0 as usize
    }
}

/// A finite f64 that can be hashed; −0 is 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Exact(u64);

impl Exact {
    /// The number itself.
    ///
    /// # Panics
    /// If it is not finite: constants come through the loader's gate or from folding that stayed exact.
    pub fn new(value: f64) -> Self {
        assert!(value.is_finite(), "constant {value}");
        Self((value + 0.0).to_bits())
    }

    /// The number back.
    pub const fn get(self) -> f64 {
        f64::from_bits(self.0)
    }
}

/// One operation on operands of type `R`: nodes in a graph, registers in a tape.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Operation<R> {
    /// An exact number.
    Constant(Exact),
    /// The abundance of species i.
    State(usize),
    /// The value of parameter i.
    Parameter(usize),
    /// −a
    Neg(R),
    /// a + b
    Add(R, R),
    /// a − b
    Sub(R, R),
    /// a b
    Mul(R, R),
    /// a / b, undefined at b = 0
    Div(R, R),
    /// aⁿ, n not 0 or 1; undefined at a = 0 for n < 0
    PowInt(R, i32),
    /// a^b for a > 0, and 0 at a = 0 where b > 0
    Pow(R, R),
    /// f(a)
    Apply(Function, R),
    /// the smaller
    Min(R, R),
    /// the larger
    Max(R, R),
    /// `[a, b, x, y]`: x where a ≤ b, y elsewhere
    Select([R; 4]),
    /// `[s, c, v]`: s/(v + c s), the monotone saturation form; undefined where v + c s = 0
    Saturation([R; 3]),
    /// The k-th derivative of f(u)/u for f(0) = 0, continued to u = 0
    Quotient(Quotient, u8, R),
    /// The k-th derivative in u of ((1 + u)^p − 1)/u, operands u and p, continued to u = 0
    PowerQuotient(u8, R, R),
    /// Σ_j m_ij x_j over row i of a matrix block
    Interaction {
        /// Which block.
        block: usize,
        /// Which row of it.
        row: usize,
    },
}

impl<R: Copy> Operation<R> {
    /// The operands, in order, padded with `None`.
    pub fn operands(&self) -> [Option<R>; 4] {
        match *self {
            Self::Constant(_) | Self::State(_) | Self::Parameter(_) | Self::Interaction { .. } => [None; 4],
            Self::Neg(a) | Self::PowInt(a, _) | Self::Apply(_, a) | Self::Quotient(_, _, a) => {
                [Some(a), None, None, None]
            }
            Self::Add(a, b)
            | Self::Sub(a, b)
            | Self::Mul(a, b)
            | Self::Div(a, b)
            | Self::Pow(a, b)
            | Self::Min(a, b)
            | Self::Max(a, b)
            | Self::PowerQuotient(_, a, b) => [Some(a), Some(b), None, None],
            Self::Saturation([a, b, c]) => [Some(a), Some(b), Some(c), None],
            Self::Select([a, b, x, y]) => [Some(a), Some(b), Some(x), Some(y)],
        }
    }

    /// The same operation on other operands.
    pub fn map<S>(&self, mut f: impl FnMut(R) -> S) -> Operation<S> {
        match *self {
            Self::Constant(value) => Operation::Constant(value),
            Self::State(i) => Operation::State(i),
            Self::Parameter(i) => Operation::Parameter(i),
            Self::Neg(a) => Operation::Neg(f(a)),
            Self::Add(a, b) => Operation::Add(f(a), f(b)),
            Self::Sub(a, b) => Operation::Sub(f(a), f(b)),
            Self::Mul(a, b) => Operation::Mul(f(a), f(b)),
            Self::Div(a, b) => Operation::Div(f(a), f(b)),
            Self::PowInt(a, n) => Operation::PowInt(f(a), n),
            Self::Pow(a, b) => Operation::Pow(f(a), f(b)),
            Self::Apply(function, a) => Operation::Apply(function, f(a)),
            Self::Min(a, b) => Operation::Min(f(a), f(b)),
            Self::Max(a, b) => Operation::Max(f(a), f(b)),
            Self::Select(operands) => Operation::Select(operands.map(f)),
            Self::Saturation(operands) => Operation::Saturation(operands.map(f)),
            Self::Quotient(quotient, k, a) => Operation::Quotient(quotient, k, f(a)),
            Self::PowerQuotient(k, a, b) => Operation::PowerQuotient(k, f(a), f(b)),
            Self::Interaction { block, row } => Operation::Interaction { block, row },
        }
    }
}

/// A matrix over all species: numbers, and in some places nodes that depend on parameters alone.
#[derive(Clone, Debug, PartialEq)]
pub struct Matrix {
    /// Rows and columns.
    pub order: usize,
    /// Row by row, `order`² numbers; 0 where a formula stands.
    pub numbers: Vec<f64>,
    /// For each row, the columns that hold a formula.
    pub formulas: Vec<Vec<(usize, NodeId)>>,
}

/// What a derivative is taken with respect to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Variable {
    /// The abundance of a species.
    State(usize),
    /// A parameter.
    Parameter(usize),
}

/// The graph: nodes in topological order, and what is known of each.
///
/// Facts hold for states in [0, ∞) (in a widened graph, for those beyond the abundances in the domains that they have there)
/// and parameters in the domains given to [`Graph::new`]; a tape made from the graph
/// computes the same function outside them too, but rules that relied on a sign may then have widened its domain.
#[derive(Clone, Debug)]
pub struct Graph {
    states: usize,
    /// The values that states after the abundances may have, where there are any: parameters that move.
    beyond: Vec<Interval>,
    parameters: Vec<Interval>,
    nodes: Vec<Operation<NodeId>>,
    facts: Vec<Facts>,
    index: HashMap<Operation<NodeId>, NodeId>,
    matrices: Vec<Matrix>,
    derivatives: HashMap<(NodeId, Variable), NodeId>,
}

impl Graph {
    /// An empty graph over `states` species and parameters that lie in the given intervals.
    pub fn new(states: usize, parameters: Vec<Interval>) -> Self {
        Self {
            states,
            beyond: Vec::new(),
            parameters,
            nodes: Vec::new(),
            facts: Vec::new(),
            index: HashMap::new(),
            matrices: Vec::new(),
            derivatives: HashMap::new(),
        }
    }

    /// How many species.
    pub fn states(&self) -> usize {
        self.states
    }

    /// The domain of each parameter.
    pub fn parameters(&self) -> &[Interval] {
        &self.parameters
    }

    /// How many nodes.
    pub fn len(&self) -> usize {
        self.nodes.len()
    }

    /// Whether there is no node.
    pub fn is_empty(&self) -> bool {
        self.nodes.is_empty()
    }

    /// The operation of a node.
    pub fn operation(&self, node: NodeId) -> Operation<NodeId> {
        self.nodes[node.index()]
    }

    /// What is known of a node.
    pub fn facts(&self, node: NodeId) -> &Facts {
        &self.facts[node.index()]
    }

    /// The matrix blocks.
    pub fn matrices(&self) -> &[Matrix] {
        &self.matrices
    }

    /// The number that a node is, where it is a constant.
    pub fn constant_value(&self, node: NodeId) -> Option<f64> {
        match self.operation(node) {
            Operation::Constant(value) => Some(value.get()),
            _ => None,
        }
    }

    /// Adds a matrix block, for [`Graph::interaction`].
    ///
    /// # Panics
    /// If its shape is not species × species.
    pub fn add_matrix(&mut self, matrix: Matrix) -> usize {
        assert_eq!(matrix.order, self.states, "matrix of order {} for {} species", matrix.order, self.states);
        assert_eq!(matrix.numbers.len(), self.states * self.states, "matrix entries");
        assert_eq!(matrix.formulas.len(), self.states, "rows of formulas");
        self.matrices.push(matrix);
        self.matrices.len() - 1
    }

    /// The entry of a matrix block, as a node.
    pub fn matrix_entry(&mut self, block: usize, row: usize, column: usize) -> NodeId {
        let matrix = &self.matrices[block];
        match matrix.formulas[row].iter().find(|(j, _)| *j == column) {
            Some(&(_, node)) => node,
            None => self.constant(matrix.numbers[row * matrix.order + column]),
        }
    }

    /// Every node that the given ones need, operands before users.
    pub fn reachable(&self, outputs: &[NodeId]) -> Vec<NodeId> {
        // A graph may hold many rows that these nodes have nothing to do with, so the marks are kept small.
        let mut marks = vec![0u64; self.nodes.len().div_ceil(64)];
        let mut needed = Vec::new();
        let mut stack = outputs.to_vec();
        while let Some(node) = stack.pop() {
            let (word, bit) = (node.index() / 64, 1 << (node.index() % 64));
            if marks[word] & bit != 0 {
                continue;
            }
            marks[word] |= bit;
            needed.push(node);
            stack.extend(self.operation(node).operands().into_iter().flatten());
            if let Operation::Interaction { block, row } = self.operation(node) {
                stack.extend(self.matrices[block].formulas[row].iter().map(|&(_, entry)| entry));
            }
        }
        needed.sort_unstable();
        needed
    }

    /// The node of an operation, shared with an equal one that is there already.
    fn intern(&mut self, operation: Operation<NodeId>) -> NodeId {
        let key = ordered(operation);
        if let Some(&node) = self.index.get(&key) {
            return node;
        }
        let node = NodeId(u32::try_from(self.nodes.len()).unwrap_or(u32::MAX));
        let facts = facts::of(self, &operation);
        self.nodes.push(operation);
        self.facts.push(facts);
        self.index.insert(key, node);
        node
    }
}

/// Commutative operations under one key; the node keeps the order in which it was first written.
fn ordered(operation: Operation<NodeId>) -> Operation<NodeId> {
    match operation {
        Operation::Add(a, b) if b < a => Operation::Add(b, a),
        Operation::Mul(a, b) if b < a => Operation::Mul(b, a),
        Operation::Min(a, b) if b < a => Operation::Min(b, a),
        Operation::Max(a, b) if b < a => Operation::Max(b, a),
        other => other,
    }
}
