//! The faces of the orthant: every way in which some species are absent and the others present.
//!
//! Species i can be absent where row i vanishes with x_i, given those absent already; on the faces where it is present its
//! row is divided by x_i, so that the root at absence does not return. Species that quota or immigration feeds, and stages
//! or patches that vanish only together, are not branched on: their zeros are ordinary roots on a border. The leaves cover
//! every equilibrium; a leaf whose rows have no meaning with those absent is left out, or forced to be emptier.

use super::Progress;
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId};

/// One face: the equations of those present.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Face {
    /// The species that may be present, in order; all others are absent.
    pub(super) variables: Vec<usize>,
    /// One row for each of them.
    pub(super) rows: Vec<NodeId>,
    /// Whether that row is the rate divided by the abundance, so that its zero is not the one at absence.
    pub(super) divided: Vec<bool>,
}

/// Walks over the faces of some rows.
#[derive(Clone)]
pub(super) struct Faces {
    stack: Vec<Part>,
    /// Whether a species may be absent at all: its lower side of the box is 0.
    reaches_zero: Vec<bool>,
    /// Whether each row vanishes with its species, all others being present.
    vanishes: Vec<bool>,
    /// The share of the walk that was passed since somebody asked.
    passed: u64,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Decision {
    Open,
    Absent,
    Present,
}

#[derive(Clone)]
struct Part {
    decisions: Vec<Decision>,
    /// The rates; `None` where they have no value on this face.
    rows: Vec<Option<NodeId>>,
    /// The rates divided by their own species, where they vanish with it.
    quotients: Vec<Option<NodeId>>,
    /// Its share of the whole walk: half of what was to be divided, at each species that is there or not.
    share: u64,
}

impl Faces {
    /// Starts at the face where nothing is decided.
    pub(super) fn new(graph: &mut Graph, rows: &[NodeId], reaches_zero: Vec<bool>) -> Self {
        let divisions: Vec<_> = rows.iter().enumerate().map(|(i, &row)| graph.divide(row, i)).collect();
        let zero = AtZero::Is(graph.zero());
        let root = Part {
            decisions: vec![Decision::Open; rows.len()],
            rows: rows.iter().copied().map(Some).collect(),
            quotients: divisions.iter().map(|division| division.quotient).collect(),
            share: Progress::WHOLE,
        };
        let vanishes = divisions.iter().map(|division| division.zero == zero).collect();
        Self { stack: vec![root], reaches_zero, vanishes, passed: 0 }
    }

    /// The next face; `None` when there are no more, or when `stop` said so, and then the walk is not done.
    pub(super) fn next(&mut self, graph: &mut Graph, stop: &dyn Fn() -> bool) -> Option<Face> {
        while let Some(part) = self.stack.pop() {
            if let Some(i) = self.branch(graph, &part) {
                self.split(graph, part, i, stop)?;
                continue;
            }
            self.passed += part.share;
            if let Some(face) = leaf(&part) {
                return Some(face);
            }
        }
        None
    }

    /// The share of the whole walk, in parts of [`Progress::WHOLE`], that was passed since this was last asked.
    pub(super) fn passed(&mut self) -> u64 {
        std::mem::take(&mut self.passed)
    }

    /// Whether every face was seen.
    pub(super) fn is_done(&self) -> bool {
        self.stack.is_empty()
    }

    /// The species that can be absent while all others are present.
    pub(super) fn free(&self) -> Vec<usize> {
        (0..self.vanishes.len()).filter(|&i| self.vanishes[i] && self.reaches_zero[i]).collect()
    }

    /// The face on which, of the species that can be absent, just those are present that are wanted and may be; of a walk
    /// that has not begun. `None` where there is none, or `stop` said so.
    pub(super) fn leaf(&self, graph: &mut Graph, wanted: &[bool], stop: &dyn Fn() -> bool) -> Option<Face> {
        let mut part = self.stack.first()?.clone();
        while let Some(i) = self.branch(graph, &part) {
            if part.rows[i].is_some() && (wanted[i] || !self.reaches_zero[i]) {
                part.decisions[i] = Decision::Present;
            } else if self.reaches_zero[i] {
                part = without(graph, part, i, stop)?;
            } else {
                return None;
            }
        }
        leaf(&part)
    }

    /// Divides the walk into at least `wanted` walks, if there are so many faces; together, and in this order, they see
    /// every face. Once `stop` says so it is not divided further.
    pub(super) fn divide(mut self, graph: &mut Graph, wanted: usize, stop: &dyn Fn() -> bool) -> Vec<Self> {
        let mut settled = Vec::new();
        while self.stack.len() + settled.len() < wanted {
            // The part with most left open comes first, so that the walks are of like size.
            let part = self.stack.remove(0);
            match self.branch(graph, &part) {
                Some(i) => {
                    if self.split(graph, part, i, stop).is_none() {
                        break;
                    }
                }
                None => settled.push(part),
            }
            if self.stack.is_empty() {
                break;
            }
        }
        let mut parts: Vec<Part> = self.stack.iter().cloned().chain(settled).collect();
        // Faces with many present take longest; begun last, one of them would keep all others waiting.
        let present = |part: &Part| part.decisions.iter().filter(|&&decision| decision == Decision::Present).count();
        parts.sort_by_key(|part| std::cmp::Reverse(present(part)));
        let passed = |first: bool| if first { self.passed } else { 0 };
        let walks = parts.into_iter().enumerate();
        walks.map(|(k, part)| Self { stack: vec![part], passed: passed(k == 0), ..self.clone() }).collect()
    }

    /// Puts both parts on the stack: species `i` present, where its rate has a value, and absent, where the box allows.
    /// `None` where it was stopped; then the part is there as it was.
    fn split(&mut self, graph: &mut Graph, part: Part, i: usize, stop: &dyn Fn() -> bool) -> Option<()> {
        let absent = if self.reaches_zero[i] { Some(without(graph, part.clone(), i, stop)) } else { None };
        if matches!(absent, Some(None)) {
            self.stack.push(part);
            return None;
        }
        let absent = absent.flatten();
        let [first, second] = match (part.rows[i].is_some(), &absent) {
            (true, Some(_)) => [part.share - part.share / 2, part.share / 2],
            (true, None) => [part.share, 0],
            (false, Some(_)) => [0, part.share],
            (false, None) => {
                self.passed += part.share;
                [0, 0]
            }
        };
        if part.rows[i].is_some() {
            self.stack.push(Part { decisions: with(&part.decisions, i, Decision::Present), share: first, ..part });
        }
        self.stack.extend(absent.map(|absent| Part { share: second, ..absent }));
        Some(())
    }

    /// An open species that can be absent here: its rate vanishes with it, or has no value unless it is absent.
    fn branch(&self, graph: &mut Graph, part: &Part) -> Option<usize> {
        (0..part.rows.len()).find(|&i| {
            part.decisions[i] == Decision::Open
                && match part.rows[i] {
                    None => self.vanishes[i],
                    Some(_) if part.quotients[i].is_some() => true,
                    Some(row) => graph.vanishes_at_zero(row, i),
                }
        })
    }
}

fn with(decisions: &[Decision], i: usize, decision: Decision) -> Vec<Decision> {
    let mut decisions = decisions.to_vec();
    decisions[i] = decision;
    decisions
}

/// The part where species `i` is absent: every other rate as it is there. `stop` is asked before each walk through the
/// graph; `None` where it said so.
fn without(graph: &mut Graph, mut part: Part, i: usize, stop: &dyn Fn() -> bool) -> Option<Part> {
    if stop() {
        return None;
    }
    part.decisions[i] = Decision::Absent;
    part.rows[i] = None;
    part.quotients[i] = None;
    let known: Vec<NodeId> = part.rows.iter().chain(&part.quotients).copied().flatten().collect();
    let restricted = graph.restrict(&known, i);
    let mut restricted = restricted.into_iter();
    for row in part.rows.iter_mut().chain(&mut part.quotients) {
        if row.is_some() {
            *row = match restricted.next() {
                Some(AtZero::Is(node)) => Some(node),
                _ => None,
            };
        }
    }
    for j in 0..part.rows.len() {
        let undivided = part.rows[j].filter(|_| part.quotients[j].is_none() && part.decisions[j] != Decision::Absent);
        if let Some(row) = undivided {
            if stop() {
                return None;
            }
            part.quotients[j] = graph.divide(row, j).quotient;
        }
    }
    Some(part)
}

/// The face of a part in which nothing is left to branch on; `None` where a rate of one present has no value.
fn leaf(part: &Part) -> Option<Face> {
    let mut face = Face { variables: Vec::new(), rows: Vec::new(), divided: Vec::new() };
    for i in 0..part.rows.len() {
        if part.decisions[i] == Decision::Absent {
            continue;
        }
        let quotient = part.quotients[i].filter(|_| part.decisions[i] == Decision::Present);
        face.variables.push(i);
        face.rows.push(quotient.or(part.rows[i])?);
        face.divided.push(quotient.is_some());
    }
    Some(face)
}

#[cfg(test)]
mod tests {
    use std::cell::Cell;

    use super::*;

    /// x_i (1 − Σ x_j), shared parts written once for each row.
    fn crowd(n: usize) -> (Graph, Vec<NodeId>) {
        let mut graph = Graph::new(n, Vec::new());
        let row = |graph: &mut Graph, i: usize| {
            let mut rest = graph.constant(1.0 + i as f64);
            for j in 0..n {
                let x = graph.state(j);
                rest = graph.sub(rest, x);
            }
            let x = graph.state(i);
            graph.mul(x, rest)
        };
        let rows = (0..n).map(|i| row(&mut graph, i)).collect();
        (graph, rows)
    }

    /// Each walk through the graph on the way to a face is one that `stop` was asked before: stopped at the k-th, it has
    /// made k of the n steps, and what it has added to the graph by then grows with k.
    #[test]
    fn the_way_to_a_face_can_be_stopped_between_any_two_steps() {
        let n = 6;
        let mut grown = Vec::new();
        for asked in 0..=n {
            let (mut graph, rows) = crowd(n);
            let faces = Faces::new(&mut graph, &rows, vec![true; n]);
            let before = graph.len();
            let left = Cell::new(asked);
            let stop = || left.replace(left.get().saturating_sub(1)) == 0;
            let face = faces.leaf(&mut graph, &vec![false; n], &stop);
            assert_eq!(face.is_some(), asked == n, "stopped at {asked}");
            grown.push(graph.len() - before);
        }
        assert_eq!(grown[0], 0);
        assert!(grown.is_sorted() && grown[n - 1] > grown[1], "{grown:?}");
    }

    /// However often a walk is stopped and taken up again, it sees every face once, in the same order.
    #[test]
    fn a_walk_that_was_stopped_goes_on_where_it_was() {
        let (mut graph, rows) = crowd(4);
        let mut whole = Faces::new(&mut graph, &rows, vec![true; 4]);
        let mut halting = whole.clone();
        let expected: Vec<Face> = std::iter::from_fn(|| whole.next(&mut graph, &|| false)).collect();
        let count = Cell::new(0);
        let stop = || count.replace(count.get() + 1) % 3 == 2;
        let mut seen = Vec::new();
        // Of three askings two let it go on, so that 16 faces cannot take more than 100 turns.
        for _ in 0..100 {
            seen.extend(halting.next(&mut graph, &stop));
        }
        assert!(halting.is_done() && whole.is_done());
        assert_eq!((seen.len(), &seen), (16, &expected));
    }

    /// Where everybody can be absent by themselves each of the 2^n faces is the same share, however the walk is divided.
    #[test]
    fn shares_of_faces_make_a_whole() {
        for n in [1, 3, 5] {
            for wanted in [1, 2, 3, 8, 100] {
                let (mut graph, rows) = crowd(n);
                let walks = Faces::new(&mut graph, &rows, vec![true; n]).divide(&mut graph, wanted, &|| false);
                let mut shares = Vec::new();
                for mut walk in walks {
                    while walk.next(&mut graph, &|| false).is_some() {
                        shares.push(walk.passed());
                    }
                }
                assert_eq!(shares, vec![Progress::WHOLE >> n; 1 << n], "{n} species in {wanted} walks");
            }
        }
    }

    /// Whoever cannot be absent halves nothing.
    #[test]
    fn a_species_that_is_always_there_divides_no_shares() {
        let (mut graph, rows) = crowd(3);
        let mut faces = Faces::new(&mut graph, &rows, vec![true, false, true]);
        let mut shares = Vec::new();
        while faces.next(&mut graph, &|| false).is_some() {
            shares.push(faces.passed());
        }
        assert_eq!(shares, vec![Progress::WHOLE / 4; 4]);
    }
}
