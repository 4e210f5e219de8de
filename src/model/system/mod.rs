//! The model as rows of the graph: one row a species and scenario, its parts, and what each harvest takes.
//!
//! All scenarios share one [`Graph`], so what they have in common is one node, and differ in rows only where they swap
//! processes or harvests; their values are inputs. `translate` turns formulas into nodes, `bounds` chooses the search box.

use crate::diag::{Diagnostic, Location};
use crate::expr::graph::{Graph, Matrix, NodeId};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

use super::{Accounting, Block, Draw, Entry, Harvest, Model, Process, SpeciesId, TimeKind, When};
use translate::Translator;

pub mod bounds;
mod translate;

/// More nodes than this, after sharing, and a model is refused; the entries of a matrix block don't count.
pub const MOST_NODES: usize = 10_000;

/// What a part of a row comes from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Origin {
    /// The process of that name.
    Process(String),
    /// The harvest of that name.
    Harvest(String),
    /// The `change` entry.
    Change,
    /// The `next` entry.
    Next,
    /// The Lotka–Volterra block.
    Block,
}

/// One summand of a row.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Part {
    /// Where it comes from.
    pub origin: Origin,
    /// Where that stands in the file.
    pub at: Location,
    /// What it adds to the row; a harvest's is negative.
    pub node: NodeId,
}

/// What one harvest takes and is worth, as nodes.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct HarvestNodes {
    /// Its name.
    pub name: String,
    /// Amount of each species, per unit of time or per step.
    pub amounts: Vec<(SpeciesId, NodeId)>,
    /// Worth of one unit of each species.
    pub price: Vec<(SpeciesId, NodeId)>,
    /// Cost per unit of time or per step.
    pub cost: Option<NodeId>,
}

/// One scenario's equations.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    /// The scenario's name.
    pub name: String,
    /// One row a species: its rate of change, or its next state.
    pub rows: Vec<NodeId>,
    /// The summands of each row.
    pub parts: Vec<Vec<Part>>,
    /// Every harvest in force.
    pub harvests: Vec<HarvestNodes>,
    /// The value of every parameter.
    pub values: Vec<f64>,
}

impl Plan {
    /// A tape of the rows.
    pub fn tape(&self, graph: &Graph) -> Tape {
        Tape::new(graph, &self.rows)
    }
}

/// A model's equations in all scenarios.
#[derive(Clone, Debug)]
pub struct System {
    /// The graph that all scenarios share.
    pub graph: Graph,
    /// One plan a scenario, in the file's order.
    pub plans: Vec<Plan>,
}

impl System {
    /// Assembles every scenario's rows, with parameters set from outside last of all.
    ///
    /// # Errors
    /// Where a scenario's value is not finite, or the formulas are too many; each with its place.
    pub fn new(model: &Model, set: &[(super::ParameterId, f64)]) -> Result<Self, Vec<Diagnostic>> {
        Self::over(model, set, &[])
    }

    /// The same, sound as well where parameters are varied over these ranges beyond what the model says of them.
    ///
    /// # Errors
    /// As for [`System::new`].
    pub fn over(
        model: &Model,
        set: &[(super::ParameterId, f64)],
        ranges: &[(super::ParameterId, [f64; 2])],
    ) -> Result<Self, Vec<Diagnostic>> {
        let mut problems = Vec::new();
        let mut values = Vec::new();
        for scenario in 0..model.scenarios.len() {
            match model.values(scenario, set) {
                Ok(found) => values.push(found),
                Err(problem) => problems.push(problem),
            }
        }
        if !problems.is_empty() {
            return Err(problems);
        }
        let mut graph = Graph::new(model.species.len(), domains(model, &values, ranges));
        let block = model.block.as_ref().map(|block| add_block(model, &mut graph, block)).transpose()?;
        let mut plans = Vec::new();
        for (scenario, values) in values.into_iter().enumerate() {
            plans.push(assemble(model, &mut graph, block.as_ref(), scenario, values)?);
        }
        Ok(Self { graph, plans })
    }

    /// Whether the rules that simplified the graph hold for these parameters; a draw outside needs a system of its own.
    pub fn covers(&self, values: &[f64]) -> bool {
        self.graph.parameters().iter().zip(values).all(|(domain, &value)| domain.contains(value))
    }
}

/// For each parameter, all values that scenarios and ranges give it, its own and those asked for, and the positive numbers
/// for a lognormal draw.
fn domains(model: &Model, values: &[Vec<f64>], asked: &[(super::ParameterId, [f64; 2])]) -> Vec<Interval> {
    let domain = |(i, parameter): (usize, &super::Parameter)| {
        let mut domain = Interval::point(parameter.value);
        for scenario in values {
            domain = domain.hull(Interval::point(scenario[i]));
        }
        if let Some(range) = &parameter.range {
            domain = domain.hull(Interval::new(range.value[0], range.value[1]));
        }
        for (_, [from, to]) in asked.iter().filter(|(id, _)| id.0 == i) {
            domain = domain.hull(Interval::new(*from, *to));
        }
        if let Some(Draw::Lognormal { .. }) = parameter.draw.as_ref().map(|draw| draw.value) {
            domain = domain.hull(Interval::new(f64::MIN_POSITIVE, f64::MAX));
        }
        domain
    };
    model.parameters.iter().enumerate().map(domain).collect()
}

/// A Lotka–Volterra block in the graph.
struct BlockNodes {
    /// Index of its matrix.
    matrix: usize,
    /// One node a species.
    growth: Vec<NodeId>,
}

/// Adds the block's matrix and growth to the graph.
fn add_block(model: &Model, graph: &mut Graph, block: &Block) -> Result<BlockNodes, Vec<Diagnostic>> {
    let order = model.species.len();
    let mut translator = Translator::new(model, graph);
    let growth = block.growth.iter().map(|entry| translator.entry(entry)).collect::<Result<Vec<_>, _>>()?;
    let mut matrix = Matrix { order, numbers: vec![0.0; order * order], formulas: vec![Vec::new(); order] };
    for (position, entry) in block.matrix.iter().enumerate() {
        match entry {
            Entry::Number(value) => matrix.numbers[position] = *value,
            Entry::Formula(_) => {
                let node = translator.entry(entry)?;
                matrix.formulas[position / order].push((position % order, node));
            }
        }
    }
    Ok(BlockNodes { matrix: graph.add_matrix(matrix), growth })
}

fn assemble(
    model: &Model,
    graph: &mut Graph,
    block: Option<&BlockNodes>,
    scenario: usize,
    values: Vec<f64>,
) -> Result<Plan, Vec<Diagnostic>> {
    let processes = model.processes_under(scenario);
    let harvests = model.harvests_under(scenario);
    let mut translator = Translator::new(model, graph);
    let harvest_nodes = harvests.iter().map(|h| harvest(&mut translator, h)).collect::<Result<Vec<_>, _>>()?;
    let parts = match model.time {
        TimeKind::Continuous => continuous(&mut translator, model, &processes, block)?,
        TimeKind::Discrete { .. } => discrete(&mut translator, model, &harvests, &harvest_nodes)?,
    };
    let parts = with_takes(graph, parts, &harvests, &harvest_nodes);
    let rows = parts.iter().map(|parts| sum(graph, parts)).collect();
    Ok(Plan { name: model.scenarios[scenario].name.clone(), rows, parts, harvests: harvest_nodes, values })
}

fn harvest(translator: &mut Translator<'_>, harvest: &Harvest) -> Result<HarvestNodes, Vec<Diagnostic>> {
    Ok(HarvestNodes {
        name: harvest.name.clone(),
        amounts: translator.terms(&harvest.amounts)?,
        price: translator.terms(&harvest.price)?,
        cost: harvest.cost.as_ref().map(|cost| translator.formula(cost)).transpose()?,
    })
}

type Parts = Vec<Vec<Part>>;

fn continuous(
    translator: &mut Translator<'_>,
    model: &Model,
    processes: &[&Process],
    block: Option<&BlockNodes>,
) -> Result<Parts, Vec<Diagnostic>> {
    let mut parts: Parts = vec![Vec::new(); model.species.len()];
    for process in processes {
        let rate = translator.formula(&process.rate)?;
        for term in &process.effect {
            let effect = translator.formula(&term.formula)?;
            let node = translator.graph.mul(effect, rate);
            let origin = Origin::Process(process.name.clone());
            parts[term.species.0].push(Part { origin, at: process.at, node });
        }
    }
    for term in &model.change {
        let node = translator.formula(&term.formula)?;
        parts[term.species.0].push(Part { origin: Origin::Change, at: term.key_at, node });
    }
    if let (Some(nodes), Some(block)) = (block, &model.block) {
        for (i, &growth) in nodes.growth.iter().enumerate() {
            let interaction = translator.graph.interaction(nodes.matrix, i);
            let per_capita = translator.graph.add(growth, interaction);
            let x = translator.graph.state(i);
            let node = translator.graph.mul(x, per_capita);
            parts[i].push(Part { origin: Origin::Block, at: block.at, node });
        }
    }
    Ok(parts)
}

/// The next state, harvested first where a harvest is taken before.
fn discrete(
    translator: &mut Translator<'_>,
    model: &Model,
    harvests: &[&Harvest],
    nodes: &[HarvestNodes],
) -> Result<Parts, Vec<Diagnostic>> {
    for (harvest, nodes) in harvests.iter().zip(nodes) {
        if harvest.accounting == Accounting::Takes && harvest.when == When::Before {
            for &(species, amount) in &nodes.amounts {
                translator.take_before(species, amount);
            }
        }
    }
    let mut parts: Parts = vec![Vec::new(); model.species.len()];
    for term in &model.next {
        let node = translator.formula(&term.formula)?;
        parts[term.species.0].push(Part { origin: Origin::Next, at: term.key_at, node });
    }
    Ok(parts)
}

fn with_takes(graph: &mut Graph, mut parts: Parts, harvests: &[&Harvest], nodes: &[HarvestNodes]) -> Parts {
    for (harvest, nodes) in harvests.iter().zip(nodes) {
        // What is taken before is inside the next state already; what only counts changes nothing.
        if harvest.accounting == Accounting::Counts || harvest.when == When::Before {
            continue;
        }
        for &(species, amount) in &nodes.amounts {
            let node = graph.neg(amount);
            parts[species.0].push(Part { origin: Origin::Harvest(harvest.name.clone()), at: harvest.at, node });
        }
    }
    parts
}

fn sum(graph: &mut Graph, parts: &[Part]) -> NodeId {
    let mut sum = graph.zero();
    for part in parts {
        sum = graph.add(sum, part.node);
    }
    sum
}
