//! A walk along the curve from a point of it: steps by pseudo-arclength (Keller 1977), and what they come upon.
//!
//! A step is refused where Newton's method does not converge at once, the curve bends too much, or the orientation of the
//! curve (the sign of its bordered determinant; Allgower & Georg 1990, ch. 2) turns over: then it has jumped to another
//! branch, or passed a point where branches cross. At a kink the tangent jumps and the orientation stays, which tells
//! where the curve goes on (as for piecewise linear curves, ibid., ch. 12).

use super::curve::{Corrected, Curve, dot};
use super::locate::crossing;

/// Steps of a walk.
const MOST_STEPS: usize = 1000;
/// Length of the first step: share of each abundance, and of the way.
const FIRST_STEP: f64 = 0.1;
/// Of the longest.
const LONGEST_STEP: f64 = 0.25;
/// A step that would have to be shorter meets something that no step gets over.
const SHORTEST_STEP: f64 = 1e-7;
/// Steps by which a kink is to be got over.
const STRIDES: [f64; 3] = [1e-6, 1e-5, 1e-4];
/// A turn and an abundance that reaches 0 are told apart by steps down to this length.
const APART: f64 = 1e-4;
/// Cosine of the largest angle between the tangents at the ends of a step.
const STRAIGHT: f64 = 0.95;
/// First correction of a step, as a share of its length: wanted, and most.
const OFF: [f64; 2] = [0.05, 0.25];
/// Ratio of corrections that is wanted.
const RATIO: f64 = 0.1;
/// Abundances are scaled by themselves, or by this share of the largest that they had on the way.
const LEAST_SCALE: f64 = 0.02;
/// Below 0 by more than this share of the largest that it was, an abundance is negative.
const NEGATIVE: f64 = 1e-11;
/// A branch that goes further beyond the search box than this many times its upper side is left there.
const FAR: f64 = 10.0;

/// A point of the curve.
#[derive(Clone, Debug)]
pub(super) struct Point {
    /// The coordinates, s last.
    pub(super) at: Vec<f64>,
    /// Unit tangent in scaled coordinates, along the walk.
    tangent: Vec<f64>,
}

/// How a walk ended.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum End {
    /// At one end of the way.
    Side { x: Vec<f64>, s: f64 },
    /// A coordinate reached 0.
    Zero { coordinate: usize, x: Vec<f64>, s: f64 },
    /// The curve goes on far beyond the search box.
    Far,
    /// No step gets over something.
    Stuck { s: f64, why: Obstacle },
    /// Out of steps.
    TooLong { s: f64 },
    /// It was told to stop.
    Stopped,
}

/// Why a step was refused.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Obstacle {
    /// The rates have no value, or Newton's method no success, or the curve bends too much.
    Rough,
    /// Branches cross, or one is hit that is not followed.
    Crossing,
}

/// A walk that has ended.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Course {
    pub(super) end: End,
    /// Where the curve turned back.
    pub(super) turns: Vec<f64>,
    /// Where it was followed over a kink.
    pub(super) kinks: Vec<f64>,
    /// Where it first left the search box, and along which coordinate.
    pub(super) exit: Option<(usize, f64)>,
}

/// Where a walk may go.
pub(super) struct Ground<'g> {
    /// Lower and upper side of the box for each coordinate.
    pub(super) sides: &'g [[f64; 2]],
    pub(super) stop: &'g dyn Fn() -> bool,
}

pub(super) struct Walk<'w, 'f> {
    curve: &'w mut Curve<'f>,
    ground: Ground<'w>,
    /// The largest that each coordinate was.
    peaks: Vec<f64>,
    here: Point,
    orientation: f64,
    step: f64,
    course: Course,
}

/// A step that was taken on trial.
struct Trial {
    point: Point,
    corrected: Corrected,
    orientation: f64,
    has_landed: bool,
}

impl<'w, 'f> Walk<'w, 'f> {
    /// A walk from x at s, at first with s rising or falling; `None` where there is no curve through x.
    pub(super) fn new(curve: &'w mut Curve<'f>, ground: Ground<'w>, x: &[f64], s: f64, rising: bool) -> Option<Self> {
        let floor = |side: &[f64; 2]| if side[1].is_finite() { 1e-3 * side[1].abs() } else { 1.0 };
        let peaks = x.iter().zip(ground.sides);
        let peaks: Vec<f64> = peaks.map(|(&x, side)| if x > 0.0 { x } else { floor(side) }).collect();
        let mut upright = vec![0.0; x.len() + 1];
        upright[x.len()] = if rising { 1.0 } else { -1.0 };
        let mut at = x.to_vec();
        at.push(s);
        let course = Course { end: End::Stopped, turns: Vec::new(), kinks: Vec::new(), exit: None };
        let here = Point { at, tangent: upright.clone() };
        let mut walk = Self { curve, ground, peaks, here, orientation: 0.0, step: FIRST_STEP, course };
        walk.rescale();
        walk.curve.correct(&mut walk.here.at, &upright)?;
        (walk.here.tangent, walk.orientation) = walk.curve.tangent(&walk.here.at, &upright)?;
        Some(walk)
    }

    /// Walks until something ends it.
    pub(super) fn run(mut self) -> Course {
        for _ in 0..MOST_STEPS {
            if (self.ground.stop)() {
                return self.course;
            }
            if let Some(end) = self.go_on() {
                self.course.end = end;
                return self.course;
            }
        }
        self.course.end = End::TooLong { s: self.s() };
        self.course
    }

    fn s(&self) -> f64 {
        self.here.at[self.peaks.len()]
    }

    /// One step, or a shorter one next time.
    fn go_on(&mut self) -> Option<End> {
        let refusal = match self.attempt(self.step) {
            Ok(trial) if trial.orientation == self.orientation => return self.take(trial),
            Ok(_) => Obstacle::Crossing,
            Err(()) => Obstacle::Rough,
        };
        self.step *= 0.4;
        if self.step >= SHORTEST_STEP {
            return None;
        }
        self.stuck(refusal)
    }

    /// The point one step ahead, on the curve again.
    fn attempt(&mut self, step: f64) -> Result<Trial, ()> {
        let m = self.peaks.len();
        let forward = self.here.tangent[m];
        let goal = if forward > 0.0 { 1.0 } else { 0.0 };
        let to_goal = if forward == 0.0 { f64::INFINITY } else { (goal - self.s()) / forward };
        let mut has_landed = to_goal <= step;
        let length = if has_landed { to_goal } else { step };
        let mut at = self.ahead(length, &self.here.tangent);
        let border = if has_landed { self.upright() } else { self.here.tangent.clone() };
        if has_landed {
            at[m] = goal;
        }
        let corrected = self.curve.correct(&mut at, &border).ok_or(())?;
        if !has_landed && !(0.0..=1.0).contains(&at[m]) {
            has_landed = true;
            at[m] = at[m].clamp(0.0, 1.0);
            self.curve.correct(&mut at, &self.upright()).ok_or(())?;
        }
        let (tangent, orientation) = self.curve.tangent(&at, &self.here.tangent).ok_or(())?;
        let is_gentle = corrected.first <= OFF[1] * length.max(SHORTEST_STEP);
        // Where s rises at both ends and is lower all the same, the curve turned twice between.
        let is_even = tangent[m] * forward <= 0.0 || (at[m] - self.s()) * forward >= 0.0;
        if !is_gentle || !is_even || dot(&tangent, &self.here.tangent) < STRAIGHT {
            return Err(());
        }
        Ok(Trial { point: Point { at, tangent }, corrected, orientation, has_landed })
    }

    fn ahead(&self, length: f64, direction: &[f64]) -> Vec<f64> {
        let parts = self.here.at.iter().zip(direction).zip(&self.curve.scale);
        parts.map(|((x, part), scale)| x + length * part * scale).collect()
    }

    fn upright(&self) -> Vec<f64> {
        let mut upright = vec![0.0; self.curve.order()];
        upright[self.peaks.len()] = 1.0;
        upright
    }

    /// Goes to a point that was found, unless something lies before it.
    fn take(&mut self, trial: Trial) -> Option<End> {
        let m = self.peaks.len();
        let next = &trial.point;
        let negative = (0..m).find(|&i| next.at[i] < -NEGATIVE * self.peaks[i]);
        let turns = next.tangent[m] * self.here.tangent[m] < 0.0;
        if negative.is_some() && turns && self.step > APART {
            self.step *= 0.4;
            return None;
        }
        if let Some(coordinate) = negative {
            return Some(self.zero(coordinate, &trial.point.at));
        }
        if turns {
            let turn = self.between(&trial.point.at, &|_, tangent| tangent[m]).map_or(next.at[m], |at| at[m]);
            self.course.turns.push(turn);
        }
        self.note_exit(&trial.point.at);
        let length = self.step;
        self.here = trial.point;
        if trial.has_landed {
            let mut x = self.here.at.clone();
            let s = x.pop().unwrap_or_default();
            return Some(End::Side { x, s });
        }
        if self.is_far() {
            return Some(End::Far);
        }
        self.step = next_length(length, trial.corrected);
        self.rescale();
        None
    }

    fn note_exit(&mut self, at: &[f64]) {
        let is_out = |(&x, side): (&f64, &[f64; 2])| x > side[1] || (side[0] > 0.0 && x < side[0]);
        let s = at[self.peaks.len()];
        if self.course.exit.is_none()
            && let Some(coordinate) = at.iter().zip(self.ground.sides).position(is_out)
        {
            self.course.exit = Some((coordinate, s));
        }
    }

    fn is_far(&self) -> bool {
        self.here.at.iter().zip(self.ground.sides).any(|(&x, side)| x > FAR * side[1])
    }

    /// New scales for where the walk is; the tangent is turned into them.
    fn rescale(&mut self) {
        let m = self.peaks.len();
        for i in 0..m {
            let x = self.here.at[i].abs();
            self.peaks[i] = self.peaks[i].max(x);
            let scale = x.max(LEAST_SCALE * self.peaks[i]);
            self.here.tangent[i] *= self.curve.scale[i] / scale;
            self.curve.scale[i] = scale;
        }
        let length = dot(&self.here.tangent, &self.here.tangent).sqrt();
        self.here.tangent.iter_mut().for_each(|part| *part /= length);
    }

    /// Where a coordinate is 0 between here and the next point.
    fn zero(&mut self, coordinate: usize, next: &[f64]) -> End {
        let point = self.between(next, &|at, _| at[coordinate]);
        let mut x = point.unwrap_or_else(|| straight(&self.here.at, next, coordinate));
        let s = x.pop().unwrap_or_default().clamp(0.0, 1.0);
        x[coordinate] = 0.0;
        End::Zero { coordinate, x, s }
    }

    /// The point between here and the next one where a number that changes sign is 0.
    fn between(&mut self, next: &[f64], number: &dyn Fn(&[f64], &[f64]) -> f64) -> Option<Vec<f64>> {
        let border = self.here.tangent.clone();
        let parts = next.iter().zip(&self.here.at).zip(&self.curve.scale);
        let chord: Vec<f64> = parts.map(|((next, here), scale)| (next - here) / scale).collect();
        let length = dot(&chord, &border);
        let mut found = None;
        let here = self.here.clone();
        let mut at = |step: f64| {
            let mut point: Vec<f64> = here.at.clone();
            let parts = point.iter_mut().zip(&border).zip(&self.curve.scale);
            parts.for_each(|((x, part), scale)| *x += step * part * scale);
            self.curve.correct(&mut point, &border)?;
            let (tangent, _) = self.curve.tangent(&point, &border)?;
            let value = number(&point, &tangent);
            found = Some(point);
            Some(value)
        };
        crossing(&mut at, number(&here.at, &here.tangent), length)?;
        found
    }

    /// What stands in the way of even the shortest step.
    fn stuck(&mut self, why: Obstacle) -> Option<End> {
        let s = self.s();
        match why {
            Obstacle::Crossing => Some(self.beyond_crossing().unwrap_or(End::Stuck { s, why })),
            Obstacle::Rough => match self.over_kink() {
                Some(trial) => {
                    self.course.kinks.push(s);
                    let m = self.peaks.len();
                    if trial.point.tangent[m] * self.here.tangent[m] < 0.0 {
                        self.course.turns.push(s);
                    }
                    self.here = trial.point;
                    self.step = SHORTEST_STEP * 1e3;
                    self.rescale();
                    None
                }
                None => Some(End::Stuck { s, why }),
            },
        }
    }

    /// Where branches cross because a coordinate goes through 0: a population of several stages that is lost.
    fn beyond_crossing(&mut self) -> Option<End> {
        for stride in [1e-5, 1e-4, 1e-3] {
            let Ok(trial) = self.attempt(stride) else { continue };
            let is_lost = |&i: &usize| trial.point.at[i] < 0.0 && self.here.at[i] >= 0.0;
            if let Some(coordinate) = (0..self.peaks.len()).find(is_lost) {
                let mut x = straight(&self.here.at, &trial.point.at, coordinate);
                let s = x.pop().unwrap_or_default().clamp(0.0, 1.0);
                return Some(End::Zero { coordinate, x, s });
            }
        }
        None
    }

    /// A point on the other side of a kink: the direction is that of the rates there.
    fn over_kink(&mut self) -> Option<Trial> {
        for stride in STRIDES {
            let probe = self.ahead(stride, &self.here.tangent);
            let Some((mut direction, orientation)) = self.curve.tangent(&probe, &self.here.tangent) else { continue };
            if orientation != self.orientation {
                for part in &mut direction {
                    *part = -*part;
                }
            }
            let mut at = self.ahead(stride, &direction);
            let Some(corrected) = self.curve.correct(&mut at, &direction) else { continue };
            let Some((tangent, orientation)) = self.curve.tangent(&at, &direction) else { continue };
            let is_inside = (0.0..=1.0).contains(&at[self.peaks.len()]);
            if is_inside && orientation == self.orientation && dot(&tangent, &direction) > STRAIGHT {
                let point = Point { at, tangent };
                return Some(Trial { point, corrected, orientation, has_landed: false });
            }
        }
        None
    }
}

/// The point of a straight line at which a coordinate is 0.
fn straight(from: &[f64], to: &[f64], coordinate: usize) -> Vec<f64> {
    let fall = from[coordinate] - to[coordinate];
    let share = if fall == 0.0 { 0.0 } else { (from[coordinate] / fall).clamp(0.0, 1.0) };
    from.iter().zip(to).map(|(from, to)| from + share * (to - from)).collect()
}

/// Longer where corrections were small, shorter where they were large.
fn next_length(length: f64, corrected: Corrected) -> f64 {
    let off = corrected.first / (OFF[0] * length);
    // A correction grows with the square of the step.
    let strain = off.max(corrected.ratio / RATIO).sqrt();
    (length * (1.0 / strain.max(1e-3)).clamp(0.4, 2.5)).min(LONGEST_STEP)
}

impl Course {
    /// The whole way to this end with nobody moving.
    pub(super) fn straight(s: f64) -> Self {
        let end = End::Side { x: Vec::new(), s };
        Self { end, turns: Vec::new(), kinks: Vec::new(), exit: None }
    }
}
