//! exp(At) of small real matrices, balanced first, kept as what it adds to the identity.
//!
//! [`Flow`] holds a matrix; [`Flow::beyond_identity`] is exp(At) − I for a short time, from which doubling reaches long
//! ones. Nothing here looks for stability or for a bound on long times: that is [`super::transient`].

use super::dense::{norm_one, product};

/// ‖At‖₁ up to which the series is used.
const SHORT: f64 = 0.5;

/// 0.5²⁰/20! is far below what f64 keeps beside 0.5.
const MOST_TERMS: usize = 20;

/// Balancing settles in a handful; what is not settled by then is near enough.
const MOST_SWEEPS: usize = 30;

/// A matrix A = D Â D⁻¹ with Â balanced, D a diagonal of powers of two (Parlett & Reinsch 1969), so that nothing is
/// rounded on the way there and back.
#[derive(Clone, Debug)]
pub struct Flow {
    /// The order.
    pub order: usize,
    /// Â, row by row.
    pub balanced: Vec<f64>,
    /// The diagonal of D.
    pub scale: Vec<f64>,
}

impl Flow {
    /// A matrix of order `n`, row by row; `None` where an entry is not finite.
    ///
    /// # Panics
    /// If there are not n² entries.
    pub fn new(entries: &[f64], n: usize) -> Option<Self> {
        assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
        if entries.iter().any(|x| !x.is_finite()) {
            return None;
        }
        let mut flow = Self { order: n, balanced: entries.to_vec(), scale: vec![1.0; n] };
        for _ in 0..MOST_SWEEPS {
            let changed = (0..n).filter(|&i| flow.level(i)).count();
            if changed == 0 {
                break;
            }
        }
        Some(flow)
    }

    /// Makes row and column `i`, off the diagonal, alike within a factor of two; whether that changed anything.
    fn level(&mut self, i: usize) -> bool {
        let n = self.order;
        let sum = |flow: &Self, at: &dyn Fn(usize) -> usize| -> f64 {
            (0..n).filter(|&j| j != i).map(|j| flow.balanced[at(j)].abs()).sum()
        };
        let (row, column) = (sum(self, &|j| i * n + j), sum(self, &|j| j * n + i));
        if row == 0.0 || column == 0.0 {
            return false;
        }
        let power = ((row / column).log2() / 2.0).round();
        let scale = (self.scale[i].log2() + power).exp2();
        // Beyond these the entries of D and of its inverse would not be f64.
        if power == 0.0 || !(1e-150..=1e150).contains(&scale) {
            return false;
        }
        self.scale[i] = scale;
        let factor = power.exp2();
        for j in (0..n).filter(|&j| j != i) {
            self.balanced[i * n + j] /= factor;
            self.balanced[j * n + i] *= factor;
        }
        true
    }

    /// D X D⁻¹ from X.
    #[must_use]
    pub fn unscaled(&self, x: &[f64]) -> Vec<f64> {
        let n = self.order;
        if self.scale.iter().all(|&d| d == 1.0) {
            return x.to_vec();
        }
        (0..n * n).map(|k| x[k] * (self.scale[k / n] / self.scale[k % n])).collect()
    }

    /// A time for which the series may be used; infinite for A = 0.
    #[must_use]
    pub fn short(&self) -> f64 {
        SHORT / norm_one(&self.balanced, self.order)
    }

    /// exp(Ât) − I by its series, for |t| up to twice [`Flow::short`]: the error is a few ulp of the result's norm.
    #[must_use]
    pub fn beyond_identity(&self, t: f64) -> Vec<f64> {
        let n = self.order;
        let step: Vec<f64> = self.balanced.iter().map(|a| a * t).collect();
        let (mut term, mut sum) = (step.clone(), step.clone());
        let size = norm_one(&step, n);
        let mut left = size;
        for k in 2..=MOST_TERMS {
            left *= size / k as f64;
            if left <= size * f64::EPSILON / 8.0 {
                break;
            }
            term = product(&term, &step, n);
            for x in &mut term {
                *x /= k as f64;
            }
            sum.iter_mut().zip(&term).for_each(|(sum, x)| *sum += x);
        }
        sum
    }
}

/// exp(2X) − I from Z = exp(X) − I: 2Z + Z².
#[must_use]
pub fn doubled(z: &[f64], n: usize) -> Vec<f64> {
    let mut square = product(z, z, n);
    square.iter_mut().zip(z).for_each(|(square, z)| *square += 2.0 * z);
    square
}

/// F (I + Z) = F + F Z.
#[must_use]
pub fn later(f: &[f64], z: &[f64], n: usize) -> Vec<f64> {
    let mut moved = product(f, z, n);
    moved.iter_mut().zip(f).for_each(|(moved, f)| *moved += f);
    moved
}

/// I + Z.
#[must_use]
pub fn with_identity(z: &[f64], n: usize) -> Vec<f64> {
    let mut whole = z.to_vec();
    whole.iter_mut().step_by(n + 1).for_each(|x| *x += 1.0);
    whole
}

#[cfg(test)]
mod tests {
    use super::*;

    /// exp(At) at a short time and after three doublings.
    fn check(a: &[f64], n: usize, t: f64, expected: impl Fn(f64) -> Vec<f64>) {
        let flow = Flow::new(a, n).expect("finite");
        assert!(t <= 2.0 * flow.short(), "{t} is not short for {a:?}");
        let mut z = flow.beyond_identity(t);
        for doublings in 0..4 {
            let found = flow.unscaled(&with_identity(&z, n));
            let expected = expected(t * 2f64.powi(doublings));
            for (x, y) in found.iter().zip(&expected) {
                assert!((x - y).abs() <= 1e-14 * y.abs(), "{found:?}, not {expected:?}");
            }
            z = doubled(&z, n);
        }
    }

    #[test]
    fn closed_forms() {
        check(&[-2.0], 1, 0.25, |t| vec![(-2.0 * t).exp()]);
        check(&[0.0, 1.0, -1.0, 0.0], 2, 0.5, |t| vec![t.cos(), t.sin(), -t.sin(), t.cos()]);
        // One eigenvector for a double eigenvalue.
        check(&[-1.0, 1.0, 0.0, -1.0], 2, 0.25, |t| vec![(-t).exp(), t * (-t).exp(), 0.0, (-t).exp()]);
        // The rotation in units that differ by 2^40.
        let unit = 40f64.exp2();
        check(&[0.0, unit, -1.0 / unit, 0.0], 2, 0.5, |t| vec![t.cos(), t.sin() * unit, -t.sin() / unit, t.cos()]);
        // Nilpotent: a polynomial.
        check(&[0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0], 3, 0.5, |t| {
            vec![1.0, t, t * t / 2.0, 0.0, 1.0, t, 0.0, 0.0, 1.0]
        });
    }

    #[test]
    fn what_is_not_finite_is_refused() {
        assert!(Flow::new(&[f64::NAN], 1).is_none() && Flow::new(&[0.0, f64::INFINITY, 0.0, 0.0], 2).is_none());
        assert!(Flow::new(&[], 0).is_some());
    }
}
