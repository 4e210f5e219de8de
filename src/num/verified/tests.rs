//! Proofs against eigenvalues known by hand.

use super::*;

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
