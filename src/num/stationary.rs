//! Stationary covariance under white noise: AC + CAᵀ + Q = 0 for rates, C = ACAᵀ + Q for a map; and the largest response
//! to noise of a given size.
//!
//! Small orders are solved as one linear system in the n(n + 1)/2 entries of a symmetric matrix, which keeps a covariance
//! of 0 exactly 0; larger ones are left to [`lyapunov`](super::lyapunov). [`response`] is what [`covariance`] multiplies
//! noise by at the most, and takes the whole system.
//! Neither looks whether A is stable: that is the caller's, as the equations have solutions without it.

use super::dense::{frobenius, inverse_unless, product, transposed};
use super::eigen::largest_singular;
use super::exponential::Flow;
use super::lyapunov::{lyapunov, stein};
use super::solve::unit_of;

/// Which equation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Time {
    /// AC + CAᵀ + Q = 0.
    Runs,
    /// C = ACAᵀ + Q.
    Steps,
}

/// Up to this order the system is written out: 78 unknowns.
const WRITTEN_OUT: usize = 12;

/// How nearly the equations are to hold, relative to the noise: half of the digits.
const HOLDS: f64 = 1e-8;

/// C for Q = diag(noise), for a stable matrix of order `n`, row by row.
///
/// In the unit of Q times time (for a map, of Q). `None` where an entry is not finite, the system is singular, `stop` says
/// so, or, beyond order 12, the equations cannot be made to hold: rates lie further apart than f64 has digits.
///
/// # Panics
/// If there are not n² entries and n intensities.
pub fn covariance(entries: &[f64], n: usize, noise: &[f64], time: Time, stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    assert_eq!(noise.len(), n, "noise for a matrix of order {n}");
    let flow = Flow::new(entries, n)?;
    let mut q = vec![0.0; n * n];
    for (i, noise) in noise.iter().enumerate() {
        q[i * n + i] = noise / flow.scale[i] / flow.scale[i];
    }
    let balanced = if n <= WRITTEN_OUT {
        let lifted = Lifted::new(&flow, time, stop)?;
        lifted.unpacked(&lifted.times(&lifted.packed(&q)))
    } else {
        refined(&flow.balanced, n, &q, time)?
    };
    let c: Vec<f64> = (0..n * n).map(|k| balanced[k] * flow.scale[k / n] * flow.scale[k % n]).collect();
    c.iter().all(|x| x.is_finite()).then_some(c)
}

/// Solved, and once more for what is left of the noise.
fn refined(a: &[f64], n: usize, q: &[f64], time: Time) -> Option<Vec<f64>> {
    let mut c = solved(a, n, q, time)?;
    let left = beyond(q, &noise_of(a, n, &c, time));
    c.iter_mut().zip(solved(a, n, &left, time)?).for_each(|(c, more)| *c += more);
    let off = beyond(q, &noise_of(a, n, &c, time));
    (frobenius(&off) <= HOLDS * frobenius(q)).then_some(c)
}

/// Q less what was found to be made of it.
fn beyond(q: &[f64], found: &[f64]) -> Vec<f64> {
    q.iter().zip(found).map(|(q, found)| q - found).collect()
}

/// C of a balanced matrix for any symmetric Q. The equations of [`lyapunov`] have Aᵀ where these have A.
fn solved(a: &[f64], n: usize, q: &[f64], time: Time) -> Option<Vec<f64>> {
    let adjoint = transposed(a, n);
    match time {
        // Of entries near 1, as that takes them: the unit of time is free.
        Time::Runs => {
            let unit = unit_of(a.iter().fold(0.0, |largest, a| largest.max(a.abs())));
            let [adjoint, q] = [&adjoint[..], q].map(|x| x.iter().map(|x| x * unit).collect::<Vec<f64>>());
            lyapunov(&adjoint, &q, n)
        }
        Time::Steps => stein(&adjoint, q, n),
    }
}

/// The largest ‖C‖ that noise of ‖Q‖ = 1 gives, both in the norm of Frobenius: ‖(A⊗I + I⊗A)⁻¹‖₂, for a map
/// ‖(I − A⊗A)⁻¹‖₂, for a stable matrix of order `n`, row by row.
///
/// Per Q: in units of time; none for a map. The solution operator keeps covariances what they are, so the largest response
/// is to one of them (Krein & Rutman 1948), and the symmetric matrices are enough to look at. `None` beyond order 12, and
/// as for [`covariance`].
///
/// # Panics
/// If there are not n² entries.
pub fn response(entries: &[f64], n: usize, time: Time, stop: &dyn Fn() -> bool) -> Option<f64> {
    let flow = Flow::new(entries, n)?;
    if n == 0 || n > WRITTEN_OUT {
        return None;
    }
    let lifted = Lifted::new(&flow, time, stop)?;
    let scale: Vec<f64> = lifted.places.iter().map(|&(i, j)| flow.scale[i] * flow.scale[j]).collect();
    let m = scale.len();
    let unscaled: Vec<f64> = (0..m * m).map(|k| lifted.solution[k] * (scale[k / m] / scale[k % m])).collect();
    largest_singular(&unscaled, m).ok()
}

/// Q ↦ C among symmetric matrices, in the orthonormal basis of the e_i e_iᵀ and (e_i e_jᵀ + e_j e_iᵀ)/√2.
struct Lifted {
    n: usize,
    places: Vec<(usize, usize)>,
    /// Row by row.
    solution: Vec<f64>,
}

impl Lifted {
    fn new(flow: &Flow, time: Time, stop: &dyn Fn() -> bool) -> Option<Self> {
        let n = flow.order;
        let places: Vec<(usize, usize)> = (0..n).flat_map(|i| (i..n).map(move |j| (i, j))).collect();
        let m = places.len();
        let mut lifted = Self { n, places, solution: Vec::new() };
        let mut operator = vec![0.0; m * m];
        for k in 0..m {
            let mut unit = vec![0.0; m];
            unit[k] = 1.0;
            let image = noise_of(&flow.balanced, n, &lifted.unpacked(&unit), time);
            for (row, x) in lifted.packed(&image).into_iter().enumerate() {
                operator[row * m + k] = x;
            }
        }
        lifted.solution = inverse_unless(&operator, m, stop)?;
        Some(lifted)
    }

    fn packed(&self, x: &[f64]) -> Vec<f64> {
        let root = std::f64::consts::SQRT_2;
        self.places.iter().map(|&(i, j)| if i == j { x[i * self.n + i] } else { root * x[i * self.n + j] }).collect()
    }

    fn unpacked(&self, coordinates: &[f64]) -> Vec<f64> {
        let mut x = vec![0.0; self.n * self.n];
        for (&(i, j), c) in self.places.iter().zip(coordinates) {
            let entry = if i == j { *c } else { c / std::f64::consts::SQRT_2 };
            x[i * self.n + j] = entry;
            x[j * self.n + i] = entry;
        }
        x
    }

    fn times(&self, coordinates: &[f64]) -> Vec<f64> {
        let row = |row: &[f64]| row.iter().zip(coordinates).map(|(a, x)| a * x).sum();
        self.solution.chunks_exact(self.places.len().max(1)).map(row).collect()
    }
}

/// The noise that has this covariance: −AC − CAᵀ, or C − ACAᵀ.
fn noise_of(a: &[f64], n: usize, c: &[f64], time: Time) -> Vec<f64> {
    let moved = product(a, c, n);
    match time {
        Time::Runs => (0..n * n).map(|k| -(moved[k] + moved[k % n * n + k / n])).collect(),
        Time::Steps => {
            let twice = product(&moved, &transposed(a, n), n);
            c.iter().zip(&twice).map(|(c, x)| c - x).collect()
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::num::random::Source;

    fn near(found: f64, expected: f64, relative: f64) {
        assert!((found - expected).abs() <= relative * expected.abs(), "{found}, not {expected}");
    }

    /// By hand.
    #[test]
    fn closed_forms() {
        let check = |a: &[f64], n: usize, noise: &[f64], time: Time, expected: &[f64]| {
            let found = covariance(a, n, noise, time, &|| false).expect("stable");
            found.iter().zip(expected).for_each(|(&found, &expected)| near(found, expected, 1e-14));
        };
        check(&[-0.5], 1, &[3.0], Time::Runs, &[3.0]);
        check(&[0.5], 1, &[3.0], Time::Steps, &[4.0]);
        // A spring with friction: −2 c₀₁ = 0 and so on gives c₀₀ = c₁₁ = q/(2 friction).
        check(&[0.0, 1.0, -1.0, -0.25], 2, &[0.0, 1.0], Time::Runs, &[2.0, 0.0, 0.0, 2.0]);
        // A chain: c₁₁ = 1/4, c₀₁ = 1/12, c₀₀ = 7/12.
        let twelfth = 1.0 / 12.0;
        check(&[-1.0, 1.0, 0.0, -2.0], 2, &[1.0, 1.0], Time::Runs, &[7.0 * twelfth, twelfth, twelfth, 0.25]);
        // The same with the first counted in units 2^-30 as large.
        let unit = 30f64.exp2();
        let expected = [7.0 * twelfth * unit * unit, twelfth * unit, twelfth * unit, 0.25];
        check(&[-1.0, unit, 0.0, -2.0], 2, &[unit * unit, 1.0], Time::Runs, &expected);
        assert_eq!(covariance(&[0.0, 1.0, -1.0, 0.0], 2, &[1.0, 1.0], Time::Runs, &|| false), None);
    }

    /// Both equations hold to rounding, by either route, for contractions of all orders up to twice the written-out ones.
    #[test]
    fn the_equations_hold() {
        let mut source = Source::new(11);
        for n in 1..=24 {
            let step: Vec<f64> = (0..n * n).map(|_| source.between(-0.9, 0.9) / n as f64).collect();
            let mut rate = step.clone();
            rate.iter_mut().step_by(n + 1).for_each(|x| *x -= 1.0);
            let noise: Vec<f64> = (0..n).map(|_| source.between(0.1, 2.0)).collect();
            for (a, time) in [(&rate, Time::Runs), (&step, Time::Steps)] {
                let c = covariance(a, n, &noise, time, &|| false).expect("stable");
                let q = noise_of(a, n, &c, time);
                for k in 0..n * n {
                    let expected = if k % (n + 1) == 0 { noise[k / n] } else { 0.0 };
                    assert!((q[k] - expected).abs() < 1e-13, "order {n}, {time:?}: {} at {k}", q[k]);
                }
            }
        }
    }

    /// For a normal matrix the largest response is that along the slowest direction.
    #[test]
    fn responses_of_normal_matrices() {
        near(response(&[-0.5], 1, Time::Runs, &|| false).expect("stable"), 1.0, 1e-15);
        near(response(&[0.5], 1, Time::Steps, &|| false).expect("stable"), 4.0 / 3.0, 1e-15);
        let rotation = [-0.25, 1.0, 0.0, -1.0, -0.25, 0.0, 0.0, 0.0, -3.0];
        near(response(&rotation, 3, Time::Runs, &|| false).expect("stable"), 2.0, 1e-14);
    }
}
