//! What the interval tests share: a random source with a fixed seed, hard numbers, and random intervals with points in them.

#![allow(dead_code, reason = "each test binary uses its own part")]

use restpoint::num::interval::Interval;

/// A random source (splitmix64; Steele, Lea & Flood 2014): small, and the same on every machine.
pub(crate) struct Random(pub(crate) u64);

impl Random {
    pub(crate) fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    pub(crate) fn below(&mut self, n: u64) -> u64 {
        self.bits() % n
    }

    /// Uniform in [0, 1).
    pub(crate) fn unit(&mut self) -> f64 {
        (self.bits() >> 11) as f64 * f64::EPSILON / 2.0
    }

    /// Uniform between two numbers.
    pub(crate) fn between(&mut self, lo: f64, hi: f64) -> f64 {
        (lo + (hi - lo) * self.unit()).clamp(lo, hi)
    }

    /// A finite number of any kind: any bits, moderate, small and whole, short, or at an edge of the format.
    pub(crate) fn number(&mut self) -> f64 {
        let x = match self.below(8) {
            0 => f64::from_bits(self.bits()),
            1 | 2 => self.between(-10.0, 10.0),
            3 => self.below(64) as f64,
            4 => (self.below(1 << 26) as f64) * 2f64.powi(self.below(200) as i32 - 100),
            5 => self.between(-1.0, 1.0) * 2f64.powi(self.below(2100) as i32 - 1070),
            6 => f64::MIN_POSITIVE * self.between(-4.0, 4.0),
            _ => EDGES[self.below(EDGES.len() as u64) as usize],
        };
        let x = if x.is_finite() { x } else { 1.0 };
        if self.below(2) == 0 { x } else { -x }
    }

    /// An interval of any kind, unbounded and single numbers included.
    pub(crate) fn interval(&mut self) -> Interval {
        let (a, b) = (self.number(), self.number());
        match self.below(8) {
            0 => Interval::new(a, f64::INFINITY),
            1 => Interval::new(f64::NEG_INFINITY, a),
            2 | 3 => Interval::point(a),
            4 => Interval::new(a, a.next_up().min(f64::MAX)),
            _ => Interval::new(a.min(b), a.max(b)),
        }
    }

    /// A finite number inside: an end as often as not.
    pub(crate) fn inside(&mut self, x: Interval) -> f64 {
        let (lo, hi) = (x.lo().max(f64::MIN), x.hi().min(f64::MAX));
        match self.below(4) {
            0 => lo,
            1 => hi,
            2 => (lo / 2.0 + (hi / 2.0 - lo / 2.0) * self.unit()).clamp(lo / 2.0, hi / 2.0) * 2.0,
            _ => self.number(),
        }
        .clamp(lo, hi)
    }
}

/// Where rounding goes wrong if anywhere.
pub(crate) const EDGES: [f64; 14] = [
    0.0,
    -0.0,
    1.0,
    0.1,
    1.0 + f64::EPSILON,
    1.0 - f64::EPSILON / 2.0,
    f64::MAX,
    f64::MAX / 2.0,
    f64::MIN_POSITIVE,
    5e-324,
    1e-323,
    1.5e154,
    1.4e-154,
    2e-308,
];

/// How many f64 steps lie between two numbers.
pub(crate) fn steps(a: f64, b: f64) -> u64 {
    let place = |x: f64| {
        let bits = x.to_bits().cast_signed();
        if bits < 0 { i64::MIN - bits } else { bits }
    };
    place(a).abs_diff(place(b))
}
