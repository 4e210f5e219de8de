//! Two species whose equations are proportional: then equilibria are not isolated points but lie on curves.
//!
//! A constant ratio at every point tried, to rounding, is the witness; two different analytic rows agree on no more than
//! a set without volume, which the points are not chosen to hit.

use super::scene::{Findings, Scene};
use crate::diag::Diagnostic;
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::model::system::Plan;
use crate::model::{SpeciesId, TimeKind};

/// How far two ratios may lie apart and count as equal, relative; well above the rounding of a few hundred operations.
const SAME_RATIO: f64 = 1e-11;
/// Points with both rows not zero that are asked for: fewer say little.
const FEWEST_POINTS: usize = 8;

/// Warns at the later species of a pair, once.
pub(super) fn find(scene: &Scene<'_>) -> Vec<Diagnostic> {
    let mut findings = Findings::default();
    for (scenario, plan) in scene.plans() {
        let changes = changes(scene, plan);
        for later in 1..changes.len() {
            let pair = (0..later).find_map(|row| Some((row, ratio(&changes[later], &changes[row])?)));
            let warning = pair.and_then(|(row, ratio)| warning(scene, SpeciesId(row), SpeciesId(later), ratio));
            if let Some(warning) = warning {
                findings.add(scenario, warning);
            }
        }
    }
    findings.finish(scene)
}

fn warning(scene: &Scene<'_>, a: SpeciesId, b: SpeciesId, ratio: f64) -> Option<Diagnostic> {
    let (first, second) = (scene.model.species.get(a.0)?, scene.model.species.get(b.0)?);
    // Ten digits: the ratio carries the rounding of two rows.
    let ratio: f64 = format!("{ratio:.9e}").parse().ok()?;
    let message = format!("{} changes {ratio} times as fast as {} everywhere", second.symbol, first.symbol);
    Some(
        Diagnostic::warning(second.at, message)
            .related(first.at, "proportional to this")
            .help("equilibria lie on curves then; write one of the two by the other, or give it a process of its own"),
    )
}

/// What moves each species, at every point where all rows are defined: row by row.
fn changes(scene: &Scene<'_>, plan: &Plan) -> Vec<Vec<f64>> {
    let mut graph = scene.system.graph.clone();
    let rows: Vec<NodeId> = match scene.model.time {
        TimeKind::Continuous => plan.rows.clone(),
        TimeKind::Discrete { .. } => {
            let moves = plan.rows.iter().enumerate();
            moves
                .map(|(row, node)| {
                    let state = graph.state(row);
                    graph.sub(*node, state)
                })
                .collect()
        }
    };
    let tape = Tape::new(&graph, &rows);
    let mut run = tape.start(&plan.values);
    let mut changes = vec![Vec::new(); rows.len()];
    for point in scene.points_for(&tape) {
        if run.at(point).defined {
            changes.iter_mut().zip(run.outputs()).for_each(|(row, value)| row.push(*value));
        }
    }
    changes
}

/// The constant that `a` is times `b`, where there is one other than 0.
fn ratio(a: &[f64], b: &[f64]) -> Option<f64> {
    let mut ratios = Vec::new();
    for (a, b) in a.iter().zip(b) {
        match (*a == 0.0, *b == 0.0) {
            (true, true) => {}
            (false, false) => ratios.push(a / b),
            _ => return None,
        }
        let first = ratios.first().copied().unwrap_or(0.0);
        if ratios.last().is_some_and(|last| (last - first).abs() > SAME_RATIO * first.abs()) {
            return None;
        }
    }
    (ratios.len() >= FEWEST_POINTS).then(|| ratios[0])
}
