//! The faces of the orthant: every way in which some species are absent and the others present.
//!
//! Species i can be absent where row i vanishes with x_i, given those absent already; on the faces where it is present its
//! row is divided by x_i, so that the root at absence does not return. Species that quota or immigration feeds, and stages
//! or patches that vanish only together, are not branched on: their zeros are ordinary roots on a border. The leaves cover
//! every equilibrium; a leaf whose rows have no meaning with those absent is left out, or forced to be emptier.

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
        };
        let vanishes = divisions.iter().map(|division| division.zero == zero).collect();
        Self { stack: vec![root], reaches_zero, vanishes }
    }

    /// The next face; `None` when there are no more.
    pub(super) fn next(&mut self, graph: &mut Graph) -> Option<Face> {
        while let Some(part) = self.stack.pop() {
            match self.branch(graph, &part) {
                Some(i) => self.split(graph, part, i),
                None => {
                    if let Some(face) = leaf(&part) {
                        return Some(face);
                    }
                }
            }
        }
        None
    }

    /// The species that can be absent while all others are present.
    pub(super) fn free(&self) -> Vec<usize> {
        (0..self.vanishes.len()).filter(|&i| self.vanishes[i] && self.reaches_zero[i]).collect()
    }

    /// The face on which, of the species that can be absent, just those are present that are wanted and may be; of a walk
    /// that has not begun.
    pub(super) fn leaf(&self, graph: &mut Graph, wanted: &[bool]) -> Option<Face> {
        let mut part = self.stack.first()?.clone();
        while let Some(i) = self.branch(graph, &part) {
            if part.rows[i].is_some() && (wanted[i] || !self.reaches_zero[i]) {
                part.decisions[i] = Decision::Present;
            } else if self.reaches_zero[i] {
                part = without(graph, part, i);
            } else {
                return None;
            }
        }
        leaf(&part)
    }

    /// Divides the walk into at least `wanted` walks, if there are so many faces; together, and in this order, they see
    /// every face.
    pub(super) fn divide(mut self, graph: &mut Graph, wanted: usize) -> Vec<Self> {
        let mut settled = Vec::new();
        while self.stack.len() + settled.len() < wanted {
            // The part with most left open comes first, so that the walks are of like size.
            let part = self.stack.remove(0);
            match self.branch(graph, &part) {
                Some(i) => self.split(graph, part, i),
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
        parts.into_iter().map(|part| Self { stack: vec![part], ..self.clone() }).collect()
    }

    /// Puts both parts on the stack: species `i` present, where its rate has a value, and absent, where the box allows.
    fn split(&mut self, graph: &mut Graph, part: Part, i: usize) {
        if part.rows[i].is_some() {
            let mut present = part.clone();
            present.decisions[i] = Decision::Present;
            self.stack.push(present);
        }
        if self.reaches_zero[i] {
            self.stack.push(without(graph, part, i));
        }
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

/// The part where species `i` is absent: every other rate as it is there.
fn without(graph: &mut Graph, mut part: Part, i: usize) -> Part {
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
            part.quotients[j] = graph.divide(row, j).quotient;
        }
    }
    part
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
