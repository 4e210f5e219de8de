//! Eigenvectors of orders two and three in closed form, without an allocation until the result; `None` where an iteration on
//! the whole matrix does better.
//!
//! Of order two, v = (λ − d, c) and wᴴ = (λ − d, b), or (b, λ − a) and (c, λ − a): of λ − a and λ − d the larger one cancels
//! less. Then wᴴv is that number times the gap between the eigenvalues, which no subtraction of vectors blurs. Of order
//! three, adj(A − λI) has rank one: any of its columns is v, any row wᴴ, and wᴴv their common entry times the trace of the
//! adjugate, the derivative of the characteristic polynomial.

use nalgebra::Complex;

use super::scale::{balance_into, exponent_of, largest, times_power};
use super::three::{adjugate, minors};
use super::{Discriminant, Spectrum, Vectors, cut_off, three, two, unscaled};

/// Exponents between which products of all that is multiplied here are neither too large nor too small.
const MODERATE: i32 = 100;

/// Below this share of the squared size the adjugate has lost too many digits to be taken for vectors.
const CLEAR: f64 = 0.06;

/// Eigenvalues and vectors of a matrix of order two.
pub(super) fn of_two(entries: &[f64; 4]) -> Option<Spectrum> {
    if !is_moderate(entries) {
        return None;
    }
    let [a, b, c, d] = *entries;
    let step = match (exponent_of(b), exponent_of(c)) {
        (Some(b), Some(c)) => (c - b) / 2,
        (None, None) => return Some(diagonal(a, d)),
        _ => 0,
    };
    let near = [a, times_power(b, step), times_power(c, -step), d];
    let values = two::values_near_one(&near);
    let rounding = f64::EPSILON * largest(&near);
    let gap = (2.0 * Discriminant::of_scaled(&near).value.abs().sqrt()).max(rounding);
    let mode = |k: usize, value: Complex<f64>| {
        let [b, c] = [near[1], near[2]].map(|x| Complex::new(x, 0.0));
        let (from_a, from_d) = (value - a, value - d);
        let [size_a, size_d] = [from_a, from_d].map(|z| z.norm_sqr());
        // Both are equal for a pair, and where two real ones meet: those take one way each.
        let by_d = size_d > size_a || (size_d == size_a && (k == 0 || value.im != 0.0));
        let far = if by_d { from_d } else { from_a };
        // Two equal ones with nothing to one side: rounding stands for the difference, as it does in larger blocks.
        let far = if far.norm_sqr() < rounding * rounding { Complex::new(rounding, 0.0) } else { far };
        let [right, left] = if by_d { [[far, c], [far, b]] } else { [[b, far], [c, far]] };
        Some(Mode { right, left, overlap: far.norm_sqr().sqrt() * gap })
    };
    spectrum(values, &[0, step], mode)
}

/// Eigenvalues and vectors of a matrix of order three; `None` also where it falls into blocks.
pub(super) fn of_three(entries: &[f64; 9]) -> Option<Spectrum> {
    if !is_moderate(entries) || cut_off(entries).is_some() {
        return None;
    }
    let (mut near, mut units) = (*entries, [0; 3]);
    balance_into(&mut near, &mut units);
    if units.iter().any(|unit| unit.abs() > MODERATE) {
        return None;
    }
    let exponent = exponent_of(largest(&near)).unwrap_or(0);
    let near = near.map(|x| times_power(x, -exponent));
    let mut values = three::values(&near)?;
    values.sort_by(super::contract_order);
    let found = spectrum(values, &units, |_, value| mode_of_three(&near, value))?;
    Some(Spectrum { values: values.iter().map(|&z| unscaled(z, exponent)).collect(), ..found })
}

fn mode_of_three(near: &[f64; 9], value: Complex<f64>) -> Option<Mode<3>> {
    let adjugate = adjugate(near, value);
    let (place, size) = adjugate.iter().map(Complex::norm_sqr).enumerate().max_by(|a, b| a.1.total_cmp(&b.1))?;
    let size = size.sqrt();
    let shift = [near[0], near[4], near[8]].map(|x| (x - value).norm_sqr().sqrt());
    let reach = shift.into_iter().fold(largest(near), f64::max);
    if size < CLEAR * reach * reach {
        return None;
    }
    let (row, column) = (place / 3, place % 3);
    let right = [0, 1, 2].map(|i| adjugate[3 * i + column]);
    let left = [0, 1, 2].map(|j| adjugate[3 * row + j]);
    Some(Mode { right, left, overlap: size * minors(near, value).norm_sqr().sqrt() })
}

fn is_moderate(entries: &[f64]) -> bool {
    entries.iter().all(|&x| exponent_of(x).is_none_or(|e| e.abs() <= MODERATE))
}

/// The unit vectors, in falling order.
fn diagonal(a: f64, d: f64) -> Spectrum {
    let one = |is: bool| Complex::new(f64::from(u8::from(is)), 0.0);
    let straight = a >= d;
    let vectors = vec![one(straight), one(!straight), one(!straight), one(straight)];
    Spectrum {
        values: vec![Complex::new(a.max(d), 0.0), Complex::new(a.min(d), 0.0)],
        vectors: Some(Vectors { right: vectors.clone(), left: vectors, condition: vec![1.0; 2] }),
    }
}

/// v and wᴴ of one eigenvalue in balanced coordinates, and |wᴴ v|.
struct Mode<const N: usize> {
    right: [Complex<f64>; N],
    left: [Complex<f64>; N],
    overlap: f64,
}

/// Of values in the contract's order; `mode` is asked for those on or above the real axis.
fn spectrum<const N: usize>(
    values: [Complex<f64>; N],
    units: &[i32; N],
    mode: impl Fn(usize, Complex<f64>) -> Option<Mode<N>>,
) -> Option<Spectrum> {
    let zero = vec![Complex::new(0.0, 0.0); N * N];
    let mut found = Vectors { right: zero.clone(), left: zero, condition: vec![0.0; N] };
    for (k, &value) in values.iter().enumerate() {
        let below = value.im < 0.0;
        let Mode { mut right, mut left, overlap } = mode(k, if below { value.conj() } else { value })?;
        for i in 0..N {
            let unit = times_power(1.0, units[i]);
            right[i] *= unit;
            // Of wᴴ, whose conjugate is w.
            left[i] = left[i].conj() / unit;
        }
        let lengths = unit_length(&mut right, value.im == 0.0) * unit_length(&mut left, value.im == 0.0);
        found.condition[k] = (lengths / overlap).max(1.0);
        for i in 0..N {
            let turned = |z: Complex<f64>| if below { z.conj() } else { z };
            found.right[i * N + k] = turned(right[i]);
            found.left[i * N + k] = turned(left[i]);
        }
    }
    Some(Spectrum { values: values.to_vec(), vectors: Some(found) })
}

/// Brings a vector to unit length and its largest entry to the positive axis; the length before.
fn unit_length<const N: usize>(vector: &mut [Complex<f64>; N], real: bool) -> f64 {
    let length = vector.iter().map(Complex::norm_sqr).sum::<f64>().sqrt();
    let largest = vector.iter().copied().fold(Complex::new(0.0, 0.0), |largest: Complex<f64>, z| {
        if z.norm_sqr() > largest.norm_sqr() { z } else { largest }
    });
    let turn = largest.conj() / (largest.norm_sqr().sqrt() * length);
    for z in vector.iter_mut() {
        *z = if real { Complex::new(z.re * turn.re, 0.0) } else { *z * turn };
    }
    length
}
