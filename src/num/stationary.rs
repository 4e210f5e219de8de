//! Stationary covariance under white noise: AC + CAᵀ + Q = 0 for rates, C = ACAᵀ + Q for a map; and the largest response
//! to noise of a given size.
//!
//! Small orders are solved as one linear system in the n(n + 1)/2 entries of a symmetric matrix, larger ones by iterations
//! that converge quadratically: [`covariance`]. [`response`] is what [`covariance`] multiplies noise by at the most.
//! Neither looks whether A is stable: that is the caller's, as the equations have solutions without it.

use super::dense::{inverse_unless, product, transposed};
use super::eigen::largest_singular;
use super::exponential::Flow;

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

/// Steps of an iteration that squares its error: rates 2⁶⁰ apart.
const MOST_STEPS: usize = 64;

/// C for Q = diag(noise), for a stable matrix of order `n`, row by row.
///
/// In the unit of Q times time (for a map, of Q). Beyond order 12 by the matrix sign function (Roberts 1980), for a map by
/// doubling (Smith 1968), once refined. `None` where an entry is not finite, the system is singular, the iteration does not
/// settle, or `stop` says so.
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
        refined(&flow.balanced, n, &q, time, stop)?
    };
    let c: Vec<f64> = (0..n * n).map(|k| balanced[k] * flow.scale[k / n] * flow.scale[k % n]).collect();
    c.iter().all(|x| x.is_finite()).then_some(c)
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

/// Solved, and once more for what is left of the noise.
fn refined(a: &[f64], n: usize, q: &[f64], time: Time, stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    let solve = |q: &[f64]| match time {
        Time::Runs => by_sign(a, n, q, stop),
        Time::Steps => by_doubling(a, n, q, stop),
    };
    let mut c = solve(q)?;
    let left: Vec<f64> = q.iter().zip(noise_of(a, n, &c, time)).map(|(q, found)| q - found).collect();
    c.iter_mut().zip(solve(&left)?).for_each(|(c, more)| *c += more);
    Some(c)
}

/// A ← (sA + (sA)⁻¹)/2 goes to −I, and Q ← (sQ + A⁻¹QA⁻ᵀ/s)/2 to 2C; s makes the two norms alike.
fn by_sign(a: &[f64], n: usize, q: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    let (mut a, mut q) = (a.to_vec(), q.to_vec());
    for _ in 0..MOST_STEPS {
        let inverse = inverse_unless(&a, n, stop)?;
        let size = |x: &[f64]| x.iter().map(|x| x * x).sum::<f64>().sqrt();
        let far = (0..n * n).map(|k| a[k] + f64::from(u8::from(k % (n + 1) == 0))).map(|x| x * x).sum::<f64>().sqrt();
        // Near the end scaling would only disturb the convergence.
        let s = if far < 0.1 { 1.0 } else { (size(&inverse) / size(&a)).sqrt() };
        let through = product(&product(&inverse, &q, n), &transposed(&inverse, n), n);
        a.iter_mut().zip(&inverse).for_each(|(a, inverse)| *a = f64::midpoint(s * *a, inverse / s));
        q.iter_mut().zip(&through).for_each(|(q, through)| *q = f64::midpoint(s * *q, through / s));
        if far < 1e-9 {
            return Some(q.iter().map(|q| q / 2.0).collect());
        }
    }
    None
}

/// C ← C + ACAᵀ, A ← A².
fn by_doubling(a: &[f64], n: usize, q: &[f64], stop: &dyn Fn() -> bool) -> Option<Vec<f64>> {
    let (mut a, mut c) = (a.to_vec(), q.to_vec());
    for _ in 0..MOST_STEPS {
        let more = product(&product(&a, &c, n), &transposed(&a, n), n);
        let size = |x: &[f64]| x.iter().fold(0.0f64, |largest, x| largest.max(x.abs()));
        let is_settled = size(&more) <= f64::EPSILON * f64::EPSILON * size(&c);
        c.iter_mut().zip(&more).for_each(|(c, more)| *c += more);
        if is_settled {
            return Some(c);
        }
        if stop() || !size(&c).is_finite() {
            return None;
        }
        a = product(&a, &a, n);
    }
    None
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
