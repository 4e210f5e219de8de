//! What a path has passed: its steps, and between them cubics through values and rates (Hermite).

/// Steps of a path, one knot each.
#[derive(Clone, Debug, Default)]
pub(super) struct Trail {
    n: usize,
    times: Vec<f64>,
    /// n coordinates a knot.
    states: Vec<f64>,
    /// Their rates.
    rates: Vec<f64>,
}

impl Trail {
    /// Of n coordinates.
    pub(super) fn new(n: usize) -> Self {
        Self { n, ..Self::default() }
    }

    pub(super) fn push(&mut self, time: f64, state: &[f64], rates: &[f64]) {
        self.times.push(time);
        self.states.extend_from_slice(state);
        self.rates.extend_from_slice(rates);
    }

    /// How many knots.
    pub(super) fn len(&self) -> usize {
        self.times.len()
    }

    pub(super) fn times(&self) -> &[f64] {
        &self.times
    }

    /// The coordinates at a knot.
    pub(super) fn state(&self, knot: usize) -> &[f64] {
        &self.states[knot * self.n..(knot + 1) * self.n]
    }

    /// The knot at or before which a time lies, so that the interval after it holds the time.
    pub(super) fn interval(&self, time: f64) -> usize {
        self.times.partition_point(|&t| t <= time).clamp(1, self.len().max(2) - 1) - 1
    }

    /// The cubic of coordinate i after a knot, as coefficients of powers of the share θ of the interval.
    fn cubic(&self, knot: usize, i: usize) -> [f64; 4] {
        let h = self.times[knot + 1] - self.times[knot];
        let (a, b) = (knot * self.n + i, (knot + 1) * self.n + i);
        let rise = self.states[b] - self.states[a];
        let (first, last) = (h * self.rates[a], h * self.rates[b]);
        [self.states[a], first, 3.0 * rise - 2.0 * first - last, first + last - 2.0 * rise]
    }

    /// Coordinate i at a share of the interval after a knot.
    pub(super) fn between(&self, knot: usize, share: f64, i: usize) -> f64 {
        let [a, b, c, d] = self.cubic(knot, i);
        a + share * (b + share * (c + share * d))
    }

    /// All coordinates at a share of the interval after a knot.
    pub(super) fn at(&self, knot: usize, share: f64, out: &mut [f64]) {
        for (i, out) in out.iter_mut().enumerate() {
            *out = self.between(knot, share, i);
        }
    }

    /// The lowest and the highest value of coordinate i over the knots from `first` to `last`, and between them.
    pub(super) fn extremes(&self, i: usize, first: usize, last: usize) -> [f64; 2] {
        let mut extremes = [f64::INFINITY, f64::NEG_INFINITY];
        let mut see = |y: f64| extremes = [extremes[0].min(y), extremes[1].max(y)];
        for knot in first..=last {
            see(self.states[knot * self.n + i]);
            let turns = knot < last && self.rates[knot * self.n + i] * self.rates[(knot + 1) * self.n + i] < 0.0;
            if turns {
                see(self.between(knot, self.turn(knot, i), i));
            }
        }
        extremes
    }

    /// Where the cubic's slope, of opposite signs at the ends, is 0.
    fn turn(&self, knot: usize, i: usize) -> f64 {
        let [_, b, c, d] = self.cubic(knot, i);
        // b + 2 c θ + 3 d θ² = 0; this form of the roots does not cancel.
        let q = -(c + c.signum() * (c * c - 3.0 * d * b).max(0.0).sqrt());
        let roots = [q / (3.0 * d), b / q];
        roots.into_iter().find(|root| (0.0..=1.0).contains(root)).unwrap_or(0.5)
    }
}

#[cfg(test)]
mod tests {
    use super::Trail;

    /// A cubic is its own interpolant: y = t³ − 3t turns at ±1.
    #[test]
    fn exact_for_cubics() {
        let mut trail = Trail::new(1);
        for t in [-2.0, -0.5, 0.25, 1.5f64] {
            trail.push(t, &[t.powi(3) - 3.0 * t], &[3.0 * t * t - 3.0]);
        }
        let check = |found: f64, expected: f64| assert!((found - expected).abs() < 1e-14, "{found}, not {expected}");
        check(trail.between(2, 0.2, 0), 0.125 - 1.5);
        let [low, high] = trail.extremes(0, 0, 3);
        check(low, -2.0);
        check(high, 2.0);
        assert_eq!([-3.0, -2.0, 0.0, 0.25, 1.4, 9.0].map(|t| trail.interval(t)), [0, 0, 1, 2, 2, 2]);
    }
}
