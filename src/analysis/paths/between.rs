//! The states of a path between those that were recorded, for drawing and for reading times off.

use super::Path;
use crate::num::elementary;

impl Path {
    /// The last time, negative for a path backwards; 0 for one that never moved.
    pub fn until(&self) -> f64 {
        self.times.last().copied().unwrap_or(0.0)
    }

    /// The state at a time: between two that were recorded by a cubic whose slope at either is that of the parabola through
    /// it and its neighbours, for a map by the last one at or before the time; before the start and after the end, those.
    ///
    /// The cubic is one of the abundance or of its logarithm, whichever bends less there. Never negative. Where a species is
    /// lost the slopes on the two sides are not mixed. Empty for a path without states.
    pub fn at(&self, time: f64, is_map: bool) -> Vec<f64> {
        let sign = if self.until() < 0.0 { -1.0 } else { 1.0 };
        let after = self.times.partition_point(|&t| sign * t <= sign * time);
        let Some(last) = self.states.len().min(self.times.len()).checked_sub(1) else { return Vec::new() };
        if after == 0 || after > last || is_map {
            return self.states[after.saturating_sub(1).min(last)].clone();
        }
        let from = after - 1;
        let share = (time - self.times[from]) / (self.times[after] - self.times[from]);
        let between = |species: usize| {
            let plain = Stretch { path: self, from, species, of: |x| x };
            let ratio = Stretch { of: elementary::ln, ..plain };
            if ratio.bend() < plain.bend() { elementary::exp(ratio.at(share)) } else { plain.at(share).max(0.0) }
        };
        (0..self.states[from].len()).map(between).collect()
    }

    fn is_corner(&self, knot: usize) -> bool {
        self.lost.iter().any(|&(_, when)| when == self.times[knot])
    }
}

/// One species between a recorded state and the next, as a function of the abundance.
#[derive(Clone, Copy)]
struct Stretch<'p> {
    path: &'p Path,
    from: usize,
    species: usize,
    of: fn(f64) -> f64,
}

impl Stretch<'_> {
    fn value(&self, knot: usize) -> f64 {
        (self.of)(self.path.states[knot][self.species])
    }

    fn length(&self, step: usize) -> f64 {
        self.path.times[step + 1] - self.path.times[step]
    }

    /// Mean slope over the step from a recorded state to the next.
    fn secant(&self, step: usize) -> f64 {
        (self.value(step + 1) - self.value(step)) / self.length(step)
    }

    /// The steps before and after, where there are any that belong to the same smooth part.
    fn neighbours(&self) -> [Option<usize>; 2] {
        let before = self.from.checked_sub(1).filter(|_| !self.path.is_corner(self.from));
        let end = self.from + 1;
        [before, Some(end).filter(|_| end + 1 < self.path.times.len() && !self.path.is_corner(end))]
    }

    /// How much the mean slope changes to the neighbours, relative; not a number where there is no such function.
    fn bend(&self) -> f64 {
        let own = self.secant(self.from);
        let change = |step: usize| (self.secant(step) - own).abs() / (self.secant(step).abs() + own.abs());
        let of =
            |step: Option<usize>| step.map_or(0.0, |step| if self.secant(step) == own { 0.0 } else { change(step) });
        let [before, after] = self.neighbours();
        of(before) + of(after) + 0.0 * own
    }

    fn at(&self, share: f64) -> f64 {
        let (own, length) = (self.secant(self.from), self.length(self.from));
        let [before, after] = self.neighbours();
        // The parabola through both steps, at the state between them.
        let inner = |other: usize| {
            let h = self.length(other);
            (self.secant(other) * length + own * h) / (length + h)
        };
        // The same parabola at the far end of the own step.
        let outer = |other: Option<usize>| {
            other.map_or(own, |other| own + (own - self.secant(other)) * length / (length + self.length(other)))
        };
        let slopes = [before.map_or_else(|| outer(after), inner), after.map_or_else(|| outer(before), inner)];
        let ends = [self.value(self.from), self.value(self.from + 1)];
        let value = cubic(ends, slopes.map(|slope| slope * length), share);
        if value.is_finite() { value } else { ends[0] + share * (ends[1] - ends[0]) }
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
    fn parabolas_and_exponentials_are_exact_and_ends_are_kept() {
        // Through 0, where its logarithm has no value.
        let of = |t: f64| t * (4.5 - t);
        let forwards = path(&[0.0, 0.5, 1.5, 2.0, 4.0], of);
        for t in [0.1, 0.4, 0.5, 0.7, 1.2, 1.5] {
            assert!((forwards.at(t, false)[0] - of(t)).abs() < 1e-12, "{t}: {:?}", forwards.at(t, false));
        }
        let exponential = path(&[0.0, 0.5, 1.5, 2.0, 4.0], |t| 3.0 * (0.7 * t).exp());
        for t in [0.1, 0.7, 1.2, 1.9, 3.7] {
            assert!((exponential.at(t, false)[0] / (3.0 * (0.7 * t).exp()) - 1.0).abs() < 1e-12, "{t}");
        }
        assert_eq!((forwards.at(-1.0, false)[0], forwards.at(9.0, false)[0]), (of(0.0), of(4.0)));
        let back = |t: f64| t * t;
        let backwards = path(&[0.0, -0.5, -1.5, -2.0], back);
        assert!((backwards.at(-1.0, false)[0] - back(-1.0)).abs() < 1e-12);
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
