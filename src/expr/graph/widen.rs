//! The same rows with some parameters as states: a control that is followed, or several that a curve runs in.
//!
//! A tape takes derivatives with respect to states alone, and takes its parameters once. Where a parameter moves with the
//! abundances it becomes a state of a graph of its own, with further states for what a problem adds (a direction, a
//! frequency).

use std::collections::HashMap;

use super::{Graph, NodeId, Operation};
use crate::num::interval::Interval;

/// Rows in a graph of more states.
#[derive(Clone, Debug)]
pub struct Widened {
    /// The graph: the states that there were, then one for each parameter that moves, then the spare ones.
    pub graph: Graph,
    /// The nodes asked for, in order.
    pub nodes: Vec<NodeId>,
}

impl Graph {
    /// The nodes over states of which the given parameters are the next after the species, in the order given, and `spare`
    /// more after these. Rows of matrix blocks are written out as sums, for a block is as wide as the graph.
    ///
    /// A spare state may have any sign, and a parameter that moves too where its domain holds negative numbers. As with
    /// parameters that do not move, no rule minds that a row may have no value at some of theirs.
    pub fn widened(&self, nodes: &[NodeId], moving: &[usize], spare: usize) -> Widened {
        let mut graph = Graph::new(self.states + moving.len() + spare, self.parameters.clone());
        // Further values than the domain may be asked for, but not of another sign.
        let domain = |&i: &usize| {
            if self.parameters[i].lo() >= 0.0 { Interval::new(0.0, f64::INFINITY) } else { Interval::ENTIRE }
        };
        graph.beyond = moving.iter().map(domain).chain(std::iter::repeat_n(Interval::ENTIRE, spare)).collect();
        let mut new: HashMap<NodeId, NodeId> = HashMap::new();
        for node in self.reachable(nodes) {
            let rebuilt = match self.operation(node) {
                Operation::Parameter(i) => match moving.iter().position(|&parameter| parameter == i) {
                    Some(place) => graph.state(self.states + place),
                    None => graph.parameter(i),
                },
                Operation::Interaction { block, row } => self.written_out(&mut graph, block, row, &new),
                operation => graph.rebuild(operation.map(|operand| new[&operand])),
            };
            new.insert(node, rebuilt);
        }
        Widened { nodes: nodes.iter().map(|node| new[node]).collect(), graph }
    }

    /// Σ_j m_ij x_j, term by term; entries that are 0 are left out.
    fn written_out(&self, graph: &mut Graph, block: usize, row: usize, new: &HashMap<NodeId, NodeId>) -> NodeId {
        let matrix = &self.matrices[block];
        let mut sum = graph.zero();
        for column in 0..matrix.order {
            let entry = match matrix.formulas[row].iter().find(|(j, _)| *j == column) {
                Some((_, node)) => new[node],
                None => graph.constant(matrix.numbers[row * matrix.order + column]),
            };
            let x = graph.state(column);
            let term = graph.mul(entry, x);
            sum = graph.add(sum, term);
        }
        sum
    }
}

#[cfg(test)]
mod tests {
    use super::super::{Graph, Matrix};
    use crate::expr::tape::Tape;
    use crate::num::interval::Interval;

    #[test]
    fn what_a_moving_parameter_leaves_without_a_value_is_no_reason_to_be_there() {
        // x (1 − a)^b is 0 at x = 0, whichever of a and b moves, and |a| is not a where a may be negative.
        let mut graph = Graph::new(1, vec![Interval::new(0.0, 1.0), Interval::new(-1.0, 1.0)]);
        let (x, a, b, one) = (graph.state(0), graph.parameter(0), graph.parameter(1), graph.one());
        let left = graph.sub(one, a);
        let share = graph.pow(left, b);
        let row = graph.mul(x, share);
        let size = graph.apply(crate::expr::function::Function::Abs, b);
        for moving in [vec![0], vec![1], vec![0, 1]] {
            let mut wide = graph.widened(&[row, size], &moving, 0);
            assert!(wide.graph.vanishes_at_zero(wide.nodes[0], 0), "{moving:?}");
            let divided = wide.graph.divide(wide.nodes[0], 0).quotient;
            assert!(divided.is_some(), "{moving:?}");
            let inputs: Vec<usize> = (0..=moving.len()).collect();
            let tape = Tape::over(&wide.graph, &wide.nodes[1..], &inputs);
            let mut run = tape.start(&[0.5, -0.25]);
            run.at(&[vec![2.0], vec![-0.25; moving.len()]].concat());
            assert_eq!(*run.output(0), 0.25, "{moving:?}");
        }
    }

    #[test]
    fn a_parameter_that_moves_is_an_input_like_any_other() {
        let mut graph = Graph::new(2, vec![Interval::new(0.0, 9.0), Interval::new(0.0, 9.0)]);
        let (x, r, c) = (graph.state(0), graph.parameter(0), graph.parameter(1));
        let formulas = vec![vec![(1, c)], vec![]];
        let block = graph.add_matrix(Matrix { order: 2, numbers: vec![2.0, 0.0, 0.0, -3.0], formulas });
        let inner = graph.interaction(block, 0);
        let growth = graph.add(r, inner);
        let row = graph.mul(x, growth);
        let wide = graph.widened(&[row], &[1], 1);
        let tape = Tape::over(&wide.graph, &wide.nodes, &[0, 1, 2]);
        // x (r + 2x + c y), and its derivative with respect to c.
        let mut run = tape.start_gradient(&[0.5, f64::NAN]);
        run.at(&[3.0, 4.0, 7.0]);
        assert_eq!(*run.output(0), 3.0 * (0.5 + 6.0 + 28.0));
        assert_eq!(run.gradient(0), Some(&[0.5 + 12.0 + 28.0, 21.0, 12.0][..]));
    }

    /// A loss of x of which a share (1 − a)^b is spared, a moving: absence of x stays absence, whatever has no value at a > 1.
    #[test]
    fn what_a_moving_parameter_leaves_undefined_vanishes_all_the_same() {
        let mut graph = Graph::new(1, vec![Interval::new(0.0, 0.9), Interval::new(1.0, 3.0)]);
        let (x, a, b, one) = (graph.state(0), graph.parameter(0), graph.parameter(1), graph.one());
        let spared = graph.sub(one, a);
        let spared = graph.pow(spared, b);
        let row = graph.mul(x, spared);
        let mut wide = graph.widened(&[row], &[0], 0);
        assert!(wide.graph.vanishes_at_zero(wide.nodes[0], 0));
        assert!(!wide.graph.vanishes_at_zero(wide.nodes[0], 1));
    }
}
