//! A species that nothing adds to, or nothing takes from, anywhere in the search box and under any scenario.
//!
//! In a map: one whose next state is nowhere above, or nowhere below, the present one. Proved by interval arithmetic;
//! where that cannot tell, nothing is said.

use super::scene::{Scene, enclosures};
use crate::diag::Diagnostic;
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::model::system::Plan;
use crate::model::{Species, SpeciesId, TimeKind};
use crate::num::interval::Interval;

/// Warns at the species.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let changes: Vec<Vec<Interval>> = scene.plans().map(|(_, plan)| changes(scene, plan)).collect();
    let species = scene.model.species.iter().enumerate();
    species
        .filter_map(|(row, species)| {
            let all = || changes.iter().filter_map(|plan| plan.get(row));
            let (falls_only, grows_only) =
                (all().all(|change| change.hi() <= 0.0), all().all(|change| change.lo() >= 0.0));
            warning(species, falls_only, grows_only)
        })
        .collect()
}

fn warning(species: &Species, falls_only: bool, grows_only: bool) -> Option<Diagnostic> {
    let symbol = &species.symbol;
    let (message, help) = match (falls_only, grows_only) {
        (true, true) => (format!("nothing changes {symbol}"), "a constant belongs in \"parameters\""),
        (true, false) => (
            format!("nothing adds to {symbol} inside the search box"),
            "it can only die out; give it growth, births or immigration",
        ),
        (false, true) => (
            format!("nothing takes from {symbol} inside the search box"),
            "it can only grow; give it deaths, crowding or a harvest",
        ),
        (false, false) => return None,
    };
    Some(Diagnostic::warning(species.at, message).help(help))
}

/// Bounds on what moves each species: the hull of the summands of its row, or of its relative change in a map.
fn changes(scene: &Scene<'_>, plan: &Plan) -> Vec<Interval> {
    let rows = (0..scene.model.species.len()).map(SpeciesId);
    match scene.model.time {
        TimeKind::Continuous => rows.map(|row| summands(scene, plan, row)).collect(),
        TimeKind::Discrete { .. } => rows.map(|row| relative_change(scene, plan, row)).collect(),
    }
}

/// From the least to the greatest value of any one summand.
fn summands(scene: &Scene<'_>, plan: &Plan, row: SpeciesId) -> Interval {
    let parts = plan.parts.get(row.0).map_or(&[][..], |parts| parts);
    let nodes: Vec<NodeId> = parts.iter().map(|part| part.node).collect();
    let bounds = scene.enclosures(plan, &nodes);
    bounds.map_or(Interval::ENTIRE, |bounds| bounds.into_iter().fold(Interval::ZERO, Interval::hull))
}

/// next x/x − 1, or next x − x where the next state is not a multiple of x.
fn relative_change(scene: &Scene<'_>, plan: &Plan, row: SpeciesId) -> Interval {
    let Some(&node) = plan.rows.get(row.0) else { return Interval::ENTIRE };
    let mut graph = scene.system.graph.clone();
    let change = if let Some(factor) = graph.divide(node, row.0).quotient {
        let one = graph.one();
        graph.sub(factor, one)
    } else {
        let state = graph.state(row.0);
        graph.sub(node, state)
    };
    let tape = Tape::new(&graph, &[change]);
    let bounds = enclosures(&tape, &plan.values, &scene.ranges);
    bounds.and_then(|bounds| bounds.first().copied()).unwrap_or(Interval::ENTIRE)
}
