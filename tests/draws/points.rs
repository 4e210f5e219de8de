//! Points: even where they claim to be, and the same whoever makes them.

#![expect(clippy::cast_sign_loss, reason = "shares are not negative")]

use restpoint::analysis::uncertain::draw::{Plan, Sampling};
use restpoint::num::permutation::Permutation;

use crate::support::{columns, drawn, model};

#[test]
fn permutations_take_every_place_once() {
    for size in [1, 2, 3, 4, 5, 7, 8, 9, 100, 1000, 4097] {
        for key in 0..20 {
            let order = Permutation::new(key, size);
            let mut seen: Vec<u64> = (0..size).map(|i| order.at(i)).collect();
            seen.sort_unstable();
            assert!(seen.into_iter().eq(0..size), "{size} by {key}");
        }
    }
    assert_eq!(Permutation::new(1, 0).at(0), 0);
    assert!(Permutation::new(1, 1 << 63).at(12345) < 1 << 63);
}

/// Chi-square over all orders of five, and over pairs of places of 21: far below what one in a million orders would give.
#[test]
fn all_orders_are_as_likely() {
    let check = |bins: usize, size: u64, place: &dyn Fn(&Permutation) -> usize| {
        let mut counts = vec![0u32; bins];
        let keys = 200 * bins as u64;
        for key in 0..keys {
            counts[place(&Permutation::new(key.wrapping_mul(0x9e37_79b9_7f4a_7c15), size))] += 1;
        }
        let chi_square: f64 = counts.iter().map(|&count| (f64::from(count) - 200.0).powi(2) / 200.0).sum();
        let freedom = bins as f64 - 1.0;
        assert!((chi_square - freedom).abs() < 5.0 * (2.0 * freedom).sqrt(), "{size}: {chi_square} of {freedom}");
    };
    // The place of an order of five among the 120 (Lehmer's code).
    let lehmer = |order: &Permutation| {
        let all: Vec<u64> = (0..5).map(|i| order.at(i)).collect();
        (0..5).fold(0, |code, i| code * (5 - i) + all[i + 1..].iter().filter(|x| **x < all[i]).count())
    };
    check(120, 5, &lehmer);
    check(420, 21, &|order| {
        let (a, b) = (order.at(3), order.at(4));
        (a * 20 + if b > a { b - 1 } else { b }) as usize
    });
}

/// One of the points of each randomisation in each of as many equal parts.
#[test]
fn latin_strata_stay_intact() {
    for draws in [16u64, 160, 163, 7] {
        let values = drawn("{value: 0.5, range: [0, 1]}", Sampling::Latin, draws);
        for r in 0..16usize {
            let own: Vec<f64> = values.iter().copied().skip(r).step_by(16).collect();
            let mut strata: Vec<usize> = own.iter().map(|x| (x * own.len() as f64) as usize).collect();
            strata.sort_unstable();
            assert!(strata.into_iter().eq(0..own.len()), "{draws} draws, {r}");
        }
    }
}

/// Scrambled or not, of 2^k points of a sequence one lies in each 2^k-th of every coordinate, and in each box of two
/// coordinates that the first two are nets of.
#[test]
fn scrambled_points_stay_nets() {
    let parameters: Vec<String> = (0..40).map(|k| format!("x{k}: {{value: 0.5, range: [0, 1]}}")).collect();
    let model = model(&parameters.join(", "));
    let plan = Plan::new(&model, Sampling::Sobol, 3, Some(16 * 64)).expect("a plan");
    let columns = columns(&model, &plan);
    for r in 0..16 {
        let own = |column: &[f64]| -> Vec<f64> { column.iter().copied().skip(r).step_by(16).collect() };
        for column in &columns {
            let mut strata: Vec<usize> = own(column).iter().map(|x| (x * 64.0) as usize).collect();
            strata.sort_unstable();
            assert!(strata.into_iter().eq(0..64), "{r}");
        }
        for (a, b) in [(2.0, 32.0), (8.0, 8.0), (32.0, 2.0)] {
            let boxes = own(&columns[0]).into_iter().zip(own(&columns[1]));
            let mut boxes: Vec<usize> = boxes.map(|(x, y)| (x * a) as usize * b as usize + (y * b) as usize).collect();
            boxes.sort_unstable();
            assert!(boxes.into_iter().eq(0..64), "{r}: {a} by {b}");
        }
    }
    let first: Vec<f64> = (0..16).map(|r| columns[0][r]).collect();
    assert!((0..15).all(|r| first[r] != first[r + 1]), "randomisations differ");
}

/// More coordinates than the sequence has are random, and still uniform and independent of it.
#[test]
fn more_coordinates_than_the_sequence_has() {
    let parameters: Vec<String> = (0..520).map(|k| format!("x{k}: {{value: 0.5, range: [0, 1]}}")).collect();
    let model = model(&parameters.join(", "));
    let plan = Plan::new(&model, Sampling::Sobol, 3, Some(4096)).expect("a plan");
    let columns = columns(&model, &plan);
    for place in [0, 511, 512, 519] {
        let mean = columns[place].iter().sum::<f64>() / 4096.0;
        // Five standard errors of a random mean.
        assert!((mean - 0.5).abs() < 5.0 / 12f64.sqrt() / 64.0, "{place}: {mean}");
    }
}
