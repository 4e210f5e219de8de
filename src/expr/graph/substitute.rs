//! The same rows with something put in another's place: 0 for some parameters (a quota of nothing, an effort of nothing),
//! or one smooth piece for a choice between two.

use std::collections::HashMap;

use super::{Graph, NodeId, Operation};

impl Graph {
    /// The nodes with every parameter that is exactly 0 in `values` written out, so that what it multiplies falls away and
    /// a row that it alone kept from vanishing at absence is seen to vanish. Entries of matrix blocks stay as they are.
    ///
    /// # Panics
    /// If there are not as many values as parameters.
    pub fn with_zeros(&mut self, nodes: &[NodeId], values: &[f64]) -> Vec<NodeId> {
        assert_eq!(values.len(), self.parameters.len(), "parameters");
        if values.iter().all(|&value| value != 0.0) {
            return nodes.to_vec();
        }
        let mut new: HashMap<NodeId, NodeId> = HashMap::new();
        for node in self.reachable(nodes) {
            let rebuilt = match self.operation(node) {
                Operation::Parameter(i) if values[i] == 0.0 => self.zero(),
                operation => self.rebuild(operation.map(|operand| new[&operand])),
            };
            new.insert(node, rebuilt);
        }
        nodes.iter().map(|node| new[node]).collect()
    }

    /// The nodes with one node put in the place of another, for all that is made of it.
    pub fn replaced(&mut self, nodes: &[NodeId], what: NodeId, by: NodeId) -> Vec<NodeId> {
        let mut new: HashMap<NodeId, NodeId> = HashMap::new();
        for node in self.reachable(nodes) {
            let rebuilt = if node == what {
                by
            } else {
                let operation = self.operation(node);
                self.rebuild(operation.map(|operand| new[&operand]))
            };
            new.insert(node, rebuilt);
        }
        nodes.iter().map(|node| new[node]).collect()
    }
}
