//! Every equilibrium in the search box, each with a proof, and what could not be decided.
//!
//! [`find`] is the way in. `faces` walks over who is present, `search` finds all roots on one face, `newton` proves them,
//! `sharpen` encloses them to the last digit, `border` settles zeros, `remains` says what the open boxes probably are, `above` looks beyond the box. Published by
//! others and recalled from memory: interval branch and prune (Hansen & Walster 2004; Neumaier 1990).

mod above;
mod border;
mod bordered;
mod choose;
mod cluster;
mod corner;
mod faces;
pub mod linear;
mod newton;
mod remains;
mod search;
mod sharpen;
pub mod starts;
mod witness;
mod zone;

use std::sync::{Mutex, OnceLock};

use crate::expr::graph::{Graph, NodeId};
use crate::expr::tape::Tape;
use crate::model::TimeKind;
use crate::num::interval::Interval;
use faces::{Face, Faces};
use newton::Region;
use remains::Remains;
use search::{Limits, Search};

pub use choose::all;
pub use remains::{Probably, Unresolved};

/// Whether the rates have a derivative at an equilibrium.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Derivative {
    /// They have.
    Exists,
    /// Two branches of min, max or abs meet there: one-sided derivatives only.
    Kink,
    /// The rates are not differentiable, or not defined, there: 0/0, ln 0, √0.
    Missing,
}

/// One equilibrium.
#[derive(Clone, Debug, PartialEq)]
pub struct Equilibrium {
    /// Abundances, as good as f64 gives them, in the species' units; exactly 0 for those absent.
    pub state: Vec<f64>,
    /// Holds the equilibrium; a point 0 for those absent.
    pub enclosure: Vec<Interval>,
    /// Whether it is proved that exactly one equilibrium is in the enclosure.
    pub proven: bool,
    /// Whether the rates have a derivative there.
    pub derivative: Derivative,
}

impl Equilibrium {
    /// Whether a species is there at all.
    pub fn has(&self, species: usize) -> bool {
        self.enclosure[species] != Interval::ZERO
    }

    /// Bound of the error of each abundance, relative (absolute for a state of 0).
    pub fn radius(&self) -> Vec<f64> {
        let radius = |(side, &x): (&Interval, &f64)| {
            let off = (*side - Interval::point(x)).mag();
            if x == 0.0 { off } else { (Interval::point(off).div(Interval::point(x.abs()), &mut true)).hi() }
        };
        self.enclosure.iter().zip(&self.state).map(radius).collect()
    }
}

/// Does several jobs, perhaps at once.
pub trait Workers: Sync {
    /// How many jobs may run at once.
    fn count(&self) -> usize;

    /// Runs job 0, 1, … up to `jobs`, each once, and returns when all are done.
    fn run(&self, jobs: usize, job: &(dyn Fn(usize) + Sync));
}

/// One job after another.
pub struct OneByOne;

impl Workers for OneByOne {
    fn count(&self) -> usize {
        1
    }

    fn run(&self, jobs: usize, job: &(dyn Fn(usize) + Sync)) {
        (0..jobs).for_each(job);
    }
}

/// How much work a search may take, and who does it.
pub struct Budget<'b> {
    /// Boxes on each face.
    pub boxes: usize,
    /// Asked often; the search ends soon after it says so.
    pub stop: &'b (dyn Fn() -> bool + Sync),
    /// Who searches the faces.
    pub workers: &'b dyn Workers,
    /// Told of work as it is done, by any of the workers.
    pub observer: Option<&'b (dyn Fn(Progress) + Sync)>,
}

/// Work done since the last time that the observer was told.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Progress {
    /// Faces finished.
    pub faces: usize,
    /// Boxes looked at.
    pub boxes: usize,
    /// How much of all faces is done, in parts of [`Progress::WHOLE`]: nobody knows how many faces there are before all were
    /// walked to, but a face counts for half of what its choices leave at each species that is there or not. 0 where that is
    /// not known either.
    pub share: u64,
}

impl Progress {
    /// The share of all faces.
    pub const WHOLE: u64 = 1 << 32;

    /// The share in hundredths, rounded downwards.
    pub fn hundredths(&self) -> u64 {
        100 * self.share.min(Self::WHOLE) / Self::WHOLE
    }
}

impl Budget<'_> {
    fn tell(&self, work: Progress) {
        if let Some(observer) = self.observer {
            observer(work);
        }
    }
}

/// Walks into which the faces are divided, for each worker: faces differ, and a worker that is done takes the next.
const WALKS_A_WORKER: usize = 32;

/// The equations to be solved: rates of change, or for a map what it adds to the state.
pub struct Problem<'p> {
    /// One row a species.
    pub rows: &'p [NodeId],
    /// The value of every parameter.
    pub values: &'p [f64],
    /// The search box: lower and upper side, one pair a species.
    pub sides: &'p [[f64; 2]],
}

/// The rows that are 0 at an equilibrium: rates of change as they are, a map less the state itself.
pub fn balance(graph: &mut Graph, rows: &[NodeId], time: &TimeKind) -> Vec<NodeId> {
    match time {
        TimeKind::Continuous => rows.to_vec(),
        TimeKind::Discrete { .. } => {
            let stays = |(i, &row): (usize, &NodeId)| {
                let x = graph.state(i);
                graph.sub(row, x)
            };
            rows.iter().enumerate().map(stays).collect()
        }
    }
}

/// What is known of the equilibria in the box.
#[derive(Clone, Debug, PartialEq)]
pub struct Equilibria {
    /// By number present, then by species, then by state.
    pub list: Vec<Equilibrium>,
    /// What could not be decided.
    pub unresolved: Vec<Unresolved>,
    /// Whether it is proved that the box holds no others.
    pub complete: bool,
    /// Whether it is proved that there are none with an abundance above the box either.
    pub none_above: bool,
    /// Boxes looked at, on all faces.
    pub boxes: usize,
    /// Faces looked at.
    pub faces: usize,
}

/// A root on a face, in the coordinates of all species.
struct Candidate {
    equilibrium: Equilibrium,
    /// Holds no other root of the face's equations; by species.
    unique: Region,
}

/// Finds every equilibrium in the box.
///
/// # Panics
/// If rows and sides are not as many as the graph has states.
pub fn find(graph: &mut Graph, problem: &Problem<'_>, budget: &Budget<'_>) -> Equilibria {
    let n = graph.states();
    assert!(problem.rows.len() == n && problem.sides.len() == n, "one row and two sides for each of {n} species");
    let reaches_zero = problem.sides.iter().map(|side| side[0] <= 0.0).collect();
    let rows = graph.with_zeros(problem.rows, problem.values);
    let problem = &Problem { rows: &rows, ..*problem };
    let faces = Faces::new(graph, problem.rows, reaches_zero);
    let whole = match budget.workers.count() {
        // Two species have four faces: not worth another thread.
        0 | 1 => Whole::of(faces, graph, problem, budget),
        _ if n <= 2 => Whole::of(faces, graph, problem, budget),
        workers => at_once(&faces.divide(graph, WALKS_A_WORKER * workers, &|| (budget.stop)()), graph, problem, budget),
    };
    whole.finish(budget)
}

/// Walks at once; what they find is put together in the order of the walks. A graph serves one walk at a time and goes
/// on to the next: what earlier walks left in it changes no result.
fn at_once(walks: &[Faces], graph: &Graph, problem: &Problem<'_>, budget: &Budget<'_>) -> Whole {
    let graphs: Mutex<Vec<Graph>> = Mutex::new(Vec::new());
    let found: Vec<OnceLock<Whole>> = walks.iter().map(|_| OnceLock::new()).collect();
    budget.workers.run(walks.len(), &|job| {
        let spare = graphs.lock().ok().and_then(|mut graphs| graphs.pop());
        let mut own = spare.unwrap_or_else(|| graph.clone());
        let whole = Whole::of(walks[job].clone(), &mut own, problem, budget);
        if let Ok(mut graphs) = graphs.lock() {
            graphs.push(own);
        }
        // Each job runs once, so its place is free.
        let _ = found[job].set(whole);
    });
    found.into_iter().filter_map(OnceLock::into_inner).fold(Whole::new(), Whole::and)
}

/// What was found on the faces so far.
struct Whole {
    candidates: Vec<Candidate>,
    unresolved: Vec<Unresolved>,
    boxes: usize,
    faces: usize,
    none_above: bool,
}

impl Whole {
    fn new() -> Self {
        Self { candidates: Vec::new(), unresolved: Vec::new(), boxes: 0, faces: 0, none_above: true }
    }

    /// Everything on the faces of a walk.
    fn of(mut faces: Faces, graph: &mut Graph, problem: &Problem<'_>, budget: &Budget<'_>) -> Self {
        let mut whole = Self::new();
        let mut rates = None;
        let mut stopped = (budget.stop)();
        while !stopped && let Some(face) = faces.next(graph, budget.stop) {
            whole.faces += 1;
            let found = whole.look_at(graph, &face, problem, budget);
            if !found.is_empty() {
                let rates = &*rates.get_or_insert_with(|| Tape::new(graph, problem.rows));
                whole.keep(found, rates, graph, problem, budget.stop);
            }
            budget.tell(Progress { faces: 1, boxes: 0, share: faces.passed() });
            stopped = (budget.stop)();
        }
        // Of those at the end that have no equations.
        budget.tell(Progress { share: faces.passed(), ..Progress::default() });
        if !faces.is_done() {
            // Whatever the walk had still to see may be anywhere in the box.
            let whole_box = problem.sides.iter().map(|side| Interval::new(side[0], side[1])).collect();
            let text = "the budget ended before every face was looked at";
            whole.unresolved.push(Unresolved::new(whole_box, Probably::Budget, text));
        }
        whole
    }

    /// Takes what was found on a face for equilibria, if the rates go to 0 there.
    fn keep(
        &mut self,
        found: Vec<Candidate>,
        rates: &Tape,
        graph: &mut Graph,
        problem: &Problem<'_>,
        stop: &dyn Fn() -> bool,
    ) {
        for candidate in found {
            let enclosure = candidate.equilibrium.enclosure.clone();
            match border::accept(graph, candidate, rates, problem, stop) {
                Some(border::Settled::Root(candidate)) => self.candidates.push(candidate),
                Some(border::Settled::Open(unresolved)) => self.unresolved.push(unresolved),
                None => {
                    let text = "the budget ended before it was known whether the rates have a value here";
                    self.unresolved.push(Unresolved::new(enclosure, Probably::Budget, text));
                }
            }
        }
    }

    fn and(mut self, other: Self) -> Self {
        self.candidates.extend(other.candidates);
        self.unresolved.extend(other.unresolved);
        self.boxes += other.boxes;
        self.faces += other.faces;
        self.none_above &= other.none_above;
        self
    }

    /// The roots on a face that are in the box.
    fn look_at(
        &mut self,
        graph: &mut Graph,
        face: &Face,
        problem: &Problem<'_>,
        budget: &Budget<'_>,
    ) -> Vec<Candidate> {
        let n = graph.states();
        let tape = Tape::over(graph, &face.rows, &face.variables);
        let side = |&i: &usize| Interval::new(problem.sides[i][0], problem.sides[i][1]);
        let region: Region = face.variables.iter().map(side).collect();
        // The search asks once a box.
        let stop = || {
            budget.tell(Progress { boxes: 1, ..Progress::default() });
            (budget.stop)()
        };
        let limits = Limits { boxes: budget.boxes, stop: &stop };
        let found = Search::run(&tape, problem.values, region.clone(), &limits);
        // Where nobody is present there is nothing to search.
        self.boxes += if face.variables.is_empty() { 0 } else { found.boxes };
        self.none_above = self.none_above && above::is_empty(&tape, problem.values, &region);
        let remains = if found.open.is_empty() && found.continuum.is_empty() && found.close.is_empty() {
            Remains::default()
        } else {
            remains::look_again(&tape, problem.values, face, n, &found, budget.stop)
        };
        self.unresolved.extend(remains.unresolved);
        let mut candidates = Vec::new();
        for root in found.roots.iter().chain(&remains.roots) {
            match border::settle(graph, face, root, problem) {
                Some(border::Settled::Root(candidate)) => candidates.push(candidate),
                Some(border::Settled::Open(unresolved)) => self.unresolved.push(unresolved),
                None => {}
            }
        }
        candidates
    }

    fn finish(mut self, budget: &Budget<'_>) -> Equilibria {
        border::merge(&mut self.candidates);
        let unresolved = remains::gathered(self.unresolved, budget.stop);
        let mut list: Vec<Equilibrium> = self.candidates.into_iter().map(|candidate| candidate.equilibrium).collect();
        list.sort_by(order);
        let complete = unresolved.is_empty();
        Equilibria {
            list,
            complete,
            none_above: self.none_above && complete,
            unresolved,
            boxes: self.boxes,
            faces: self.faces,
        }
    }
}

/// By number present, then by who is present in species order, then by state.
fn order(a: &Equilibrium, b: &Equilibrium) -> std::cmp::Ordering {
    let present = |e: &Equilibrium| -> Vec<bool> { (0..e.state.len()).map(|i| e.has(i)).collect() };
    let count = |present: &[bool]| present.iter().filter(|&&p| p).count();
    let (pa, pb) = (present(a), present(b));
    count(&pa).cmp(&count(&pb)).then_with(|| pb.cmp(&pa)).then_with(|| {
        a.state
            .iter()
            .zip(&b.state)
            .map(|(x, y)| x.total_cmp(y))
            .find(|o| o.is_ne())
            .unwrap_or(std::cmp::Ordering::Equal)
    })
}

/// A region of a face among all species.
fn everywhere(region: &[Interval], face: &Face, n: usize) -> Region {
    let mut all = vec![Interval::ZERO; n];
    for (&i, side) in face.variables.iter().zip(region) {
        all[i] = *side;
    }
    all
}
