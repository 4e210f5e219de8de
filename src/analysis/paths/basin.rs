//! Regions from which paths can only go to one stable equilibrium, as far as numbers tell.
//!
//! With z the relative deviation from the equilibrium and V = zᵀPz a Lyapunov function of its linear part, a region V ≤ c
//! is taken in which V was seen to fall at points in shells of every size up to c. A sample, not a proof.

use crate::analysis::equilibria::Equilibrium;
use crate::num::dense::inverse;
use crate::num::lyapunov::{lyapunov, stein};
use crate::num::quadratic;
use crate::num::random::Source;

use super::face::{Face, Field};

/// Outer radii of the shells: the first, how each follows, and how many.
const FIRST_SHELL: f64 = 1e-5;
const WIDER: f64 = 1.3;
const SHELLS: usize = 52;
/// Points in each shell, for each coordinate.
const POINTS: usize = 16;
const MOST_POINTS: usize = 128;
/// Beyond so many coordinates the equation for V alone, which cannot be broken off, takes a second. Paths then end at rest.
const LARGEST: usize = 200;
/// The region ends so far inside the last good shell, since shells are only sampled.
const MARGIN: f64 = 0.8;

/// What a face's equations are: a flow or a map.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Motion {
    /// Rates of change.
    Flow,
    /// Next states.
    Map,
}

/// The region of one equilibrium, over the abundances of those present on a face.
#[derive(Clone, Debug)]
pub(super) struct Basin {
    /// Index in the list.
    pub(super) equilibrium: usize,
    centre: Vec<f64>,
    /// What deviations are measured by: the abundance, or where that is 0 at most the box.
    unit: Vec<f64>,
    p: Vec<f64>,
    inverse: Vec<f64>,
    /// V at the region's border.
    level: f64,
}

/// The regions of all equilibria of a face that are stable on it; without those that are not done when `stop`, asked once a
/// shell, says so, and for large communities none.
pub(super) fn basins(face: &Face, list: &[Equilibrium], motion: Motion, stop: &dyn Fn() -> bool) -> Vec<Basin> {
    if face.len() > LARGEST {
        return Vec::new();
    }
    let mut field = face.field();
    let on_face = |e: &Equilibrium| (0..face.species).all(|i| face.present.contains(&i) || !e.has(i));
    let candidates = list.iter().enumerate().filter(|(_, e)| on_face(e));
    candidates.filter_map(|(index, e)| Basin::new(face, &mut field, index, &e.state, motion, stop)).collect()
}

/// Units in which no absent species moves another faster than anything moves by itself: a box may be far larger than what
/// the others feel, and P would be as lopsided.
fn balanced(slopes: &[f64], centre: &[f64], mut unit: Vec<f64>) -> Vec<f64> {
    let n = unit.len();
    let own = (0..n).map(|i| slopes[i * n + i].abs()).fold(0.0, f64::max);
    for j in (0..n).filter(|&j| centre[j] == 0.0) {
        let moves = |i: usize| slopes[i * n + j].abs() * unit[j] / unit[i];
        let most = (0..n).filter(|&i| i != j && centre[i] > 0.0).map(moves).fold(0.0, f64::max);
        if most > own && own > 0.0 {
            unit[j] *= own / most;
        }
    }
    unit
}

impl Basin {
    fn new(
        face: &Face,
        field: &mut Field<'_>,
        equilibrium: usize,
        state: &[f64],
        motion: Motion,
        stop: &dyn Fn() -> bool,
    ) -> Option<Self> {
        if stop() {
            return None;
        }
        let n = face.len();
        let centre: Vec<f64> = face.present.iter().map(|&i| state[i]).collect();
        let unit: Vec<f64> = centre.iter().zip(&face.scale).map(|(&x, &s)| if x > 0.0 { x } else { s }).collect();
        let mut slopes = vec![0.0; n * n];
        if !field.slopes_at(&centre, &mut slopes) {
            return None;
        }
        let unit = balanced(&slopes, &centre, unit);
        (0..n * n).for_each(|k| slopes[k] *= unit[k % n] / unit[k / n]);
        let one: Vec<f64> = (0..n * n).map(|k| f64::from(u8::from(k / n == k % n))).collect();
        let p = match motion {
            Motion::Flow => {
                // Time in the unit of the fastest rate, so that P is near 1.
                let fastest = slopes.iter().fold(0.0f64, |most, slope| most.max(slope.abs()));
                for slope in &mut slopes {
                    *slope /= fastest;
                }
                lyapunov(&slopes, &one, n)?
            }
            Motion::Map => stein(&slopes, &one, n)?,
        };
        // Positive definite only where the equilibrium is stable (Lyapunov 1892).
        let root = quadratic::root(&p, n)?;
        let mut basin = Self { equilibrium, centre, unit, inverse: inverse(&p, n)?, p, level: 0.0 };
        basin.level = basin.widest(field, &inverse(&root, n)?, motion, stop)?;
        Some(basin)
    }

    /// V at given abundances of those present.
    pub(super) fn value(&self, x: &[f64], z: &mut [f64]) -> f64 {
        for (i, z) in z.iter_mut().enumerate() {
            *z = (x[i] - self.centre[i]) / self.unit[i];
        }
        quadratic::value(&self.p, z)
    }

    /// V up to which a path is in the region.
    pub(super) fn level(&self) -> f64 {
        self.level
    }

    /// V up to which no abundance is further than `share` from the equilibrium's, relative to it; where that is 0, above
    /// that share of `start`; never more than the region's own.
    pub(super) fn level_within(&self, share: f64, start: &[f64]) -> f64 {
        let n = self.centre.len();
        let room = |i: usize| {
            let size = if self.centre[i] > 0.0 { self.centre[i] } else { start[i] };
            let room = share * size / self.unit[i];
            // The furthest that V ≤ v goes in coordinate i is √(v (P⁻¹)ᵢᵢ).
            room * room / self.inverse[i * n + i]
        };
        (0..n).map(room).fold(self.level, f64::min)
    }

    /// The level of the last shell before one in which V does not fall everywhere.
    fn widest(&self, field: &mut Field<'_>, root: &[f64], motion: Motion, stop: &dyn Fn() -> bool) -> Option<f64> {
        let n = self.centre.len();
        let mut source = Source::new(1);
        let (mut radius, mut good) = (FIRST_SHELL, None);
        for _ in 0..SHELLS {
            if stop() {
                return None;
            }
            for _ in 0..(POINTS * n).min(MOST_POINTS) {
                let direction: Vec<f64> = (0..n).map(|_| source.between(-1.0, 1.0)).collect();
                // Anywhere in the shell: where one side of it is not allowed, the other alone would say nothing.
                let within = radius * source.between(1.0 / WIDER, 1.0);
                if self.point(&direction, root, within).is_some_and(|x| !self.falls(field, &x, motion)) {
                    return good;
                }
            }
            good = Some((MARGIN * radius).powi(2));
            radius *= WIDER;
        }
        good
    }

    /// The abundances in a direction on the shell V = radius²; `None` where one would be negative.
    fn point(&self, direction: &[f64], root: &[f64], radius: f64) -> Option<Vec<f64>> {
        let n = self.centre.len();
        let length = direction.iter().map(|u| u * u).sum::<f64>().sqrt();
        // P = L Lᵀ, so z = L⁻ᵀ u has V = |u|².
        let mut z: Vec<f64> =
            (0..n).map(|i| (0..n).map(|k| root[k * n + i] * direction[k]).sum::<f64>() / length).collect();
        for (z, centre) in z.iter_mut().zip(&self.centre) {
            *z = if *centre > 0.0 { *z } else { z.abs() };
        }
        let stretch = radius / quadratic::value(&self.p, &z).sqrt();
        let x: Vec<f64> = (0..n).map(|i| self.centre[i] + self.unit[i] * stretch * z[i]).collect();
        x.iter().all(|x| x.is_finite() && *x >= 0.0).then_some(x)
    }

    fn falls(&self, field: &mut Field<'_>, x: &[f64], motion: Motion) -> bool {
        let n = x.len();
        let (mut next, mut z) = (vec![0.0; n], vec![0.0; n]);
        if !field.at(x, &mut next) {
            return false;
        }
        let here = self.value(x, &mut z);
        match motion {
            Motion::Map => self.value(&next, &mut z) < here,
            Motion::Flow => {
                let pull = |i: usize| next[i] / self.unit[i] * (0..n).map(|j| self.p[i * n + j] * z[j]).sum::<f64>();
                (0..n).map(pull).sum::<f64>() < 0.0
            }
        }
    }
}
