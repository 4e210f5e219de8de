//! Where the starts that a survey leaves possible go: each an abundance for every species, drawn from the survey's spread.
//!
//! Independent lognormals, the median being the value, cut to the region that holds 95 %: |z|² up to the quantile of a
//! chi-square distribution, z the deviations of the logarithms in standard deviations. Distances from the middle are
//! spread evenly over that distribution, directions by a seeded source, so the same file gives the same starts.

use crate::model::Model;
use crate::num::random::Source;
use crate::num::{chi_square, elementary};

/// The share of the spread that is looked at.
const REGION: f64 = 0.95;
const SEED: u64 = 20;
/// Places at which the distribution of distances is computed; starts are found in between.
const GRID: usize = 64;
const MOST_TRIES: usize = 200;

/// `count` starts; none where the survey gives no spread.
pub(super) fn starts(model: &Model, middle: &[f64], count: usize) -> Vec<Vec<f64>> {
    let spread = |cv: f64| elementary::ln(1.0 + cv * cv).sqrt();
    let uncertain = model.now.iter().filter(|survey| survey.value > 0.0);
    let uncertain: Vec<(usize, f64)> =
        uncertain.filter_map(|s| s.cv.filter(|cv| *cv > 0.0).map(|cv| (s.species.0, spread(cv)))).collect();
    if uncertain.is_empty() {
        return Vec::new();
    }
    let distances = Distances::new(uncertain.len());
    let mut source = Source::new(SEED);
    let start = |k: usize| {
        let distance = distances.at((k as f64 + 0.5) / count as f64);
        let mut state = middle.to_vec();
        for (&(i, sd), z) in uncertain.iter().zip(direction(uncertain.len(), k, &mut source)) {
            state[i] *= elementary::exp(sd * distance * z);
        }
        state
    };
    (0..count).map(start).collect()
}

/// A direction of length 1: one way and the other by turns on a line, else that of independent normals.
fn direction(d: usize, k: usize, source: &mut Source) -> Vec<f64> {
    if d == 1 {
        return vec![if k.is_multiple_of(2) { 1.0 } else { -1.0 }];
    }
    let normals: Vec<f64> = (0..d).map(|_| normal(source)).collect();
    let length = normals.iter().map(|z| z * z).sum::<f64>().sqrt().max(f64::MIN_POSITIVE);
    normals.into_iter().map(|z| z / length).collect()
}

/// A standard normal number (Marsaglia & Bray 1964); one in (4/π)^200 times it is 0.
fn normal(source: &mut Source) -> f64 {
    for _ in 0..MOST_TRIES {
        let (u, v) = (source.between(-1.0, 1.0), source.between(-1.0, 1.0));
        let s = u * u + v * v;
        if s > 0.0 && s < 1.0 {
            return u * (-2.0 * elementary::ln(s) / s).sqrt();
        }
    }
    0.0
}

/// The distribution of |z| within the region.
struct Distances {
    freedom: usize,
    /// Even steps of |z| up to the region's border, and the share of the whole spread within each.
    grid: Vec<(f64, f64)>,
}

impl Distances {
    fn new(freedom: usize) -> Self {
        let border = chi_square::quantile(freedom, REGION).sqrt();
        let distance = |k: usize| border * k as f64 / GRID as f64;
        let grid = (0..=GRID).map(|k| (distance(k), chi_square::share(freedom, distance(k).powi(2)))).collect();
        Self { freedom, grid }
    }

    /// The distance within which a share of the region lies: linear on the grid, then one step of the secant rule.
    fn at(&self, share: f64) -> f64 {
        let wanted = REGION * share;
        let above = self.grid.partition_point(|(_, share)| *share < wanted).clamp(1, GRID);
        let ((low, below), (high, beyond)) = (self.grid[above - 1], self.grid[above]);
        let line =
            |(a, f): (f64, f64), (b, g): (f64, f64)| if g > f { a + (b - a) * (wanted - f) / (g - f) } else { b };
        let first = line((low, below), (high, beyond));
        let there = chi_square::share(self.freedom, first * first);
        if there < wanted { line((first, there), (high, beyond)) } else { line((low, below), (first, there)) }
    }
}

#[cfg(test)]
mod tests {
    use super::{Distances, REGION};
    use crate::num::chi_square;

    #[test]
    fn distances_follow_the_distribution() {
        for freedom in [1, 2, 3, 7, 30] {
            let distances = Distances::new(freedom);
            for k in 0..100 {
                let share = (f64::from(k) + 0.5) / 100.0;
                let found = chi_square::share(freedom, distances.at(share).powi(2)) / REGION;
                assert!((found - share).abs() < 1e-4, "{freedom} degrees: {share} became {found}");
            }
        }
    }
}
