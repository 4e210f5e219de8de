//! The largest that ‖exp(At)‖₂ gets at any t ≥ 0, and ‖Aᵏ‖₂ at any k: the global maximum, however many humps there are.
//!
//! [`flow_peak`] and [`map_peak`] are the ways in. The search ends where nothing higher can follow, because norms are
//! submultiplicative: once ‖exp(AT)‖ < 1 all that comes after T stays below the maximum before it. What is not settled
//! within the bounds on the work is `None`.

mod sharpen;

use super::dense::{frobenius, identity, norm_one, product};
use super::eigen::{self, largest_singular};
use super::exponential::{Flow, doubled, later, with_identity};

/// The largest value, and the first time found at which it is taken.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Peak {
    /// At least 1; within [`RELATIVE`] of the maximum.
    pub factor: f64,
    /// When; 0 where nothing grows beyond rounding.
    pub time: f64,
}

/// How near to the maximum the search comes; no unit.
pub const RELATIVE: f64 = 1e-10;

/// From the shortest time looked at to the longest: a factor of 2^90 spans all rates that f64 keeps apart in one matrix.
const MOST_DOUBLINGS: usize = 90;

/// Halvings of the shortest time: a parabola at its top is within [`RELATIVE`] after about 17.
const MOST_HALVINGS: i32 = 45;

/// Matrices looked at for order 1 or 2; fewer for larger ones, so that none takes more than a fraction of a second.
const MOST_MATRICES: usize = 20_000;

/// A norm below this is below 1 whatever rounding did to it.
const DECAYED: f64 = 1.0 - 1e-12;

/// No growth at all.
const NONE: Peak = Peak { factor: 1.0, time: 0.0 };

/// max over t ≥ 0 of ‖exp(At)‖₂ for a matrix of order `n`, row by row, all of whose eigenvalues have negative real parts.
///
/// Between a and b = a + w the norm is at most max(‖F(a)‖, ‖F(b)‖) + w²/8 ‖A²F(a)‖ P(w), F(t) = exp(At), by the error of
/// linear interpolation, where P(w) bounds ‖F‖ on [0, w]; and at most ‖F(a)‖ P(w). Where units of abundance lie far apart
/// P is large at once, and a bound of A²F in balanced coordinates is better. Intervals are halved until that is
/// no more than [`RELATIVE`] above the largest value found; the times 0 < w ≤ h are done before those from h to 2h, so that
/// P is known. (Quantity: Neubert & Caswell 1997.) `None` where an entry is not finite, nothing decays within the bounds on
/// the work, they do not suffice, or `stop` says so.
///
/// # Panics
/// If there are not n² entries.
pub fn flow_peak(entries: &[f64], n: usize, stop: &dyn Fn() -> bool) -> Option<Peak> {
    let flow = Flow::new(entries, n)?;
    let growth = eigen::largest_symmetric(entries, n).ok()?;
    if growth <= 0.0 {
        return Some(NONE);
    }
    let mut search = Search::new(&flow, entries, growth)?;
    search.run(stop)?;
    let peak = search.refined();
    Some(if peak.factor <= 1.0 + RELATIVE { NONE } else { peak })
}

/// max over k ≥ 0 of ‖Aᵏ‖₂ for a matrix of order `n`, row by row, all of whose eigenvalues have modulus below 1; the time
/// is k.
///
/// Every k is looked at until the norm is below 1. `None` as for [`flow_peak`].
///
/// # Panics
/// If there are not n² entries.
pub fn map_peak(entries: &[f64], n: usize, stop: &dyn Fn() -> bool) -> Option<Peak> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    let mut power = entries.to_vec();
    let mut peak = NONE;
    if norm(entries, n)? <= 1.0 {
        return Some(NONE);
    }
    for k in 1..=5 * most_matrices(n) {
        let size = norm(&power, n)?;
        if size > peak.factor * (1.0 + RELATIVE) {
            peak = Peak { factor: size, time: k as f64 };
        }
        if size < DECAYED || n == 0 {
            return Some(peak);
        }
        if k % 64 == 0 && stop() {
            return None;
        }
        power = product(&power, entries, n);
    }
    None
}

fn most_matrices(n: usize) -> usize {
    (4 * MOST_MATRICES / (n * n).max(4)).max(250)
}

/// ‖F‖₂; `None` where it is not finite.
fn norm(f: &[f64], n: usize) -> Option<f64> {
    let size = match *f {
        [a] => a.abs(),
        // Half the sum of two moduli: of the parts of the map z ↦ p z + q z̄ of the plane.
        [a, b, c, d] => f64::midpoint((a + d).hypot(c - b), (a - d).hypot(b + c)),
        _ => largest_singular(f, n).ok()?,
    };
    size.is_finite().then_some(size)
}

/// As an exponent of two; there are fewer than [`MOST_DOUBLINGS`].
fn level_of(k: usize) -> i32 {
    i32::try_from(k).unwrap_or(i32::MAX)
}

/// exp(Ât) at one time.
#[derive(Clone, Debug)]
struct Moment {
    time: f64,
    matrix: Vec<f64>,
    /// ‖exp(At)‖₂.
    size: f64,
}

/// From `start` for the time step of that level, to where the norm is `end`.
struct Stretch {
    start: Moment,
    end: f64,
    level: i32,
}

struct Search<'f> {
    flow: &'f Flow,
    entries: &'f [f64],
    /// Â².
    square: Vec<f64>,
    /// Rate of the fastest growth at once: ‖F(t)‖ ≤ exp(growth t).
    growth: f64,
    /// ‖Â‖₁.
    rate: f64,
    /// The shortest time looked at by doubling.
    first: f64,
    /// exp(Â w) − I for w = first 2^k.
    doublings: Vec<Vec<f64>>,
    /// The same for w = first 2^−(k + 1).
    halvings: Vec<Vec<f64>>,
    /// Bound of ‖F‖ on [0, first 2^k], as far as is known.
    bounds: Vec<f64>,
    best: Moment,
    /// A time from which on nothing is as large as what was before.
    settled: f64,
    matrices: usize,
}

impl<'f> Search<'f> {
    /// Doubles the time until the norm is below 1; `None` where it never is.
    fn new(flow: &'f Flow, entries: &'f [f64], growth: f64) -> Option<Self> {
        let n = flow.order;
        let first = flow.short();
        let mut best = Moment { time: 0.0, matrix: identity(n), size: 1.0 };
        let mut doublings = vec![flow.beyond_identity(first)];
        for k in 0..MOST_DOUBLINGS {
            let matrix = with_identity(&doublings[k], n);
            let size = norm(&flow.unscaled(&matrix), n)?;
            let time = first * (k as f64).exp2();
            if size > best.size {
                best = Moment { time, matrix, size };
            }
            if size < DECAYED {
                let square = product(&flow.balanced, &flow.balanced, n);
                let (halvings, bounds) = (Vec::new(), Vec::new());
                let settled = time;
                let matrices = k;
                return Some(Self {
                    flow,
                    entries,
                    square,
                    growth,
                    rate: norm_one(&flow.balanced, n),
                    first,
                    doublings,
                    halvings,
                    bounds,
                    best,
                    settled,
                    matrices,
                });
            }
            doublings.push(doubled(&doublings[k], n));
        }
        None
    }

    /// Looks at [0, first], then at each doubling of the time.
    fn run(&mut self, stop: &dyn Fn() -> bool) -> Option<()> {
        let n = self.flow.order;
        let mut start = self.origin();
        for k in 0..self.doublings.len() {
            let matrix = with_identity(&self.doublings[k], n);
            let end = Moment { time: self.width(level_of(k)), size: self.size(&matrix)?, matrix };
            let level = (level_of(k) - 1).max(0);
            let bound = self.shell(Stretch { start, end: end.size, level }, stop)?;
            let before = self.bounds.last().copied().unwrap_or(1.0);
            self.bounds.push(bound.max(before));
            if end.time >= self.settled {
                break;
            }
            start = end;
        }
        Some(())
    }

    /// Halves a stretch until its parts cannot hold more than the best; a bound of the norm on it.
    fn shell(&mut self, whole: Stretch, stop: &dyn Fn() -> bool) -> Option<f64> {
        let mut bound = whole.start.size.max(whole.end);
        let mut stack = vec![whole];
        while let Some(stretch) = stack.pop() {
            if stretch.start.time >= self.settled {
                continue;
            }
            let above = self.above(&stretch);
            let ends = stretch.start.size.max(stretch.end);
            // The second condition keeps the bounds useful to the stretches that rest on them.
            let is_done = above <= self.best.size * (1.0 + RELATIVE) && above <= 2.0 * ends;
            if is_done || stretch.level <= -MOST_HALVINGS {
                bound = bound.max(above);
                continue;
            }
            self.matrices += 1;
            if self.matrices > most_matrices(self.flow.order) || (self.matrices.is_multiple_of(64) && stop()) {
                return None;
            }
            let middle = self.after(&stretch.start, stretch.level - 1)?;
            stack.push(Stretch { start: middle.clone(), end: stretch.end, level: stretch.level - 1 });
            stack.push(Stretch { end: middle.size, level: stretch.level - 1, ..stretch });
            if middle.size > self.best.size {
                self.best = middle;
            } else if middle.size < DECAYED {
                self.settled = self.settled.min(middle.time);
            }
        }
        Some(bound)
    }

    /// Bound of the norm over a stretch.
    fn above(&self, stretch: &Stretch) -> f64 {
        let Stretch { start, end, level } = stretch;
        let width = self.width(*level);
        let mut before = (self.growth * width).exp();
        if let Some(&known) = usize::try_from(*level).ok().and_then(|level| self.bounds.get(level)) {
            before = before.min(known);
        }
        let balanced = product(&self.square, &start.matrix, self.flow.order);
        let curvature = frobenius(&self.flow.unscaled(&balanced));
        let curvature = (curvature * before).min(curvature + self.drift(&balanced, width));
        let bent = start.size.max(*end) + width * width / 8.0 * curvature;
        bent.min(start.size * before)
    }

    /// Bound of ‖exp(As) G − G‖ over 0 ≤ s ≤ w, from the balanced G: there exp(Âs) − I is small, whatever the units are. Each
    /// column grows by at most exp(‖Â‖₁w) − 1 of its own sum, wherever that goes.
    fn drift(&self, balanced: &[f64], width: f64) -> f64 {
        let (n, d) = (self.flow.order, &self.flow.scale);
        let column = |j: usize| balanced.iter().skip(j).step_by(n).map(|x| x.abs()).sum::<f64>() / d[j];
        let columns: Vec<f64> = (0..n).map(column).collect();
        (self.rate * width).exp_m1() * frobenius(d) * frobenius(&columns)
    }

    fn width(&self, level: i32) -> f64 {
        self.first * f64::from(level).exp2()
    }

    /// One step of that level later; finer steps are made when they are first needed.
    fn after(&mut self, start: &Moment, level: i32) -> Option<Moment> {
        let n = self.flow.order;
        while level < 0 && self.halvings.len() < level.unsigned_abs() as usize {
            let next = self.width(-level_of(self.halvings.len() + 1));
            self.halvings.push(self.flow.beyond_identity(next));
        }
        let step = match usize::try_from(level) {
            Ok(level) => &self.doublings[level],
            Err(_) => &self.halvings[level.unsigned_abs() as usize - 1],
        };
        let matrix = later(&start.matrix, step, n);
        Some(Moment { time: start.time + self.width(level), size: self.size(&matrix)?, matrix })
    }

    fn origin(&self) -> Moment {
        let n = self.flow.order;
        Moment { time: 0.0, matrix: identity(n), size: 1.0 }
    }

    /// Some time after a moment.
    fn near(&self, start: &Moment, by: f64) -> Option<Moment> {
        let n = self.flow.order;
        let (mut part, mut doublings) = (by, 0);
        while part > self.flow.short() && doublings < MOST_DOUBLINGS {
            part /= 2.0;
            doublings += 1;
        }
        let mut step = self.flow.beyond_identity(part);
        for _ in 0..doublings {
            step = doubled(&step, n);
        }
        let matrix = later(&start.matrix, &step, n);
        Some(Moment { time: start.time + by, size: self.size(&matrix)?, matrix })
    }

    fn size(&self, matrix: &[f64]) -> Option<f64> {
        norm(&self.flow.unscaled(matrix), self.flow.order)
    }
}

#[cfg(test)]
mod tests;
