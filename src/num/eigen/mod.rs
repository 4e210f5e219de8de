//! Eigenvalues and eigenvectors of real matrices, every iteration bounded.
//!
//! [`eigenvalues`] and [`spectrum`] are the ways in, [`symmetric()`], [`largest_symmetric`] and [`largest_singular`] for growth
//! at once, and [`Discriminant`] for the border between node and spiral. A matrix is divided along its zeros (`blocks`), each
//! block scaled and balanced by powers of two (`scale`), solved in closed form ([`two()`] and [`three()`], which allocate next to
//! nothing) or by an iteration (`general`; values alone on `hessenberg` and `francis`), and put together again (`triangular`, `vectors`; orders two and three in
//! `small`). All numerical: what is *proved* of a spectrum is said by [`verified`](super::verified). The library's own calls
//! for eigenvalues may run for ever; the lint settings forbid them.

mod blocks;
mod francis;
mod general;
mod hessenberg;
mod scale;
mod small;
mod symmetric;
mod three;
mod triangular;
mod two;
mod vectors;

use nalgebra::Complex;

pub(crate) use blocks::strongly_connected;
pub use symmetric::{SymmetricSpectrum, largest_singular, largest_symmetric, symmetric, symmetric_spectrum};
pub(crate) use triangular::complex_schur;
pub use two::Discriminant;

use super::interval::Interval;
use scale::{Scaled, balance, balance_into, exponent_of, largest, times_power};

/// Why there are no eigenvalues.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unsolved {
    /// An entry is not finite, or an eigenvalue would be too large for f64.
    NotFinite,
    /// The iteration did not end in time, nor after an orthogonal similarity.
    NoConvergence,
}

/// Eigenvalues of a matrix of order n, and their vectors where they were asked for.
#[derive(Clone, Debug, PartialEq)]
pub struct Spectrum {
    /// By falling real part, then falling imaginary part; pairs are exactly conjugate.
    pub values: Vec<Complex<f64>>,
    /// Their vectors.
    pub vectors: Option<Vectors>,
}

/// Right and left eigenvectors, each of length 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Vectors {
    /// A v = λ v: entry i of the k-th at i n + k. The largest entry is real and positive.
    pub right: Vec<Complex<f64>>,
    /// wᴴ A = λ wᴴ: entry i of the k-th at i n + k. The largest entry is real and positive.
    pub left: Vec<Complex<f64>>,
    /// Condition of each eigenvalue, 1/|wᴴ v|; infinite where the two are orthogonal, and huge where rounding alone keeps
    /// them from it.
    pub condition: Vec<f64>,
}

impl Spectrum {
    /// The same in a map's order: by falling modulus, then falling real part, then falling imaginary part.
    #[must_use]
    pub fn by_modulus(self) -> Self {
        let key = |z: &Complex<f64>| (z.re.hypot(z.im), z.re, z.im);
        self.sorted(|a, b| falling(key(a), key(b)))
    }

    fn by_real_part(self) -> Self {
        self.sorted(contract_order)
    }

    fn sorted(self, compare: impl Fn(&Complex<f64>, &Complex<f64>) -> std::cmp::Ordering) -> Self {
        let n = self.values.len();
        let mut order: Vec<usize> = (0..n).collect();
        order.sort_by(|&a, &b| compare(&self.values[a], &self.values[b]));
        let columns = |entries: &[Complex<f64>]| (0..n * n).map(|k| entries[k / n * n + order[k % n]]).collect();
        Self {
            values: order.iter().map(|&k| self.values[k]).collect(),
            vectors: self.vectors.as_ref().map(|vectors| Vectors {
                right: columns(&vectors.right),
                left: columns(&vectors.left),
                condition: order.iter().map(|&k| vectors.condition[k]).collect(),
            }),
        }
    }
}

fn falling(a: (f64, f64, f64), b: (f64, f64, f64)) -> std::cmp::Ordering {
    b.0.total_cmp(&a.0).then(b.1.total_cmp(&a.1)).then(b.2.total_cmp(&a.2))
}

/// By falling real part, then falling imaginary part.
fn contract_order(a: &Complex<f64>, b: &Complex<f64>) -> std::cmp::Ordering {
    falling((a.re, a.im, 0.0), (b.re, b.im, 0.0))
}

/// Eigenvalues of a matrix of order `n`, row by row; in its unit, in the order of [`Spectrum::values`].
///
/// Those of a block triangular matrix (in any order of its indices) are those of the blocks, so a row or column with
/// nothing off the diagonal gives its entry exactly. Each is otherwise within about n ulp of the *balanced* block's size
/// times its condition; double ones that are not exactly so in closed form come out about 1e-8 of that apart.
///
/// # Panics
/// If there are not n² entries.
pub fn eigenvalues(entries: &[f64], n: usize) -> Result<Vec<Complex<f64>>, Unsolved> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    match *entries {
        [a, b, c, d] => return Ok(two(&[a, b, c, d])?.to_vec()),
        [a, b, c, d, e, f, g, h, i] => return Ok(three(&[a, b, c, d, e, f, g, h, i])?.to_vec()),
        _ => all_finite(entries)?,
    }
    let mut values = by_blocks(entries, n)?;
    if values.iter().any(|z| !z.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    values.sort_by(contract_order);
    Ok(values)
}

/// As [`eigenvalues`] of a matrix of order two, without an allocation.
pub fn two(entries: &[f64; 4]) -> Result<[Complex<f64>; 2], Unsolved> {
    if two::is_moderate(entries) {
        return Ok(two::values_near_one(entries));
    }
    all_finite(entries)?;
    let values = two::values(entries);
    if values.iter().all(|z| z.is_finite()) { Ok(values) } else { Err(Unsolved::NotFinite) }
}

/// As [`eigenvalues`] of a matrix of order three; without an allocation, unless two of them nearly meet.
pub fn three(entries: &[f64; 9]) -> Result<[Complex<f64>; 3], Unsolved> {
    all_finite(entries)?;
    let mut values = match cut_off(entries) {
        Some(i) => {
            let (j, k) = ((i + 1) % 3, (i + 2) % 3);
            let others = [entries[4 * j], entries[3 * j + k], entries[3 * k + j], entries[4 * k]];
            let [first, second] = two::values(&others);
            [Complex::new(entries[4 * i], 0.0), first, second]
        }
        None => of_three(entries)?,
    };
    values.sort_by(contract_order);
    if values.iter().all(|z| z.is_finite()) { Ok(values) } else { Err(Unsolved::NotFinite) }
}

fn all_finite(entries: &[f64]) -> Result<(), Unsolved> {
    if entries.iter().all(|x| x.is_finite()) { Ok(()) } else { Err(Unsolved::NotFinite) }
}

fn by_blocks(entries: &[f64], n: usize) -> Result<Vec<Complex<f64>>, Unsolved> {
    let mut values = Vec::with_capacity(n);
    for part in strongly_connected(n, |i, j| entries[i * n + j] != 0.0) {
        let block: Vec<f64> = part.iter().flat_map(|&i| part.iter().map(move |&j| entries[i * n + j])).collect();
        match block[..] {
            [a] => values.push(Complex::new(a, 0.0)),
            [a, b, c, d] => values.extend(two::values(&[a, b, c, d])),
            [a, b, c, d, e, f, g, h, i] => values.extend(of_three(&[a, b, c, d, e, f, g, h, i])?),
            _ => values.extend(of_block(&block, part.len())?),
        }
    }
    Ok(values)
}

/// An index of three that has no arrow out or none in, so that its entry is an eigenvalue and the other two are alone. A
/// graph of three without one is strongly connected.
fn cut_off(a: &[f64; 9]) -> Option<usize> {
    let apart = |i: usize, j: usize| a[i] == 0.0 && a[j] == 0.0;
    let [first, second, third] = [apart(1, 2) || apart(3, 6), apart(3, 5) || apart(1, 7), apart(6, 7) || apart(2, 5)];
    if first {
        Some(0)
    } else if second {
        Some(1)
    } else {
        third.then_some(2)
    }
}

/// Of an irreducible one.
fn of_three(entries: &[f64; 9]) -> Result<[Complex<f64>; 3], Unsolved> {
    let mut near = *entries;
    balance_into(&mut near, &mut [0; 3]);
    let exponent = exponent_of(largest(&near)).unwrap_or(0);
    let near = near.map(|x| times_power(x, -exponent));
    let values = match three::values(&near) {
        Some(values) => values,
        None => match general::values(&near, 3)?[..] {
            [a, b, c] => [a, b, c],
            _ => return Err(Unsolved::NoConvergence),
        },
    };
    Ok(values.map(|z| unscaled(z, exponent)))
}

/// Of an irreducible block of order three or more.
fn of_block(entries: &[f64], n: usize) -> Result<Vec<Complex<f64>>, Unsolved> {
    let mut balanced = entries.to_vec();
    balance(&mut balanced, n);
    let scaled = Scaled::new(&balanced);
    Ok(general::values(&scaled.entries, n)?.into_iter().map(|z| unscaled(z, scaled.exponent)).collect())
}

fn unscaled(z: Complex<f64>, exponent: i32) -> Complex<f64> {
    Complex::new(times_power(z.re, exponent), times_power(z.im, exponent))
}

/// Eigenvalues of a matrix of order `n`, row by row, with right and left vectors.
///
/// Values as [`eigenvalues`] gives them, up to rounding.
///
/// # Panics
/// If there are not n² entries.
pub fn spectrum(entries: &[f64], n: usize) -> Result<Spectrum, Unsolved> {
    assert_eq!(entries.len(), n * n, "entries of a matrix of order {n}");
    if entries.iter().any(|x| !x.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    let in_closed_form = match *entries {
        [a, b, c, d] => small::of_two(&[a, b, c, d]),
        [a, b, c, d, e, f, g, h, i] => small::of_three(&[a, b, c, d, e, f, g, h, i]),
        _ => None,
    };
    if let Some(found) = in_closed_form {
        return Ok(found);
    }
    let form = triangular::Triangular::new(entries, n)?;
    if form.values.iter().any(|z| !z.is_finite()) {
        return Err(Unsolved::NotFinite);
    }
    let vectors = vectors::vectors(&form);
    Ok(Spectrum { values: form.values, vectors: Some(vectors) }.by_real_part())
}

/// A matrix between bounds that is similar to the given one divided by the power of two beside it: balanced, with entries
/// near 1. Bounds stay bounds, and may come out unbounded.
pub(crate) fn balanced(entries: &[Interval], n: usize) -> (Vec<Interval>, f64) {
    let mut sizes: Vec<f64> = entries.iter().map(|entry| entry.mag()).collect();
    let exponents = balance(&mut sizes, n);
    let exponent = exponent_of(largest(&sizes)).unwrap_or(0).clamp(-1022, 1022);
    let moved = |(place, &entry): (usize, &Interval)| {
        // In thirds, because the whole power may be no f64; beyond 2^±3000 an entry that is not 0 is out of range anyway.
        let power = (exponents[place % n] - exponents[place / n] - exponent).clamp(-3000, 3000);
        let thirds = [power / 3, power / 3, power - 2 * (power / 3)];
        thirds.iter().fold(entry, |entry, &third| entry * Interval::point(times_power(1.0, third)))
    };
    (entries.iter().enumerate().map(moved).collect(), times_power(1.0, exponent))
}

#[cfg(test)]
mod tests;
