//! A species that nothing adds to, or nothing takes from, anywhere in the search box and under any scenario.
//!
//! In a map: one whose next state is nowhere above, or nowhere below, the present one. Proved by interval arithmetic;
//! where that cannot tell, nothing is said.

use super::scene::{Scene, enclosures};
use crate::diag::Diagnostic;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::model::system::Plan;
use crate::model::{Species, TimeKind};
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
    match scene.model.time {
        TimeKind::Continuous => {
            let nodes = plan.parts.iter().map(|parts| parts.iter().map(|part| part.node).collect());
            hulls(&scene.system.graph, scene, plan, &nodes.collect::<Vec<_>>(), Interval::ZERO)
        }
        TimeKind::Discrete { .. } => {
            let mut graph = scene.system.graph.clone();
            let rows = plan.rows.iter().enumerate();
            let nodes = rows.map(|(row, node)| vec![relative_change(&mut graph, *node, row)]).collect::<Vec<_>>();
            hulls(&graph, scene, plan, &nodes, Interval::EMPTY)
        }
    }
}

/// next x/x − 1, or next x − x where the next state is not a multiple of x.
fn relative_change(graph: &mut Graph, node: NodeId, row: usize) -> NodeId {
    if let Some(factor) = graph.divide(node, row).quotient {
        let one = graph.one();
        return graph.sub(factor, one);
    }
    let state = graph.state(row);
    graph.sub(node, state)
}

/// For each group of nodes the hull of their values over the box and of `least`; everything where one may be undefined.
fn hulls(graph: &Graph, scene: &Scene<'_>, plan: &Plan, groups: &[Vec<NodeId>], least: Interval) -> Vec<Interval> {
    let bounds = |nodes: &[NodeId]| enclosures(&Tape::new(graph, nodes), &plan.values, &scene.ranges);
    let hull = |bounds: &mut dyn Iterator<Item = Interval>| bounds.fold(least, Interval::hull);
    // One tape for all is enough, unless something somewhere is undefined.
    if let Some(all) = bounds(&groups.concat()) {
        let mut all = all.into_iter();
        return groups.iter().map(|group| hull(&mut all.by_ref().take(group.len()))).collect();
    }
    let alone = |group: &Vec<NodeId>| bounds(group).map_or(Interval::ENTIRE, |bounds| hull(&mut bounds.into_iter()));
    groups.iter().map(alone).collect()
}
