//! A scenario's equations with controls as inputs beside the abundances, face by face.
//!
//! In the graph of its own that [`Equations`] has, state i below `species` is an abundance, the next are the controls in
//! their order, and those from [`Equations::spare`] on are free for whoever adds unknowns (a direction, a frequency). All
//! derivatives with respect to controls are therefore as exact as those with respect to abundances.

use crate::analysis::passage::restricted;
use crate::analysis::subject::Subject;
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId, Operation};
use crate::expr::tape::Tape;
use crate::model::system::HarvestNodes;
use crate::model::{ParameterId, SpeciesId};

use super::Taking;

/// Unknowns that a defining system may add: two vectors over the species, and four numbers.
fn spares(species: usize) -> usize {
    2 * species + 4
}

/// A scenario's rows over abundances and controls.
#[derive(Clone, Debug)]
pub struct Equations {
    /// Their graph: abundances, controls, spare inputs.
    pub graph: Graph,
    /// How many species there are.
    pub species: usize,
    /// The parameters that are inputs.
    pub controls: Vec<ParameterId>,
    /// Rates of change, or for a map the next state.
    pub rows: Vec<NodeId>,
    /// The rows that are 0 at an equilibrium.
    pub balance: Vec<NodeId>,
    /// Each of these divided by its own abundance, where that can be done.
    pub divided: Vec<Option<NodeId>>,
    /// What harvests give, in the order of `takings`.
    pub given: Vec<NodeId>,
    /// What each of these is.
    pub takings: Vec<Taking>,
    /// The value of every parameter; those of controls are of no account.
    pub values: Vec<f64>,
    /// The search box, one side pair a species.
    pub sides: Vec<[f64; 2]>,
    /// Time units that one application of the map takes; `None` where time is continuous.
    pub step: Option<f64>,
}

impl Equations {
    /// A scenario with these parameters as inputs. Other parameters that are 0 take their terms with them.
    pub fn new(subject: &Subject<'_>, controls: &[ParameterId]) -> Self {
        let mut graph = subject.graph.clone();
        let (takings, given) = takings(&mut graph, &subject.plan.harvests);
        let species = subject.species();
        let mut values = subject.plan.values.clone();
        for control in controls {
            // Not 0, whatever it is in the scenario.
            values[control.0] = f64::NAN;
        }
        let nodes: Vec<NodeId> = subject.plan.rows.iter().chain(&subject.balance).chain(&given).copied().collect();
        let nodes = graph.with_zeros(&nodes, &values);
        let moving: Vec<usize> = controls.iter().map(|control| control.0).collect();
        let wide = graph.widened(&nodes, &moving, spares(species));
        let (mut graph, nodes) = (wide.graph, wide.nodes);
        let balance = nodes[species..2 * species].to_vec();
        let divided = balance.iter().enumerate().map(|(i, &row)| graph.divide(row, i).quotient).collect();
        Self {
            divided,
            rows: nodes[..species].to_vec(),
            balance,
            given: nodes[2 * species..].to_vec(),
            graph,
            species,
            controls: controls.to_vec(),
            takings,
            values: subject.plan.values.clone(),
            sides: subject.sides.clone(),
            step: subject.step(),
        }
    }

    /// The input that a control is.
    pub fn control(&self, place: usize) -> usize {
        self.species + place
    }

    /// A spare input.
    pub fn spare(&self, place: usize) -> usize {
        self.species + self.controls.len() + place
    }

    /// The face on which these are present, and whoever is fed there; `None` where a rate has no value with the others
    /// absent.
    pub fn face(&mut self, present: &[bool]) -> Option<Face> {
        let mut moves = present.to_vec();
        let zero = AtZero::Is(self.graph.zero());
        // Each round makes one more species move at least.
        for _ in 0..=self.species {
            let known = restricted(&mut self.graph, &self.balance, &moves);
            let fed: Vec<usize> = (0..self.species).filter(|&i| !moves[i] && known[i] != zero).collect();
            if fed.is_empty() {
                return self.with_rows(&moves, &known);
            }
            for i in fed {
                moves[i] = true;
            }
        }
        None
    }

    fn with_rows(&mut self, moves: &[bool], known: &[AtZero]) -> Option<Face> {
        let moving: Vec<usize> = (0..self.species).filter(|&i| moves[i]).collect();
        let quotients: Vec<NodeId> = moving.iter().filter_map(|&i| self.divided[i]).collect();
        let mut quotients = restricted(&mut self.graph, &quotients, moves).into_iter();
        let mut rows = Vec::with_capacity(moving.len());
        let mut is_divided = Vec::with_capacity(moving.len());
        for &i in &moving {
            let divided = self.divided[i].and_then(|_| quotients.next()).and_then(value);
            is_divided.push(divided.is_some());
            rows.push(divided.or_else(|| value(known[i]))?);
        }
        let strays =
            |node: &NodeId| matches!(self.graph.operation(*node), Operation::State(i) if i < self.species && !moves[i]);
        if self.graph.reachable(&rows).iter().any(strays) {
            return None;
        }
        Some(Face { moving, rows, is_divided })
    }

    /// The inputs of a face's rows: those who move, then every control.
    pub fn inputs(&self, face: &Face) -> Vec<usize> {
        face.moving.iter().copied().chain((0..self.controls.len()).map(|place| self.control(place))).collect()
    }

    /// A face's rows, compiled over those who move and then every control.
    pub fn tape(&self, face: &Face) -> Tape {
        Tape::over(&self.graph, &face.rows, &self.inputs(face))
    }
}

/// The rows of those who are present, all others being 0.
#[derive(Clone, Debug, PartialEq)]
pub struct Face {
    /// Who moves, in species order.
    pub moving: Vec<usize>,
    /// Their balance rows, divided by their own abundance where that can be done: so a branch goes through 0 instead of
    /// meeting another there.
    pub rows: Vec<NodeId>,
    /// Which of them are divided.
    pub is_divided: Vec<bool>,
}

fn value(known: AtZero) -> Option<NodeId> {
    match known {
        AtZero::Is(node) => Some(node),
        _ => None,
    }
}

/// Every amount taken or counted, species by species, and each harvest's value where it has a price or a cost.
fn takings(graph: &mut Graph, harvests: &[HarvestNodes]) -> (Vec<Taking>, Vec<NodeId>) {
    let mut takings = Vec::new();
    let mut nodes = Vec::new();
    for harvest in harvests {
        let mut add = |species: Option<SpeciesId>, node: NodeId| {
            takings.push(Taking { harvest: harvest.name.clone(), species });
            nodes.push(node);
        };
        for &(species, amount) in &harvest.amounts {
            add(Some(species), amount);
        }
        if !harvest.price.is_empty() || harvest.cost.is_some() {
            add(None, worth(graph, harvest));
        }
    }
    (takings, nodes)
}

/// Prices times amounts less cost.
fn worth(graph: &mut Graph, harvest: &HarvestNodes) -> NodeId {
    let mut sum = graph.zero();
    for (species, price) in &harvest.price {
        for (_, amount) in harvest.amounts.iter().filter(|(taken, _)| taken == species) {
            let revenue = graph.mul(*price, *amount);
            sum = graph.add(sum, revenue);
        }
    }
    match harvest.cost {
        Some(cost) => graph.sub(sum, cost),
        None => sum,
    }
}
