//! Powers of two that bring entries near 1 and balance rows against columns; exact, so eigenvalues change by a factor alone.
//!
//! [`Scaled`] takes out the size of the whole matrix, [`balance`] gives each index a unit of its own. Neither rounds anything
//! but entries that are 2^−1000 of the largest.

/// A matrix divided by a power of two.
pub(super) struct Scaled {
    /// Row by row; the largest is in [1, 2) in modulus, unless all are 0.
    pub(super) entries: Vec<f64>,
    /// The matrix was 2^exponent times this.
    pub(super) exponent: i32,
}

impl Scaled {
    /// Of finite entries.
    pub(super) fn new(entries: &[f64]) -> Self {
        let exponent = exponent_of(largest(entries)).unwrap_or(0);
        Self { entries: entries.iter().map(|&x| times_power(x, -exponent)).collect(), exponent }
    }
}

/// Largest modulus.
pub(super) fn largest(entries: &[f64]) -> f64 {
    entries.iter().fold(0.0, |largest, x| largest.max(x.abs()))
}

/// e with |x| in [2^e, 2^(e+1)); `None` for 0. For subnormal numbers too.
pub(super) fn exponent_of(x: f64) -> Option<i32> {
    let biased = |x: f64| ((x.to_bits() >> 52) & 0x7ff) as i32 - 1023;
    if x == 0.0 {
        None
    } else if x.abs() < f64::MIN_POSITIVE {
        Some(biased(x * 2f64.powi(64)) - 64)
    } else {
        Some(biased(x))
    }
}

/// x 2^e, rounded only where it is subnormal, infinite where it is too large.
///
/// In three steps, because 2^e itself may be no f64.
pub(super) fn times_power(x: f64, e: i32) -> f64 {
    if (-1022..=1023).contains(&e) {
        return x * power(e);
    }
    let e = e.clamp(-3000, 3000);
    let third = (e / 3).clamp(-1000, 1000);
    let rest = (e - third).clamp(-2000, 2000);
    x * power(third) * power(rest / 2) * power(rest - rest / 2)
}

/// 2^e for −1022 ≤ e ≤ 1023.
fn power(e: i32) -> f64 {
    f64::from_bits(u64::from((e + 1023).unsigned_abs()) << 52)
}

/// Sweeps after which balancing ends wherever it is: a sweep halves what is left of most imbalances.
const MOST_SWEEPS: usize = 60;

/// A step must shorten the two vectors by this factor (Parlett & Reinsch 1969).
const WORTH_IT: f64 = 0.95;

/// Balances an irreducible matrix of order `n` in place: afterwards entry (i, j) is what it was times 2^(d_j − d_i).
///
/// Off the diagonal, row and column of each index get about the same length. Parlett & Reinsch (1969), with the Euclidean
/// length and the whole column in the test as in James, Langou & Lowery (2014), which does no harm to matrices that are
/// nearly triangular.
pub(super) fn balance(entries: &mut [f64], n: usize) -> Vec<i32> {
    let mut exponents = vec![0; n];
    balance_into(entries, &mut exponents);
    exponents
}

/// As [`balance`], of as many indices as there are `exponents`, all 0 before.
pub(super) fn balance_into(entries: &mut [f64], exponents: &mut [i32]) {
    let n = exponents.len();
    for _ in 0..MOST_SWEEPS {
        let mut changed = false;
        for i in 0..n {
            let step = step_of(entries, n, i);
            if step != 0 {
                changed = true;
                exponents[i] += step;
                for j in (0..n).filter(|&j| j != i) {
                    entries[j * n + i] = times_power(entries[j * n + i], step);
                    entries[i * n + j] = times_power(entries[i * n + j], -step);
                }
            }
        }
        if !changed {
            break;
        }
    }
}

/// The power of two by which column i is to be multiplied and row i divided; 0 where that gains nothing.
fn step_of(entries: &[f64], n: usize, i: usize) -> i32 {
    let others = || (0..n).filter(move |&j| j != i);
    let column: f64 = others().map(|j| entries[j * n + i] * entries[j * n + i]).sum();
    let row: f64 = others().map(|j| entries[i * n + j] * entries[i * n + j]).sum();
    let diagonal = entries[i * n + i];
    if SAFE.contains(&column) && SAFE.contains(&row) {
        return step_of_squares(column, row, diagonal * diagonal);
    }
    step_far_away(entries, n, i)
}

/// Squares of lengths between which, times powers of four that bring two of them together, nothing overflows.
const SAFE: std::ops::Range<f64> = 1e-120..1e120;

fn step_of_squares(column: f64, row: f64, diagonal: f64) -> i32 {
    if row < 4.0 * column && column < 4.0 * row {
        return 0;
    }
    let (Some(c), Some(r)) = (exponent_of(column), exponent_of(row)) else { return 0 };
    let mut best = (0, column + row);
    let half = (r.div_euclid(2) - c.div_euclid(2)).div_euclid(2);
    for step in [half, half + 1] {
        let size = times_power(column, 2 * step) + times_power(row, -2 * step);
        if size < best.1 {
            best = (step, size);
        }
    }
    let worth = best.1 + diagonal < WORTH_IT * WORTH_IT * (column + row + diagonal);
    if worth { best.0 } else { 0 }
}

/// The same where squares may leave the range of f64.
fn step_far_away(entries: &[f64], n: usize, i: usize) -> i32 {
    let column = length((0..n).filter(|&j| j != i).map(|j| entries[j * n + i]));
    let row = length((0..n).filter(|&j| j != i).map(|j| entries[i * n + j]));
    if row < 2.0 * column && column < 2.0 * row {
        return 0;
    }
    let (Some(c), Some(r)) = (exponent_of(column), exponent_of(row)) else { return 0 };
    let mut best = (0, column.hypot(row));
    for step in [(r - c).div_euclid(2), (r - c).div_euclid(2) + 1] {
        let size = times_power(column, step).hypot(times_power(row, -step));
        if size < best.1 {
            best = (step, size);
        }
    }
    let diagonal = entries[i * n + i];
    let worth = best.1.hypot(diagonal) < WORTH_IT * column.hypot(row).hypot(diagonal);
    if worth { best.0 } else { 0 }
}

/// Euclidean length, without overflow or underflow on the way.
fn length(entries: impl Iterator<Item = f64> + Clone) -> f64 {
    let plain: f64 = entries.clone().map(|x| x * x).sum();
    if (1e-250..1e250).contains(&plain) {
        return plain.sqrt();
    }
    let largest = entries.clone().fold(0.0f64, |largest, x| largest.max(x.abs()));
    let Some(exponent) = exponent_of(largest) else { return 0.0 };
    let sum: f64 = entries.map(|x| times_power(x, -exponent).powi(2)).sum();
    times_power(sum.sqrt(), exponent)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn powers_of_two_are_exact() {
        let check = |x: f64, e: i32, expected: f64| assert_eq!(times_power(x, e), expected, "{x:e} 2^{e}");
        check(3.0, 4, 48.0);
        check(f64::from_bits(1), 1074, 1.0);
        check(f64::from_bits(1), 2097, 2f64.powi(1023));
        check(2f64.powi(1023), -2097, f64::from_bits(1));
        check(1.0, 1024, f64::INFINITY);
        check(1.0, -5000, 0.0);
        check(-1.5, -1074, -f64::from_bits(2));
        for e in [-1074, -1073, -1022, -1, 0, 1, 1023] {
            assert_eq!(exponent_of(times_power(1.0, e)), Some(e));
        }
        assert_eq!(exponent_of(0.0), None);
    }

    /// Balancing a diagonal similarity of a balanced matrix finds one again, and entries are products of powers of two.
    #[test]
    fn units_are_taken_out() {
        let plain = [1.0, 2.0, -1.0, 1.5, -1.0, 1.0, 1.0, 2.0, 0.5];
        for units in [[0, 0, 0], [300, -300, 7], [0, 400, -500]] {
            let mut entries: Vec<f64> = (0..9).map(|k| times_power(plain[k], units[k / 3] - units[k % 3])).collect();
            let exponents = balance(&mut entries, 3);
            for (k, entry) in entries.iter().enumerate() {
                let moved = units[k / 3] - units[k % 3] + exponents[k % 3] - exponents[k / 3];
                assert_eq!(*entry, times_power(plain[k], moved));
                assert!((-2..=2).contains(&moved), "{units:?}: {exponents:?}");
            }
        }
    }
}
