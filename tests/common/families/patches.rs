//! Communities of patches with all 3ⁿ equilibria, none of them in closed form.
//!
//! Without dispersal each patch has three states. With a little, patch i still has exactly one near each of them for any
//! inflow, `x_i = φ_σ(y_i)` with |φ'| < 1/8 (checked in `tests/equilibria/families.rs`), and the inflows `y` are
//! means of the x. So for each choice σ of states `x ↦ φ_σ(y(x))` is a contraction, with exactly one fixed point. The
//! points given are these, to within [`WITHIN`]; that there are no others is the argument above.

use super::{Family, choices, model, symbols};
use crate::common::text::Point;
use restpoint::num::interval::Interval;

/// Relative, of the points given.
pub const WITHIN: f64 = 1e-13;

/// A patch by itself, and how strongly it is coupled.
pub struct Patch {
    pub growth: fn(f64) -> f64,
    pub dispersal: f64,
    /// About where the rate turns from falling to rising, and back: one state lies below, one between, one above.
    pub turns: [f64; 2],
    /// Above every state.
    pub top: f64,
}

/// `x (1 − x)(x − 1/4)` under dispersal to all patches alike: joint absence is one of the 3ⁿ states.
pub const ALLEE: Patch =
    Patch { growth: |x| x * (1.0 - x) * (x - 0.25), dispersal: 0.007_812_5, turns: [0.120_6, 0.712_8], top: 1.5 };

/// Budworm (Ludwig, Jones & Holling 1978, from memory) with immigration 1/64, under dispersal to both neighbours.
pub const BUDWORM: Patch = Patch {
    growth: |x| 0.5 * x * (1.0 - x / 10.0) - x * x / (1.0 + x * x) + 0.015_625,
    dispersal: 0.001_953_125,
    turns: [1.273, 4.816],
    top: 12.0,
};

impl Patch {
    /// Growth, less what goes, with what comes.
    pub fn rate(&self, x: f64, inflow: f64) -> f64 {
        (self.growth)(x) + self.dispersal * (inflow - x)
    }

    /// The state between the turns that `which` says, by bisection: there the rate has one sign change.
    pub fn state(&self, which: usize, inflow: f64) -> f64 {
        let [below, above] = [[0.0, self.turns[0]], self.turns, [self.turns[1], self.top]][which];
        // The lower and the upper state are stable, the one between is not.
        let sign = if which == 1 { -1.0 } else { 1.0 };
        if sign * self.rate(below, inflow) <= 0.0 {
            return below;
        }
        let (mut low, mut high) = (below, above);
        for _ in 0..200 {
            let middle = f64::midpoint(low, high);
            if sign * self.rate(middle, inflow) > 0.0 { low = middle } else { high = middle }
        }
        f64::midpoint(low, high)
    }

    /// The fixed points for all choices of states, `inflow` giving what comes to each patch.
    fn fixed_points(&self, n: usize, inflow: impl Fn(&[f64], usize) -> f64) -> Vec<Point> {
        let fixed_point = |chosen: Vec<usize>| {
            let mut x: Vec<f64> = chosen.iter().map(|&which| self.state(which, 0.0)).collect();
            // Each round brings x at least eight times as near.
            for _ in 0..20 {
                for i in 0..n {
                    x[i] = self.state(chosen[i], inflow(&x, i));
                }
            }
            x.iter().map(|&x| Interval::new(x * (1.0 - WITHIN), x * (1.0 + WITHIN))).collect()
        };
        choices(3, n).map(fixed_point).collect()
    }
}

/// [`ALLEE`] patches with dispersal to all of them: the inflow is the mean.
pub fn allee(n: usize) -> Family {
    let mean = format!("({})/{n}", symbols(n).join(" + "));
    let row = |x: &String| format!("{x}*(1 - {x})*({x} - 0.25) + {}*({mean} - {x})", ALLEE.dispersal);
    let rows: Vec<_> = symbols(n).iter().map(row).collect();
    let name = format!("Allee patches {n}");
    let points = ALLEE.fixed_points(n, |x, _| x.iter().sum::<f64>() / n as f64);
    Family::complete(&name, model(&name, "2", &rows), points)
}

/// [`BUDWORM`] patches in a ring: the inflow is the mean of both neighbours.
pub fn budworm_ring(n: usize) -> Family {
    let symbols = symbols(n);
    let sides = |i: usize| [(i + n - 1) % n, (i + 1) % n];
    let row = |(i, x): (usize, &String)| {
        let [left, right] = sides(i).map(|side| &symbols[side]);
        let dispersal = BUDWORM.dispersal;
        format!("0.5*{x}*(1 - {x}/10) - {x}^2/(1 + {x}^2) + 0.015625 + {dispersal}*(({left} + {right})/2 - {x})")
    };
    let rows: Vec<_> = symbols.iter().enumerate().map(row).collect();
    let name = format!("budworm ring {n}");
    let points = BUDWORM.fixed_points(n, |x, i| sides(i).map(|side| x[side]).iter().sum::<f64>() / 2.0);
    Family::complete(&name, model(&name, "20", &rows), points)
}
