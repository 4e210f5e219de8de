//! Equilibria of a community to the last digit, where its rates come from formulas.
//!
//! A coefficient that is computed from parameters is an interval some steps wide, and so are the abundances solved for. The
//! growth per head at a point, evaluated as it is written in numbers of 32 digits, is sharp, and one step
//! x̃ − R r + (I − R A)(x − x̃) (Krawczyk 1969) takes the enclosure down to neighbouring f64.

use super::super::sharpen::{Residual, is_sharp, narrow};
use super::super::{Equilibria, Equilibrium, Problem};
use super::Affine;
use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::num::dense::inverse;
use crate::num::double::Double;
use crate::num::interval::Interval;

/// Larger communities keep the enclosures that they have: each step takes n³ multiplications of intervals.
const MOST_SPECIES: usize = 100;

/// Narrows the enclosures in a list as far as f64 goes, until `stop` says so.
pub(in super::super) fn sharpen(
    graph: &mut Graph,
    community: &Affine,
    problem: &Problem<'_>,
    found: &mut Equilibria,
    stop: &dyn Fn() -> bool,
) {
    let is_done = |equilibrium: &Equilibrium| equilibrium.enclosure.iter().all(|side| is_sharp(*side));
    if community.species() > MOST_SPECIES || found.list.iter().all(is_done) {
        return;
    }
    let quotient = |(i, &row): (usize, &NodeId)| graph.divide(row, i).quotient;
    let Some(rates) = problem.rows.iter().enumerate().map(quotient).collect::<Option<Vec<NodeId>>>() else { return };
    let tape = Tape::new(graph, &rates);
    let mut growth = Residual::new(&tape, problem.values);
    for equilibrium in found.list.iter_mut().filter(|equilibrium| !is_done(equilibrium)) {
        if stop() {
            return;
        }
        narrow_one(community, &mut growth, equilibrium);
    }
}

/// One step on one equilibrium; `None` where it leads nowhere.
fn narrow_one(community: &Affine, growth: &mut Residual<'_, Double>, equilibrium: &mut Equilibrium) -> Option<()> {
    let present: Vec<usize> = (0..community.species()).filter(|&i| equilibrium.has(i)).collect();
    let n = present.len();
    let rates = growth.at(&equilibrium.state)?;
    let (matrix, _) = community.among(&present);
    let middle: Vec<f64> = matrix.iter().map(|entry| entry.mid()).collect();
    let inverse = inverse(&middle, n)?;
    let away: Vec<Interval> =
        present.iter().map(|&i| equilibrium.enclosure[i] - Interval::point(equilibrium.state[i])).collect();
    let defect = |i: usize, j: usize| {
        let unit = if i == j { Interval::ONE } else { Interval::ZERO };
        (0..n).fold(unit, |sum, k| sum - Interval::point(inverse[i * n + k]) * matrix[k * n + j])
    };
    let offset = |i: usize| {
        let shift = (0..n).fold(Interval::ZERO, |sum, k| sum + Interval::point(inverse[i * n + k]) * rates[present[k]]);
        (0..n).fold(-shift, |sum, j| sum + defect(i, j) * away[j])
    };
    let offset: Vec<Interval> = (0..n).map(offset).collect();
    let mut point: Vec<f64> = present.iter().map(|&i| equilibrium.state[i]).collect();
    let mut enclosure: Vec<Interval> = present.iter().map(|&i| equilibrium.enclosure[i]).collect();
    narrow(&mut point, &mut enclosure, &offset);
    for (k, &i) in present.iter().enumerate() {
        equilibrium.state[i] = point[k];
        equilibrium.enclosure[i] = enclosure[k];
    }
    Some(())
}
