//! The linear part of every equilibrium of the published models, in all of their scenarios: Jacobian, eigenvalues, type,
//! stability, and what is proved.
#![expect(clippy::panic, reason = "a test fails by panicking")]

use crate::common::cases::{Case, Equilibrium, all};
use crate::common::linear::{Linear, linear};
use nalgebra::Complex;
use restpoint::analysis::linearise::{Linearisation, Verdict};
use restpoint::report::kinds;

/// Found states are those of parameters rounded to f64, and published entries have 22 digits; so an entry moves by the
/// state's condition, which in these cases leaves ten digits of the largest.
const ENTRY: f64 = 1e-10;

/// An eigenvalue beside its published one, relative to its condition and the size of the balanced matrix.
const EIGENVALUE: f64 = 1e-13;

/// Eigenvalues this near to each other, relative to the largest, are compared by their mean.
const CLUSTER: f64 = 1e-7;

fn matrix(published: &Equilibrium) -> Option<Vec<f64>> {
    published.jacobian.as_ref().map(|rows| rows.concat())
}

/// The found equilibrium at a published state, if it was found: a double root is not.
fn matching<'f>(found: &'f [Linear], published: &Equilibrium) -> Option<&'f Linear> {
    let scale = published.x.iter().fold(1e-12f64, |most, x| most.max(x.abs()));
    let near = |(x, y): (&f64, &f64)| (x - y).abs() <= 1e-9 * scale;
    found.iter().find(|(equilibrium, _)| equilibrium.state.iter().zip(&published.x).all(near))
}

/// Calls `check` on every pair of a published and a found equilibrium.
fn each(mut check: impl FnMut(&str, &Case, &Equilibrium, &Linearisation)) -> usize {
    let mut pairs = 0;
    for case in all() {
        let mut read = case.text().read();
        for (scenario, published) in case.lists().enumerate() {
            let found = linear(&mut read, scenario);
            for published in published {
                let name = format!("{} [{scenario}] {:?}", case.id, published.x);
                match matching(&found, published) {
                    Some((_, Ok(linear))) => check(&name, &case, published, linear),
                    Some((_, Err(why))) => panic!("{name}: {why:?}"),
                    None => assert!(case.is_degenerate(published) || case.species.len() > 6, "{name} is missing"),
                }
                pairs += 1;
            }
        }
    }
    pairs
}

#[test]
fn jacobians_are_the_published_ones() {
    let mut compared = 0;
    let pairs = each(|name, _, published, found| {
        let Some(jacobian) = matrix(published) else { return };
        let largest = jacobian.iter().fold(0.0f64, |most, entry| most.max(entry.abs()));
        for (k, (found, published)) in found.jacobian.iter().zip(&jacobian).enumerate() {
            assert!((found - published).abs() <= ENTRY * largest, "{name}: entry {k}: {found} for {published}");
        }
        compared += 1;
    });
    assert!(compared > 200 && pairs > 700, "{compared} of {pairs}");
}

/// The largest entry of S⁻¹ A S for the powers of two S that make it small.
fn balanced_size(matrix: &[f64], n: usize) -> f64 {
    let mut scale = vec![1.0f64; n];
    for _ in 0..20 {
        for i in 0..n {
            let others = |f: &dyn Fn(usize) -> f64| (0..n).filter(|&j| j != i).map(f).fold(0.0, f64::max);
            let row = others(&|j| matrix[i * n + j].abs() * scale[j]);
            let column = others(&|j| matrix[j * n + i].abs() / scale[j]);
            if row > 0.0 && column > 0.0 {
                scale[i] = (row / column).sqrt().log2().round().exp2();
            }
        }
    }
    (0..n * n).map(|k| matrix[k].abs() * scale[k % n] / scale[k / n]).fold(0.0, f64::max)
}

/// The mean of all values that hang together with the k-th.
fn cluster_mean(values: &[Complex<f64>], k: usize, reach: f64) -> Complex<f64> {
    let near: Vec<_> = values.iter().filter(|value| (*value - values[k]).norm() <= reach).collect();
    near.iter().copied().sum::<Complex<f64>>() / near.len() as f64
}

#[test]
fn eigenvalues_are_the_published_ones() {
    let mut compared = 0;
    each(|name, _, published, found| {
        let n = published.x.len();
        // The spectrum of the same matrix: the published one's, not of rounded parameters.
        let Some(jacobian) = matrix(published) else { return };
        let moved = found.jacobian.iter().zip(&jacobian).any(|(a, b)| (a - b).abs() > 1e-15 * b.abs());
        let size = balanced_size(&jacobian, n);
        let expected: Vec<Complex<f64>> = published.eigenvalues.iter().map(|&(re, im)| Complex::new(re, im)).collect();
        let reach = CLUSTER * size;
        let condition = &found.spectrum.vectors.as_ref().unwrap().condition;
        for (k, value) in found.spectrum.values.iter().enumerate() {
            let nearest = (0..n).min_by(|&a, &b| (expected[a] - value).norm().total_cmp(&(expected[b] - value).norm()));
            let nearest = nearest.unwrap();
            let clustered = (0..n).any(|j| j != nearest && (expected[j] - expected[nearest]).norm() <= reach);
            let [here, there] = if clustered {
                [cluster_mean(&found.spectrum.values, k, 10.0 * reach), cluster_mean(&expected, nearest, reach)]
            } else {
                [*value, expected[nearest]]
            };
            // Entries of rounded parameters are another matrix: as far off as they are.
            let tolerance = if moved { ENTRY } else { EIGENVALUE };
            let condition = if clustered { 1.0 } else { condition[k] };
            assert!((here - there).norm() <= tolerance * condition * size, "{name}: {here} for {there}");
            compared += 1;
        }
    });
    assert!(compared > 400, "{compared}");
}

#[test]
fn types_are_the_published_ones_and_proved() {
    each(|name, case, published, found| {
        assert_eq!(kinds::of(found.kind).word, case.word(published), "{name}: {:?}", found.spectrum.values);
        let [stable, unstable, centre] = published.counts;
        let dimensions = found.dimensions;
        assert_eq!([dimensions.stable, dimensions.unstable, dimensions.centre], [stable, unstable, centre], "{name}");
        let (re, im) = case.leading(published);
        assert_eq!(found.alternating, case.discrete && im == 0.0 && re < 0.0, "{name}");
        // Equal eigenvalues are a border of types too.
        let equal = case.word(published).contains("star") || case.word(published).contains("improper");
        if !case.is_degenerate(published) {
            assert!(found.stable_proven, "{name}: stability is not proved");
            assert!(found.kind_proven || equal, "{name}: {:?} is not proved: {:?}", found.kind, found.spectrum.values);
        }
    });
}

#[test]
fn what_is_true_of_the_nonlinear_model_is_said() {
    let mut critical = 0;
    each(|name, _, published, found| {
        let stability = published.stability.as_str();
        let Some(nonlinear) = found.nonlinear else {
            assert_eq!(found.stable, Some(!stability.starts_with("unstable")), "{name}: {stability}");
            return;
        };
        critical += 1;
        let expected = match stability {
            attracts if attracts.starts_with("asymptotically stable") => Verdict::Attracts,
            repels if repels.starts_with("unstable") => Verdict::Repels,
            both if both.starts_with("semi-stable") => Verdict::SemiStable,
            neutral if neutral.starts_with("stable, not asymptotically") => Verdict::Open,
            other => panic!("{name}: {other}"),
        };
        assert_eq!(nonlinear.verdict, expected, "{name}: {stability}: {nonlinear:?}");
        // Rounded parameters are not exactly critical; of the exact ones nothing is to be decided.
        assert!(!nonlinear.proven, "{name}: {nonlinear:?}");
    });
    assert_eq!(critical, 7);
}
