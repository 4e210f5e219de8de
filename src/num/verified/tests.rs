//! Proofs against eigenvalues known by hand.

use super::*;
use crate::num::dense::identity;
use crate::num::random::Source;

fn points(entries: &[f64]) -> Vec<Interval> {
    entries.iter().map(|&entry| Interval::point(entry)).collect()
}

/// Counts for the axis and for the circle.
fn check(entries: &[f64], n: usize, axis: [usize; 2], circle: [usize; 2]) {
    let matrix = points(entries);
    for (found, [below, above]) in [(half_plane(&matrix, n), axis), (unit_circle(&matrix, n), circle)] {
        assert_eq!(found, Some(Counts { below, above }), "{entries:?}");
    }
}

#[test]
fn counts_by_hand() {
    check(&[], 0, [0, 0], [0, 0]);
    check(&[0.0], 1, [0, 0], [1, 0]);
    check(&[-1.0], 1, [1, 0], [0, 0]);
    check(&[2.0, 7.0, 0.0, -0.5], 2, [1, 1], [1, 1]);
    // −1/4 ± i, −1/2.
    check(&[-0.25, 1.0, 0.0, -1.0, -0.25, 0.0, 1.0, 1.0, -0.5], 3, [3, 0], [1, 2]);
    // ±i and 1/2 i times two.
    check(&[0.0, 1.0, -1.0, 0.0], 2, [0, 0], [0, 0]);
    check(&[0.0, 0.5, -0.5, 0.0], 2, [0, 0], [2, 0]);
}

/// L and U with ones on the diagonal and whole numbers off it, and the inverse of their product, exact.
fn unimodular(n: usize, source: &mut Source) -> [Vec<f64>; 2] {
    let mut forth = identity(n);
    let mut back = identity(n);
    for _ in 0..2 * n {
        let [i, j] = [(); 2].map(|()| (source.bits() % n as u64) as usize);
        let by = source.between(-1.5, 1.5).round();
        if i != j {
            // Row i gains a multiple of row j; column j of the inverse loses as much of column i.
            (0..n).for_each(|k| forth[i * n + k] += by * forth[j * n + k]);
            (0..n).for_each(|k| back[k * n + j] -= by * back[k * n + i]);
        }
    }
    [forth, back]
}

/// Sums of products of dyadic numbers of few bits: exact, and an error here is an error of the test.
fn times(a: &[f64], b: &[f64], n: usize) -> Vec<f64> {
    let entry = |k: usize| {
        let terms = (0..n).map(|l| Interval::point(a[k / n * n + l]) * Interval::point(b[l * n + k % n]));
        let sum = terms.fold(Interval::ZERO, |sum, term| sum + term);
        assert!(sum.is_point(), "not exact: {sum:?}");
        sum.lo()
    };
    (0..n * n).map(entry).collect()
}

/// A matrix whose eigenvalues lie on a border or 2^−k beside it, in Jordan blocks of random size and with random couplings,
/// in coordinates that hide them; and how many lie on each side.
fn near_a_border(n: usize, border: Border, source: &mut Source) -> (Vec<f64>, Counts) {
    let mut diagonal = vec![0.0; n * n];
    let mut counts = Counts::default();
    let mut k = 0;
    while k < n {
        let off =
            [0.0, 1.0, -1.0, 1.0, -1.0][(source.bits() % 5) as usize] * (-(source.between(0.0, 24.0).floor())).exp2();
        let m = if source.unit() < 0.4 && k + 1 < n { 2 } else { 1 };
        let sign = if source.unit() < 0.5 { 1.0 } else { -1.0 };
        let entries = match (border, m) {
            (Border::Axis, 1) => [off, 0.0, 0.0, 0.0],
            (Border::Axis, _) => [off, 1.0, -1.0, off],
            (Border::Circle, 1) => [sign * (1.0 + off), 0.0, 0.0, 0.0],
            (Border::Circle, _) => [0.0, 1.0 + off, -1.0 - off, 0.0],
        };
        for (place, entry) in entries.iter().enumerate().filter(|(place, _)| place / 2 < m && place % 2 < m) {
            diagonal[(k + place / 2) * n + k + place % 2] = *entry;
        }
        for row in 0..k {
            for column in k..k + m {
                let coupled = source.unit() < 0.3;
                diagonal[row * n + column] = if coupled { source.between(-2.0, 2.0).round() } else { 0.0 };
            }
        }
        // 1 + off = 0 and −1 are inside; 1 + off = 2 is outside.
        counts.below += if off < 0.0 { m } else { 0 };
        counts.above += if off > 0.0 { m } else { 0 };
        k += m;
    }
    let [forth, back] = unimodular(n, source);
    (times(&times(&forth, &diagonal, n), &back, n), counts)
}

/// Of thousands of matrices near a border no count is ever above the true one, and most are decided.
#[test]
fn counts_are_never_wrong() {
    for (border, seed) in [(Border::Axis, 1), (Border::Circle, 2)] {
        let mut source = Source::new(seed);
        let (mut decided, mut all) = (0, 0);
        let mut by_method = [0; METHODS.len()];
        for round in 0..3000 {
            let n = 1 + round % 8;
            let (matrix, truth) = near_a_border(n, border, &mut source);
            let radius = if round % 3 == 0 { (-40f64).exp2() } else { 0.0 };
            let bounds: Vec<Interval> = matrix.iter().map(|&x| Interval::new(x - radius, x + radius)).collect();
            let blocks = blocks(&bounds, n).expect("bounded");
            for ((name, method), decided) in METHODS.into_iter().zip(&mut by_method) {
                let found = blocks.iter().map(|block| method(block, border)).fold(Counts::default(), Add::add);
                let sound = found.below <= truth.below && found.above <= truth.above;
                assert!(sound, "{name}, {border:?}, round {round}: {found:?}, not {truth:?}: {matrix:?}");
                *decided += found.below + found.above;
            }
            let found = counts(&bounds, n, border).expect("bounded");
            assert!(found.below <= truth.below && found.above <= truth.above, "{found:?}, not {truth:?}: {matrix:?}");
            decided += found.below + found.above;
            all += truth.below + truth.above;
        }
        // A method that never answers is never wrong either.
        let answered = 4 * decided > 3 * all && by_method.iter().all(|&by| 10 * by > all);
        assert!(answered, "{border:?}: {decided} of {all} decided, by method {by_method:?}");
    }
}

type Method = fn(&Block, Border) -> Counts;

const METHODS: [(&str, Method); 3] = [
    ("small", |block, border| small::counts(&block.entries, border).unwrap_or_default()),
    ("discs", |block, border| discs::of(block).map_or_else(Counts::default, |discs| discs::count(&discs, border))),
    ("inertia", |block, border| inertia::counts(block, border).unwrap_or_default()),
];

/// One Jordan block of eigenvalue `value` in coordinates that hide it.
fn hidden_jordan(n: usize, value: f64) -> Vec<f64> {
    let mut source = Source::new(n as u64);
    let jordan: Vec<f64> = (0..n * n)
        .map(|k| {
            if k / n == k % n {
                value
            } else if k / n + 1 == k % n {
                1.0
            } else {
                0.0
            }
        })
        .collect();
    let [forth, back] = unimodular(n, &mut source);
    times(&times(&forth, &jordan, n), &back, n)
}

#[test]
fn defective_matrices_are_decided() {
    for n in 2..8 {
        check(&hidden_jordan(n, -1.5), n, [n, 0], [0, n]);
        check(&hidden_jordan(n, 1.5), n, [0, n], [0, n]);
        check(&hidden_jordan(n, 0.5), n, [0, n], [n, 0]);
    }
}

#[test]
fn every_matrix_between_the_bounds_counts() {
    let check = |entries: &[[f64; 2]], n: usize, expected: Counts| {
        let bounds: Vec<Interval> = entries.iter().map(|&[lo, hi]| Interval::new(lo, hi)).collect();
        assert_eq!(half_plane(&bounds, n), Some(expected), "{entries:?}");
    };
    // Trace in [−3, −1], determinant in [1.25, 6.25]: stable. A diagonal that reaches 0.75 makes the trace reach 0.25.
    let [minus, plus] = [[-1.5, -0.5], [1.0, 2.0]];
    check(&[minus, plus, [-2.0, -1.0], minus], 2, Counts { below: 2, above: 0 });
    check(&[[-1.5, 0.75], plus, [-2.0, -1.0], [-0.5, -0.5]], 2, Counts::default());
    check(&[minus, plus, plus, [-0.25, 0.25]], 2, Counts { below: 1, above: 1 });
    // As close to the border as f64 gets.
    check(&[[5e-324, 1.0]], 1, Counts { below: 0, above: 1 });
    check(&[[-1.0, 0.0]], 1, Counts::default());
    let inside = Interval::new(-1f64.next_down(), 0.5);
    assert_eq!(unit_circle(&[inside], 1), Some(Counts { below: 1, above: 0 }));
    assert_eq!(unit_circle(&[Interval::new(-1.0, 0.5)], 1), Some(Counts::default()));
    assert_eq!(half_plane(&[Interval::ENTIRE], 1), None);
    assert_eq!(unit_circle(&[Interval::EMPTY], 1), None);
}
