//! From a bracket on a branch to a threshold: the root of the system that defines it.
//!
//! Whoever follows a branch sees a number change its sign between two points of it ([`Event`]); [`Locator::locate`] solves the
//! defining system from there, to rounding, and says what the root is ([`Located`]), or that there is none where the sign
//! changed. What stands beside a threshold in a table (eigenvalues, soft or hard) is [`describe`]'s. Systems are compiled once
//! for each face and sign.

mod attempt;
pub mod describe;
pub(super) mod judge;

use crate::expr::graph::{NodeId, Operation};

use super::ThresholdKind;
use super::defining::frame::Sizes;
use super::defining::{Defining, Matrix, at_face};
use super::equations::{Equations, Face};

/// What changed its sign along a branch.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Sign {
    /// The direction of the control.
    Turn,
    /// The abundance of this species, one of those who move.
    Abundance(usize),
    /// An abundance less a side of the search box: the lower (0) or the upper (1).
    Side(usize, usize),
    /// The own growth of this absent species; for a map what its multiplier is above 1.
    Growth(usize),
    /// The same of a population that is absent: the leading eigenvalue of the block of these species.
    Block(Vec<usize>),
    /// A real eigenvalue, or multiplier less 1, of those who move, while the control does not turn.
    Crossing,
    /// The real part of a pair, for a map its modulus less 1: of those who move, or of these absent species.
    Pair(Option<Vec<usize>>),
    /// A real multiplier plus 1: of those who move, or of these absent species.
    Flip(Option<Vec<usize>>),
    /// The difference of the two quantities that this node (min, max, abs or select) compares.
    Kink(NodeId),
}

/// A change of sign between two points of a branch.
#[derive(Clone, Debug)]
pub struct Event<'e> {
    /// The branch's face.
    pub face: &'e Face,
    /// What changed.
    pub sign: Sign,
    /// The point before: abundances of those who move, then every control. Where there are several controls the threshold is
    /// looked for on the straight line of their values.
    pub before: &'e [f64],
    /// The point after.
    pub after: &'e [f64],
}

impl Event<'_> {
    /// The first control that differs between the two points.
    fn varied(&self) -> usize {
        let m = self.face.moving.len();
        (m..self.before.len()).find(|&place| self.before[place] != self.after[place]).map_or(0, |place| place - m)
    }
}

/// A threshold that was located.
#[derive(Clone, Debug, PartialEq)]
pub struct Located {
    /// What happens there.
    pub kind: ThresholdKind,
    /// Abundances of those who move, then every control.
    pub point: Vec<f64>,
    /// The value of the control; where there are several, of the first that differs between the event's points.
    pub at: f64,
    /// The state of all species.
    pub state: Vec<f64>,
    /// The last correction in the control, in its unit.
    pub error: f64,
    /// Who comes or goes, or leaves the box.
    pub species: Option<usize>,
    /// The node at whose kink it lies.
    pub kink: Option<NodeId>,
    /// The absent species whose block is critical, where it is not that of those who move.
    pub block: Option<Vec<usize>>,
    /// Every unknown of the defining system, to go on from.
    pub(super) unknowns: Vec<f64>,
    /// Which system that is.
    pub(super) system: usize,
}

/// Which system defines what, and on which face.
struct Compiled {
    /// With its rows, for several smooth pieces of a branch may have the same species.
    face: Face,
    sign: Sign,
    /// Which control moves, where that matters.
    control: usize,
    /// `None` where it cannot be set up: something has no value or no derivative there.
    system: Option<Defining>,
    /// The species that the system's matrix is over.
    over: Vec<usize>,
}

/// Locates thresholds of one scenario.
#[derive(Default)]
pub struct Locator {
    compiled: Vec<Compiled>,
}

impl Locator {
    /// With nothing compiled yet.
    pub fn new() -> Self {
        Self::default()
    }

    /// The threshold of an event; `None` where the system that defines it has no root nearby, or one that is something else
    /// (two real eigenvalues of sum 0, an imperfect crossing).
    ///
    /// A root is nearby within a modest multiple of the bracket's length. A turn that is no fold is tried as a crossing of
    /// branches, and a population that reaches 0 as one whose block is critical.
    pub fn locate(&mut self, equations: &mut Equations, event: &Event<'_>) -> Option<Located> {
        match event.sign {
            Sign::Turn => {
                let fold = self.solved(equations, event);
                fold.or_else(|| self.solved(equations, &Event { sign: Sign::Crossing, ..event.clone() }))
            }
            Sign::Abundance(species) => match lost_together(equations, event, species) {
                Some((face, lost)) => {
                    let kept = |point: &[f64]| without(point, event.face, &lost);
                    let (before, after) = (kept(event.before), kept(event.after));
                    let sign = if lost.len() == 1 && equations.divided[lost[0]].is_some() {
                        Sign::Growth(lost[0])
                    } else {
                        Sign::Block(lost)
                    };
                    let smaller = Event { face: &face, sign, before: &before, after: &after };
                    let found = self.solved(equations, &smaller)?;
                    Some(Located { species: Some(species), ..found })
                }
                None => self.solved(equations, event),
            },
            _ => self.solved(equations, event),
        }
    }

    fn solved(&mut self, equations: &mut Equations, event: &Event<'_>) -> Option<Located> {
        let place = self.place(equations, event.face, &event.sign, event.varied());
        let Compiled { system: Some(system), over, .. } = &self.compiled[place] else { return None };
        let bracket = attempt::Bracket::new(equations, system, over, event);
        let found = bracket.solve()?;
        let mut located = judge::judged(equations, system, event, &bracket.sizes, found)?;
        located.system = place;
        Some(located)
    }

    /// The compiled system of a face and a sign; that of a crossing is one for each control.
    pub(super) fn place(&mut self, equations: &mut Equations, face: &Face, sign: &Sign, control: usize) -> usize {
        let control = if *sign == Sign::Crossing { control } else { 0 };
        let is_same =
            |compiled: &Compiled| compiled.sign == *sign && compiled.control == control && compiled.face == *face;
        if let Some(place) = self.compiled.iter().position(is_same) {
            return place;
        }
        let over = match sign {
            Sign::Block(absent) | Sign::Pair(Some(absent)) | Sign::Flip(Some(absent)) => absent.clone(),
            _ => face.moving.clone(),
        };
        let system = compiled(equations, face, sign, control);
        self.compiled.push(Compiled { face: face.clone(), sign: sign.clone(), control, system, over });
        self.compiled.len() - 1
    }

    /// Who moves in the system at a place.
    pub(super) fn moving(&self, place: usize) -> Option<&[usize]> {
        self.compiled.get(place).map(|compiled| &compiled.face.moving[..])
    }

    /// The system at a place, and the species that its matrix is over.
    pub(super) fn system(&self, place: usize) -> Option<(&Defining, &[usize])> {
        let compiled = self.compiled.get(place)?;
        Some((compiled.system.as_ref()?, &compiled.over))
    }
}

/// The system that defines what a change of sign is about; `None` where a row or a derivative has no value on the face.
fn compiled(equations: &mut Equations, face: &Face, sign: &Sign, control: usize) -> Option<Defining> {
    Some(match sign {
        Sign::Turn => {
            let matrix = Matrix::of_face(equations, face);
            Defining::kernel(equations, face, &matrix)
        }
        Sign::Abundance(i) => {
            let x = equations.graph.state(*i);
            Defining::plain(equations, face, x)
        }
        Sign::Side(i, which) => {
            let side = equations.sides.get(*i)?.get(*which).copied().filter(|side| side.is_finite())?;
            let (x, side) = (equations.graph.state(*i), equations.graph.constant(side));
            let beyond = equations.graph.sub(x, side);
            Defining::plain(equations, face, beyond)
        }
        Sign::Growth(i) => {
            let growth = Matrix::of_absent(equations, &[*i], face)?.entries[0];
            Defining::plain(equations, face, growth)
        }
        Sign::Block(absent) => {
            let matrix = Matrix::of_absent(equations, absent, face)?;
            Defining::kernel(equations, face, &matrix)
        }
        Sign::Crossing => Defining::crossing(equations, face, control),
        Sign::Pair(absent) => {
            let matrix = jacobian(equations, face, absent.as_deref())?;
            Defining::pair(equations, face, &matrix)
        }
        Sign::Flip(absent) => {
            let matrix = jacobian(equations, face, absent.as_deref())?.shifted(&mut equations.graph, 1.0);
            Defining::kernel(equations, face, &matrix)
        }
        Sign::Kink(node) => {
            let ((a, b), [piece, _]) = (compared(equations, *node)?, pieces(equations, *node)?);
            let rows = equations.graph.replaced(&face.rows, &[(*node, piece)]);
            let smooth = Face { rows, ..face.clone() };
            let difference = equations.graph.sub(a, b);
            let difference = at_face(equations, &[difference], face)?[0];
            Defining::plain(equations, &smooth, difference)
        }
    })
}

/// The Jacobian of the rates, or of the next state, of those who move or of some who are absent.
fn jacobian(equations: &mut Equations, face: &Face, absent: Option<&[usize]>) -> Option<Matrix> {
    match absent {
        None => Matrix::of_rows(equations, face),
        // What is 0 at a map's equilibrium is the next state less the state.
        Some(absent) if equations.step.is_some() => {
            Some(Matrix::of_absent(equations, absent, face)?.shifted(&mut equations.graph, 1.0))
        }
        Some(absent) => Matrix::of_absent(equations, absent, face),
    }
}

/// The two quantities that a node with a kink compares; `None` for any other.
pub fn compared(equations: &mut Equations, node: NodeId) -> Option<(NodeId, NodeId)> {
    use crate::expr::function::Function::Abs;
    match equations.graph.operation(node) {
        Operation::Min(a, b) | Operation::Max(a, b) | Operation::Select([a, b, ..]) => Some((a, b)),
        Operation::Apply(Abs, a) => Some((a, equations.graph.zero())),
        _ => None,
    }
}

/// What a node with a kink is where the first of its two quantities is the smaller, and where it is the larger; each goes on
/// smoothly beyond the kink. `None` for a node without one.
pub fn pieces(equations: &mut Equations, node: NodeId) -> Option<[NodeId; 2]> {
    use crate::expr::function::Function::Abs;
    match equations.graph.operation(node) {
        Operation::Min(a, b) => Some([a, b]),
        Operation::Max(a, b) => Some([b, a]),
        Operation::Select([_, _, x, y]) => Some([x, y]),
        Operation::Apply(Abs, a) => Some([equations.graph.neg(a), a]),
        _ => None,
    }
}

/// Who is lost with a species whose row is not divided, and the face that is left: the others whose rows are not divided
/// either and that change their sign with it, if nobody feeds any of them then. `None` where the species is lost alone, and
/// where it is fed: then its branch goes on below 0.
fn lost_together(equations: &mut Equations, event: &Event<'_>, species: usize) -> Option<(Face, Vec<usize>)> {
    let place = event.face.moving.iter().position(|&i| i == species)?;
    if event.face.is_divided[place] {
        return None;
    }
    let turns = |&k: &usize| event.before[k] * event.after[k] <= 0.0 && !event.face.is_divided[k];
    let lost: Vec<usize> = (0..event.face.moving.len()).filter(turns).map(|k| event.face.moving[k]).collect();
    let mut present = vec![false; equations.species];
    event.face.moving.iter().for_each(|&i| present[i] = !lost.contains(&i));
    let face = equations.face(&present)?;
    (!lost.is_empty() && lost.iter().all(|i| !face.moving.contains(i))).then_some((face, lost))
}

/// A point without some of those who move.
fn without(point: &[f64], face: &Face, lost: &[usize]) -> Vec<f64> {
    let stays = |&(place, _): &(usize, &f64)| face.moving.get(place).is_none_or(|i| !lost.contains(i));
    point.iter().enumerate().filter(stays).map(|(_, &x)| x).collect()
}

impl Sizes {
    /// Of a stretch of a branch: the larger of each number's two values, and of absent species the sides of the box.
    pub(super) fn between(equations: &Equations, face: &Face, over: &[usize], points: [&[f64]; 2]) -> Self {
        let m = face.moving.len();
        let size = |place: usize| {
            let [a, b] = points.map(|point| point[place].abs());
            let most = a.max(b);
            if most > 0.0 { most } else { 1.0 }
        };
        let side = |i: usize| {
            let most = equations.sides[i][1].abs().max(equations.sides[i][0].abs());
            if most > 0.0 { most } else { 1.0 }
        };
        let of_species = |i: &usize| match face.moving.iter().position(|moving| moving == i) {
            Some(place) => size(place),
            None => side(*i),
        };
        Self {
            moving: (0..m).map(size).collect(),
            controls: (m..points[0].len()).map(size).collect(),
            vector: over.iter().map(of_species).collect(),
        }
    }
}
