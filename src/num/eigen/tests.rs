//! Spectra by hand, and the identities that vectors obey.

use super::*;
use crate::num::random::Source;

/// Eigenvalues by hand, to `bound`; the same from the spectrum with vectors.
fn check(entries: &[f64], n: usize, expected: &[(f64, f64)], bound: f64) {
    let alone = eigenvalues(entries, n).expect("finite");
    let with_vectors = spectrum(entries, n).expect("finite").values;
    for found in [alone, with_vectors] {
        let close = |(z, &(re, im)): (&Complex<f64>, &(f64, f64))| (z.re - re).hypot(z.im - im) <= bound;
        assert!(found.len() == expected.len() && found.iter().zip(expected).all(close), "{entries:?}: {found:?}");
    }
}

#[test]
fn spectra_by_hand() {
    check(&[], 0, &[], 0.0);
    check(&[-7.5], 1, &[(-7.5, 0.0)], 0.0);
    check(&[0.0; 16], 4, &[(0.0, 0.0); 4], 0.0);
    // Triangular in some order of its indices: the diagonal, exactly.
    check(&[0.1, 0.0, 0.0, 5.0, 0.3, 7.0, 9.0, 0.0, 0.2], 3, &[(0.3, 0.0), (0.2, 0.0), (0.1, 0.0)], 0.0);
    // A cyclic permutation of order four, which the library's iteration never solves as it is.
    let cycle = [0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0];
    check(&cycle, 4, &[(1.0, 0.0), (0.0, 1.0), (0.0, -1.0), (-1.0, 0.0)], 1e-14);
    for unit in [1e-307, 1e-200, 1e200, 1e300] {
        let entries = cycle.map(|x| x * unit);
        check(&entries, 4, &[(unit, 0.0), (0.0, unit), (0.0, -unit), (-unit, 0.0)], 1e-14 * unit);
    }
    // λ³ = 1e100 · 1e100 · 1e-200: units differ by 1e100.
    check(
        &[0.0, 1e100, 0.0, 0.0, 0.0, 1e100, 1e-200, 0.0, 0.0],
        3,
        &[(1.0, 0.0), (-0.5, 0.75f64.sqrt()), (-0.5, -0.75f64.sqrt())],
        1e-14,
    );
}

#[test]
fn what_has_no_spectrum_says_so() {
    for n in 1..6 {
        for bad in [f64::NAN, f64::INFINITY] {
            let entries = vec![bad; n * n];
            assert_eq!(eigenvalues(&entries, n), Err(Unsolved::NotFinite));
            assert_eq!(spectrum(&entries, n), Err(Unsolved::NotFinite));
        }
    }
    for n in 2..6 {
        assert_eq!(eigenvalues(&vec![f64::MAX; n * n], n), Err(Unsolved::NotFinite));
        assert_eq!(spectrum(&vec![f64::MAX; n * n], n), Err(Unsolved::NotFinite));
    }
}

/// A v = λ v, wᴴ A = λ wᴴ, unit lengths, |wᴴ v| = 1/condition, pairs exactly conjugate.
fn check_vectors(entries: &[f64], n: usize) {
    let found = spectrum(entries, n).expect("finite");
    let Vectors { right, left, condition } = found.vectors.expect("asked for");
    let bound = 1e-14 * n as f64 * entries.iter().map(|x| x * x).sum::<f64>().sqrt();
    for (k, &value) in found.values.iter().enumerate() {
        let [v, w] = [&right, &left].map(|all| (0..n).map(|i| all[i * n + k]).collect::<Vec<_>>());
        let dot = |x: &dyn Fn(usize) -> Complex<f64>, y: &[Complex<f64>]| -> Complex<f64> {
            (0..n).map(|j| x(j) * y[j]).sum()
        };
        for i in 0..n {
            let forth = dot(&|j| entries[i * n + j].into(), &v) - value * v[i];
            let back = dot(&|j| entries[j * n + i].into(), &w) - value.conj() * w[i];
            assert!(forth.norm() <= bound && back.norm() <= bound, "{entries:?}, {value}: {forth} {back}");
        }
        let [lengths, across] =
            [dot(&|j| v[j].conj(), &v).norm().max(dot(&|j| w[j].conj(), &w).norm()), dot(&|j| w[j].conj(), &v).norm()];
        assert!((lengths - 1.0).abs() < 1e-14, "{lengths}");
        assert!(
            (across - 1.0 / condition[k]).abs() < 1e-14 * n as f64,
            "{entries:?}, {value}: {across} {}",
            condition[k]
        );
        let conjugate =
            |j: usize| found.values[j] == value.conj() && (0..n).all(|i| right[i * n + j] == right[i * n + k].conj());
        assert!((0..n).any(conjugate), "{value} has no partner");
    }
}

#[test]
fn vectors_are_vectors() {
    let mut source = Source::new(11);
    for round in 0..200 {
        let n = 1 + round % 12;
        let keep = if round % 3 == 0 { 0.3 } else { 1.0 };
        let mut entry = |_| if source.unit() < keep { source.between(-1.0, 1.0) } else { 0.0 };
        let entries: Vec<f64> = (0..n * n).map(&mut entry).collect();
        check_vectors(&entries, n);
    }
    // Equal eigenvalues with as many vectors, and with one.
    check_vectors(&[2.0, 0.0, 0.0, 2.0], 2);
    check_vectors(&[2.0, 1.0, 0.0, 2.0], 2);
    check_vectors(&[0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0], 3);
    check_vectors(&[0.0; 9], 3);
    // Two rotations, coupled: a double pair.
    check_vectors(&[0.0, 1.0, 1.0, 0.0, -1.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, -1.0, 0.0], 4);
}

#[test]
fn condition_tells_defective_from_simple() {
    let check = |entries: &[f64], n: usize, least: f64, most: f64| {
        let condition = spectrum(entries, n).expect("finite").vectors.expect("asked for").condition;
        assert!(condition.iter().all(|&c| c >= least && c <= most), "{entries:?}: {condition:?}");
    };
    check(&[3.0, 0.0, 0.0, 3.0], 2, 1.0, 1.0);
    check(&[1.0, 2.0, 2.0, 1.0], 2, 1.0, 1.0 + 1e-14);
    // cos of the angle between (1, 0) and its left vector (1, −1)/√2.
    check(&[2.0, 1.0, 0.0, 1.0], 2, 2f64.sqrt() - 1e-14, 2f64.sqrt() + 1e-14);
    check(&[2.0, 1.0, 0.0, 2.0], 2, 1e14, f64::INFINITY);
    let mut jordan = vec![0.0; 3600];
    (0..59).for_each(|i| jordan[i * 61 + 1] = 1.0);
    check(&jordan, 60, 1e100, f64::INFINITY);
}

#[test]
fn a_map_has_its_own_order() {
    // 1/2 and −3/4 ± 0.
    let found = spectrum(&[0.5, 1.0, 0.0, -0.75], 2).expect("finite");
    assert_eq!(found.values.iter().map(|z| z.re).collect::<Vec<_>>(), [0.5, -0.75]);
    let turned = found.clone().by_modulus();
    assert_eq!(turned.values.iter().map(|z| z.re).collect::<Vec<_>>(), [-0.75, 0.5]);
    let [before, after] = [found, turned].map(|s| s.vectors.expect("asked for").right);
    assert_eq!([before[0], before[2]], [after[1], after[3]]);
}

/// Eigenvalues of larger matrices by hand.
#[test]
fn rings_and_chains_of_any_order() {
    // Roots of one, by falling real part: a cyclic permutation, which double shifts alone never solve.
    for n in 4..65 {
        let mut ring = vec![0.0; n * n];
        (0..n).for_each(|i| ring[i * n + (i + 1) % n] = 1.0);
        let angle = |k: usize| std::f64::consts::TAU * k as f64 / n as f64;
        let root = |k: usize| (angle(k).cos(), angle(k).sin());
        let mut roots = vec![(1.0, 0.0)];
        for k in 1..n.div_ceil(2) {
            roots.extend([root(k), (root(k).0, -root(k).1)]);
        }
        if n % 2 == 0 {
            roots.push((-1.0, 0.0));
        }
        check(&ring, n, &roots, 1e-14 * n as f64);
    }
    // Entries k and n − k beside the diagonal: n − 1, n − 3, …, 1 − n (Kac 1947), well conditioned once balanced.
    for n in [5, 12, 25] {
        let mut chain = vec![0.0; n * n];
        for k in 1..n {
            chain[(k - 1) * n + k] = k as f64;
            chain[k * n + k - 1] = (n - k) as f64;
        }
        let values: Vec<(f64, f64)> = (0..n).map(|k| ((n - 1) as f64 - 2.0 * k as f64, 0.0)).collect();
        check(&chain, n, &values, 1e-13 * n as f64);
    }
}

/// Sums of eigenvalues and of their squares are the traces of A and A².
#[test]
fn traces_agree() {
    let mut source = Source::new(17);
    for n in (4..40).chain([63, 64, 65, 130]) {
        let entries: Vec<f64> = (0..n * n).map(|_| source.between(-1.0, 1.0)).collect();
        let found = eigenvalues(&entries, n).expect("random");
        let trace: f64 = (0..n).map(|i| entries[i * n + i]).sum();
        let square: f64 = (0..n * n).map(|k| entries[k] * entries[k % n * n + k / n]).sum();
        let sums =
            [found.iter().sum::<Complex<f64>>() - trace, found.iter().map(|z| z * z).sum::<Complex<f64>>() - square];
        let size = entries.iter().map(|x| x * x).sum::<f64>();
        let bounds = [1e-14 * (n as f64 * size).sqrt(), 1e-14 * size];
        assert!(sums.iter().zip(bounds).all(|(sum, bound)| sum.norm() <= bound), "order {n}: {sums:?} {bounds:?}");
    }
}

/// What the library's Schur form says of the same matrices, with sizes from one row to the next that differ much.
#[test]
fn graded_matrices_agree_with_the_schur_form() {
    let mut source = Source::new(23);
    for n in [4, 7, 20, 50] {
        for ratio in [0.9, 0.3f64] {
            let entries: Vec<f64> =
                (0..n * n).map(|k| source.between(-1.0, 1.0) * ratio.powf((k / n + k % n) as f64)).collect();
            let Spectrum { values, vectors } = spectrum(&entries, n).expect("random");
            let condition = vectors.expect("asked for").condition;
            let alone = eigenvalues(&entries, n).expect("random");
            for (value, condition) in values.iter().zip(condition) {
                let off = alone.iter().map(|z| (z - value).norm()).fold(f64::INFINITY, f64::min);
                assert!(off <= 1e-14 * n as f64 * condition, "order {n}, {ratio}: {value} off by {off:e}");
            }
        }
    }
}
