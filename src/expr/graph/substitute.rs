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

    /// The nodes with some nodes put in the place of others, `(what, by)`, for all that is made of them; also in what is put
    /// there, where that is an operand of what it replaces.
    pub fn replaced(&mut self, nodes: &[NodeId], changes: &[(NodeId, NodeId)]) -> Vec<NodeId> {
        let mut new: HashMap<NodeId, NodeId> = HashMap::new();
        for node in self.reachable(nodes) {
            let rebuilt = if let Some((_, by)) = changes.iter().find(|(what, _)| *what == node) {
                new.get(by).copied().unwrap_or(*by)
            } else {
                let operation = self.operation(node);
                self.rebuild(operation.map(|operand| new[&operand]))
            };
            new.insert(node, rebuilt);
        }
        nodes.iter().map(|node| new[node]).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::super::Graph;

    #[test]
    fn pieces_are_put_in_the_place_of_choices_within_each_other() {
        let mut graph = Graph::new(3, Vec::new());
        let [x, y, z] = [0, 1, 2].map(|i| graph.state(i));
        let inner = graph.min(x, y);
        let outer = graph.max(inner, z);
        let whole = graph.mul(outer, z);
        let expected = graph.mul(y, z);
        assert_eq!(graph.replaced(&[whole], &[(inner, y), (outer, inner)]), [expected]);
        assert_eq!(graph.replaced(&[whole, inner], &[]), [whole, inner]);
        let square = graph.mul(z, z);
        assert_eq!(graph.replaced(&[whole], &[(outer, z)]), [square]);
    }
}
