//! Sums, quantiles and ranks of many numbers: exact where they say so, and the same of parts as of the whole.

#![expect(clippy::cast_sign_loss, reason = "shares are not negative")]

use restpoint::num::quantiles::{MOST_EXACT, Quantiles, WIDTH};
use restpoint::num::random::Source;
use restpoint::num::ranks::Ranks;
use restpoint::num::sum::Sum;

fn sum(numbers: &[f64]) -> Sum {
    let mut sum = Sum::default();
    for x in numbers {
        sum.add(*x);
    }
    sum
}

#[test]
fn sums_are_exact() {
    let check = |numbers: &[f64], expected: f64| {
        assert_eq!(sum(numbers).value().to_bits(), expected.to_bits(), "{numbers:?}");
        let mut turned = numbers.to_vec();
        turned.reverse();
        assert_eq!(sum(&turned), sum(numbers));
    };
    check(&[], 0.0);
    check(&[1e300, 1.0, -1e300], 1.0);
    check(&[f64::MAX, f64::MAX, -f64::MAX], f64::MAX);
    check(&[f64::MIN_POSITIVE, 5e-324, -f64::MIN_POSITIVE], 5e-324);
    check(&[-1.0, 1e-20, 1e20, -1e20], -1.0);
    check(&[-1e-320, 3e-320], 3e-320 - 1e-320);
    check(&[0.1; 10], 1.0);
    assert_eq!(sum(&[1.0, f64::INFINITY]).value(), f64::INFINITY);
    assert!(sum(&[f64::NEG_INFINITY, f64::INFINITY]).value().is_nan());
}

/// Whole numbers times a power of two, whose sum a whole number of 128 bits holds.
#[test]
fn sums_of_many_and_of_parts() {
    let mut source = Source::new(3);
    let mut whole = 0i128;
    let mut parts = vec![Sum::default(); 3];
    for k in 0..100_000 {
        let (size, power) = (i128::from(source.bits() >> 11), source.bits() % 50);
        let size = if source.bits().is_multiple_of(2) { size } else { -size };
        whole += size << power;
        parts[k % 3].add(size as f64 * 2f64.powi(power as i32));
    }
    let mut all = parts[2].clone();
    all.and(&parts[0]);
    all.and(&parts[1]);
    let error = (all.value() - whole as f64).abs();
    assert!(error <= f64::EPSILON * (whole as f64).abs(), "{} not {whole}", all.value());
}

/// The same of parts as of the whole, whatever part a number is in.
fn check_parts(planned: u64, numbers: &[f64]) {
    let of = |start: usize, step: usize| {
        let mut part = Quantiles::new(planned);
        numbers.iter().skip(start).step_by(step).for_each(|x| part.push(*x));
        part
    };
    let mut parts = of(2, 3);
    parts.and(&of(0, 3));
    parts.and(&of(1, 3));
    assert_eq!(parts.sorted(), of(0, 1).sorted());
}

#[test]
fn exact_quantiles() {
    let check = |numbers: &[f64], share: f64, expected: Option<f64>| {
        let mut quantiles = Quantiles::new(MOST_EXACT);
        for x in numbers {
            quantiles.push(*x);
        }
        assert!(quantiles.is_exact());
        assert_eq!(quantiles.sorted().at(share), expected, "{numbers:?} at {share}");
    };
    check(&[], 0.5, None);
    check(&[f64::NAN], 0.5, None);
    check(&[3.0], 0.9, Some(3.0));
    check(&[4.0, 1.0, 3.0, 2.0], 0.5, Some(2.5));
    check(&[4.0, 1.0, 3.0, 2.0], 0.0, Some(1.0));
    check(&[4.0, 1.0, 3.0, 2.0], 1.0, Some(4.0));
    check(&[0.0, 10.0, 20.0], 0.25, Some(5.0));
    check(&[f64::INFINITY, 1.0, f64::INFINITY], 1.0, Some(f64::INFINITY));
    check(&[f64::NEG_INFINITY, f64::NEG_INFINITY, 0.0], 0.0, Some(f64::NEG_INFINITY));
    check_parts(10, &[3.0, -0.0, 0.0, -2.0, f64::INFINITY, 3.0, 1e-310]);
}

#[test]
fn quantiles_by_bins_are_near() {
    let mut source = Source::new(9);
    // Numbers of both signs over twenty powers of ten, with a twentieth of zeros.
    let mut numbers: Vec<f64> = (0..30_000)
        .map(|k| {
            let size = 10f64.powf(source.between(-10.0, 10.0));
            if k % 20 == 0 {
                0.0
            } else if k % 3 == 0 {
                -size
            } else {
                size
            }
        })
        .collect();
    check_parts(MOST_EXACT + 1, &numbers);
    let mut bins = Quantiles::new(MOST_EXACT + 1);
    for x in &numbers {
        bins.push(*x);
    }
    assert!(!bins.is_exact());
    let bins = bins.sorted();
    numbers.sort_by(f64::total_cmp);
    for k in 0..=100 {
        let share = f64::from(k) / 100.0;
        let found = bins.at(share).expect("numbers");
        // The number of that rank, or its neighbours.
        let at = (share * 29_999.0) as usize;
        let (low, high) = (numbers[at.saturating_sub(1)], numbers[(at + 2).min(29_999)]);
        assert!(
            found >= low - WIDTH * low.abs() && found <= high + WIDTH * high.abs(),
            "{share}: {found}, {low} to {high}"
        );
        let below = numbers.partition_point(|x| *x <= high) as f64 / 30_000.0;
        assert!((bins.share(high) - below).abs() < 3e-4, "{high}: {} not {below}", bins.share(high));
    }
    check_parts(MOST_EXACT + 1, &[f64::MAX, f64::MIN_POSITIVE, 5e-324, f64::NEG_INFINITY, -1.0, 0.0]);
    let mut ends = Quantiles::new(u64::MAX);
    for x in [f64::MAX, 5e-324, f64::NEG_INFINITY, f64::INFINITY] {
        ends.push(x);
    }
    let ends = ends.sorted();
    assert_eq!((ends.at(0.0), ends.at(1.0)), (Some(f64::NEG_INFINITY), Some(f64::INFINITY)));
    assert!(ends.at(2.0 / 3.0).is_some_and(|x| (x / f64::MAX - 1.0).abs() < WIDTH));
}

#[test]
fn rank_correlations() {
    let check = |pairs: &[(f64, f64)], expected: Option<f64>| {
        let mut ranks = Ranks::new(10, || [Vec::new(), Vec::new()]);
        for (x, y) in pairs {
            ranks.push(*x, *y);
        }
        match (ranks.correlation(), expected) {
            (Some(found), Some(expected)) => assert!((found - expected).abs() < 1e-15, "{pairs:?}: {found}"),
            (found, expected) => assert_eq!(found, expected, "{pairs:?}"),
        }
    };
    check(&[], None);
    check(&[(1.0, 2.0)], None);
    check(&[(1.0, 2.0), (2.0, 2.0)], None);
    check(&[(1.0, 10.0), (2.0, 1e9), (3.0, f64::INFINITY)], Some(1.0));
    check(&[(1.0, 2.0), (f64::NAN, 0.0), (2.0, 1.0)], Some(-1.0));
    // 1 − 6 Σd²/(n(n² − 1)) with d = 1, 1, 2, 2, 0 over five.
    check(
        &[(1.0, 2.0), (2.0, 1.0), (3.0, 5.0), (4.0, 3.0), (5.0, 4.0)],
        Some(1.0 - 6.0 * 10.0 / 120.0 + 6.0 * 2.0 / 120.0),
    );
    // With two equal: ranks 1, 2½, 2½, 4 against 1, 2, 3, 4: covariance 4.5, variances 4.5 and 5.
    check(&[(1.0, 1.0), (2.0, 2.0), (2.0, 3.0), (9.0, 4.0)], Some(4.5 / (4.5f64 * 5.0).sqrt()));
    check(&[(-0.0, 1.0), (0.0, 2.0), (1.0, 3.0)], Some(1.5 / 3f64.sqrt()));
}

/// The grid comes near the exact correlation, and parts give the same as the whole.
#[test]
fn rank_correlations_by_a_grid() {
    let mut source = Source::new(9);
    for weight in [0.0, 0.3, 2.0, -5.0] {
        let pairs: Vec<(f64, f64)> = (0..50_000).map(|_| (source.unit(), source.unit())).collect();
        let pairs: Vec<(f64, f64)> = pairs.into_iter().map(|(x, y)| (x, (weight * x + y).exp())).collect();
        let mut edges = [Quantiles::new(2000), Quantiles::new(2000)];
        for (x, y) in &pairs[..2000] {
            edges[0].push(*x);
            edges[1].push(*y);
        }
        let edges = edges.map(|one| one.sorted().edges(64));
        let mut exact = Ranks::new(1, || edges.clone());
        let mut parts: Vec<Ranks> = (0..3).map(|_| Ranks::new(MOST_EXACT + 1, || edges.clone())).collect();
        let mut whole = parts[0].clone();
        for (k, (x, y)) in pairs.iter().enumerate() {
            exact.push(*x, *y);
            whole.push(*x, *y);
            parts[k % 3].push(*x, *y);
        }
        let mut joined = parts.remove(2);
        for part in &parts {
            joined.and(part);
        }
        assert!(joined == whole && exact.is_exact() && !whole.is_exact());
        let (found, expected) = (whole.correlation().expect("spread"), exact.correlation().expect("spread"));
        assert!((found - expected).abs() < 1.5e-3, "{weight}: {found}, not {expected}");
    }
}
