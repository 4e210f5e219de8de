//! One scenario as an analysis takes it: the model, its equations under the scenario, and the search box.

use super::equilibria::{Problem, balance};
use crate::expr::graph::{Graph, NodeId};
use crate::model::system::Plan;
use crate::model::{Model, TimeKind};

/// What every analysis of one scenario works on.
#[derive(Clone, Debug)]
pub struct Subject<'s> {
    /// The model, for names, roles, populations and today's stocks.
    pub model: &'s Model,
    /// The scenario's rows, harvests and parameter values.
    pub plan: &'s Plan,
    /// A graph of its own, so that no result hangs on what else was asked for.
    pub graph: Graph,
    /// The rows that are 0 at an equilibrium.
    pub balance: Vec<NodeId>,
    /// The search box: lower and upper side, one pair a species.
    pub sides: Vec<[f64; 2]>,
}

impl<'s> Subject<'s> {
    /// A scenario's plan in the graph that all scenarios share; the graph is copied.
    pub fn new(model: &'s Model, graph: &Graph, plan: &'s Plan, sides: Vec<[f64; 2]>) -> Self {
        let mut graph = graph.clone();
        let balance = balance(&mut graph, &plan.rows, &model.time);
        Self { model, plan, graph, balance, sides }
    }

    /// How many species there are.
    pub fn species(&self) -> usize {
        self.plan.rows.len()
    }

    /// Time units that one application of the map takes; `None` where time is continuous.
    pub fn step(&self) -> Option<f64> {
        match self.model.time {
            TimeKind::Continuous => None,
            TimeKind::Discrete { step } => Some(step),
        }
    }

    /// The equations as the search takes them, with the graph that they are in.
    pub fn problem(&mut self) -> (&mut Graph, Problem<'_>) {
        let problem = Problem { rows: &self.balance, values: &self.plan.values, sides: &self.sides };
        (&mut self.graph, problem)
    }
}
