//! A face's equations ready to be followed: one smooth piece of them, and what is watched beside it.
//!
//! Between kinks of `min`, `max`, `abs` and choices the rows are smooth. A piece has each such node replaced by the operand
//! that counts on its side, so that it can be followed past the kink and corrected to lie on it. [`Pieces`] compiles each
//! once. What is watched at every point: growth of the absent, what harvests give, and on which side of each kink one is.

use std::collections::HashMap;
use std::rc::Rc;

use super::equations::{Equations, Face};
use crate::analysis::passage::restricted;
use crate::expr::function::Function;
use crate::expr::graph::divide::AtZero;
use crate::expr::graph::{Graph, NodeId, Operation, Variable};
use crate::expr::tape::Tape;

/// A place where rows have a kink: the side is told by the sign of a difference.
#[derive(Clone, Copy, Debug)]
pub(super) struct Kink {
    /// The node of `min`, `max`, `abs` or a choice.
    pub(super) node: NodeId,
    /// The two quantities that are equal on the kink.
    pub(super) quantities: [NodeId; 2],
    /// What the node is where the first quantity is larger, and elsewhere.
    operands: [NodeId; 2],
}

/// One smooth piece of the equations on a face.
#[derive(Debug)]
pub(super) struct Piece {
    /// Who moves, by species.
    pub(super) present: Vec<bool>,
    /// The same as a list.
    pub(super) moving: Vec<usize>,
    /// Which rows are divided by their own abundance.
    pub(super) is_divided: Vec<bool>,
    /// On which side of each kink of the face it holds.
    pub(super) sides: Vec<bool>,
    /// The kinks of the face.
    pub(super) kinks: Vec<Kink>,
    /// Rows over those who move and the control.
    pub(super) tape: Tape,
    /// Everything watched, over the same.
    pub(super) beside: Tape,
    /// The absent that grow or shrink alone: the first outputs of `beside`.
    pub(super) alone: Vec<usize>,
    /// The absent that do so only together: the next outputs are their block, row by row.
    pub(super) together: Vec<usize>,
    /// Whether all of that is known.
    pub(super) is_typed: bool,
    /// For each taking its output of `beside`.
    pub(super) takings: Vec<Option<usize>>,
    /// The first output of the differences at kinks; the last outputs.
    pub(super) differences: usize,
    /// Whole rows over all species and the control, with derivatives: for what is rarely asked.
    pub(super) whole: Rc<Tape>,
    /// The face as written, kinks and all.
    pub(super) face: Face,
    rows: Vec<NodeId>,
}

impl Piece {
    /// Whether rows are the same on another piece: a kink between them is none of theirs.
    pub(super) fn is_like(&self, other: &Self) -> bool {
        self.rows == other.rows
    }
}

/// Every face and piece met so far.
#[derive(Debug, Default)]
pub(super) struct Pieces {
    faces: HashMap<Vec<bool>, Option<Rc<Frame>>>,
    compiled: HashMap<(Vec<bool>, Vec<bool>), Rc<Piece>>,
    whole: Option<Rc<Tape>>,
}

/// A face before it is divided into pieces.
#[derive(Debug)]
struct Frame {
    face: Face,
    present: Vec<bool>,
    kinks: Vec<Kink>,
    /// Differences at all kinks, as written.
    sides: Tape,
}

impl Pieces {
    /// Who moves on the face of these: they and whoever is fed there. `None` where rates have no value there.
    pub(super) fn moving(&mut self, equations: &mut Equations, present: &[bool]) -> Option<Vec<bool>> {
        Some(self.frame(equations, present)?.present.clone())
    }

    /// The piece of a face that holds at a state and a control value.
    pub(super) fn at(
        &mut self,
        equations: &mut Equations,
        present: &[bool],
        state: &[f64],
        control: f64,
    ) -> Option<Rc<Piece>> {
        let frame = self.frame(equations, present)?;
        let point: Vec<f64> = frame.face.moving.iter().map(|&i| state[i]).chain([control]).collect();
        let mut run = frame.sides.start(&equations.values);
        run.at(&point);
        let sides: Vec<bool> = run.outputs().map(|&difference| difference >= 0.0).collect();
        self.piece(equations, present, &sides)
    }

    /// The piece of a face on given sides of its kinks.
    pub(super) fn piece(&mut self, equations: &mut Equations, present: &[bool], sides: &[bool]) -> Option<Rc<Piece>> {
        let frame = self.frame(equations, present)?;
        let key = (frame.present.clone(), sides.to_vec());
        if let Some(known) = self.compiled.get(&key) {
            return Some(known.clone());
        }
        let all: Vec<usize> = (0..=equations.species).collect();
        let whole = self.whole.get_or_insert_with(|| Rc::new(Tape::over(&equations.graph, &equations.balance, &all)));
        let piece = Rc::new(compiled(equations, &frame, sides, whole.clone()));
        self.compiled.insert(key, piece.clone());
        Some(piece)
    }

    fn frame(&mut self, equations: &mut Equations, present: &[bool]) -> Option<Rc<Frame>> {
        if let Some(known) = self.faces.get(present) {
            return known.clone();
        }
        let frame = equations.face(present).map(|face| Rc::new(Frame::new(equations, face)));
        self.faces.insert(present.to_vec(), frame.clone());
        frame
    }
}

impl Frame {
    fn new(equations: &mut Equations, face: Face) -> Self {
        let present = (0..equations.species).map(|i| face.moving.contains(&i)).collect();
        let kinks = kinks(&mut equations.graph, &face.rows);
        let differences: Vec<NodeId> =
            kinks.iter().map(|kink| equations.graph.sub(kink.quantities[0], kink.quantities[1])).collect();
        let sides = Tape::over(&equations.graph, &differences, &equations.inputs(&face));
        Self { face, present, kinks, sides }
    }
}

/// The kinks of some nodes, operands before users.
fn kinks(graph: &mut Graph, rows: &[NodeId]) -> Vec<Kink> {
    let mut kinks = Vec::new();
    for node in graph.reachable(rows) {
        if !graph.facts(node).state_dependent {
            continue;
        }
        let kink = match graph.operation(node) {
            Operation::Min(a, b) => ([b, a], [a, b]),
            Operation::Max(a, b) => ([a, b], [a, b]),
            Operation::Select([a, b, x, y]) => ([b, a], [x, y]),
            Operation::Apply(Function::Abs, u) => ([u, graph.zero()], [u, graph.neg(u)]),
            _ => continue,
        };
        kinks.push(Kink { node, quantities: kink.0, operands: kink.1 });
    }
    kinks
}

fn compiled(equations: &mut Equations, frame: &Frame, sides: &[bool], whole: Rc<Tape>) -> Piece {
    let species = equations.species;
    let absent: Vec<usize> = (0..species).filter(|&i| !frame.present[i]).collect();
    let mut watched = Watched::default();
    watched.growths(equations, frame, &absent);
    let given = known(equations, &equations.given.clone(), &frame.present);
    let mut takings = Vec::new();
    for node in given {
        takings.push(node.map(|_| watched.nodes.len()));
        watched.nodes.extend(node);
    }
    let wanted: Vec<NodeId> =
        frame.face.rows.iter().copied().chain(frame.kinks.iter().flat_map(|kink| kink.quantities)).collect();
    let new = smoothed(&mut equations.graph, &wanted, &frame.kinks, sides);
    let differences = watched.nodes.len();
    for kink in &frame.kinks {
        let [a, b] = kink.quantities.map(|node| new[&node]);
        watched.nodes.push(equations.graph.sub(a, b));
    }
    let rows: Vec<NodeId> = frame.face.rows.iter().map(|row| new[row]).collect();
    let inputs = equations.inputs(&frame.face);
    Piece {
        present: frame.present.clone(),
        moving: frame.face.moving.clone(),
        is_divided: frame.face.is_divided.clone(),
        sides: sides.to_vec(),
        kinks: frame.kinks.clone(),
        tape: Tape::over(&equations.graph, &rows, &inputs),
        beside: Tape::over(&equations.graph, &watched.nodes, &inputs),
        alone: watched.alone,
        together: watched.together,
        is_typed: watched.is_typed,
        takings,
        differences,
        whole,
        face: frame.face.clone(),
        rows,
    }
}

#[derive(Default)]
struct Watched {
    nodes: Vec<NodeId>,
    alone: Vec<usize>,
    together: Vec<usize>,
    is_typed: bool,
}

impl Watched {
    /// The block of the Jacobian that belongs to the absent: a row that vanishes with its own species alone has that
    /// species' growth on the diagonal and nothing beside it.
    fn growths(&mut self, equations: &mut Equations, frame: &Frame, absent: &[usize]) {
        self.is_typed = true;
        for &i in absent {
            let growth = equations.divided[i].and_then(|node| known(equations, &[node], &frame.present)[0]);
            match growth {
                Some(growth) => {
                    self.alone.push(i);
                    self.nodes.push(growth);
                }
                None => self.together.push(i),
            }
        }
        let mut entries = Vec::new();
        for &i in &self.together {
            for &j in &self.together {
                let entry = equations.graph.derivative(equations.balance[i], Variable::State(j));
                entries.extend(known(equations, &[entry], &frame.present)[0]);
            }
        }
        self.is_typed = entries.len() == self.together.len() * self.together.len();
        if self.is_typed {
            self.nodes.extend(entries);
        } else {
            self.together.clear();
        }
    }
}

/// What nodes are on a face; `None` where they have no value there.
fn known(equations: &mut Equations, nodes: &[NodeId], present: &[bool]) -> Vec<Option<NodeId>> {
    let found = restricted(&mut equations.graph, nodes, present);
    let graph = &equations.graph;
    let strays = |node: NodeId| {
        let is_stray =
            |node: &NodeId| matches!(graph.operation(*node), Operation::State(i) if i < present.len() && !present[i]);
        graph.reachable(&[node]).iter().any(is_stray)
    };
    let value = |known: AtZero| match known {
        AtZero::Is(node) if !strays(node) => Some(node),
        _ => None,
    };
    found.into_iter().map(value).collect()
}

/// Nodes with every kink replaced by the operand of one side.
fn smoothed(graph: &mut Graph, nodes: &[NodeId], kinks: &[Kink], sides: &[bool]) -> HashMap<NodeId, NodeId> {
    let mut new: HashMap<NodeId, NodeId> = HashMap::new();
    let extra: Vec<NodeId> = kinks.iter().flat_map(|kink| kink.operands).collect();
    for node in graph.reachable(&[nodes, &extra].concat()) {
        let rebuilt = if let Some(place) = kinks.iter().position(|kink| kink.node == node) {
            let operand = kinks[place].operands[usize::from(!sides[place])];
            // −u comes after |u| in the graph, so that it may not be there yet.
            new.get(&operand).copied().unwrap_or_else(|| {
                let inner = new[&kinks[place].operands[0]];
                graph.neg(inner)
            })
        } else {
            let operation = graph.operation(node);
            graph.rebuild(operation.map(|operand| new[&operand]))
        };
        new.insert(node, rebuilt);
    }
    new
}
