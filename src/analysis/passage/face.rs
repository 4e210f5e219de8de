//! The equations of two scenarios on one face, in the coordinates that a branch moves in.
//!
//! A species stays absent along the way if its row vanishes with it in both scenarios, given the others that are absent.
//! One that is fed in either (restocking, immigration, a constant take) moves, though it may begin at 0. A row that can be
//! divided by its own species in both is divided, so that the branch goes through 0 instead of meeting another there.

use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId, Operation};
use crate::expr::tape::Tape;

/// Rows of both scenarios, and each divided by its own species where that can be done in both.
#[derive(Clone, Debug)]
pub(super) struct Rows {
    whole: [Vec<NodeId>; 2],
    divided: Vec<Option<[NodeId; 2]>>,
}

impl Rows {
    pub(super) fn new(graph: &mut Graph, whole: [Vec<NodeId>; 2]) -> Self {
        let divided = (0..whole[0].len()).map(|i| {
            let first = graph.divide(whole[0][i], i).quotient?;
            Some([first, graph.divide(whole[1][i], i).quotient?])
        });
        Self { divided: divided.collect(), whole }
    }
}

/// One face, compiled.
#[derive(Clone, Debug)]
pub(super) struct Face {
    /// The species that move, in order; all others are 0.
    pub(super) moving: Vec<usize>,
    /// Their rows in either scenario.
    pub(super) tapes: [Tape; 2],
}

impl Face {
    /// The face on which these move, and whoever is fed there; `None` where a rate has no value with the others absent.
    pub(super) fn new(graph: &mut Graph, rows: &Rows, mut moves: Vec<bool>) -> Option<Self> {
        let zero = AtZero::Is(graph.zero());
        // Each round makes one more species move at least.
        for _ in 0..=moves.len() {
            let [first, second] = [0, 1].map(|scenario| restricted(graph, &rows.whole[scenario], &moves));
            let fed = |&i: &usize| !moves[i] && (first[i] != zero || second[i] != zero);
            let fed: Vec<usize> = (0..moves.len()).filter(fed).collect();
            if fed.is_empty() {
                return Self::compiled(graph, rows, &moves, &[first, second]);
            }
            for i in fed {
                moves[i] = true;
            }
        }
        None
    }

    fn compiled(graph: &mut Graph, rows: &Rows, moves: &[bool], whole: &[Vec<AtZero>; 2]) -> Option<Self> {
        let moving: Vec<usize> = (0..moves.len()).filter(|&i| moves[i]).collect();
        let mut chosen: [Vec<NodeId>; 2] = [Vec::new(), Vec::new()];
        for &i in &moving {
            let divided = rows.divided[i].and_then(|quotients| {
                let known = restricted(graph, &quotients, moves);
                Some([value(known[0])?, value(known[1])?])
            });
            let nodes = match divided {
                Some(nodes) => nodes,
                None => [value(whole[0][i])?, value(whole[1][i])?],
            };
            chosen[0].push(nodes[0]);
            chosen[1].push(nodes[1]);
        }
        let strays = |node: &NodeId| matches!(graph.operation(*node), Operation::State(i) if !moves[i]);
        if graph.reachable(&chosen.concat()).iter().any(strays) {
            return None;
        }
        let tapes = [0, 1].map(|scenario| Tape::over(graph, &chosen[scenario], &moving));
        Some(Self { moving, tapes })
    }
}

/// What nodes are where all that do not move are 0.
pub(in crate::analysis) fn restricted(graph: &mut Graph, nodes: &[NodeId], moves: &[bool]) -> Vec<AtZero> {
    let mut known: Vec<AtZero> = nodes.iter().map(|&node| AtZero::Is(node)).collect();
    for absent in (0..moves.len()).filter(|&i| !moves[i]) {
        let live: Vec<NodeId> = known.iter().copied().filter_map(value).collect();
        let mut rest = graph.restrict(&live, absent).into_iter();
        for entry in &mut known {
            if let AtZero::Is(_) = entry {
                *entry = rest.next().unwrap_or(AtZero::Unknown);
            }
        }
    }
    known
}

fn value(known: AtZero) -> Option<NodeId> {
    match known {
        AtZero::Is(node) => Some(node),
        _ => None,
    }
}
