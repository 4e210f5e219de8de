//! A walk along one smooth piece of a branch: steps by pseudo-arclength (Keller 1977), and what happens on the way.
//!
//! A step is refused where Newton's method does not converge at once, the curve bends too much or turns twice unseen, or
//! the orientation of the curve (the sign of its bordered determinant; Allgower & Georg 1990, ch. 2) turns over: only where
//! that stays so down to the shortest steps do branches cross. Steps are short enough for a plot. What changed its sign on
//! a step is located between its ends (`inspect`).

mod inspect;

use super::curve::{Curve, Sample, dot};
use super::events::Change;
use inspect::{DEEPEST, TIGHT};
use nalgebra::Complex;

/// A step that ends on a threshold is shortened to this share, so often on one walk at most.
const EVADED: f64 = 0.83;
const EVASIONS: usize = 20;
/// Steps of a walk.
const MOST_STEPS: usize = 6000;
/// Length of the first step: share of each abundance, and of the range.
const FIRST_STEP: f64 = 0.01;
/// Of the longest.
const LONGEST_STEP: f64 = 0.2;
/// Share of the range, and of the largest abundance so far, that no step exceeds: what a plot can show.
const SHOWN: [f64; 2] = [0.009, 0.03];
/// The same for communities of more than [`LARGE`] who move, of which one point takes long.
const SHOWN_LARGE: [f64; 2] = [0.03, 0.1];
/// In these only thresholds of stable states are looked for.
pub(super) const LARGE: usize = 8;
/// A step that would have to be shorter meets something that no step gets over.
const SHORTEST_STEP: f64 = 1e-7;
/// At steps shorter than this branches that seem to cross do.
const CROSSES: f64 = 1e-6;
/// Cosine of the largest angle between the tangents at the ends of a step.
const STRAIGHT: f64 = 0.96;
/// First correction of a step, as a share of its length: wanted, and most.
const OFF: [f64; 2] = [0.03, 0.2];
/// Abundances are scaled by themselves, or by this share of the largest that they had on the way.
const LEAST_SCALE: f64 = 0.05;
/// A branch is left where an abundance is this share of the largest so far below 0, or this many times the box's side above.
const BELOW: f64 = 1.0;
const ABOVE: f64 = 2.0;
/// The same share for such communities: beyond, each branch meets others that nobody can have.
const BELOW_LARGE: f64 = 0.02;

/// A point of a walk.
#[derive(Clone, Debug)]
pub(super) struct Node {
    pub(super) sample: Sample,
    pub(super) event: Option<Event>,
}

/// Something that happens at a point.
#[derive(Clone, Debug)]
pub(super) struct Event {
    pub(super) changes: Vec<Change>,
    /// All eigenvalues there, the leading one first; empty where there are none.
    pub(super) eigenvalues: Vec<Complex<f64>>,
    /// How far off it may be, in the control's unit.
    pub(super) error: f64,
    /// Points close by on either side.
    pub(super) bracket: [Vec<f64>; 2],
}

/// How a walk ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum End {
    Range,
    Closed,
    Undefined,
    Far,
    Lost,
    Stopped,
    /// On a kink; the last point lies on it.
    Kink(usize),
}

/// Where a walk may go.
#[derive(Clone, Copy)]
pub(super) struct Ground<'g> {
    /// Lower and upper side of the box for each coordinate but the control.
    pub(super) sides: &'g [[f64; 2]],
    pub(super) range: [f64; 2],
    pub(super) stop: &'g dyn Fn() -> bool,
}

/// Why a step was refused.
enum Refusal {
    Rough,
    Crossing,
}

pub(super) struct Walk<'w, 'p> {
    curve: &'w mut Curve<'p>,
    ground: Ground<'w>,
    /// The largest that each abundance was.
    peaks: Vec<f64>,
    /// Unit tangent where the walk is, in scaled coordinates.
    border: Vec<f64>,
    here: Sample,
    next: Sample,
    step: f64,
    nodes: Vec<Node>,
    /// Where the walk of the whole branch began, if it may come back there.
    home: Option<Sample>,
    travelled: f64,
    /// Steps that were shortened in order not to end on a threshold.
    evasions: usize,
}

impl<'w, 'p> Walk<'w, 'p> {
    /// A walk from a described point, in its direction; `home` is where the branch began.
    pub(super) fn new(curve: &'w mut Curve<'p>, ground: Ground<'w>, start: Sample, home: Option<Sample>) -> Self {
        let floor = |side: &[f64; 2]| if side[1].is_finite() { 1e-3 * side[1].abs() } else { 1.0 };
        let peaks = start.at.iter().zip(ground.sides).map(|(x, side)| x.abs().max(floor(side))).collect();
        let n = curve.order();
        let mut walk = Self {
            curve,
            ground,
            peaks,
            border: vec![0.0; n],
            here: start,
            next: Sample::default(),
            step: FIRST_STEP,
            nodes: Vec::new(),
            home,
            travelled: 0.0,
            evasions: 0,
        };
        walk.rescale();
        walk
    }

    /// Walks until something ends it; the points after the first.
    pub(super) fn run(mut self) -> (Vec<Node>, End) {
        let end = self.go();
        (self.nodes, end)
    }

    fn go(&mut self) -> End {
        for _ in 0..MOST_STEPS {
            if (self.ground.stop)() {
                return End::Stopped;
            }
            let tried = self.step;
            let end = match self.attempt(tried) {
                Ok(false) if self.lands_on_the_border() => {
                    self.evasions += 1;
                    self.step = EVADED * tried.min(self.most_shown());
                    None
                }
                Ok(has_landed) => self.take(has_landed),
                Err(Refusal::Crossing) if tried <= CROSSES => self.take(false),
                Err(_) => {
                    self.step = 0.4 * tried.min(self.most_shown());
                    (self.step < SHORTEST_STEP).then(|| self.why_stuck())
                }
            };
            if let Some(end) = end {
                return end;
            }
        }
        End::Lost
    }

    /// Whether a step ends where eigenvalues are neither here nor there, though they were clear before: what happens there
    /// is seen from points on either side. Where they stay so there is nothing to evade.
    fn lands_on_the_border(&self) -> bool {
        let [here, next] = [&self.here, &self.next].map(|sample| sample.typed.unstable);
        here.is_some() && next.is_none() && self.evasions < EVASIONS
    }

    fn m(&self) -> usize {
        self.peaks.len()
    }

    /// The point one step ahead, on the curve again; whether it lies at an end of the range.
    fn attempt(&mut self, step: f64) -> Result<bool, Refusal> {
        let m = self.m();
        let forward = self.border[m];
        let goal = self.ground.range[usize::from(forward > 0.0)];
        let to_goal =
            if forward == 0.0 { f64::INFINITY } else { (goal - self.here.at[m]) / (forward * self.curve.scale[m]) };
        let length = step.min(self.most_shown());
        let mut has_landed = to_goal <= length;
        let length = if has_landed { to_goal.max(0.0) } else { length };
        let mut next = std::mem::take(&mut self.next);
        next.at.clear();
        next.at
            .extend(self.here.at.iter().zip(&self.border).zip(&self.curve.scale).map(|((x, t), s)| x + length * t * s));
        if has_landed {
            next.at[m] = goal;
        }
        let mut found =
            if has_landed { self.upright(&mut next.at) } else { self.curve.correct(&mut next.at, &self.border) };
        let [from, to] = self.ground.range;
        if !has_landed && found.is_some() && !(from..=to).contains(&next.at[m]) {
            has_landed = true;
            next.at[m] = next.at[m].clamp(from, to);
            found = self.upright(&mut next.at);
        }
        let Some(mut corrected) = found else {
            self.next = next;
            return Err(Refusal::Rough);
        };
        self.curve.describe(&mut next, corrected.orientation);
        let mut cosine = self.cosine(&next);
        if has_landed && cosine < 0.0 {
            // Upright points to larger values of the control, whichever way the walk goes.
            next.direction.iter_mut().for_each(|part| *part = -*part);
            next.orientation = -next.orientation;
            corrected.orientation = next.orientation;
            cosine = -cosine;
        }
        let is_gentle = corrected.first <= OFF[1] * length.max(SHORTEST_STEP);
        let is_straight = cosine >= STRAIGHT && self.is_even(&next);
        let keeps = corrected.orientation == self.here.orientation;
        self.next = next;
        if !is_gentle || !is_straight {
            return Err(Refusal::Rough);
        }
        if !keeps {
            return Err(Refusal::Crossing);
        }
        self.step = next_length(length, corrected.first);
        Ok(has_landed)
    }

    fn upright(&mut self, at: &mut [f64]) -> Option<super::curve::Corrected> {
        let mut upright = vec![0.0; at.len()];
        upright[at.len() - 1] = 1.0;
        self.curve.correct(at, &upright)
    }

    /// The longest step that a plot shows as a smooth line.
    fn most_shown(&self) -> f64 {
        let m = self.m();
        let shown = if m > LARGE { SHOWN_LARGE } else { SHOWN };
        let along = |i: usize| shown[1] * self.peaks[i] / (self.border[i].abs() * self.curve.scale[i]).max(1e-300);
        (0..m).map(along).fold(shown[0] / self.border[m].abs().max(1e-300), f64::min).min(LONGEST_STEP)
    }

    fn cosine(&self, next: &Sample) -> f64 {
        let parts = || next.direction.iter().zip(&self.curve.scale).map(|(part, scale)| part / scale);
        let length = parts().map(|part| part * part).sum::<f64>().sqrt();
        parts().zip(&self.border).map(|(a, b)| a * b).sum::<f64>() / length
    }

    /// Whether every coordinate runs between the two points as the slopes at its ends say: a cubic through both that goes
    /// back on its way means that it turned twice, unseen.
    fn is_even(&self, next: &Sample) -> bool {
        let length = distance(&self.here.at, &next.at, &self.curve.scale);
        let unit = |sample: &Sample| {
            1.0 / sample.direction.iter().zip(&self.curve.scale).map(|(d, s)| (d / s) * (d / s)).sum::<f64>().sqrt()
        };
        let (first, second) = (unit(&self.here) * length, unit(next) * length);
        let turned = |i: usize| {
            let (a, b, rise) =
                (self.here.direction[i] * first, next.direction[i] * second, next.at[i] - self.here.at[i]);
            // With slopes a, b of one sign the cubic's least slope is below 0 where 3 rise < a + b − √(a b).
            a * b > 0.0 && {
                let sign = a.signum();
                3.0 * rise * sign < (a + b) * sign - (a * b).sqrt()
            }
        };
        length < 10.0 * TIGHT || !turned(self.m())
    }

    /// Goes to the point that was found, with all that lies before it.
    fn take(&mut self, has_landed: bool) -> Option<End> {
        let next = std::mem::take(&mut self.next);
        let here = self.here.clone();
        if next.orientation != here.orientation {
            // Beyond a crossing corrections are long again only some way off.
            self.step = FIRST_STEP * 0.1;
        }
        if self.is_over_a_kink(&next) {
            return self.stop_at_kink(&here, &next);
        }
        if self.comes_home(&here, &next) {
            return Some(End::Closed);
        }
        self.inspect(&here, &next, DEEPEST);
        self.travelled += distance(&here.at, &next.at, &self.curve.scale);
        self.nodes.push(Node { sample: next.clone(), event: None });
        self.here = next;
        if has_landed {
            return Some(End::Range);
        }
        if self.is_far() {
            return Some(End::Far);
        }
        self.rescale();
        None
    }

    fn is_far(&self) -> bool {
        let below = if self.m() > LARGE { BELOW_LARGE } else { BELOW };
        let parts = self.here.at.iter().zip(self.ground.sides).zip(&self.peaks);
        parts.into_iter().any(|((&x, side), &peak)| {
            let reach = (side[1] - side[0]).abs();
            x < (-below * peak).max(-0.1 * reach).min(-1e-3 * reach) || x > side[1] + (ABOVE - 1.0) * reach
        })
    }

    /// New scales for where the walk is, and the tangent in them.
    fn rescale(&mut self) {
        let m = self.m();
        for i in 0..m {
            let x = self.here.at[i].abs();
            self.peaks[i] = self.peaks[i].max(x);
            self.curve.scale[i] = x.max(LEAST_SCALE * self.peaks[i]);
        }
        for i in 0..=m {
            self.border[i] = self.here.direction[i] / self.curve.scale[i];
        }
        let length = dot(&self.border, &self.border).sqrt();
        self.border.iter_mut().for_each(|part| *part /= length);
    }

    fn why_stuck(&mut self) -> End {
        let ahead: Vec<f64> =
            self.here.at.iter().zip(&self.border).zip(&self.curve.scale).map(|((x, t), s)| x + 1e-6 * t * s).collect();
        if self.curve.evaluate(&ahead) { End::Lost } else { End::Undefined }
    }

    /// Whether the branch comes back to where it began between two points.
    fn comes_home(&mut self, here: &Sample, next: &Sample) -> bool {
        let Some(home) = &self.home else { return false };
        let scale = &self.curve.scale;
        let chord: Vec<f64> = next.at.iter().zip(&here.at).zip(scale).map(|((b, a), s)| (b - a) / s).collect();
        let to_home: Vec<f64> = home.at.iter().zip(&here.at).zip(scale).map(|((h, a), s)| (h - a) / s).collect();
        let (length, along) = (dot(&chord, &chord), dot(&chord, &to_home));
        let same_way: f64 =
            home.direction.iter().zip(&next.direction).zip(scale).map(|((a, b), s)| a * b / s / s).sum();
        let off = (dot(&to_home, &to_home) - along * along / length).max(0.0).sqrt();
        let is_near = along > 0.0 && along <= length && same_way > 0.0 && off < 0.3 * length.sqrt();
        // On the way back a branch that all but touches itself is told apart by going to the very point.
        let far_enough = self.travelled > 3.0 * length.sqrt();
        let home = home.at.clone();
        is_near && far_enough && {
            let point = self.between(here, next, along / length);
            point.is_some_and(|point| distance(&point.at, &home, &self.curve.scale) < 1e-5)
        }
    }
}

/// Distance in scaled coordinates.
pub(super) fn distance(a: &[f64], b: &[f64], scale: &[f64]) -> f64 {
    a.iter().zip(b).zip(scale).map(|((a, b), s)| ((a - b) / s) * ((a - b) / s)).sum::<f64>().sqrt()
}

/// Longer where corrections were small, shorter where they were large: a correction grows with the square of the step.
fn next_length(length: f64, first: f64) -> f64 {
    let strain = (first / (OFF[0] * length.max(SHORTEST_STEP))).sqrt();
    (length * (1.0 / strain.max(1e-3)).clamp(0.4, 2.5)).min(LONGEST_STEP)
}
