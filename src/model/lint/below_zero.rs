//! A species that can be driven below zero: its row is negative somewhere where the species is absent.
//!
//! The usual cause is a quota or a mortality that does not vanish with the stock. Silent where the row vanishes with the
//! species, or where interval arithmetic proves that it is nowhere negative; a witness is a point where it proves the contrary.

use super::scene::{Findings, Scene, enclosures, start};
use crate::diag::{Diagnostic, Location};
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::model::system::{Origin, Plan};
use crate::model::{Accounting, SpeciesId, TimeKind, When};
use crate::num::interval::Interval;

/// Warns at the process or harvest that takes most; once for each of them and species.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let mut findings = Findings::default();
    let mut graph = scene.system.graph.clone();
    for (scenario, plan) in scene.plans() {
        for (row, &node) in plan.rows.iter().enumerate() {
            let species = SpeciesId(row);
            if graph.vanishes_at_zero(node, row) {
                continue;
            }
            let suspects = suspects(scene, scenario, plan, species);
            if let Some(suspect) = culprit(scene, plan, species, node, &suspects) {
                findings.add(scenario, warning(scene, species, suspect));
            }
        }
    }
    findings.finish(scene)
}

/// What may take from a species where none is left.
struct Suspect {
    name: String,
    at: Location,
    /// What it adds to the row, or takes before the row is worked out.
    node: NodeId,
    role: Role,
}

/// How a suspect acts on a row.
#[derive(PartialEq)]
enum Role {
    /// It is a summand.
    Summand,
    /// It is taken before a map's step.
    Before,
    /// It is the map itself, after something was taken: not to blame.
    Led,
}

impl Suspect {
    /// How much it takes, given the value of its node.
    fn takes(&self, value: &Interval) -> f64 {
        match self.role {
            Role::Summand => -value.lo(),
            Role::Before => value.hi(),
            Role::Led => f64::NEG_INFINITY,
        }
    }
}

/// The summands of a row, and the harvests that are inside the next state already.
fn suspects(scene: &Scene<'_>, scenario: usize, plan: &Plan, species: SpeciesId) -> Vec<Suspect> {
    let before = scene.model.harvests_under(scenario).into_iter().zip(&plan.harvests).filter(|(harvest, _)| {
        let is_map = matches!(scene.model.time, TimeKind::Discrete { .. });
        is_map && harvest.when == When::Before && harvest.accounting == Accounting::Takes
    });
    let before: Vec<Suspect> = before
        .flat_map(|(harvest, nodes)| nodes.amounts.iter().map(move |amount| (harvest, amount)))
        .filter(|(_, (taken, _))| *taken == species)
        .map(|(harvest, (_, node))| Suspect {
            name: quoted(&harvest.name),
            at: harvest.at,
            node: *node,
            role: Role::Before,
        })
        .collect();
    let parts = plan.parts.get(species.0).map_or(&[][..], |parts| parts);
    let parts = parts.iter().map(|part| Suspect {
        name: name(scene, species, &part.origin),
        at: part.at,
        node: part.node,
        role: if part.origin == Origin::Next && !before.is_empty() { Role::Led } else { Role::Summand },
    });
    parts.collect::<Vec<_>>().into_iter().chain(before).collect()
}

fn name(scene: &Scene<'_>, species: SpeciesId, origin: &Origin) -> String {
    let symbol = scene.symbol(species);
    match origin {
        Origin::Process(name) | Origin::Harvest(name) => quoted(name),
        Origin::Change => format!("the change of {symbol}"),
        Origin::Next => format!("the next state of {symbol}"),
        Origin::Block => "the Lotka-Volterra block".to_owned(),
    }
}

fn quoted(name: &str) -> String {
    format!("\"{name}\"")
}

fn warning(scene: &Scene<'_>, species: SpeciesId, suspect: &Suspect) -> Diagnostic {
    let (symbol, who) = (scene.symbol(species), &suspect.name);
    Diagnostic::warning(suspect.at, format!("{who} can drive {symbol} below zero"))
        .expected(format!("0 where {symbol} = 0"))
        .help(format!("let it vanish with the stock, by a factor such as ramp({symbol}, 0, 10)"))
}

/// Who takes most at a point where the species is absent and its row is negative.
fn culprit<'p>(
    scene: &Scene<'_>,
    plan: &Plan,
    species: SpeciesId,
    row: NodeId,
    suspects: &'p [Suspect],
) -> Option<&'p Suspect> {
    let outputs: Vec<NodeId> = [row].into_iter().chain(suspects.iter().map(|suspect| suspect.node)).collect();
    let tape = Tape::new(&scene.system.graph, &outputs);
    let mut face = scene.ranges.clone();
    *face.get_mut(species.0)? = Interval::ZERO;
    if enclosures(&tape, &plan.values, &face).is_some_and(|bounds| bounds.first().is_some_and(|row| row.lo() >= 0.0)) {
        return None;
    }
    let mut run = start(&tape, &plan.values);
    let is_negative = |point: &&Vec<f64>| {
        let mut point: Vec<Interval> = point.iter().copied().map(Interval::point).collect();
        point[species.0] = Interval::ZERO;
        run.at(&point).defined && run.output(0).hi() < 0.0
    };
    scene.points_for(&tape, scene.system.plans.len() * scene.model.species.len()).iter().find(is_negative)?;
    let values = run.outputs().skip(1);
    let by_takes = suspects.iter().zip(values).map(|(suspect, value)| (suspect, suspect.takes(value)));
    by_takes.max_by(|a, b| a.1.total_cmp(&b.1)).map(|(suspect, _)| suspect)
}
