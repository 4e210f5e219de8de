//! The states of a path between those that were recorded, for drawing and for reading times off.

use super::Path;

impl Path {
    /// The last time, negative for a path backwards; 0 for one that never moved.
    pub fn until(&self) -> f64 {
        self.times.last().copied().unwrap_or(0.0)
    }

    /// The state at a time: between two that were recorded by a cubic whose slope at either is that of the parabola through
    /// it and its neighbours, for a map by the last one at or before the time; before the start and after the end, those.
    ///
    /// Never negative. Where a species is lost the slopes on the two sides are not mixed. Empty for a path without states.
    pub fn at(&self, time: f64, is_map: bool) -> Vec<f64> {
        let sign = if self.until() < 0.0 { -1.0 } else { 1.0 };
        let after = self.times.partition_point(|&t| sign * t <= sign * time);
        let Some(last) = self.states.len().min(self.times.len()).checked_sub(1) else { return Vec::new() };
        if after == 0 || after > last || is_map {
            return self.states[after.saturating_sub(1).min(last)].clone();
        }
        let from = after - 1;
        let (start, end) = (self.times[from], self.times[after]);
        let share = (time - start) / (end - start);
        let (a, b) = (&self.states[from], &self.states[after]);
        let between = |i: usize| {
            let slopes = [self.slope(from, i, [from, after]), self.slope(after, i, [from, after])];
            cubic([a[i], b[i]], slopes.map(|slope| slope * (end - start)), share).max(0.0)
        };
        (0..a.len()).map(between).collect()
    }

    /// The slope of a species at a recorded state, seen from the step between two of them.
    fn slope(&self, knot: usize, species: usize, step: [usize; 2]) -> f64 {
        let x = |k: usize| self.states[k][species];
        let secant = |k: usize| (x(k + 1) - x(k)) / (self.times[k + 1] - self.times[k]);
        let own = secant(step[0]);
        let is_loss = self.lost.iter().any(|&(_, when)| when == self.times[knot]);
        let (before, after) = (knot.checked_sub(1), knot + 1);
        let Some(before) = before.filter(|_| after < self.times.len() && !is_loss) else { return own };
        let [left, right] = [self.times[knot] - self.times[before], self.times[after] - self.times[knot]];
        let slope = (secant(before) * right + secant(knot) * left) / (left + right);
        if slope.is_finite() { slope } else { own }
    }
}

/// Hermite's cubic on the unit interval.
fn cubic([a, b]: [f64; 2], [da, db]: [f64; 2], t: f64) -> f64 {
    let rest = 1.0 - t;
    rest * rest * (a * (1.0 + 2.0 * t) + da * t) + t * t * (b * (1.0 + 2.0 * rest) - db * rest)
}

#[cfg(test)]
mod tests {
    use super::super::{Ended, Path};
    use crate::model::SpeciesId;

    fn path(times: &[f64], of: impl Fn(f64) -> f64) -> Path {
        let states = times.iter().map(|&t| vec![of(t)]).collect();
        Path { times: times.to_vec(), states, lost: Vec::new(), ended: Ended::InTime }
    }

    #[test]
    fn parabolas_are_exact_inside_and_ends_are_kept() {
        let of = |t: f64| 3.0 + t * (1.0 - 0.25 * t);
        let forwards = path(&[0.0, 0.5, 1.5, 2.0, 4.0], of);
        for t in [0.5, 0.7, 1.2, 1.5, 1.9, 2.0] {
            assert!((forwards.at(t, false)[0] - of(t)).abs() < 1e-12, "{t}");
        }
        assert_eq!((forwards.at(-1.0, false)[0], forwards.at(9.0, false)[0]), (of(0.0), of(4.0)));
        let backwards = path(&[0.0, -0.5, -1.5, -2.0], of);
        assert!((backwards.at(-1.0, false)[0] - of(-1.0)).abs() < 1e-12);
        assert_eq!(backwards.until(), -2.0);
        // A map stays where it is until its next step.
        assert_eq!(forwards.at(1.4, true)[0], of(0.5));
    }

    #[test]
    fn a_loss_is_a_corner() {
        let mut falls = path(&[0.0, 1.0, 2.0, 3.0], |t| (2.0 - t).max(0.0));
        falls.lost.push((SpeciesId(0), 2.0));
        for t in [1.25, 1.75, 2.0, 2.5] {
            assert!((falls.at(t, false)[0] - (2.0 - t).max(0.0)).abs() < 1e-12, "{t}");
        }
        let none = Path { times: Vec::new(), states: Vec::new(), lost: Vec::new(), ended: Ended::InTime };
        assert_eq!(none.at(1.0, false), Vec::<f64>::new());
    }
}
