//! The communities that no absent species can invade, as pivoting finds them, against all that there are by exact fractions.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

use crate::common::Source;
use crate::common::whole::{Whole, present};
use restpoint::analysis::equilibria::linear::{Affine, Assembly, assemble, find};
use restpoint::analysis::equilibria::{Budget, OneByOne, Probably, Problem};
use restpoint::num::interval::Interval;

/// Every community that no absent species can invade, by exact fractions; `None` where one is degenerate.
fn uninvadable(whole: &Whole) -> Option<Vec<Vec<usize>>> {
    let mut found = Vec::new();
    for face in whole.faces() {
        let solution = whole.solution(&face)?;
        let absent = (0..whole.n()).filter(|i| !face.contains(i));
        let rates: Vec<i128> = absent.map(|i| whole.rate(i, &face, &solution)).collect();
        if solution.0.iter().all(|&x| x >= 0) && rates.iter().all(|&rate| rate <= 0) {
            if solution.0.contains(&0) || rates.contains(&0) {
                return None;
            }
            found.push(face);
        }
    }
    Some(found)
}

#[test]
fn pivoting_ends_at_one_of_all_uninvadable_communities() {
    let mut source = Source::new(4);
    let (mut alone, mut among_several, mut rays) = (0, 0, 0);
    for seed in 0..400 {
        let n = if seed % 40 == 0 { 10 } else { 2 + seed % 7 };
        let whole = match seed % 3 {
            // Competition, in which several may be uninvadable; feeding and competition; and the same, strongly limited.
            0 => Whole::random(&mut source, n, [-40, 0], 25),
            1 => Whole::random(&mut source, n, [-15, 12], 25),
            _ => Whole::random(&mut source, n, [-2, 2], 30),
        };
        let Some(all) = uninvadable(&whole) else { continue };
        match assemble(&whole.affine(), &vec![1.0; n], &|| false) {
            Assembly::Found { equilibrium, uninvadable } => {
                assert!(uninvadable && all.contains(&present(&equilibrium)), "seed {seed}: {equilibrium:?} of {all:?}");
                if all.len() == 1 { alone += 1 } else { among_several += 1 }
            }
            Assembly::Ray => {
                // All competing with all, the matrix is copositive, and a ray is impossible.
                assert!(seed % 3 == 1 || (seed % 3 == 2 && n > 5), "seed {seed}: a ray");
                rays += 1;
            }
            other => panic!("seed {seed}: {other:?}"),
        }
    }
    assert!(alone > 200 && among_several > 50 && rays < 60, "{alone} {among_several} {rays}");
}

#[test]
fn a_large_community_gets_its_assembly_and_says_what_is_not_proved() {
    let mut source = Source::new(5);
    let n = 40;
    let growth = (0..n).map(|_| Interval::point(source.between(0.1, 1.0))).collect();
    let entry = |k: usize| if k / n == k % n { -1.0 } else { source.between(-0.15, 0.05) };
    let matrix = (0..n * n).map(entry).map(Interval::point).collect();
    let community = Affine { growth, matrix };
    let problem = Problem { rows: &[], values: &[], sides: &vec![[0.0, 1e3]; n] };
    let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
    let found = find(&community, &problem, &budget);
    assert!(!found.complete && !found.none_above && found.unresolved.len() == 1);
    assert_eq!(found.unresolved[0].probably, Probably::Budget);
    assert!(found.unresolved[0].text.contains("2^40") && found.unresolved[0].text.contains("which is proved"));
    // The empty state, and by diagonal dominance of the matrix the one and only assembly.
    assert_eq!(found.list.len(), 2);
    let state = &found.list[1].state;
    for i in 0..n {
        let rate =
            community.growth[i].mid() + (0..n).map(|j| community.matrix[i * n + j].mid() * state[j]).sum::<f64>();
        assert!(if state[i] > 0.0 { rate.abs() < 1e-14 } else { rate < 0.0 }, "{i}: {rate}");
    }
}
