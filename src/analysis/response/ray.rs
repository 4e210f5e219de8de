//! A stable state followed along a straight line of controls until it is lost.
//!
//! Steps by pseudo-arclength (Keller 1977) from where the state is sound; the first point that is not, or at which the
//! control has turned, brackets what happened, and the bracket is halved until only few things can have. What it was is then
//! solved for by its defining system. A kink is stepped over if a sound state goes on beyond. Start at [`Ray::follow`].

use super::equations::Equations;
use super::footing::{Footing, Standing};
use super::locate::{Event, Located, Locator, Sign};
use super::watch::{Seen, Watch};
use crate::analysis::passage::dot;

/// Steps of a walk.
const MOST_STEPS: usize = 600;
/// Length of the first step, in scaled coordinates.
const FIRST_STEP: f64 = 0.05;
/// Of the longest.
const LONGEST_STEP: f64 = 0.2;
/// A bracket this short is tried before it is halved further.
const BRACKET: f64 = 4e-3;
/// No step is shorter.
const SHORTEST_STEP: f64 = 1e-9;
/// First correction of a step, as a share of its length: wanted, and most.
const OFF: [f64; 2] = [0.05, 0.25];
/// Tangents of neighbouring points have at least this cosine between them.
const STRAIGHT: f64 = 0.95;
/// Things that happen within this of each other, in scaled t, happen in one place.
const SAME_PLACE: f64 = 1e-8;
/// Strides, in scaled t, that are tried over a kink.
const STRIDES: [f64; 3] = [1e-7, 1e-6, 1e-5];

/// What is followed.
pub(super) struct Ray<'r, 'f> {
    pub(super) equations: &'r mut Equations,
    pub(super) locator: &'r mut Locator,
    pub(super) watch: &'r Watch,
    pub(super) standing: Standing<'f>,
    pub(super) stop: &'r dyn Fn() -> bool,
}

/// How it ended.
#[derive(Clone, Debug)]
pub(super) enum Course {
    /// Sound up to the end of the line.
    Reached,
    /// Lost at t.
    Lost {
        /// How far along the line.
        t: f64,
        /// What it was.
        located: Box<Located>,
        /// Abundances of those who move and every control shortly before, and after.
        around: [Vec<f64>; 2],
    },
    /// It could not be followed beyond t, or what happened there could not be located.
    NotFollowed {
        /// How far along the line.
        t: f64,
    },
}

/// A point of the walk.
#[derive(Clone)]
struct Point {
    spot: Vec<f64>,
    tangent: Vec<f64>,
    seen: Seen,
}

impl Ray<'_, '_> {
    /// Follows the state of those who move from t = 0 to the limit.
    pub(super) fn follow(&mut self, x: &[f64], limit: f64) -> Course {
        let stuck = |t: f64| Course::NotFollowed { t };
        let Some(mut here) = self.first(x) else { return stuck(0.0) };
        let last = x.len();
        let mut step = FIRST_STEP.min(limit.max(0.0));
        let scaled_limit = limit / self.standing.scale[last];
        for _ in 0..MOST_STEPS {
            let t = here.spot[last];
            if t >= limit {
                return Course::Reached;
            }
            if (self.stop)() {
                return stuck(t);
            }
            let to_limit = (scaled_limit - t / self.standing.scale[last]) / here.tangent[last];
            let length = step.min(to_limit.max(SHORTEST_STEP));
            match self.attempt(&here, length, limit) {
                Some((next, first)) if self.is_sound(&here, &next) => {
                    let strain = (first / (OFF[0] * length)).sqrt();
                    step = (length * (1.0 / strain.max(1e-3)).clamp(0.4, 2.0)).min(LONGEST_STEP);
                    here = next;
                }
                Some((next, _)) => {
                    if length <= BRACKET
                        && let Some(course) = self.lost(&here, &next)
                    {
                        return course;
                    }
                    step = 0.35 * length;
                }
                None => step = 0.35 * length,
            }
            if step < SHORTEST_STEP {
                match self.over_kink(&here) {
                    Ok(next) => {
                        here = next;
                        step = BRACKET;
                    }
                    Err(course) => return course,
                }
            }
        }
        stuck(here.spot[last])
    }

    fn first(&mut self, x: &[f64]) -> Option<Point> {
        let mut spot: Vec<f64> = x.iter().copied().chain([0.0]).collect();
        let mut upright = vec![0.0; spot.len()];
        upright[x.len()] = 1.0;
        self.standing.correct_at(&mut spot)?;
        let tangent = self.standing.tangent(&spot, &upright)?;
        let seen = self.watch.at(&self.standing.line.inputs(&spot))?;
        self.watch.is_sound(&spot[..x.len()], &seen).then_some(Point { spot, tangent, seen })
    }

    /// The point a step ahead, and the size of the first correction; at the limit of t exactly where it lies beyond.
    fn attempt(&mut self, here: &Point, length: f64, limit: f64) -> Option<(Point, f64)> {
        let last = here.spot.len() - 1;
        let mut spot = self.ahead(here, length);
        let mut corrected = self.standing.correct_across(&mut spot, &here.tangent)?;
        if spot[last] > limit {
            spot = self.ahead(here, length);
            spot[last] = limit;
            corrected = self.standing.correct_at(&mut spot)?;
        }
        let tangent = self.standing.tangent(&spot, &here.tangent)?;
        let is_gentle = corrected.first <= OFF[1] * length.max(10.0 * SHORTEST_STEP);
        if !is_gentle || dot(&tangent, &here.tangent) < STRAIGHT {
            return None;
        }
        let seen = self.watch.at(&self.standing.line.inputs(&spot))?;
        Some((Point { spot, tangent, seen }, corrected.first))
    }

    fn ahead(&self, here: &Point, length: f64) -> Vec<f64> {
        let parts = here.spot.iter().zip(&here.tangent).zip(&self.standing.scale);
        parts.map(|((x, part), scale)| x + length * part * scale).collect()
    }

    fn has_turned(here: &Point, next: &Point) -> bool {
        let last = here.spot.len() - 1;
        next.tangent[last] <= 0.0 || next.spot[last] <= here.spot[last]
    }

    fn is_sound(&self, here: &Point, next: &Point) -> bool {
        !Self::has_turned(here, next) && self.watch.is_sound(&next.spot[..next.spot.len() - 1], &next.seen)
    }

    /// What happened first between a point that is sound and one that is not; `None` where that is not clear yet.
    fn lost(&mut self, here: &Point, next: &Point) -> Option<Course> {
        let x = &next.spot[..next.spot.len() - 1];
        let signs = self.watch.signs(&self.standing.footing.face, x, &next.seen, Self::has_turned(here, next));
        // At a kink eigenvalues may jump over the border, where no other system has a root. Which of them it was shows
        // only where the bracket is too short for two things to happen.
        let kinks = self.watch.kinks_between(&here.seen, &next.seen);
        if kinks.is_empty() {
            return self.first_of(signs, here, next);
        }
        let chord = self.standing.chord(&here.spot, &next.spot);
        if dot(&chord, &chord).sqrt() > 1e2 * SHORTEST_STEP { None } else { self.first_of(kinks, here, next) }
    }

    /// What happened first; of things that happen in one place, what stands first in the list.
    fn first_of(&mut self, signs: Vec<Sign>, here: &Point, next: &Point) -> Option<Course> {
        let found: Vec<(f64, Located)> = signs.into_iter().filter_map(|sign| self.located(sign, here, next)).collect();
        let least = found.iter().fold(f64::INFINITY, |least, (t, _)| least.min(*t));
        let room = SAME_PLACE * self.standing.scale[here.spot.len() - 1];
        let (t, located) = found.into_iter().find(|(t, _)| *t <= least + room)?;
        let around = [here, next].map(|point| self.standing.line.inputs(&point.spot));
        Some(Course::Lost { t, located: Box::new(located), around })
    }

    fn located(&mut self, sign: Sign, here: &Point, next: &Point) -> Option<(f64, Located)> {
        let line = &self.standing.line;
        let (before, after) = (line.inputs(&here.spot), line.inputs(&next.spot));
        let event = Event { face: &self.standing.footing.face, sign, before: &before, after: &after };
        let located = self.locator.locate(self.equations, &event)?;
        let t = self.along(&located);
        t.is_finite().then_some((t, located))
    }

    /// How far along the line the controls of a root are.
    fn along(&self, located: &Located) -> f64 {
        let line = &self.standing.line;
        let controls = &located.point[located.point.len() - line.direction.len()..];
        // Of all that move, the one that does so most in its own digits tells best.
        let share = |j: &usize| (line.direction[*j] / line.base[*j].abs().max(line.direction[*j].abs())).abs();
        let moving = (0..controls.len()).filter(|&j| line.direction[j] != 0.0);
        let best = moving.max_by(|i, j| share(i).total_cmp(&share(j)));
        best.map_or(f64::NAN, |best| (controls[best] - line.base[best]) / line.direction[best])
    }

    /// Beyond something that no step gets over: a sound state close by with t a little larger, or what the kink did.
    fn over_kink(&mut self, here: &Point) -> Result<Point, Course> {
        let last = here.spot.len() - 1;
        let stuck = Course::NotFollowed { t: here.spot[last] };
        for stride in STRIDES {
            let mut spot = here.spot.clone();
            spot[last] += stride * self.standing.scale[last];
            let Some(corrected) = self.standing.correct_at(&mut spot) else { continue };
            let Some(tangent) = self.standing.tangent(&spot, &upright(last)) else { continue };
            let Some(seen) = self.watch.at(&self.standing.line.inputs(&spot)) else { continue };
            let next = Point { spot, tangent, seen };
            if corrected.first > 1e3 * stride || next.tangent[last] <= 0.0 {
                continue;
            }
            if self.watch.is_sound(&next.spot[..last], &next.seen) {
                return Ok(next);
            }
            return Err(self.lost_at_kink(here, &next).unwrap_or(stuck));
        }
        // No state goes on: two were born, or meet, at the kink.
        let mut spot = self.ahead(here, 1e2 * SHORTEST_STEP);
        for _ in 0..12 {
            if let Some(seen) = self.watch.at(&self.standing.line.inputs(&spot)) {
                let next = Point { spot: spot.clone(), tangent: here.tangent.clone(), seen };
                if let Some(course) = self.lost_at_kink(here, &next) {
                    return Err(course);
                }
            }
            let parts = spot.iter_mut().zip(&here.spot);
            parts.for_each(|(x, from)| *x = from + 3.0 * (*x - from));
        }
        Err(stuck)
    }

    fn lost_at_kink(&mut self, here: &Point, next: &Point) -> Option<Course> {
        let kinks = self.watch.kinks_between(&here.seen, &next.seen);
        self.first_of(kinks, here, next)
    }
}

fn upright(last: usize) -> Vec<f64> {
    let mut upright = vec![0.0; last + 1];
    upright[last] = 1.0;
    upright
}

/// Units of abundance for a state that is followed: its own, or a small share of the box where it begins at nothing.
pub(super) fn scales(footing: &Footing, x: &[f64], sides: &[[f64; 2]]) -> Vec<f64> {
    let scale = |(&i, &x): (&usize, &f64)| {
        let floor = if sides[i][1].is_finite() { 1e-3 * sides[i][1].abs() } else { 1.0 };
        if x > 0.0 { x } else { floor.max(f64::MIN_POSITIVE) }
    };
    footing.face.moving.iter().zip(x).map(scale).chain([1.0]).collect()
}
