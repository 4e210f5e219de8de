//! Equilibria by continuity alone: where a formula has no value because species are absent (0/0, ln 0), the rates must go to
//! one limit from every direction, not only along the axes.
//!
//! A term does where it has a value; where divided by the abundance of one of the absent it stays bounded nearby, for then
//! it is no larger than that abundance times the bound; where it hangs on one absent species alone, for then there is only
//! one direction; and where it is a sum or product of such terms. Anything else is not claimed.

use super::{Equilibrium, Problem};
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId, Operation};
use crate::expr::tape::Tape;
use crate::num::interval::Interval;

/// How far the neighbourhood reaches: this share of each side of the box, or of an abundance.
const NEARBY: f64 = 1e-6;
/// Terms looked at for one row.
const MOST_TERMS: usize = 500;

/// Whether every rate is proved to have one limit at an equilibrium at which some are absent. `stop` is asked before each
/// walk through the graph, and nothing is claimed once it said so.
pub(super) fn is_limit(
    graph: &mut Graph,
    problem: &Problem<'_>,
    equilibrium: &Equilibrium,
    stop: &dyn Fn() -> bool,
) -> bool {
    let n = problem.rows.len();
    let absent = (0..n).filter(|&i| !equilibrium.has(i)).collect();
    let nearby = |i: usize| {
        let side = equilibrium.enclosure[i];
        let reach = if equilibrium.has(i) { NEARBY * side.mig() } else { NEARBY * problem.sides[i][1] };
        let below = if equilibrium.has(i) { side.lo() - reach } else { 0.0 };
        Interval::try_new(below, side.hi() + reach).unwrap_or(Interval::NONNEGATIVE)
    };
    let around = (0..n).map(nearby).collect();
    let values = problem.values.iter().map(|&value| Interval::point(value)).collect();
    let mut corner = Corner { graph, values, at: &equilibrium.enclosure, around, absent, stop };
    problem.rows.iter().all(|&row| corner.has_limit(row))
}

struct Corner<'c> {
    graph: &'c mut Graph,
    values: Vec<Interval>,
    /// The point.
    at: &'c [Interval],
    /// All states near it.
    around: Vec<Interval>,
    absent: Vec<usize>,
    stop: &'c dyn Fn() -> bool,
}

impl Corner<'_> {
    fn has_limit(&mut self, row: NodeId) -> bool {
        let mut terms = vec![row];
        for _ in 0..MOST_TERMS {
            let Some(term) = terms.pop() else { return true };
            if (self.stop)() {
                return false;
            }
            if self.has_limit_by_itself(term) {
                continue;
            }
            match self.parts(term) {
                Some(parts) => terms.extend(parts),
                None => return false,
            }
        }
        false
    }

    fn has_limit_by_itself(&mut self, term: NodeId) -> bool {
        if self.over(term, self.at).is_some() {
            return true;
        }
        let states: Vec<usize> = (0..self.at.len()).filter(|&i| self.graph.facts(term).may_depend_on(i)).collect();
        if let [only] = states[..]
            && self.absent.contains(&only)
            && matches!(self.graph.at_zero(term, only), AtZero::Is(_))
        {
            return true;
        }
        for k in 0..self.absent.len() {
            if (self.stop)() {
                return false;
            }
            let quotient = self.graph.divide(term, self.absent[k]).quotient;
            if quotient.is_some_and(|quotient| self.stays_bounded(quotient)) {
                return true;
            }
        }
        false
    }

    /// Terms whose limits give that of a sum or product.
    fn parts(&mut self, term: NodeId) -> Option<Vec<NodeId>> {
        let (a, b) = match self.graph.operation(term) {
            Operation::Add(a, b) | Operation::Sub(a, b) => return Some(vec![a, b]),
            Operation::Neg(a) => return Some(vec![a]),
            Operation::Mul(a, b) => (a, b),
            _ => return None,
        };
        // A factor may grow without bound (ln x) while its product with the other has a limit.
        for (factor, sum) in [(a, b), (b, a)] {
            if let Operation::Add(x, y) | Operation::Sub(x, y) = self.graph.operation(sum) {
                return Some(vec![self.graph.mul(factor, x), self.graph.mul(factor, y)]);
            }
        }
        Some(vec![a, b])
    }

    /// The value over some states; `None` unless it is defined and continuous there.
    fn over(&self, node: NodeId, states: &[Interval]) -> Option<Interval> {
        let tape = Tape::new(self.graph, &[node]);
        let mut run = tape.start(&self.values);
        let defined = run.at(states).defined;
        let value = *run.output(0);
        (defined && value.is_bounded()).then_some(value)
    }

    /// Whether all values that there are near the point lie within bounds.
    fn stays_bounded(&self, node: NodeId) -> bool {
        let tape = Tape::new(self.graph, &[node]);
        let mut run = tape.start(&self.values);
        run.at(&self.around);
        run.output(0).is_bounded()
    }
}

#[cfg(test)]
mod tests {
    use super::super::Derivative;
    use super::*;

    /// x y / (x + y) and the like of two species, at (0, 0).
    fn check(row: impl Fn(&mut Graph, NodeId, NodeId) -> NodeId, expected: bool) {
        let mut graph = Graph::new(2, Vec::new());
        let (x, y) = (graph.state(0), graph.state(1));
        let rows = [row(&mut graph, x, y), y];
        let enclosure = vec![Interval::ZERO; 2];
        let nobody = Equilibrium { state: vec![0.0; 2], enclosure, proven: true, derivative: Derivative::Missing };
        let problem = Problem { rows: &rows, values: &[], sides: &[[0.0, 10.0]; 2] };
        assert_eq!(is_limit(&mut graph, &problem, &nobody, &|| false), expected, "{:?}", graph.operation(rows[0]));
    }

    #[test]
    fn rates_have_a_limit_from_every_direction_or_none_is_claimed() {
        // x y/(x + y) ≤ x
        check(
            |g, x, y| {
                let (product, sum) = (g.mul(x, y), g.add(x, y));
                g.div(product, sum)
            },
            true,
        );
        // x (ln(4/x) − y/(x + y)): x ln x goes to 0 alone, the rest as above.
        check(
            |g, x, y| {
                let (four, sum) = (g.constant(4.0), g.add(x, y));
                let ratio = g.div(four, x);
                let (ln, share) = (g.apply(crate::expr::function::Function::Ln, ratio), g.div(y, sum));
                let growth = g.sub(ln, share);
                g.mul(x, growth)
            },
            true,
        );
        // x y²/(x³ + y³) vanishes on both axes, and is 1/2 along x = y.
        check(
            |g, x, y| {
                let (square, cubes) = (g.powi(y, 2), [g.powi(x, 3), g.powi(y, 3)]);
                let (product, sum) = (g.mul(x, square), g.add(cubes[0], cubes[1]));
                g.div(product, sum)
            },
            false,
        );
        // y/(x + y) goes to 0 or 1, as one comes.
        check(
            |g, x, y| {
                let sum = g.add(x, y);
                g.div(y, sum)
            },
            false,
        );
    }
}
