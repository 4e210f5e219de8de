//! How wide the region of an equilibrium is: points in shells around it, 64 to a batch, at which its Lyapunov function is to
//! fall.

use crate::num::ode::lanes::{Batch, WIDTH};
use crate::num::random::Source;

use super::basin::{Basin, Motion};
use super::face::{Coordinate, Face};
use super::flock::LaneField;

/// Outer radii of the shells: the first, how each follows, and how many.
const FIRST_SHELL: f64 = 1e-5;
const WIDER: f64 = 1.3;
const SHELLS: usize = 52;
/// Points in each shell, for each coordinate.
const POINTS: usize = 16;
const MOST_POINTS: usize = 128;
/// The region ends so far inside the last good shell, since shells are only sampled.
const MARGIN: f64 = 0.8;

/// A batch of points and what is computed of it; one batch a coordinate.
pub(super) struct Shells<'b> {
    basin: &'b Basin,
    face: &'b Face,
    /// L⁻ᵀ row by row, for P = L Lᵀ.
    root: Vec<f64>,
    motion: Motion,
    field: LaneField<'b>,
    source: Source,
    direction: Vec<Batch>,
    /// Deviations.
    z: Vec<Batch>,
    /// P z.
    pull: Vec<Batch>,
    next: Vec<Batch>,
}

impl<'b> Shells<'b> {
    /// `inverse` is L⁻¹ row by row.
    pub(super) fn new(basin: &'b Basin, face: &'b Face, inverse: &[f64], motion: Motion) -> Self {
        let n = face.len();
        let root = (0..n * n).map(|k| inverse[k % n * n + k / n]).collect();
        let [direction, z, pull, next] = std::array::from_fn(|_| vec![[0.0; WIDTH]; n]);
        let (field, source) = (LaneField::new(face), Source::new(1));
        Self { basin, face, root, motion, field, source, direction, z, pull, next }
    }

    /// The level of the last shell before one in which V does not fall everywhere; `None` where `stop`, asked once a shell,
    /// says so.
    pub(super) fn widest(mut self, stop: &dyn Fn() -> bool) -> Option<f64> {
        let points = (POINTS * self.face.len()).min(MOST_POINTS);
        let (mut radius, mut good) = (FIRST_SHELL, None);
        for _ in 0..SHELLS {
            if stop() {
                return None;
            }
            for first in (0..points).step_by(WIDTH) {
                if !self.falls(radius, WIDTH.min(points - first)) {
                    return good;
                }
            }
            good = Some((MARGIN * radius).powi(2));
            radius *= WIDER;
        }
        good
    }

    /// Whether V falls at so many points in the shell within this radius; those where an abundance would be negative count
    /// for nothing.
    fn falls(&mut self, radius: f64, count: usize) -> bool {
        let within = self.draw(radius, count);
        let allowed = self.place(&within);
        self.field.evaluate(&mut self.next);
        let change = match self.motion {
            Motion::Flow => self.slope(),
            Motion::Map => self.step(),
        };
        (0..count).all(|lane| !allowed[lane] || change[lane] < 0.0)
    }

    /// A direction a point, and how far along: anywhere in the shell, because where one side of it is not allowed, the other
    /// alone would say nothing.
    fn draw(&mut self, radius: f64, count: usize) -> Batch {
        let mut within = [0.0; WIDTH];
        for (lane, within) in within.iter_mut().enumerate().take(count) {
            for direction in &mut self.direction {
                direction[lane] = self.source.between(-1.0, 1.0);
            }
            *within = radius * self.source.between(1.0 / WIDER, 1.0);
        }
        within
    }

    /// The abundances at which V is what it is on that sphere, and whether none is negative.
    fn place(&mut self, within: &Batch) -> [bool; WIDTH] {
        let n = self.face.len();
        // z = L⁻ᵀ u has V = |u|².
        product(&self.root, &self.direction, &mut self.z);
        for (z, _) in self.z.iter_mut().zip(&self.basin.centre).filter(|(_, centre)| **centre == 0.0) {
            *z = z.map(f64::abs);
        }
        product(&self.basin.p, &self.z, &mut self.pull);
        let mut stretch = dot(&self.z, &self.pull);
        stretch.iter_mut().zip(within).for_each(|(v, within)| *v = within / v.sqrt());
        let mut allowed = [true; WIDTH];
        for i in 0..n {
            let (centre, unit) = (self.basin.centre[i], self.basin.unit[i]);
            for lane in 0..WIDTH {
                self.z[i][lane] *= stretch[lane];
                let x = centre + unit * self.z[i][lane];
                allowed[lane] &= x.is_finite() && x >= 0.0;
                self.field.x[i][lane] = x;
            }
        }
        allowed
    }

    /// zᵀP times the rates: half of what V changes by in a unit of time, but for a positive factor.
    fn slope(&mut self) -> Batch {
        for i in 0..self.face.len() {
            let unit = self.basin.unit[i];
            for lane in 0..WIDTH {
                let x = if self.face.kinds[i] == Coordinate::Logarithm { self.field.x[i][lane] } else { 1.0 };
                self.next[i][lane] *= x / unit;
            }
        }
        dot(&self.pull, &self.next)
    }

    /// What V changes by in one step of a map.
    fn step(&mut self) -> Batch {
        // From the abundances as they are rounded, like what they become.
        let before = self.value(true);
        let mut change = self.value(false);
        change.iter_mut().zip(before).for_each(|(after, before)| *after -= before);
        change
    }

    fn value(&mut self, here: bool) -> Batch {
        let x = if here { &self.field.x } else { &self.next };
        for (i, (z, x)) in self.z.iter_mut().zip(x).enumerate() {
            let (centre, unit) = (self.basin.centre[i], self.basin.unit[i]);
            z.iter_mut().zip(x).for_each(|(z, x)| *z = (x - centre) / unit);
        }
        product(&self.basin.p, &self.z, &mut self.pull);
        dot(&self.z, &self.pull)
    }
}

/// M x in every lane.
fn product(matrix: &[f64], x: &[Batch], out: &mut [Batch]) {
    for (row, out) in matrix.chunks_exact(x.len().max(1)).zip(out) {
        *out = [0.0; WIDTH];
        for (&entry, x) in row.iter().zip(x).filter(|(entry, _)| **entry != 0.0) {
            out.iter_mut().zip(x).for_each(|(out, x)| *out += entry * x);
        }
    }
}

/// Σ xᵢ yᵢ in every lane.
fn dot(x: &[Batch], y: &[Batch]) -> Batch {
    let mut sum = [0.0; WIDTH];
    for (x, y) in x.iter().zip(y) {
        for lane in 0..WIDTH {
            sum[lane] += x[lane] * y[lane];
        }
    }
    sum
}
