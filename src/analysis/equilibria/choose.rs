//! Which method finds the equilibria of a system: exact for communities, certified while it is small, else from starts.

use super::faces::Faces;
use super::{Budget, Equilibria, Probably, Problem, find, linear, order, starts};
use crate::expr::graph::Graph;

/// Most species for the certified search.
const CERTIFIED: usize = 8;
/// With so few species that can be absent the certified search is tried up to [`CERTIFIED_WITH_FEW_FACES`] species.
const FEW_FREE: usize = 4;
const CERTIFIED_WITH_FEW_FACES: usize = 12;

/// Every equilibrium in the box by the method that suits the rows; the result says what is proved.
///
/// # Panics
/// If rows and sides are not as many as the graph has states.
pub fn all(graph: &mut Graph, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let n = graph.states();
    assert!(problem.rows.len() == n && problem.sides.len() == n, "one row and two sides for each of {n} species");
    let rows = graph.with_zeros(problem.rows, problem.values);
    let problem = &Problem { rows: &rows, ..*problem };
    if let Some(community) = linear::recognise(graph, problem) {
        let mut found = linear::find(&community, problem, budget);
        linear::sharpen(graph, &community, problem, &mut found, budget.stop);
        return found;
    }
    if n > CERTIFIED && !has_few_faces(graph, problem) {
        return starts::find(graph, problem, budget);
    }
    let certified = find(graph, problem, budget);
    let ran_out = certified.unresolved.iter().any(|open| open.probably == Probably::Budget);
    if ran_out && !(budget.stop)() { together(certified, starts::find(graph, problem, budget)) } else { certified }
}

fn has_few_faces(graph: &mut Graph, problem: &Problem<'_>) -> bool {
    let reaches_zero = problem.sides.iter().map(|side| side[0] <= 0.0).collect();
    let n = problem.rows.len();
    n <= CERTIFIED_WITH_FEW_FACES && Faces::new(graph, problem.rows, reaches_zero).free().len() <= FEW_FREE
}

/// What a search that ran out of its budget found, and what starting points add to it.
fn together(mut certified: Equilibria, started: Equilibria) -> Equilibria {
    for equilibrium in started.list {
        let meets = |(a, b): (&_, &_)| !crate::num::interval::Interval::intersect(*a, *b).is_empty();
        let known = certified.list.iter().any(|one| one.enclosure.iter().zip(&equilibrium.enclosure).all(meets));
        if !known {
            certified.list.push(equilibrium);
        }
    }
    certified.list.sort_by(order);
    certified.faces = certified.faces.max(started.faces);
    certified.unresolved.extend(started.unresolved.into_iter().filter(|open| open.probably == Probably::Budget));
    certified
}
