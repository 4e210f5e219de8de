//! Growth and matrix of a Lotka–Volterra community, read off the graph.
//!
//! Each balanced row is divided by its own species; what is left must be built of abundances and of terms in parameters
//! alone by sums, differences, and products and quotients in which only one operand (of a quotient, the first) depends on
//! an abundance. Where that holds the row *is* affine, wherever it stands in the file: a block, a formula, a harvest.

use super::super::Problem;
use super::Affine;
use crate::expr::graph::{Graph, NodeId, Operation};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// Most terms of one row, counted once for each way in which they enter it.
const MOST_TERMS: usize = 100_000;

/// Growth and matrix, where every row is its species' abundance times an affine function of all abundances; else `None`.
pub fn recognise(graph: &mut Graph, problem: &Problem<'_>) -> Option<Affine> {
    let n = graph.states();
    let mut quotients = Vec::with_capacity(n);
    for (i, &row) in problem.rows.iter().enumerate() {
        let quotient = graph.divide(row, i).quotient?;
        // Defined everywhere, or the affine function would stand where the rates do not.
        if !(graph.facts(row).total && graph.facts(quotient).total) {
            return None;
        }
        quotients.push(quotient);
    }
    let fixed = fixed_terms(graph, &quotients, problem.values)?;
    let mut community = Affine { growth: vec![Interval::ZERO; n], matrix: vec![Interval::ZERO; n * n] };
    for (i, &quotient) in quotients.iter().enumerate() {
        let slopes = &mut community.matrix[i * n..(i + 1) * n];
        let row = Row { graph, fixed: &fixed, growth: &mut community.growth[i], slopes };
        row.read(quotient)?;
    }
    let bounded = community.growth.iter().chain(&community.matrix).all(|entry| entry.is_bounded());
    bounded.then_some(community)
}

/// Everything in some nodes that depends on parameters alone, by node; `None` where one is not defined.
fn fixed_terms(graph: &Graph, nodes: &[NodeId], values: &[f64]) -> Option<Vec<Interval>> {
    let fixed: Vec<NodeId> =
        graph.reachable(nodes).into_iter().filter(|&node| !graph.facts(node).state_dependent).collect();
    let tape = Tape::over(graph, &fixed, &[]);
    let exact: Vec<Interval> = values.iter().map(|&value| Interval::point(value)).collect();
    let mut run = tape.start(&exact);
    if !run.at(&[]).defined {
        return None;
    }
    let mut known = vec![Interval::EMPTY; graph.len()];
    for (node, value) in fixed.iter().zip(run.outputs()) {
        known[node.index()] = *value;
    }
    Some(known)
}

/// One row as it is read.
struct Row<'r> {
    graph: &'r Graph,
    fixed: &'r [Interval],
    growth: &'r mut Interval,
    slopes: &'r mut [Interval],
}

impl Row<'_> {
    /// Adds up a node's terms; `None` where it is not seen to be affine.
    fn read(mut self, node: NodeId) -> Option<()> {
        // Each part still to be read, and what it is multiplied by.
        let mut parts = vec![(node, Interval::ONE)];
        for _ in 0..MOST_TERMS {
            let Some((node, factor)) = parts.pop() else { return Some(()) };
            if let Some(value) = self.value(node) {
                *self.growth += factor * value;
                continue;
            }
            match self.graph.operation(node) {
                Operation::State(j) => self.slopes[j] += factor,
                Operation::Interaction { block, row } => self.add_interaction(block, row, factor),
                Operation::Neg(a) => parts.push((a, -factor)),
                Operation::Add(a, b) => parts.extend([(b, factor), (a, factor)]),
                Operation::Sub(a, b) => parts.extend([(b, -factor), (a, factor)]),
                Operation::Mul(a, b) => match (self.value(a), self.value(b)) {
                    (Some(value), _) => parts.push((b, factor * value)),
                    (_, Some(value)) => parts.push((a, factor * value)),
                    _ => return None,
                },
                Operation::Div(a, b) => {
                    let divisor = self.value(b)?;
                    parts.push((a, factor.div(divisor, &mut true)));
                }
                _ => return None,
            }
        }
        None
    }

    /// The value of what depends on parameters alone.
    fn value(&self, node: NodeId) -> Option<Interval> {
        (!self.graph.facts(node).state_dependent).then(|| self.fixed[node.index()])
    }

    fn add_interaction(&mut self, block: usize, row: usize, factor: Interval) {
        let matrix = &self.graph.matrices()[block];
        let numbers = &matrix.numbers[row * matrix.order..(row + 1) * matrix.order];
        for (slope, &number) in self.slopes.iter_mut().zip(numbers) {
            if number != 0.0 {
                *slope += factor * Interval::point(number);
            }
        }
        for &(column, node) in &matrix.formulas[row] {
            self.slopes[column] += factor * self.fixed[node.index()];
        }
    }
}
