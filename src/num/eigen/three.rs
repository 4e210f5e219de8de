//! Eigenvalues of an irreducible matrix of order three in nearly closed form, where that is as good as an iteration on the
//! whole matrix; it says where it is not.
//!
//! The extreme real root of the characteristic cubic by Halley's iteration (1694) from beyond it, where the cubic is monotone
//! and convex; the others from the quadratic that is left. Coefficients lose digits, so each root then takes Newton steps on
//! det(A − λI) itself, whose value is known to within a few ulp of the permanent of |A − λI|. A root is kept if that error
//! moves it by no more than some ulp of the matrix, which fails only where roots nearly meet.

use std::ops::{Add, Mul, Neg, Sub};

use nalgebra::Complex;

/// Steps towards the extreme root; from a start at most four times too far away three to five are usual.
const MOST_STEPS: usize = 40;

/// A last step so short, relative to the root, leaves an error of its cube.
const SHORT: f64 = 1e-5;

/// Steps of each root on the determinant, at most: the second only confirms the first.
const POLISHING: usize = 2;

/// A step so short needs no confirmation, and one that is longer in the end has not settled.
const CONFIRMED: f64 = 1e-12;

/// A root may be off by this many ulp of the largest entry: what backward stability would allow at a condition of ten.
const ULPS: f64 = 32.0;

/// Eigenvalues of a matrix row by row, irreducible, balanced, its largest entry near 1; `None` where roots nearly meet.
pub(super) fn values(a: &[f64; 9]) -> Option<[Complex<f64>; 3]> {
    let trace = a[0] + a[4] + a[8];
    let first = polished(a, extreme(a, trace / 3.0)?)?;
    // What is left of sum and sum of products.
    let sum = trace - first;
    let product = minors(a, 0.0) - first * sum;
    let middle = sum / 2.0;
    let discriminant = middle * middle - product;
    let real = |x: f64| Complex::new(x, 0.0);
    if discriminant < 0.0 {
        let second = polished_pair(a, Complex::new(middle, (-discriminant).sqrt()))?;
        return Some([real(first), second, second.conj()]);
    }
    let far = middle + discriminant.sqrt().copysign(middle);
    let near = if far == 0.0 { return None } else { product / far };
    Some([real(first), real(polished(a, far)?), real(polished(a, near)?)])
}

/// The real eigenvalue farthest from `middle`, a third of the trace, to a few digits less than there are.
///
/// Where the cubic has but one real root a step may land a little on its other side, from where the next ones come back.
fn extreme(a: &[f64; 9], middle: f64) -> Option<f64> {
    // y³ + p y + q for y = λ − middle.
    let (p, q) = (minors(a, middle), -determinant(a, middle));
    // |y| ≤ 2 max(√|p|, ∛|q|) (Fujiwara 1916), with a power of two above the cube root.
    let cube = f64::from_bits(((q.abs().to_bits() >> 52) / 3 + 683) << 52);
    let mut y = -(2.0 * p.abs().sqrt().max(cube)).copysign(q);
    for _ in 0..MOST_STEPS {
        let (value, slope) = ((y * y + p) * y + q, 3.0 * y * y + p);
        // f f'/(f'² − f f''/2).
        let step = value * slope / (slope * slope - 3.0 * y * value);
        y -= step;
        if step.abs() <= SHORT * y.abs() {
            return Some(y + middle);
        }
    }
    None
}

/// Sum of the principal minors of A − xI.
pub(super) fn minors<T: Number>(a: &[f64; 9], x: T) -> T {
    let [d, e, f] = [-x + a[0], -x + a[4], -x + a[8]];
    (d * e - a[1] * a[3]) + (d * f - a[2] * a[6]) + (e * f - a[5] * a[7])
}

/// Numbers that an eigenvalue may be.
pub(super) trait Number:
    Copy + Neg<Output = Self> + Add<Output = Self> + Add<f64, Output = Self> + Sub<f64, Output = Self> + Mul<Output = Self>
{
}

impl Number for f64 {}
impl Number for Complex<f64> {}

/// adj(A − xI), row by row.
pub(super) fn adjugate(a: &[f64; 9], x: Complex<f64>) -> [Complex<f64>; 9] {
    let [d, e, f] = [a[0] - x, a[4] - x, a[8] - x];
    [
        e * f - a[5] * a[7],
        -f * a[1] + a[2] * a[7],
        -e * a[2] + a[1] * a[5],
        -f * a[3] + a[5] * a[6],
        d * f - a[2] * a[6],
        -d * a[5] + a[2] * a[3],
        -e * a[6] + a[3] * a[7],
        -d * a[7] + a[1] * a[6],
        d * e - a[1] * a[3],
    ]
}

/// det(A − xI).
fn determinant(a: &[f64; 9], x: f64) -> f64 {
    let [d, e, f] = [a[0] - x, a[4] - x, a[8] - x];
    d * (e * f - a[5] * a[7]) - a[1] * (a[3] * f - a[5] * a[6]) + a[2] * (a[3] * a[7] - e * a[6])
}

/// Permanent of a matrix of moduli with this diagonal: what the rounding of its determinant is measured by.
fn permanent(a: &[f64; 9], [d, e, f]: [f64; 3]) -> f64 {
    let m = |i: usize| a[i].abs();
    d * (e * f + m(5) * m(7)) + m(1) * (m(3) * f + m(5) * m(6)) + m(2) * (m(3) * m(7) + e * m(6))
}

/// Whether an error of a few ulp in each product of the determinant moves a root only a little.
fn settled(permanent: f64, slope: f64, step: f64) -> bool {
    // The rounding error is at most 8 units of half an ulp.
    4.0 * permanent <= ULPS * slope && step <= CONFIRMED
}

fn polished(a: &[f64; 9], start: f64) -> Option<f64> {
    let (mut x, mut step) = (start, 0.0);
    for _ in 0..POLISHING {
        // The derivative of det(A − xI) is minus the sum of minors.
        step = determinant(a, x) / minors(a, x);
        x += step;
        if step.abs() <= CONFIRMED {
            break;
        }
    }
    let diagonal = [a[0] - x, a[4] - x, a[8] - x].map(f64::abs);
    settled(permanent(a, diagonal), minors(a, x).abs(), step.abs()).then_some(x)
}

fn polished_pair(a: &[f64; 9], start: Complex<f64>) -> Option<Complex<f64>> {
    let (mut z, mut step, mut slope) = (start, Complex::new(0.0, 0.0), 0.0);
    for _ in 0..POLISHING {
        let [d, e, f] = [a[0] - z, a[4] - z, a[8] - z];
        let value = d * (e * f - a[5] * a[7]) - (f * a[3] - a[5] * a[6]) * a[1] + (a[3] * a[7] - e * a[6]) * a[2];
        let derivative = (d * e - a[1] * a[3]) + (d * f - a[2] * a[6]) + (e * f - a[5] * a[7]);
        slope = derivative.norm_sqr();
        step = value * derivative.conj() / slope;
        z += step;
        if step.norm_sqr() <= CONFIRMED * CONFIRMED {
            break;
        }
    }
    let diagonal = [a[0] - z, a[4] - z, a[8] - z].map(|x| x.norm_sqr().sqrt());
    (z.im > 0.0 && settled(permanent(a, diagonal), slope.sqrt(), step.norm_sqr().sqrt())).then_some(z)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against the roots by hand, in any order; `None` where the iteration on the whole matrix must do it.
    #[test]
    fn by_hand() {
        let check = |a: [f64; 9], expected: Option<[(f64, f64); 3]>| match (values(&a), expected) {
            (Some(found), Some(expected)) => {
                for (re, im) in expected {
                    let near = |z: &Complex<f64>| (z.re - re).hypot(z.im - im) < 1e-15 * 8.0;
                    assert!(found.iter().any(near), "{a:?}: {found:?}");
                }
            }
            (found, expected) => assert_eq!(found.is_some(), expected.is_some(), "{a:?}: {found:?}"),
        };
        let half = 0.75f64.sqrt();
        check([0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0], Some([(1.0, 0.0), (-0.5, half), (-0.5, -half)]));
        let root = 2f64.sqrt();
        check([2.0, 1.0, 0.0, 1.0, 2.0, 1.0, 0.0, 1.0, 2.0], Some([(2.0, 0.0), (2.0 + root, 0.0), (2.0 - root, 0.0)]));
        check([0.0, 1.0, 0.0, 1.0, 0.0, 1.0, 0.0, 1.0, 0.0], Some([(0.0, 0.0), (root, 0.0), (-root, 0.0)]));
        // A double one, and a triple one: (λ − 1)³, as a companion matrix.
        check([2.0, 1.0, 1.0, 1.0, 2.0, 1.0, 1.0, 1.0, 2.0], None);
        check([3.0, -3.0, 1.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0], None);
    }
}
