//! Regions from which paths can only go to one stable equilibrium, as far as numbers tell.
//!
//! With z the relative deviation from the equilibrium and V = zᵀPz a Lyapunov function of its linear part, a region V ≤ c
//! is taken in which V was seen to fall at points in shells of every size up to c ([`super::shells`]). A sample, not a proof.

use crate::analysis::equilibria::Equilibrium;
use crate::num::dense::inverse;
use crate::num::lyapunov::{lyapunov, stein};
use crate::num::quadratic;

use super::face::{Face, Field};
use super::shells::Shells;

/// Beyond so many coordinates the equation for V alone, which cannot be broken off, takes a second. Paths then end at rest.
const LARGEST: usize = 200;

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
    pub(super) centre: Vec<f64>,
    /// What deviations are measured by: the abundance, or where that is 0 at most the box.
    pub(super) unit: Vec<f64>,
    pub(super) p: Vec<f64>,
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
        basin.level = Shells::new(&basin, face, &inverse(&root, n)?, motion).widest(stop)?;
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
}
