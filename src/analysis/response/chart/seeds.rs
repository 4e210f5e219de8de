//! Thresholds along a line through the chart: the response to one control, the other being held.
//!
//! Of a threshold is kept what says on which curve of the chart it lies: who is present, and what changes its sign.

use std::sync::atomic::{AtomicBool, Ordering};

use crate::analysis::equilibria::{Budget, Equilibrium, Problem, all};
use crate::analysis::response::equations::Equations;
use crate::analysis::response::locate::{Sign, compared};
use crate::analysis::response::{Control, Response, Threshold, ThresholdKind, respond};
use crate::analysis::subject::Subject;
use crate::expr::graph::NodeId;
use crate::expr::tape::Tape;
use crate::model::system::Plan;

use super::{Seed, at_face};

/// An abundance this share of its box is 0, and two quantities this near to each other, as a share of their size, are equal.
const SAME: f64 = 1e-9;

/// The thresholds on the line through a point of the chart along one of the controls, from the states that there are at the
/// point; `list` where they are known.
pub(super) fn along(
    subject: &Subject<'_>,
    equations: &mut Equations,
    controls: &[Control; 2],
    which: usize,
    through: [f64; 2],
    list: Option<&[Equilibrium]>,
    budget: &Budget<'_>,
) -> Vec<Seed> {
    let mut values = subject.plan.values.clone();
    for (control, &value) in controls.iter().zip(&through) {
        values[control.parameter.0] = value;
    }
    let plan = Plan { values, ..subject.plan.clone() };
    let mut line = Subject { plan: &plan, ..subject.clone() };
    let found;
    let list = if let Some(list) = list {
        list
    } else {
        let Subject { graph, balance, sides, .. } = &mut line;
        found = all(graph, &Problem { rows: balance, values: &plan.values, sides }, budget).list;
        &found
    };
    let control = Control { present: through[which], ..controls[which] };
    // The branches are wanted and no proof that they are all.
    let is_followed = AtomicBool::new(false);
    let stop = || is_followed.load(Ordering::Relaxed) || (budget.stop)();
    let limited = Budget { boxes: budget.boxes, stop: &stop, workers: budget.workers, observer: budget.observer };
    let mut thresholds: Vec<Threshold> = Vec::new();
    let mut told = |response: &Response| {
        thresholds.clone_from(&response.thresholds);
        is_followed.store(true, Ordering::Relaxed);
    };
    respond(&mut line, &control, list, &limited, &mut told);
    let held = through[1 - which];
    let at = |value: f64| if which == 0 { [value, held] } else { [held, value] };
    thresholds.iter().flat_map(|threshold| seeds(equations, threshold, at(threshold.at))).collect()
}

/// What curves a threshold may lie on.
fn seeds(equations: &mut Equations, threshold: &Threshold, at: [f64; 2]) -> Vec<Seed> {
    let state = &threshold.state;
    let is_zero = |i: &usize| state[*i].abs() <= SAME * equations.sides[*i][1].abs();
    let present: Vec<bool> = (0..state.len()).map(|i| !is_zero(&i)).collect();
    let absent: Vec<usize> = (0..state.len()).filter(is_zero).collect();
    let species = threshold.species.map(|species| species.0);
    let signs: Vec<Sign> = match threshold.kind {
        ThresholdKind::Fold => vec![Sign::Turn],
        ThresholdKind::Hopf | ThresholdKind::NeimarkSacker => vec![Sign::Pair(None)],
        ThresholdKind::PeriodDoubling => vec![Sign::Flip(None)],
        ThresholdKind::Transcritical => match species {
            Some(i) if equations.divided[i].is_some() => vec![Sign::Growth(i)],
            Some(_) => vec![Sign::Block(absent.into_iter().filter(|&i| equations.divided[i].is_none()).collect())],
            None => Vec::new(),
        },
        ThresholdKind::Exit => match species {
            Some(i) if is_zero(&i) => {
                let mut present = present;
                present[i] = true;
                return vec![Seed { present, sign: Sign::Abundance(i), state: state.clone(), at }];
            }
            Some(i) => {
                let upper = (state[i] - equations.sides[i][1]).abs() <= (state[i] - equations.sides[i][0]).abs();
                vec![Sign::Side(i, usize::from(upper))]
            }
            None => Vec::new(),
        },
        ThresholdKind::BorderCollision => kinks(equations, &present, state, at).into_iter().map(Sign::Kink).collect(),
        _ => Vec::new(),
    };
    let seed = |sign| Seed { present: present.clone(), sign, state: state.clone(), at };
    signs.into_iter().map(seed).collect()
}

/// Nodes of a face that have a kink at a point of it.
fn kinks(equations: &mut Equations, present: &[bool], state: &[f64], at: [f64; 2]) -> Vec<NodeId> {
    let Some(face) = equations.face(present) else { return Vec::new() };
    let free: Vec<f64> = face.moving.iter().map(|&i| state[i]).chain(at).collect();
    let inputs = equations.inputs(&face);
    let nodes = equations.graph.reachable(&face.rows);
    let is_kink = |&node: &NodeId| {
        let Some((a, b)) = compared(equations, node) else { return false };
        let Some(both) = at_face(equations, &[a, b], &face) else { return false };
        let tape = Tape::over(&equations.graph, &both, &inputs);
        let mut run = tape.start(&equations.values);
        let is_defined = run.at(&free).defined;
        let (a, b) = (*run.output(0), *run.output(1));
        is_defined && (a - b).abs() <= 1e3 * SAME * a.abs().max(b.abs())
    };
    nodes.into_iter().filter(is_kink).collect()
}
