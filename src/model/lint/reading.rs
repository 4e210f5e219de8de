//! Pieces of formulas as nodes of a graph of their own, so that each can be evaluated by itself.
//!
//! A symbol stands for the abundance itself, also in a map that is harvested before its step: what is left lies in the
//! search box as well.

use crate::expr::ast::Expr;
use crate::expr::graph::{Graph, NodeId};
use crate::model::system::System;
use crate::model::{Model, Name};

/// A graph with the model's shorthands in it.
pub(super) struct Reading<'m> {
    model: &'m Model,
    pub(super) graph: Graph,
    shorthands: Vec<NodeId>,
}

impl<'m> Reading<'m> {
    pub(super) fn new(model: &'m Model, system: &System) -> Self {
        let graph = Graph::new(model.species.len(), system.graph.parameters().to_vec());
        let mut reading = Self { model, graph, shorthands: Vec::new() };
        for shorthand in &model.shorthand {
            let node = reading.node(&shorthand.formula.expr);
            reading.shorthands.push(node);
        }
        reading
    }

    /// The node of a piece of a formula.
    pub(super) fn node(&mut self, expr: &Expr) -> NodeId {
        let (model, shorthands) = (self.model, &self.shorthands);
        self.graph.read(expr, &mut |graph, name| match model.names.get(name) {
            Some(Name::Species(id)) => graph.state(id.0),
            Some(Name::Parameter(id)) => graph.parameter(id.0),
            Some(Name::Shorthand(id)) => shorthands.get(id.0).copied().unwrap_or_else(|| graph.zero()),
            None => graph.zero(),
        })
    }
}
