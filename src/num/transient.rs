//! The largest that ‖exp(At)‖₂ gets at any t ≥ 0, and ‖Aᵏ‖₂ at any k: the global maximum, however many humps there are.
//!
//! [`flow_peak`] and [`map_peak`] are the ways in. The search ends where nothing higher can follow, because norms are
//! submultiplicative: once ‖exp(AT)‖ < 1 all that comes after T stays below the maximum before it. What is not settled
//! within the bounds on the work is `None`.

use super::dense::{product, transposed};
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

/// Steps to where the slope is 0; ten are usual.
const MOST_STEPS: usize = 60;

/// How far to either side of the best a change of the slope's sign is looked for, relative to its time.
const NEARBY: [f64; 6] = [1e-4, 1e-3, 1e-2, 0.05, 0.2, 0.5];

/// A norm below this is below 1 whatever rounding did to it.
const DECAYED: f64 = 1.0 - 1e-12;

/// No growth at all.
const NONE: Peak = Peak { factor: 1.0, time: 0.0 };

/// max over t ≥ 0 of ‖exp(At)‖₂ for a matrix of order `n`, row by row, all of whose eigenvalues have negative real parts.
///
/// Between a and b = a + w the norm is at most max(‖F(a)‖, ‖F(b)‖) + w²/8 ‖A²F(a)‖ P(w), F(t) = exp(At), by the error of
/// linear interpolation, where P(w) bounds ‖F‖ on [0, w]; and at most ‖F(a)‖ P(w). Intervals are halved until that is
/// no more than [`RELATIVE`] above the largest value found; the times 0 < w ≤ h are done before those from h to 2h, so that
/// P is known. (Quantity: Neubert & Caswell 1997.) `None` where an entry is not finite, nothing decays within the bounds on
/// the work, they do not suffice, or `stop` says so.
///
/// # Panics
/// If there are not n² entries.
pub fn flow_peak(entries: &[f64], n: usize, stop: &dyn Fn() -> bool) -> Option<Peak> {
    let flow = Flow::new(entries, n)?;
    let growth = eigen::symmetric(entries, n).ok()?.first().copied().unwrap_or(0.0);
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

/// From where the norm rises, for a time, to where it falls.
struct Bracket {
    start: Moment,
    width: f64,
    slopes: [f64; 2],
}

struct Search<'f> {
    flow: &'f Flow,
    entries: &'f [f64],
    /// Â².
    square: Vec<f64>,
    /// Rate of the fastest growth at once: ‖F(t)‖ ≤ exp(growth t).
    growth: f64,
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
        let first = flow.short().min(1.0 / growth);
        let mut best = Moment { time: 0.0, matrix: with_identity(&vec![0.0; n * n], n), size: 1.0 };
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
            let end = Moment { time: self.width(k as i32), size: self.size(&matrix)?, matrix };
            let level = (k as i32 - 1).max(0);
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
        let curvature = self.flow.unscaled(&product(&self.square, &start.matrix, self.flow.order));
        let curvature = curvature.iter().map(|x| x * x).sum::<f64>().sqrt();
        let bent = start.size.max(*end) + width * width / 8.0 * curvature * before;
        bent.min(start.size * before)
    }

    fn width(&self, level: i32) -> f64 {
        self.first * f64::from(level).exp2()
    }

    /// One step of that level later; finer steps are made when they are first needed.
    fn after(&mut self, start: &Moment, level: i32) -> Option<Moment> {
        let n = self.flow.order;
        while level < 0 && self.halvings.len() < level.unsigned_abs() as usize {
            let next = self.width(-(self.halvings.len() as i32 + 1));
            self.halvings.push(self.flow.beyond_identity(next));
        }
        let step = match usize::try_from(level) {
            Ok(level) => &self.doublings[level],
            Err(_) => &self.halvings[level.unsigned_abs() as usize - 1],
        };
        let matrix = later(&start.matrix, step, n);
        Some(Moment { time: start.time + self.width(level), size: self.size(&matrix)?, matrix })
    }

    fn size(&self, matrix: &[f64]) -> Option<f64> {
        norm(&self.flow.unscaled(matrix), self.flow.order)
    }

    /// The best moment moved to where the slope of the norm is 0, which says when far more exactly than comparing values:
    /// by false position, a side that stays being weighed half (Illinois; Dowell & Jarratt 1971).
    fn refined(&self) -> Peak {
        let mut peak = Peak { factor: self.best.size, time: self.best.time };
        let Some(Bracket { start, width, mut slopes }) = self.bracket() else { return peak };
        let mut ends = [0.0, width];
        let mut last = ends.len();
        for _ in 0..MOST_STEPS {
            let by = ends[0] + (ends[1] - ends[0]) * (slopes[0] / (slopes[0] - slopes[1]));
            let Some(moment) = self.near(&start, by) else { break };
            let Some(slope) = self.slope(&moment) else { break };
            // Values near the top are equal but for rounding, so the slope says when.
            if moment.size >= peak.factor * (1.0 - RELATIVE) {
                peak = Peak { factor: moment.size.max(peak.factor), time: moment.time };
            }
            let side = usize::from(slope <= 0.0);
            if side == last {
                slopes[1 - side] /= 2.0;
            }
            last = side;
            slopes[side] = slope;
            let moved = (by - ends[side]).abs();
            ends[side] = by;
            if slope == 0.0 || moved <= 4.0 * f64::EPSILON * moment.time {
                break;
            }
        }
        peak
    }

    /// From where the norm rises to where it falls, close around the best.
    fn bracket(&self) -> Option<Bracket> {
        for aside in NEARBY {
            let start = self.near(&self.origin(), self.best.time * (1.0 - aside))?;
            let width = 2.0 * aside * self.best.time;
            let slopes = [self.slope(&start)?, self.slope(&self.near(&start, width)?)?];
            if slopes[0] > 0.0 && slopes[1] < 0.0 {
                return Some(Bracket { start, width, slopes });
            }
        }
        None
    }

    fn origin(&self) -> Moment {
        let n = self.flow.order;
        Moment { time: 0.0, matrix: with_identity(&vec![0.0; n * n], n), size: 1.0 }
    }

    /// Some time after a moment.
    fn near(&self, start: &Moment, by: f64) -> Option<Moment> {
        let n = self.flow.order;
        let doublings = (by / self.flow.short()).log2().ceil().clamp(0.0, MOST_DOUBLINGS as f64);
        let mut step = self.flow.beyond_identity(by / doublings.exp2());
        for _ in 0..doublings as usize {
            step = doubled(&step, n);
        }
        let matrix = later(&start.matrix, &step, n);
        Some(Moment { time: start.time + by, size: self.size(&matrix)?, matrix })
    }

    /// d ln‖F‖/dt = uᵀAu, u the left singular vector of the largest singular value; per time unit.
    fn slope(&self, moment: &Moment) -> Option<f64> {
        let n = self.flow.order;
        let f = self.flow.unscaled(&moment.matrix);
        let largest = f.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
        let f: Vec<f64> = f.iter().map(|x| x / largest).collect();
        let spectrum = eigen::symmetric_spectrum(&product(&f, &transposed(&f, n), n), n).ok()?;
        let u: Vec<f64> = (0..n).map(|i| spectrum.vectors[i * n]).collect();
        let row = |i: usize| -> f64 { (0..n).map(|j| self.entries[i * n + j] * u[j]).sum() };
        Some((0..n).map(|i| u[i] * row(i)).sum())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(found: Option<Peak>, factor: f64, time: f64) {
        let found = found.expect("stable");
        let near = |x: f64, y: f64, relative: f64| (x - y).abs() <= relative * y.abs();
        assert!(near(found.factor, factor, 2.0 * RELATIVE), "{found:?}, not {factor} at {time}");
        assert!(near(found.time, time, 1e-7), "{found:?}, not {factor} at {time}");
    }

    fn flow(a: &[f64], n: usize) -> Option<Peak> {
        flow_peak(a, n, &|| false)
    }

    fn map(a: &[f64], n: usize) -> Option<Peak> {
        map_peak(a, n, &|| false)
    }

    #[test]
    fn nothing_grows_where_the_symmetric_part_attracts() {
        check(flow(&[-3.0], 1), 1.0, 0.0);
        check(flow(&[-1.0, 1.0, -1.0, -1.0], 2), 1.0, 0.0);
        // Symmetric part just singular.
        check(flow(&[-1.0, 2.0, 0.0, -1.0], 2), 1.0, 0.0);
        check(map(&[0.9], 1), 1.0, 0.0);
        check(map(&[0.0, 1.0, 0.0, 0.0], 2), 1.0, 0.0);
    }

    /// [[−1, g], [0, −1]]: exp(At) = e^−t [[1, gt], [0, 1]], of norm e^−t (gt/2 + √(1 + g²t²/4)) = e^(asinh(gt/2) − t), so
    /// that the slope is 0 where √(1 + g²t²/4) = g/2.
    #[test]
    fn one_hump_by_hand() {
        for g in [2.5f64, 10.0, 1e3, 1e6] {
            let time = 2.0 / g * (g * g / 4.0 - 1.0).sqrt();
            check(flow(&[-1.0, g, 0.0, -1.0], 2), ((g * time / 2.0).asinh() - time).exp(), time);
            // In other time units.
            check(flow(&[-1e-3, g * 1e-3, 0.0, -1e-3], 2), ((g * time / 2.0).asinh() - time).exp(), time * 1e3);
        }
    }

    /// Two blocks: the first hump comes early and is the lower one; or the higher one.
    #[test]
    fn the_higher_of_two_humps() {
        let hump = |g: f64| -> (f64, f64) {
            let time = 2.0 / g * (g * g / 4.0 - 1.0).sqrt();
            (((g * time / 2.0).asinh() - time).exp(), time)
        };
        for (fast, slow) in [(30.0, 31.0), (31.0, 30.0), (40.0, 40.001)] {
            let scale = 1e5;
            let mut a = vec![0.0; 16];
            (a[0], a[1], a[5]) = (-scale, fast * scale, -scale);
            (a[10], a[11], a[15]) = (-0.01, slow * 0.01, -0.01);
            let (factor, time) = hump(f64::max(fast, slow));
            check(flow(&a, 4), factor, if fast > slow { time / scale } else { time * 100.0 });
        }
    }

    /// [[a, g], [0, a]]: powers a^k [[1, kg/a], [0, 1]].
    #[test]
    fn maps_by_hand() {
        let (a, g) = (0.9f64, 2.0);
        let norm = |k: f64| a.powf(k) * (k * g / a / 2.0).asinh().exp();
        let k = (1..200).map(f64::from).max_by(|&i, &j| norm(i).total_cmp(&norm(j))).expect("some");
        check(map(&[a, g, 0.0, a], 2), norm(k), k);
    }

    #[test]
    fn what_never_dies_out_has_no_peak() {
        for a in [[1.0, 2.0, 0.0, -1.0], [0.0, 2.0, -1.0, 0.0], [0.0, 1.0, 0.0, 0.0], [f64::NAN, 0.0, 0.0, 0.0]] {
            assert_eq!(flow(&a, 2), None, "{a:?}");
        }
        assert_eq!(map(&[1.0, 1.0, 0.0, 1.0], 2), None);
        assert_eq!(flow_peak(&[-1e-9, 1.0, 0.0, -1e-9], 2, &|| true), None);
    }
}
