//! Many paths of a flow or a map at once, only to learn where they go: 64 to a batch, each lane taking the next start
//! when its path is decided.

use crate::expr::tape::lanes::Lanes;
use crate::num::ode::lanes::{Batch, LaneFlow, LaneStepper, WIDTH};
use crate::num::rapid;

use super::basin::Basin;
use super::cycle::Ring;
use super::face::{Coordinate, Face};

/// Relative error of a step: which way a path goes seldom hangs on more.
const STEP: f64 = 1e-5;
/// A first step by so much of the fastest relative rate's time.
const FIRST: f64 = 1e-2;
/// How many steps between two looks whether a path has come to a known cycle.
const LOOK_EVERY: u32 = 4;
/// So close to a cycle, as a share of the way that each coordinate goes on it, squared, a path has come to it.
const ON_CYCLE: f64 = 4e-4;
/// Batches between two questions whether to stop.
const ASK_EVERY: u32 = 64;

/// Where a path was seen to go.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Fate {
    /// Into the region of this equilibrium.
    Equilibrium(usize),
    /// To this one of the known cycles.
    Ring(usize),
    /// This coordinate has reached 0, and the path goes on from this state of all species.
    Emptied(usize, Vec<f64>),
    /// Nowhere yet; it stands at these coordinates.
    Open(Vec<f64>),
}

/// What the paths are compared with.
pub(super) struct Ends<'e> {
    pub(super) basins: &'e [Basin],
    pub(super) rings: &'e [Ring],
    /// Steps, or iterates, of one path.
    pub(super) most: u32,
    pub(super) stop: &'e dyn Fn() -> bool,
}

impl Ends<'_> {
    /// The known cycle of this face that a state is on.
    pub(super) fn ring(&self, face: &Face, y: &[f64], within: f64) -> Option<usize> {
        self.rings.iter().position(|ring| ring.present == face.present && ring.distance(y) <= within)
    }

    fn basin(&self, x: &[f64], z: &mut [f64]) -> Option<Fate> {
        let inside = |basin: &&Basin| basin.value(x, z) <= basin.level();
        self.basins.iter().find(inside).map(|basin| Fate::Equilibrium(basin.equilibrium))
    }
}

/// Who is in which lane, and what has become of each.
struct Flock<'s> {
    starts: &'s [Vec<f64>],
    fates: Vec<Option<Fate>>,
    next: usize,
    lanes: [Option<usize>; WIDTH],
    taken: [u32; WIDTH],
}

impl<'s> Flock<'s> {
    fn new(starts: &'s [Vec<f64>]) -> Self {
        let fates = vec![None; starts.len()];
        Self { starts, fates, next: 0, lanes: [None; WIDTH], taken: [0; WIDTH] }
    }

    /// Notes the fate of the path in a lane, which is then free.
    fn decide(&mut self, lane: usize, fate: Fate) {
        if let Some(path) = self.lanes[lane].take() {
            self.fates[path] = Some(fate);
        }
    }

    /// The next start for a free lane.
    fn refill(&mut self, lane: usize) -> Option<&'s [f64]> {
        if self.lanes[lane].is_some() || self.next == self.starts.len() {
            return None;
        }
        (self.lanes[lane], self.taken[lane]) = (Some(self.next), 0);
        self.next += 1;
        Some(&self.starts[self.next - 1])
    }

    fn is_done(&self) -> bool {
        self.next == self.starts.len() && self.lanes.iter().all(Option::is_none)
    }

    /// One fate a start; those never decided stand where they stood.
    fn finish(self) -> Vec<Fate> {
        self.fates.into_iter().map(|fate| fate.unwrap_or(Fate::Open(Vec::new()))).collect()
    }
}

/// The rates of a face in all lanes.
pub(super) struct LaneField<'f> {
    face: &'f Face,
    lanes: Lanes,
    /// The abundances of the latest evaluation.
    pub(super) x: Vec<Batch>,
}

impl<'f> LaneField<'f> {
    pub(super) fn new(face: &'f Face) -> Self {
        Self { face, lanes: face.tape.lanes_of_points(&face.values), x: vec![[0.0; WIDTH]; face.len()] }
    }

    /// The tape's outputs at the abundances `x`; not a number in lanes in which they are not defined.
    pub(super) fn evaluate(&mut self, out: &mut [Batch]) {
        let inputs: Vec<&[f64]> = self.x.iter().map(|x| &x[..]).collect();
        let mut outputs: Vec<&mut [f64]> = out.iter_mut().map(|out| &mut out[..]).collect();
        if !self.lanes.run(&inputs, &mut outputs) {
            for (lane, _) in self.lanes.defined().iter().enumerate().filter(|(_, defined)| !**defined) {
                for out in &mut outputs {
                    out[lane] = f64::NAN;
                }
            }
        }
    }
}

impl LaneFlow for LaneField<'_> {
    fn rates(&mut self, y: &[Batch], out: &mut [Batch]) {
        for ((x, y), kind) in self.x.iter_mut().zip(y).zip(&self.face.kinds) {
            *x = *y;
            match kind {
                Coordinate::Logarithm => rapid::exp_all(x),
                Coordinate::Plain => x.iter_mut().for_each(|x| *x = x.max(0.0)),
            }
        }
        self.evaluate(out);
    }
}

/// The fates of paths of a flow from these states of all species, on whose face they start.
pub(super) fn flow(face: &Face, starts: &[Vec<f64>], ends: &Ends<'_>) -> Vec<Fate> {
    let n = face.len();
    let mut field = LaneField::new(face);
    let mut stepper = LaneStepper::new(&face.tolerance(STEP));
    let mut flock = Flock::new(starts);
    let first = first_step(face, starts);
    let (mut x, mut y, mut z) = (vec![0.0; n], vec![0.0; n], vec![0.0; n]);
    for batch in 0.. {
        for lane in 0..WIDTH {
            if let Some(start) = flock.refill(lane) {
                stepper.set(lane, &face.coordinates(start), first);
            }
        }
        // Every path has its number of steps, so this ends.
        if flock.is_done() || (batch % ASK_EVERY == 0 && (ends.stop)()) {
            break;
        }
        stepper.step(&mut field);
        for lane in 0..WIDTH {
            if flock.lanes[lane].is_none() {
                continue;
            }
            flock.taken[lane] += 1;
            (0..n).for_each(|i| y[i] = stepper.states()[i][lane]);
            if stepper.kept()[lane] {
                // The last stage of a step that is kept is its end.
                (0..n).for_each(|i| x[i] = field.x[i][lane]);
                if let Some(fate) = ends.basin(&x, &mut z).or_else(|| emptied(face, &stepper, &y, lane)) {
                    flock.decide(lane, fate);
                } else if flock.taken[lane].is_multiple_of(LOOK_EVERY)
                    && let Some(ring) = ends.ring(face, &y, ON_CYCLE)
                {
                    flock.decide(lane, Fate::Ring(ring));
                }
            }
            if stepper.failed()[lane] || flock.taken[lane] >= ends.most {
                flock.decide(lane, Fate::Open(y.clone()));
            }
        }
    }
    flock.finish()
}

/// A coordinate that the step took to 0 and that its equation would take further.
fn emptied(face: &Face, stepper: &LaneStepper, y: &[f64], lane: usize) -> Option<Fate> {
    let through = |&i: &usize| face.kinds[i] == Coordinate::Plain && y[i] <= 0.0 && stepper.rates()[i][lane] < 0.0;
    let i = (0..face.len()).find(through)?;
    let mut state = face.state(y);
    state[face.present[i]] = 0.0;
    Some(Fate::Emptied(i, state))
}

/// A length that the fastest rate at the first start allows.
fn first_step(face: &Face, starts: &[Vec<f64>]) -> f64 {
    let Some(start) = starts.first() else { return FIRST };
    let x: Vec<f64> = face.present.iter().map(|&i| start[i]).collect();
    let mut rates = vec![0.0; face.len()];
    face.field().at(&x, &mut rates);
    let relative = rates.iter().zip(&x).map(|(rate, x)| (rate / x).abs()).filter(|rate| rate.is_finite());
    let fastest = relative.fold(0.0, f64::max);
    if fastest > 0.0 { FIRST / fastest } else { FIRST }
}

/// The fates of orbits of a map from these states of all species.
pub(super) fn map(face: &Face, starts: &[Vec<f64>], ends: &Ends<'_>) -> Vec<Fate> {
    let n = face.len();
    let mut field = LaneField::new(face);
    let mut next = vec![[0.0; WIDTH]; n];
    let mut flock = Flock::new(starts);
    let (mut x, mut z) = (vec![0.0; n], vec![0.0; n]);
    for batch in 0.. {
        for lane in 0..WIDTH {
            if let Some(start) = flock.refill(lane) {
                field.x.iter_mut().zip(face.coordinates(start)).for_each(|(batch, x)| batch[lane] = x);
            }
        }
        // Every orbit has its number of iterates, so this ends.
        if flock.is_done() || (batch % ASK_EVERY == 0 && (ends.stop)()) {
            break;
        }
        field.evaluate(&mut next);
        for lane in 0..WIDTH {
            if flock.lanes[lane].is_none() {
                continue;
            }
            flock.taken[lane] += 1;
            x.iter_mut().zip(&next).for_each(|(x, next)| *x = next[lane]);
            if let Some(fate) = judged(face, ends, &mut x, &mut z, flock.taken[lane]) {
                flock.decide(lane, fate);
            }
            (0..n).for_each(|i| field.x[i][lane] = x[i]);
        }
    }
    flock.finish()
}

/// The fate of an orbit that has come to x, which is left with no negative abundance.
fn judged(face: &Face, ends: &Ends<'_>, x: &mut [f64], z: &mut [f64], taken: u32) -> Option<Fate> {
    if x.iter().any(|x| !x.is_finite()) {
        x.fill(0.0);
        return Some(Fate::Open(Vec::new()));
    }
    let emptied = x.iter().position(|x| *x < 0.0);
    for x in x.iter_mut() {
        *x = x.max(0.0);
    }
    if let Some(i) = emptied {
        return Some(Fate::Emptied(i, face.state(x)));
    }
    if let Some(fate) = ends.basin(x, z) {
        return Some(fate);
    }
    if taken.is_multiple_of(LOOK_EVERY)
        && let Some(ring) = ends.ring(face, x, ON_CYCLE)
    {
        return Some(Fate::Ring(ring));
    }
    (taken >= ends.most).then(|| Fate::Open(x.to_vec()))
}
