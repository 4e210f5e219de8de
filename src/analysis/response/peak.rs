//! A best pair of yields solved for, from a place near it.
//!
//! Newton's method on what is 0 there: slopes of a yield or of both together, or one yield's difference from a given one and
//! the angle between the slopes. Inside the ranges first, then on the end of one that it is led to. `front` says from where.

use super::terrain::{Place, Terrain};
use crate::analysis::passage::{dot, solve};

/// Newton steps for a point.
const STEPS: usize = 40;
/// Half the width of a difference by which a slope's own slope is estimated; it sets the speed, not the result.
const PROBE: f64 = 1e-5;
/// The longest step, as a share of the ranges.
const LONGEST: f64 = 0.1;
/// What is left at a stationary point: sine of the angle between slopes, or share of a yield.
const STATIONARY: f64 = 1e-10;

/// What a point is to be.
pub(super) enum Goal {
    /// The largest of a yield.
    Most {
        /// Which.
        which: usize,
        /// The yield whose slope by either control is to be 0: this one, or the other where this does not hang on it.
        by: [usize; 2],
    },
    /// The largest second yield where the first is this; and the size that differences of it are measured by.
    Given { first: f64, size: f64 },
    /// The largest sum of both.
    Total,
}

/// The stationary point near a place: inside the ranges, or on the end of one that it is led to.
pub(super) fn refined(terrain: &mut Terrain<'_>, start: &Place, goal: &Goal) -> Option<Place> {
    let mut held: [Option<f64>; 2] =
        start.share.map(|share| if share == 0.0 || share == 1.0 { Some(share) } else { None });
    // Free first: the nearest node may lie at an end of a range by chance.
    for free in [[true, true], [held[0].is_none(), held[1].is_none()]] {
        if let Some(found) = newton(terrain, start, goal, free)
            && is_best(&found, goal, free)
        {
            return Some(found);
        }
    }
    for j in 0..2 {
        held[j].get_or_insert(start.share[j].round());
        let mut free = [true; 2];
        free[j] = false;
        let Some(end) = held[j] else { continue };
        let mut share = start.share;
        share[j] = end;
        if let Some(start) = walked(terrain, start.clone(), share)
            && let Some(found) = newton(terrain, &start, goal, free)
            && is_best(&found, goal, free)
        {
            return Some(found);
        }
    }
    None
}

/// What is to be 0: one number a free control, each without unit.
fn residual(place: &Place, goal: &Goal, free: [bool; 2]) -> Vec<f64> {
    let size = |slopes: &[f64; 2]| dot(slopes, slopes).sqrt().max(f64::MIN_POSITIVE);
    match goal {
        Goal::Most { by, .. } => {
            // Measured by the yield, for at a largest one the slope itself is 0.
            let share = |j: usize| place.slopes[by[j]][j] / place.yields[by[j]].abs().max(f64::MIN_POSITIVE);
            (0..2).filter(|&j| free[j]).map(share).collect()
        }
        Goal::Total => {
            let sum = place.total().abs().max(f64::MIN_POSITIVE);
            (0..2).filter(|&j| free[j]).map(|j| place.total_slope(j) / sum).collect()
        }
        Goal::Given { first, size: whole } => {
            let mut all = vec![(place.yields[0] - first) / whole];
            if free == [true, true] {
                let [a, b] = &place.slopes;
                all.push((a[0] * b[1] - a[1] * b[0]) / (size(a) * size(b)));
            }
            all
        }
    }
}

/// Newton's method on the free controls, with slopes of residuals by differences: these set how fast it goes and nothing
/// else, for the residuals themselves are exact.
fn newton(terrain: &mut Terrain<'_>, start: &Place, goal: &Goal, free: [bool; 2]) -> Option<Place> {
    let places: Vec<usize> = (0..2).filter(|&j| free[j]).collect();
    let mut here = start.clone();
    let mut least = f64::INFINITY;
    for _ in 0..STEPS {
        let now = residual(&here, goal, free);
        let size = now.iter().fold(0.0f64, |most, x| most.max(x.abs()));
        // Once good, as long as it gets better.
        if (size <= STATIONARY && size >= 0.5 * least) || size == 0.0 || (places.is_empty() && size <= STATIONARY) {
            return Some(here);
        }
        if now.len() != places.len() || !size.is_finite() {
            return None;
        }
        least = least.min(size);
        let n = places.len();
        let mut matrix = vec![0.0; n * n];
        for (column, &j) in places.iter().enumerate() {
            let mut share = here.share;
            let step = if share[j] + PROBE <= 1.0 { PROBE } else { -PROBE };
            share[j] += step;
            let beside = terrain.beside(&here, share)?;
            let moved = residual(&beside, goal, free);
            (0..n).for_each(|i| matrix[i * n + column] = (moved[i] - now[i]) / step);
        }
        let mut step: Vec<f64> = now.iter().map(|x| -x).collect();
        solve(&mut matrix, &mut step)?;
        let longest = step.iter().fold(0.0f64, |most, x| most.max(x.abs()));
        let cut = (LONGEST / longest).min(1.0);
        let mut share = here.share;
        places.iter().zip(&step).for_each(|(&j, part)| share[j] += cut * part);
        if !share.iter().all(|share| (-0.5 * LONGEST..=1.0 + 0.5 * LONGEST).contains(share)) {
            return None;
        }
        here = terrain.beside(&here, share)?;
    }
    None
}

/// Whether a stationary point is within the ranges and largest, not least: yields trade against each other, and at an end of
/// a range what lies inside has less.
fn is_best(place: &Place, goal: &Goal, free: [bool; 2]) -> bool {
    if !place.share.iter().all(|share| (0.0..=1.0).contains(share)) {
        return false;
    }
    let [a, b] = &place.slopes;
    let inward = |j: usize| if place.share[j] == 0.0 { 1.0 } else { -1.0 };
    let held = (0..2).filter(|&j| !free[j]);
    match goal {
        Goal::Most { which, .. } => held.into_iter().all(|j| place.slopes[*which][j] * inward(j) <= 0.0),
        Goal::Total => held.into_iter().all(|j| place.total_slope(j) * inward(j) <= 0.0),
        Goal::Given { .. } if free == [true, true] => dot(a, b) <= 0.0,
        Goal::Given { .. } => {
            // b + λ a is 0 along the free control for some λ ≥ 0, and leads out of the range along the other.
            let Some(along) = (0..2).find(|&j| free[j]) else { return true };
            let share = -b[along] / a[along];
            share >= 0.0 && held.into_iter().all(|j| (b[j] + share * a[j]) * inward(j) <= 0.0)
        }
    }
}

/// From a place to other controls in short steps; `None` where the state is lost on the way.
pub(super) fn walked(terrain: &mut Terrain<'_>, mut place: Place, goal: [f64; 2]) -> Option<Place> {
    for k in 1..=8u8 {
        let left = 1.0 / f64::from(9 - k);
        let share = [0, 1].map(|j| place.share[j] + left * (goal[j] - place.share[j]));
        place = terrain.beside(&place, if k == 8 { goal } else { share })?;
    }
    Some(place)
}
