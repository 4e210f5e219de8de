//! Roots on the border of the orthant: zeros shown to be exactly zero, the same point seen on two faces, and points where
//! the rates have no derivative.

use std::collections::BTreeMap;

use super::corner;
use super::faces::Face;
use super::newton::{Equations, Proved};
use super::{Candidate, Derivative, Equilibrium, Probably, Problem, Unresolved, everywhere};
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// What became of a root of a face's equations.
pub(super) enum Settled {
    /// An equilibrium.
    Root(Candidate),
    /// A root that may or may not lie in the orthant.
    Open(Unresolved),
}

/// Takes a face's root for an equilibrium, unless it is outside the box; `None` where it is.
pub(super) fn settle(graph: &mut Graph, face: &Face, root: &Proved, problem: &Problem<'_>) -> Option<Settled> {
    let n = graph.states();
    let enclosure = everywhere(&root.enclosure, face, n);
    let outside = |i: usize| {
        let [low, high] = problem.sides[i];
        enclosure[i].hi() < low || enclosure[i].lo() > high
    };
    if (0..n).any(outside) {
        return None;
    }
    let near_zero: Vec<usize> = face.variables.iter().copied().filter(|&i| enclosure[i].contains_zero()).collect();
    if near_zero.is_empty() {
        return Some(Settled::Root(candidate(face, root, n)));
    }
    if near_zero.iter().all(|&i| enclosure[i] == Interval::ZERO) {
        // Exactly on the border. Where a divided rate vanishes, the face without the species has the same point.
        let divided = face.variables.iter().zip(&face.divided).any(|(i, divided)| *divided && near_zero.contains(i));
        return (!divided).then(|| Settled::Root(candidate(face, root, n)));
    }
    if let Some(found) = exact_zeros(graph, face, root, &near_zero, problem) {
        return Some(Settled::Root(found));
    }
    let text = "an equilibrium on the border, or one beside it, or both: they are too close to be told apart";
    Some(Settled::Open(Unresolved::new(enclosure, Probably::DoubleRoot, text)))
}

fn candidate(face: &Face, root: &Proved, n: usize) -> Candidate {
    let mut state = vec![0.0; n];
    for (&i, &x) in face.variables.iter().zip(&root.point) {
        state[i] = x;
    }
    let enclosure = everywhere(&root.enclosure, face, n);
    let derivative = if root.smooth { Derivative::Exists } else { Derivative::Kink };
    let equilibrium = Equilibrium { state, enclosure, proven: true, derivative };
    Candidate { equilibrium, unique: everywhere(&root.unique, face, n) }
}

/// The root with some abundances exactly 0: their rates vanish with them, and the others' rates have a root in the region
/// where there is only one.
fn exact_zeros(
    graph: &mut Graph,
    face: &Face,
    root: &Proved,
    zeros: &[usize],
    problem: &Problem<'_>,
) -> Option<Candidate> {
    let mut rows: Vec<NodeId> = face.rows.clone();
    for &i in zeros {
        rows = graph.restrict(&rows, i).into_iter().map(is).collect::<Option<_>>()?;
    }
    let zero = graph.zero();
    let mut rest = Face { variables: Vec::new(), rows: Vec::new(), divided: Vec::new() };
    let mut start = Vec::new();
    let mut around = Vec::new();
    for (position, &i) in face.variables.iter().enumerate() {
        if zeros.contains(&i) {
            if rows[position] != zero {
                return None;
            }
            continue;
        }
        rest.variables.push(i);
        rest.rows.push(rows[position]);
        rest.divided.push(face.divided[position]);
        start.push(root.point[position]);
        around.push(root.unique[position]);
    }
    let n = graph.states();
    let tape = Tape::over(graph, &rest.rows, &rest.variables);
    let scale = start.iter().map(|x: &f64| x.abs()).collect();
    let mut equations = Equations::new(&tape, problem.values, scale);
    let point = equations.approximate(&start, None)?;
    let mut proved = equations.prove(&point, &around)?;
    equations.sharpen(&mut proved);
    let mut found = candidate(&rest, &proved, n);
    let unique = everywhere(&root.unique, face, n);
    let same = found.equilibrium.enclosure.iter().zip(&unique).all(|(side, unique)| side.subset_of(*unique));
    found.unique = unique;
    same.then_some(found)
}

fn is(zero: AtZero) -> Option<NodeId> {
    match zero {
        AtZero::Is(node) => Some(node),
        _ => None,
    }
}

/// Drops a point that was found on two faces: the same species are present, and the enclosures meet. Each is held only
/// against those of its own community: of thousands of communities few have more than a handful.
pub(super) fn merge(candidates: &mut Vec<Candidate>) {
    let mut kept: Vec<Candidate> = Vec::new();
    let mut alike: BTreeMap<Vec<bool>, Vec<usize>> = BTreeMap::new();
    for candidate in candidates.drain(..) {
        let here = &candidate.equilibrium;
        let alike = alike.entry((0..here.state.len()).map(|i| here.has(i)).collect()).or_default();
        let meets = |(a, b): (&Interval, &Interval)| !a.intersect(*b).is_empty();
        let same = |&other: &usize| {
            let there: &Equilibrium = &kept[other].equilibrium;
            here.enclosure.iter().zip(&there.enclosure).all(meets)
        };
        if !alike.iter().any(same) {
            alike.push(kept.len());
            kept.push(candidate);
        }
    }
    *candidates = kept;
}

/// Asks the full rates, not the divided ones, whether they have a derivative at a root; where they have no value there,
/// whether they go to 0 from every direction. `None` where `stop` said so before that was known.
pub(super) fn accept(
    graph: &mut Graph,
    mut candidate: Candidate,
    rates: &Tape,
    problem: &Problem<'_>,
    stop: &dyn Fn() -> bool,
) -> Option<Settled> {
    candidate.equilibrium.derivative = derivative(rates, problem.values, &candidate.equilibrium, stop)?;
    let is_plain = candidate.equilibrium.derivative != Derivative::Missing;
    if is_plain || corner::is_limit(graph, problem, &candidate.equilibrium, stop) {
        return Some(Settled::Root(candidate));
    }
    if stop() {
        return None;
    }
    let text = "the rates vanish along the borders here, but have no value, and it is not proved that they go to 0 from \
                every direction";
    Some(Settled::Open(Unresolved::new(candidate.equilibrium.enclosure, Probably::NoDerivative, text)))
}

fn derivative(rates: &Tape, values: &[f64], at: &Equilibrium, stop: &dyn Fn() -> bool) -> Option<Derivative> {
    let exact: Vec<Interval> = values.iter().map(|&value| Interval::point(value)).collect();
    let mut run = rates.start_gradient(&exact);
    let domain = run.at_unless(&at.enclosure, stop)?;
    let bounded = (0..rates.outputs()).all(|i| run.gradient(i).is_none_or(|row| row.iter().all(|s| s.is_bounded())));
    Some(if !domain.defined || !bounded {
        Derivative::Missing
    } else if !domain.smooth {
        Derivative::Kink
    } else {
        at.derivative
    })
}
