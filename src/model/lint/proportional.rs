//! Two species whose equations are proportional, as they are or per head: then equilibria are not isolated points but
//! lie on curves.
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
        let (changes, per_head) = changes(scene, plan);
        for later in 1..changes.len() {
            let pair = |rows: &[Vec<f64>]| (0..later).find_map(|row| Some((row, ratio(&rows[later], &rows[row])?)));
            let found = pair(&changes).map(|pair| (pair, "changes"));
            let found = found.or_else(|| pair(&per_head).map(|pair| (pair, "changes per head")));
            let Some(((earlier, ratio), verb)) = found else { continue };
            if let Some(warning) = warning(scene, SpeciesId(earlier), SpeciesId(later), ratio, verb) {
                findings.add(scenario, warning);
            }
        }
    }
    findings.finish(scene)
}

fn warning(scene: &Scene<'_>, a: SpeciesId, b: SpeciesId, ratio: f64, verb: &str) -> Option<Diagnostic> {
    let (first, second) = (scene.model.species.get(a.0)?, scene.model.species.get(b.0)?);
    // Ten digits: the ratio carries the rounding of two rows.
    let ratio: f64 = format!("{ratio:.9e}").parse().ok()?;
    let times = if ratio == 1.0 { String::new() } else { format!("{ratio} times ") };
    let message = format!("{} {verb} {times}as fast as {} everywhere", second.symbol, first.symbol);
    Some(
        Diagnostic::warning(second.at, message)
            .related(first.at, "proportional to this")
            .help("equilibria lie on curves; give one of them a process of its own"),
    )
}

/// What moves each species, as it is and divided by the abundance, row by row: at every point inside the box where all
/// rows are defined.
fn changes(scene: &Scene<'_>, plan: &Plan) -> (Vec<Vec<f64>>, Vec<Vec<f64>>) {
    let mut graph = scene.system.graph.clone();
    let rows: Vec<NodeId> = match scene.model.time {
        TimeKind::Continuous => plan.rows.clone(),
        TimeKind::Discrete { .. } => {
            let moves = plan.rows.iter().enumerate();
            let minus_state = |(row, node): (usize, &NodeId)| {
                let state = graph.state(row);
                graph.sub(*node, state)
            };
            moves.map(minus_state).collect()
        }
    };
    let tape = Tape::new(&graph, &rows);
    let mut run = tape.start(&plan.values);
    let (mut changes, mut per_head) = (vec![Vec::new(); rows.len()], vec![Vec::new(); rows.len()]);
    let points = scene.points_for(&tape, scene.system.plans.len()).iter();
    for point in points.filter(|point| point.iter().all(|x| *x > 0.0)) {
        if run.at(point).defined {
            for (row, value) in run.outputs().enumerate() {
                changes[row].push(*value);
                per_head[row].push(value / point[row]);
            }
        }
    }
    (changes, per_head)
}

/// The constant that `a` is times `b`, where there is one other than 0. Rows that are constant themselves say nothing:
/// they have no zeros to share.
fn ratio(a: &[f64], b: &[f64]) -> Option<f64> {
    let first = a.first()?;
    if a.iter().all(|other| (other - first).abs() <= SAME_RATIO * first.abs()) {
        return None;
    }
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
