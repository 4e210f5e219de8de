//! Which equilibrium of one scenario is which of another: each is followed on the way from the one to the other.
//!
//! The way is of the two balance functions as evaluated, each with the parameters of its own scenario: (1 − s) f(x) +
//! s g(x) = 0, s from 0 to 1, f and g being rates of change, for a map what it adds to the state. So scenarios may differ
//! in equations as well as in values. An equilibrium is followed by pseudo-arclength (Keller 1977; Allgower & Georg 1990)
//! among those present; what becomes of it is its [`Fate`]. All of this is numerical: nothing here is proved. It makes no
//! statement about time either: the way is between two plans, not from one year to the next.
//!
//! [`Ways`] is the way in. `face` has the equations of those present, `curve` points of the curve, `walk` goes along it,
//! `locate` finds where something happened, `agree` keeps of what was found only what is the same from both ends,
//! [`identify`] numbers the equilibria of several scenarios by it.

mod agree;
mod curve;
mod face;
mod identity;
pub(in crate::analysis) mod locate;
mod walk;

use std::collections::HashMap;

use super::equilibria::{Equilibrium, balance};
use super::prepare::Prepared;
use crate::expr::graph::{Graph, NodeId};
use crate::model::{Model, SpeciesId};
use curve::Curve;
pub(in crate::analysis) use curve::{dot, solve};
pub(in crate::analysis) use face::restricted;
use face::{Face, Rows};
pub use identity::{Identities, identify};
pub(in crate::analysis) use locate::crossing;
use walk::{Course, End, Ground, Obstacle, Walk};

/// What becomes of an equilibrium on the way to another scenario. Shares of the way are counted from the first scenario of
/// the passage to the second, whichever of them it was followed from.
#[derive(Clone, Debug, PartialEq)]
pub enum Fate {
    /// It is an equilibrium of the other scenario.
    Arrives {
        /// Its place in the other's list.
        at: usize,
        /// Shares of the way at which its branch turned back; an even number of them.
        turns: Vec<f64>,
        /// Shares of the way at which the rates have a kink that it was followed over.
        kinks: Vec<f64>,
    },
    /// Its branch turns back: two equilibria meet and are gone.
    Fold {
        /// Share of the way.
        at: f64,
        /// Which of its own scenario it meets; `None` where that arose on the way, or is not known.
        with: Option<usize>,
    },
    /// The abundance of one who is present reaches 0; beyond, it would be negative.
    Zero {
        /// Share of the way.
        at: f64,
        /// Whose.
        species: SpeciesId,
        /// The equilibrium of its own scenario without that species that it meets, where that is known.
        with: Option<usize>,
    },
    /// It leaves the search box, and is not in the other scenario's list.
    LeavesBox {
        /// Share of the way.
        at: f64,
        /// Whose abundance leaves it.
        species: SpeciesId,
    },
    /// It could not be followed.
    NotFollowed(Reason),
}

/// Why an equilibrium could not be followed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Reason {
    /// It is singular, or nearly: several equilibria in one place, or a line of them.
    Singular,
    /// Rates have no value or no derivative, beside it or on its face.
    NoDerivative,
    /// Rates have no value or an impassable kink at this share of the way, or its curve does not go on smoothly.
    Rough(f64),
    /// Branches cross, or all but touch, at this share of the way.
    Crossing(f64),
    /// It arrives at a state that is not in the other scenario's list.
    Unlisted,
    /// Followed back, it does not come to where it was followed from.
    Disagrees,
    /// Steps were used up at this share of the way.
    TooLong(f64),
    /// The search was told to stop before.
    Stopped,
}

/// What becomes of the equilibria of two scenarios between them.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Passage {
    /// One for each equilibrium of the first scenario.
    pub forward: Vec<Fate>,
    /// One for each of the second, followed back to the first.
    pub backward: Vec<Fate>,
}

impl Passage {
    /// Which of the first scenario's equilibria is which of the second's: both ways agree on these.
    pub fn pairs(&self) -> impl Iterator<Item = (usize, usize)> + '_ {
        self.forward.iter().enumerate().filter_map(|(first, fate)| match fate {
            Fate::Arrives { at, .. } => Some((first, *at)),
            _ => None,
        })
    }
}

/// The equations of all scenarios that have any, ready for any two of them to be joined.
#[derive(Clone, Debug)]
pub struct Ways {
    graph: Graph,
    /// For each scenario of the model its balanced rows and its parameters.
    scenarios: Vec<Option<(Vec<NodeId>, Vec<f64>)>>,
    sides: Vec<[f64; 2]>,
}

/// A scenario of the model, and its equilibria.
#[derive(Clone, Copy, Debug)]
pub struct Found<'e> {
    /// Its index.
    pub scenario: usize,
    /// What was found in it.
    pub list: &'e [Equilibrium],
}

impl Ways {
    /// The scenarios of a model; its graph is copied.
    pub fn new(model: &Model, prepared: &Prepared) -> Self {
        let mut graph = prepared.system.graph.clone();
        let mut rows = |plan: &Result<usize, _>| {
            let plan = prepared.system.plans.get(*plan.as_ref().ok()?)?;
            let rows = balance(&mut graph, &plan.rows, &model.time);
            Some((graph.with_zeros(&rows, &plan.values), plan.values.clone()))
        };
        let scenarios = prepared.plans.iter().map(&mut rows).collect();
        Self { graph, scenarios, sides: prepared.sides() }
    }

    /// Follows every equilibrium of either scenario to the other. Once `stop` says so the rest is not followed.
    pub fn passage(&mut self, ends: [Found<'_>; 2], stop: &dyn Fn() -> bool) -> Passage {
        self.passage_of(ends, &|_| true, &|_, _| true, stop)
    }

    /// As [`Ways::passage`], of only those for which `wanted` says so, asked with the place in the first list, and `back`,
    /// asked with the place in the second and what became of the first; the others count as stopped, and no pair with them
    /// is made.
    pub fn passage_of(
        &mut self,
        ends: [Found<'_>; 2],
        wanted: &dyn Fn(usize) -> bool,
        back: &dyn Fn(usize, &[Fate]) -> bool,
        stop: &dyn Fn() -> bool,
    ) -> Passage {
        let [first, second] = ends.map(|end| self.scenarios.get(end.scenario).cloned().flatten());
        let unfollowed = |end: Found<'_>| vec![Fate::NotFollowed(Reason::Stopped); end.list.len()];
        let (Some(first), Some(second)) = (first, second) else {
            return Passage { forward: unfollowed(ends[0]), backward: unfollowed(ends[1]) };
        };
        let rows = Rows::new(&mut self.graph, [first.0, second.0]);
        let values = [&first.1[..], &second.1[..]];
        let mut way =
            Way { graph: &mut self.graph, rows, values, sides: &self.sides, ends, faces: HashMap::new(), stop };
        let mut fates = |end: usize, wanted: &dyn Fn(usize) -> bool| -> Vec<Fate> {
            let places = 0..ends[end].list.len();
            let stopped = || Fate::NotFollowed(Reason::Stopped);
            places.map(|place| if wanted(place) { way.fate(end, place) } else { stopped() }).collect()
        };
        let forward = fates(0, wanted);
        let backward = fates(1, &|place| back(place, &forward));
        agree::agreed(&Passage { forward, backward })
    }
}

/// Between two scenarios.
struct Way<'w> {
    graph: &'w mut Graph,
    rows: Rows,
    values: [&'w [f64]; 2],
    sides: &'w [[f64; 2]],
    ends: [Found<'w>; 2],
    /// By who moves.
    faces: HashMap<Vec<bool>, Option<Face>>,
    stop: &'w dyn Fn() -> bool,
}

/// An equilibrium that is not proved is singular where the smallest pivot of its slopes is below this.
const SINGULAR: f64 = 1e-7;

/// Whether a state that was arrived at is one of the list: within this share of its abundance,
const SAME: f64 = 1e-7;
/// or for one of 0 within this share of the search box.
const SAME_ZERO: f64 = 1e-10;

/// An abundance below this share of the box is 0 where another reaches 0.
const ABSENT: f64 = 1e-7;

impl Way<'_> {
    fn fate(&mut self, end: usize, place: usize) -> Fate {
        let start = &self.ends[end].list[place];
        let present: Vec<bool> = (0..start.state.len()).map(|i| start.has(i)).collect();
        let Some(face) = self.face(&present) else { return Fate::NotFollowed(Reason::NoDerivative) };
        if (self.stop)() {
            return Fate::NotFollowed(Reason::Stopped);
        }
        let x: Vec<f64> = face.moving.iter().map(|&i| start.state[i]).collect();
        let s = if end == 0 { 0.0 } else { 1.0 };
        if face.moving.is_empty() {
            let course = Course::straight(1.0 - s);
            return self.told(end, &face, course);
        }
        let mut curve = Curve::new(&face, self.values);
        if !start.proven && !is_regular(&mut curve, &x, s) {
            return Fate::NotFollowed(Reason::Singular);
        }
        let sides = self.sides_of(&face);
        let ground = Ground { sides: &sides, stop: self.stop };
        match Walk::new(&mut curve, ground, &x, s, end == 0) {
            Some(walk) => {
                let course = walk.run();
                self.told(end, &face, course)
            }
            None => Fate::NotFollowed(if curve.is_defined(&x, s) { Reason::Singular } else { Reason::NoDerivative }),
        }
    }

    fn face(&mut self, present: &[bool]) -> Option<Face> {
        if let Some(known) = self.faces.get(present) {
            return known.clone();
        }
        let face = Face::new(self.graph, &self.rows, present.to_vec());
        self.faces.insert(present.to_vec(), face.clone());
        face
    }

    fn sides_of(&self, face: &Face) -> Vec<[f64; 2]> {
        face.moving.iter().map(|&i| self.sides[i]).collect()
    }

    /// What a walk from an equilibrium of one end came to.
    fn told(&mut self, end: usize, face: &Face, course: Course) -> Fate {
        let Course { turns, kinks, exit, .. } = course;
        let home = if end == 0 { 0.0 } else { 1.0 };
        let left = |otherwise: Reason| match exit {
            Some((coordinate, at)) => Fate::LeavesBox { at, species: SpeciesId(face.moving[coordinate]) },
            None => Fate::NotFollowed(otherwise),
        };
        match (course.end, turns.first().copied()) {
            (End::Side { x, s }, _) if s != home => match self.listed(1 - end, face, &x) {
                Some(at) => Fate::Arrives { at, turns, kinks },
                None => left(Reason::Unlisted),
            },
            // After more turns the one at the other end is not the one that is met at the first.
            (End::Side { x, .. }, Some(at)) if turns.len() == 1 => Fate::Fold { at, with: self.listed(end, face, &x) },
            (End::Stopped, _) => Fate::NotFollowed(Reason::Stopped),
            (_, Some(at)) => Fate::Fold { at, with: None },
            (End::Zero { coordinate, x, s }, None) => {
                let with = self.exchanged(end, face, &x, s);
                Fate::Zero { at: s, species: SpeciesId(face.moving[coordinate]), with }
            }
            (End::Far, None) => left(Reason::Unlisted),
            (End::Stuck { s, why: Obstacle::Rough }, None) => Fate::NotFollowed(Reason::Rough(s)),
            (End::Stuck { s, why: Obstacle::Crossing }, None) => Fate::NotFollowed(Reason::Crossing(s)),
            (End::TooLong { s }, None) => Fate::NotFollowed(Reason::TooLong(s)),
            (End::Side { .. }, None) => Fate::NotFollowed(Reason::Disagrees),
        }
    }

    /// The one of a list that a state is; `None` where there is none, or more than one.
    fn listed(&self, end: usize, face: &Face, x: &[f64]) -> Option<usize> {
        let near = |i: usize, (found, listed): (f64, f64)| {
            let room = if listed == 0.0 { SAME_ZERO * self.sides[i][1].abs() } else { SAME * listed.abs() };
            (found - listed).abs() <= room
        };
        let state = |i: usize| face.moving.iter().position(|&moving| moving == i).map_or(0.0, |place| x[place]);
        let is_same =
            |equilibrium: &Equilibrium| (0..equilibrium.state.len()).all(|i| near(i, (state(i), equilibrium.state[i])));
        let mut same = (0..self.ends[end].list.len()).filter(|&place| is_same(&self.ends[end].list[place]));
        same.next().filter(|_| same.next().is_none())
    }

    /// The equilibrium of an end that the branch without those who are 0 at a point leads back to.
    fn exchanged(&mut self, end: usize, face: &Face, x: &[f64], s: f64) -> Option<usize> {
        let mut present = vec![false; self.sides.len()];
        for (&i, &x) in face.moving.iter().zip(x) {
            present[i] = x > ABSENT * self.sides[i][1].abs();
        }
        let smaller = self.face(&present)?;
        if smaller.moving.len() >= face.moving.len() {
            return None;
        }
        let of = |i: &usize| face.moving.iter().position(|moving| moving == i).map(|place| x[place]);
        let x: Vec<f64> = smaller.moving.iter().map(of).collect::<Option<_>>()?;
        if x.is_empty() {
            return self.listed(end, &smaller, &x);
        }
        let home = if end == 0 { 0.0 } else { 1.0 };
        let mut curve = Curve::new(&smaller, self.values);
        let sides = self.sides_of(&smaller);
        let ground = Ground { sides: &sides, stop: self.stop };
        let course = Walk::new(&mut curve, ground, &x, s, end == 1)?.run();
        match course.end {
            End::Side { x, s } if s == home => self.listed(end, &smaller, &x),
            _ => None,
        }
    }
}

fn is_regular(curve: &mut Curve<'_>, x: &[f64], s: f64) -> bool {
    let point: Vec<f64> = x.iter().copied().chain([s]).collect();
    for (scale, &x) in curve.scale.iter_mut().zip(x) {
        *scale = if x > 0.0 { x } else { 1.0 };
    }
    curve.regularity(&point) > SINGULAR
}
