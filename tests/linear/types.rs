//! Types and what is proved of them: on both sides of every border of the trace–determinant plane and on the borders
//! themselves, for flows and maps; three and more species; random matrices against exact arithmetic.
#![expect(clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::common::Source;
use crate::common::linear::{Time, around_one, at, mixed, supposed};
use crate::common::text::ModelText;
use restpoint::analysis::linearise::{Kind, Linearisation, Unavailable};

use Kind::*;
use Time::{Flow, Map};

const E20: f64 = 1.0 / 1_048_576.0;
const E40: f64 = E20 * E20;

/// A matrix, the type of an equilibrium with it, and how many eigenvalues attract, are critical, repel. Everything is
/// exact in f64 and far enough from what else its decimals may stand for, so all of it must be proved.
fn check(time: Time, matrix: &[f64], kind: Kind, dimensions: [usize; 3]) -> Linearisation {
    let n = if matrix.len() == 1 { 1 } else { (2..9).find(|n| n * n == matrix.len()).unwrap() };
    let found = at(&around_one(matrix, n, time), &vec![1.0; n]);
    let name = format!("{time:?} {matrix:?}");
    assert_eq!(found.jacobian, matrix, "{name}");
    let counts = [found.dimensions.stable, found.dimensions.centre, found.dimensions.unstable];
    assert_eq!((found.kind, counts), (kind, dimensions), "{name}: {found:?}");
    assert!(found.kind_proven && found.stable_proven, "{name} is not proved: {found:?}");
    let stable = match dimensions {
        [_, 0, 0] => Some(true),
        [_, _, 0] => None,
        _ => Some(false),
    };
    assert_eq!(found.stable, stable, "{name}");
    assert_eq!(found.nonlinear.is_some(), dimensions[1] > 0 && dimensions[2] == 0, "{name}");
    found
}

#[test]
fn one_species() {
    check(Flow, &[-1.0], StableNode, [1, 0, 0]);
    check(Flow, &[-1e-300], StableNode, [1, 0, 0]);
    check(Flow, &[1e-300], UnstableNode, [0, 0, 1]);
    check(Flow, &[0.0], Undecided, [0, 1, 0]);
    let maps = [
        (0.5, StableNode, [1, 0, 0]),
        (-0.5, StableNode, [1, 0, 0]),
        (0.0, StableNode, [1, 0, 0]),
        (1.0, Undecided, [0, 1, 0]),
        (-1.0, Undecided, [0, 1, 0]),
        // As near as bounds of what was written keep off the border.
        (1.0 + 2.0 * f64::EPSILON, UnstableNode, [0, 0, 1]),
        (f64::EPSILON - 1.0, StableNode, [1, 0, 0]),
        (-1.5, UnstableNode, [0, 0, 1]),
    ];
    for (multiplier, kind, dimensions) in maps {
        let found = check(Map, &[multiplier], kind, dimensions);
        assert_eq!(found.alternating, multiplier < 0.0, "{multiplier}");
    }
}

#[test]
fn planar_flows() {
    let stable = [
        ([-1.0, 0.0, 0.0, -2.0], StableNode),
        ([-2.0, 1.0, 1.0, -2.0], StableNode),
        ([-1.0, 2.0, -2.0, -1.0], StableSpiral),
        ([-1.0, 0.0, 0.0, -1.0], StableStar),
        ([-1.0, 1.0, 0.0, -1.0], StableImproperNode),
        ([-2.0, 1.0, -1.0, 0.0], StableImproperNode),
        // Just beside the border between node and spiral: discriminant ±2⁻³⁸.
        ([-1.0, 1.0, E40, -1.0], StableNode),
        ([-1.0, 1.0, -E40, -1.0], StableSpiral),
        // Just beside the axis: trace −2⁻³⁹, determinant 2⁻⁴⁰.
        ([-E40, 1.0, -1.0, -E40], StableSpiral),
        ([-1.0, 1.0, 1.0 - E40, -1.0], StableNode),
        // Abundances in units that differ by 2⁸⁰.
        ([-1.0, 2.0 / (E40 * E40), -2.0 * E40 * E40, -1.0], StableSpiral),
    ];
    for (matrix, kind) in stable {
        check(Flow, &matrix, kind, [2, 0, 0]);
        let unstable = match kind {
            StableNode => UnstableNode,
            StableSpiral => UnstableSpiral,
            StableStar => UnstableStar,
            _ => UnstableImproperNode,
        };
        check(Flow, &matrix.map(|entry| -entry), unstable, [0, 0, 2]);
    }
    for saddle in [[1.0, 0.0, 0.0, -1.0], [1.0, 2.0, 2.0, 1.0], [-1.0, 1.0, 1.0 + E40, -1.0]] {
        check(Flow, &saddle, Saddle, [1, 0, 1]);
    }
    for centre in [[0.0, 1.0, -2.0, 0.0], [1.0, -2.0, 1.0, -1.0], [E20, -1.0, 1.0, -E20]] {
        check(Flow, &centre, Centre, [0, 2, 0]);
    }
    check(Flow, &[-1.0, 1.0, 1.0, -1.0], Undecided, [1, 1, 0]);
    check(Flow, &[1.0, 1.0, 1.0, 1.0], UnstableNode, [0, 1, 1]);
    check(Flow, &[0.0, 1.0, 0.0, 0.0], Undecided, [0, 2, 0]);
    check(Flow, &[0.0; 4], Undecided, [0, 2, 0]);
}

#[test]
fn planar_maps() {
    let cases = [
        ([0.5, 0.0, 0.0, 0.25], StableNode, [2, 0, 0], false),
        ([0.5, 0.0, 0.0, -0.75], StableNode, [2, 0, 0], true),
        ([0.5, 0.5, -0.5, 0.5], StableSpiral, [2, 0, 0], false),
        ([0.5, 0.0, 0.0, 0.5], StableStar, [2, 0, 0], false),
        ([-0.5, 0.0, 0.0, -0.5], StableStar, [2, 0, 0], true),
        ([0.5, 1.0, 0.0, 0.5], StableImproperNode, [2, 0, 0], false),
        ([1.5, 0.0, 0.0, 0.5], Saddle, [1, 0, 1], false),
        ([-1.5, 0.0, 0.0, 0.5], Saddle, [1, 0, 1], true),
        ([2.0, 0.0, 0.0, 3.0], UnstableNode, [0, 0, 2], false),
        ([2.0, 1.0, 1.0, -2.0], UnstableNode, [0, 0, 2], false),
        ([1.0, 1.0, -1.0, 1.0], UnstableSpiral, [0, 0, 2], false),
        ([2.0, 0.0, 0.0, 2.0], UnstableStar, [0, 0, 2], false),
        // Jury's triangle from both sides and on its edges: D = 1, p(1) = 0, p(−1) = 0.
        ([0.0, 1.0, -1.0, 0.0], Centre, [0, 2, 0], false),
        ([0.0, -1.0, 1.0, 1.0], Centre, [0, 2, 0], false),
        ([0.0, -1.0 + E40, 1.0, 1.0], StableSpiral, [2, 0, 0], false),
        ([0.0, -1.0 - E40, 1.0, 1.0], UnstableSpiral, [0, 0, 2], false),
        ([0.5, 0.25, 1.0, 0.5], Undecided, [1, 1, 0], false),
        ([0.5, 0.25 - E40, 1.0, 0.5], StableNode, [2, 0, 0], false),
        ([0.5, 0.25 + E40, 1.0, 0.5], Saddle, [1, 0, 1], false),
        ([-0.5, 0.25, 1.0, -0.5], Undecided, [1, 1, 0], true),
        ([-0.5, 0.25 - E40, 1.0, -0.5], StableNode, [2, 0, 0], true),
        ([-0.5, 0.25 + E40, 1.0, -0.5], Saddle, [1, 0, 1], true),
        // The corners: double 1, double −1, 1 and −1.
        ([1.0, 1.0, 0.0, 1.0], Undecided, [0, 2, 0], false),
        ([-1.0, 1.0, 0.0, -1.0], Undecided, [0, 2, 0], true),
        ([1.0, 0.0, 0.0, -1.0], Undecided, [0, 2, 0], false),
        ([-1.0, 0.0, 0.0, 2.0], UnstableNode, [0, 1, 1], false),
    ];
    for (matrix, kind, dimensions, alternating) in cases {
        let found = check(Map, &matrix, kind, dimensions);
        assert_eq!(found.alternating, alternating, "{matrix:?}");
    }
}

/// A block diagonal matrix, and the same matrix in another basis.
fn check_mixed(time: Time, blocks: &[&[f64]], kind: Kind, dimensions: [usize; 3]) {
    let orders: Vec<usize> = blocks.iter().map(|block| if block.len() == 1 { 1 } else { 2 }).collect();
    let n: usize = orders.iter().sum();
    let mut matrix = vec![0.0; n * n];
    let mut first = 0;
    for (block, &m) in blocks.iter().zip(&orders) {
        (0..m * m).for_each(|k| matrix[(first + k / m) * n + first + k % m] = block[k]);
        first += m;
    }
    check(time, &matrix, kind, dimensions);
    let other = mixed(&matrix, n);
    assert!(other.iter().filter(|entry| **entry == 0.0).count() < n, "{other:?} has blocks left");
    check(time, &other, kind, dimensions);
}

#[test]
fn several_species() {
    let slow = &[-0.25, 2.0, -2.0, -0.25];
    let fast = &[-1.0, 2.0, -2.0, -1.0];
    check_mixed(Flow, &[fast, &[-0.5]], StableNode, [3, 0, 0]);
    check_mixed(Flow, &[slow, &[-0.5]], StableSpiral, [3, 0, 0]);
    check_mixed(Flow, &[slow, fast], StableSpiral, [4, 0, 0]);
    check_mixed(Flow, &[fast, &[0.5]], Saddle, [2, 0, 1]);
    check_mixed(Flow, &[&[1.0, 2.0, -2.0, 1.0], &[-0.5], &[-1.0]], Saddle, [2, 0, 2]);
    check_mixed(Flow, &[&[1.0, 2.0, -2.0, 1.0], &[0.5]], UnstableSpiral, [0, 0, 3]);
    check_mixed(Flow, &[&[1.0, 2.0, -2.0, 1.0], &[1.5]], UnstableNode, [0, 0, 3]);
    check_mixed(Flow, &[&[0.0, 1.0, -1.0, 0.0], &[-1.0]], Centre, [1, 2, 0]);
    check_mixed(Flow, &[&[-1.0], &[-2.0], &[0.0]], Undecided, [2, 1, 0]);
    check_mixed(Map, &[&[0.5, 0.25, -0.25, 0.5], &[0.25]], StableSpiral, [3, 0, 0]);
    check_mixed(Map, &[&[0.5, 0.25, -0.25, 0.5], &[0.75]], StableNode, [3, 0, 0]);
    check_mixed(Map, &[&[0.5, 0.25, -0.25, 0.5], &[1.25]], Saddle, [2, 0, 1]);
    check_mixed(Map, &[&[0.5, 1.0, -1.0, 0.5], &[2.0]], UnstableNode, [0, 0, 3]);
}

#[test]
fn defective_matrices_have_proved_stability() {
    // One Jordan block of order m and eigenvalue λ: no type follows from bounds, but all attract, or none does.
    let block = |m: usize, value: f64| -> Vec<f64> {
        let entry = |(i, j): (usize, usize)| if i == j { value } else { f64::from(u8::from(j == i + 1)) };
        (0..m * m).map(|k| entry((k / m, k % m))).collect()
    };
    let check = |time, m: usize, value: f64, stable: bool| {
        let matrix = mixed(&block(m, value), m);
        let found = at(&around_one(&matrix, m, time), &vec![1.0; m]);
        assert_eq!(found.stable, Some(stable), "{time:?} {m} {value}: {:?}", found.spectrum.values);
        assert!(found.stable_proven, "{time:?} {m} {value}: {found:?}");
        let dimensions = found.dimensions;
        let expected = if stable { [m, 0, 0] } else { [0, 0, m] };
        assert_eq!([dimensions.stable, dimensions.centre, dimensions.unstable], expected, "{time:?} {m} {value}");
    };
    for m in 2..=5 {
        check(Flow, m, -1.0, true);
        check(Flow, m, 1.0, false);
        check(Map, m, 0.5, true);
        check(Map, m, -0.5, true);
        check(Map, m, 2.0, false);
    }
}

#[test]
fn nothing_is_proved_of_what_may_not_be_there() {
    let stable = [-1.0, 2.0, -2.0, -1.0];
    let found = supposed(&around_one(&stable, 2, Flow), &[1.0, 1.0], false);
    assert_eq!((found.kind, found.stable), (StableSpiral, Some(true)));
    assert!(!found.kind_proven && !found.stable_proven);
    let centre = supposed(&around_one(&[0.0, 1.0, -1.0, 0.0], 2, Flow), &[1.0, 1.0], false);
    assert_eq!((centre.kind, centre.stable), (Centre, None));
    assert!(!centre.kind_proven && !centre.stable_proven && centre.nonlinear.is_some_and(|found| !found.proven));
}

#[test]
fn large_communities_are_computed_but_not_proved() {
    // Each eats the next, all the same: −1 on the diagonal, 1 and −1 beside it; so −1 plus what is imaginary.
    let n = 48;
    let entry = |k: usize| match (k / n, k % n) {
        (i, j) if i == j => -1.0,
        (i, j) if j == i + 1 => 1.0,
        (i, j) if i == j + 1 => -1.0,
        _ => 0.0,
    };
    let matrix: Vec<f64> = (0..n * n).map(entry).collect();
    let found = at(&around_one(&matrix, n, Flow), &vec![1.0; n]);
    assert_eq!((found.kind, found.stable, found.dimensions.stable), (StableSpiral, Some(true), n));
    assert!(found.enclosure.is_empty() && !found.kind_proven && !found.stable_proven);
    assert!(found.spectrum.values.iter().all(|value| (value.re + 1.0).abs() < 1e-12), "{:?}", found.spectrum.values);
}

#[test]
fn huge_and_tiny_rates_are_classified() {
    for size in [1e200, 1e-200] {
        let found = at(&around_one(&[-size, 2.0 * size, -2.0 * size, -size], 2, Flow), &[1.0, 1.0]);
        assert_eq!((found.kind, found.stable), (StableSpiral, Some(true)), "{size}: {found:?}");
        let found = at(&around_one(&[size, 2.0 * size, 2.0 * size, size], 2, Flow), &[1.0, 1.0]);
        assert_eq!((found.kind, found.stable), (Saddle, Some(false)), "{size}: {found:?}");
    }
}

/// Whole numbers, so that sums and products of a few of them are exact.
fn whole(source: &mut Source, most: f64) -> i128 {
    source.between(-most, most).round() as i128
}

/// The type by exact arithmetic: trace T and determinant D, discriminant T² − 4D.
fn exact_kind([a, b, c, d]: [i128; 4]) -> Kind {
    let (trace, determinant) = (a + d, a * d - b * c);
    let discriminant = (a - d) * (a - d) + 4 * b * c;
    match (determinant.signum(), trace.signum(), discriminant.signum()) {
        (-1, ..) => Saddle,
        (0, 1, _) => UnstableNode,
        (0, ..) => Undecided,
        (1, 0, _) => Centre,
        (1, -1, 1) => StableNode,
        (1, -1, -1) => StableSpiral,
        (1, 1, 1) => UnstableNode,
        (1, 1, -1) => UnstableSpiral,
        (1, -1, _) if b == 0 && c == 0 => StableStar,
        (1, -1, _) => StableImproperNode,
        _ if b == 0 && c == 0 => UnstableStar,
        _ => UnstableImproperNode,
    }
}

/// Matrices near each border, entries of `bits` bits; up to 26 bits every product is exact, so all must be proved.
fn random_planar(bits: i32, seed: u64) -> (usize, usize) {
    let mut source = Source::new(seed);
    let (mut proved, mut tried) = (0, 0);
    for trial in 0..400 {
        let most = f64::from(bits - 2).exp2();
        let [a, b, c] = [(); 3].map(|()| whole(&mut source, most));
        let beside = whole(&mut source, 2.0);
        let matrix = match trial % 4 {
            0 => [a, b, c, -a + beside],
            1 if a != 0 => [a, b, c, (b * c) / a + beside],
            2 => [a, b, beside, a + whole(&mut source, 2.0)],
            _ => [a, b, c, whole(&mut source, most)],
        };
        if matrix.iter().any(|entry| entry.abs() >= 1 << bits) {
            continue;
        }
        tried += 1;
        let found = at(&around_one(&matrix.map(|entry| entry as f64), 2, Flow), &[1.0, 1.0]);
        if found.kind_proven {
            proved += 1;
            assert_eq!(found.kind, exact_kind(matrix), "{matrix:?}");
        }
    }
    (proved, tried)
}

#[test]
fn exact_borders_are_always_proved() {
    let (proved, tried) = random_planar(24, 1);
    assert!(proved == tried && tried > 200, "{proved} of {tried}");
}

#[test]
fn rounded_borders_are_never_proved_wrong() {
    let (proved, tried) = random_planar(52, 2);
    assert!(proved > tried / 2 && tried > 200, "{proved} of {tried}");
}

/// Signs of the real parts of a matrix of order three by Routh's array, where no entry of its first column is 0.
fn exact_counts(m: &[i128]) -> Option<[usize; 3]> {
    let minor = |i: usize, j: usize, k: usize, l: usize| m[i] * m[l] - m[j] * m[k];
    let c1 = -(m[0] + m[4] + m[8]);
    let c2 = minor(0, 1, 3, 4) + minor(0, 2, 6, 8) + minor(4, 5, 7, 8);
    let c3 = -(m[0] * minor(4, 5, 7, 8) - m[1] * minor(3, 5, 6, 8) + m[2] * minor(3, 4, 6, 7));
    let column = [1, c1.signum(), (c1 * c2 - c3).signum() * c1.signum(), c3.signum()];
    let changes = column.windows(2).filter(|pair| pair[0] != pair[1]).count();
    (!column.contains(&0)).then_some([3 - changes, 0, changes])
}

#[test]
fn counts_of_three_species_are_never_proved_wrong() {
    let mut source = Source::new(3);
    let mut proved = 0;
    for _ in 0..300 {
        let matrix: Vec<i128> = (0..9).map(|_| whole(&mut source, 8.0)).collect();
        let Some(expected) = exact_counts(&matrix) else { continue };
        let numbers: Vec<f64> = matrix.iter().map(|&entry| entry as f64).collect();
        let found = at(&around_one(&numbers, 3, Flow), &[1.0; 3]);
        let counts = [found.dimensions.stable, found.dimensions.centre, found.dimensions.unstable];
        assert_eq!(counts, expected, "{matrix:?}");
        assert_eq!(found.stable, Some(expected[2] == 0), "{matrix:?}");
        proved += usize::from(found.kind_proven && found.stable_proven);
    }
    assert!(proved > 250, "{proved}");
}

#[test]
fn a_species_alone_at_its_border_has_its_own_growth() {
    // By hand: x′ = x (1 − √x) has slope 1 at 0, though √x has none; x min(1, y) likewise at y = 1.
    let check = |rows: &[(&str, &str)], state: &[f64], expected: Option<&[f64]>| {
        let mut read = ModelText::new("border", "9", rows).read();
        let found = crate::common::linear::linear(&mut read, 0);
        let near = |(x, y): (&f64, &f64)| (x - y).abs() < 1e-12;
        let here = found.iter().find(|(equilibrium, _)| equilibrium.state.iter().zip(state).all(near));
        let (_, linear) = here.unwrap_or_else(|| panic!("{rows:?}: no {state:?}"));
        match (linear, expected) {
            (Ok(linear), Some(jacobian)) => assert_eq!(linear.jacobian, jacobian, "{rows:?}"),
            (Err(Unavailable::NoDerivative(_)), None) => {}
            _ => panic!("{rows:?}: {linear:?}"),
        }
    };
    check(&[("x", "x*(1 - sqrt(x))")], &[0.0], Some(&[1.0]));
    check(&[("x", "x*(min(1, y) - x)"), ("y", "y*(1 - y)")], &[0.0, 1.0], Some(&[1.0, 0.0, 0.0, -1.0]));
    // Both sides of the kink have slope −1 there, but that is not looked for.
    check(&[("x", "max(x, 1)*(1 - x)")], &[1.0], None);
}
