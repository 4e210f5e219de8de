//! The chi-square distribution: how far a normal vector strays.

use super::elementary;

const MOST_TERMS: usize = 2_000;
const BISECTIONS: usize = 200;

/// The share of a chi-square distribution with `freedom` degrees of freedom at or below x ≥ 0.
///
/// The lower incomplete gamma function by its power series, P(a, z) = z^a e^(−z) Σ z^k/Γ(a + k + 1), a = freedom/2, z = x/2:
/// all terms are positive. 0 for x ≤ 0; made for freedom up to some thousands and x not far from it.
pub fn share(freedom: usize, x: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    let (a, z) = (freedom as f64 / 2.0, x / 2.0);
    let mut term = elementary::exp(a * elementary::ln(z) - z - ln_gamma_of_half(freedom + 2));
    let mut sum = term;
    for k in 1..MOST_TERMS {
        term *= z / (a + k as f64);
        sum += term;
        if term <= f64::EPSILON * sum * 0.5 && k as f64 > z {
            break;
        }
    }
    sum.min(1.0)
}

/// The value at or below which a share lies, 0 ≤ share < 1; by bisection.
///
/// Begins at d + 2√(d t) + 2t, beyond which lies at most e^(−t) of the distribution (Laurent & Massart 2000): far beyond it
/// terms underflow, and a share would be taken for 0.
pub fn quantile(freedom: usize, wanted: f64) -> f64 {
    let (d, t) = (freedom as f64, -elementary::ln(1.0 - wanted));
    let (mut low, mut high) = (0.0, d + 2.0 * (d * t).sqrt() + 2.0 * t);
    for _ in 0..BISECTIONS {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if share(freedom, middle) < wanted {
            low = middle;
        } else {
            high = middle;
        }
    }
    high
}

/// ln Γ(k/2), by Γ(x + 1) = x Γ(x) from Γ(1) = 1 or Γ(1/2) = √π; k ≥ 1.
fn ln_gamma_of_half(k: usize) -> f64 {
    let half_of_ln_pi = 0.5 * elementary::ln(std::f64::consts::PI);
    let (first, start) = if k.is_multiple_of(2) { (2, 0.0) } else { (1, half_of_ln_pi) };
    (first..k).step_by(2).fold(start, |sum, j| sum + elementary::ln(j as f64 / 2.0))
}

#[cfg(test)]
mod tests {
    use super::{quantile, share};

    /// Two degrees: 1 − e^(−x/2). Others: tables of Abramowitz & Stegun (1964, 26.8), three to five digits.
    #[test]
    fn known_values() {
        let check = |freedom, wanted: f64, expected: f64, error: f64| {
            let x = quantile(freedom, wanted);
            assert!((x - expected).abs() <= error, "{freedom} degrees, {wanted}: {x}");
            assert!((share(freedom, x) - wanted).abs() < 1e-13, "{freedom} degrees, {wanted}");
        };
        check(2, 0.95, -2.0 * 0.05f64.ln(), 1e-12);
        check(2, 0.5, 2.0 * 2f64.ln(), 1e-13);
        check(1, 0.95, 1.959_963_984_540_054f64.powi(2), 1e-12);
        check(3, 0.95, 7.81473, 1e-5);
        check(10, 0.95, 18.3070, 1e-4);
        check(30, 0.95, 43.7729, 2e-4);
        check(100, 0.95, 124.342, 1e-3);
        // Beyond the tables: their formula 26.4.17 (Wilson & Hilferty 1931) is good to 0.01 % there.
        for freedom in [620, 1_000] {
            let (d, z) = (f64::from(freedom), 1.644_853_626_951_472_7);
            let spread = (2.0 / (9.0 * d)).sqrt();
            let expected = d * (1.0 - spread * spread + z * spread).powi(3);
            check(usize::try_from(freedom).expect("small"), 0.95, expected, 1e-4 * d);
        }
    }
}
