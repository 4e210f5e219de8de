//! Nodes as numbers at a state, each `None` where it has no value there.

use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;

/// Some nodes on one tape.
#[derive(Clone, Debug)]
pub(super) struct Values {
    nodes: Vec<NodeId>,
    tape: Tape,
}

impl Values {
    pub(super) fn new(graph: &Graph, nodes: Vec<NodeId>) -> Self {
        let tape = Tape::new(graph, &nodes);
        Self { nodes, tape }
    }

    /// All of them, in order. Where one has no value as written, each is looked at by itself, and by continuity from states
    /// in which nobody is absent.
    pub(super) fn at(&self, graph: &mut Graph, parameters: &[f64], state: &[f64]) -> Vec<Option<f64>> {
        if let Some(values) = evaluate(&self.tape, parameters, state) {
            return values.into_iter().map(Some).collect();
        }
        let alone = |&node: &NodeId| {
            let node = continued(graph, node, state)?;
            let tape = Tape::new(graph, &[node]);
            evaluate(&tape, parameters, state)?.first().copied()
        };
        self.nodes.iter().map(alone).collect()
    }
}

fn continued(graph: &mut Graph, node: NodeId, state: &[f64]) -> Option<NodeId> {
    let mut absent = (0..state.len()).filter(|&i| state[i] == 0.0);
    absent.try_fold(node, |node, i| match graph.at_zero(node, i) {
        AtZero::Is(node) => Some(node),
        _ => None,
    })
}

fn evaluate(tape: &Tape, parameters: &[f64], state: &[f64]) -> Option<Vec<f64>> {
    let mut run = tape.start(parameters);
    let domain = run.at(state);
    let values: Vec<f64> = run.outputs().copied().collect();
    (domain.defined && values.iter().all(|x| x.is_finite())).then_some(values)
}
