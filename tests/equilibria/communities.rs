//! Lotka–Volterra communities: recognised however they are written; every equilibrium found and proved, against exact
//! rational arithmetic, the published eleven groups, and the search for general rates.
#![allow(clippy::panic, clippy::unwrap_used, clippy::expect_used, reason = "a test fails by panicking")]

use crate::common::Source;
use crate::common::cases::named;
use crate::common::text::{ModelText, Read};
use crate::common::whole::{Whole, present};
use crate::common::workers::Two;
use restpoint::analysis::equilibria::linear::{Affine, find, recognise};
use restpoint::analysis::equilibria::{
    Budget, Equilibria, Equilibrium, OneByOne, Probably, Problem, balance, find as search,
};
use restpoint::num::interval::Interval;

const BUDGET: Budget<'_> = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };

fn solve(community: &Affine, upper: f64) -> Equilibria {
    let sides = vec![[0.0, upper]; community.species()];
    find(community, &Problem { rows: &[], values: &[], sides: &sides }, &BUDGET)
}

/// Whether an enclosure holds numerator/denominator, and how wide it is in units in the last place.
fn width_around(side: Interval, numerator: i128, denominator: i128) -> f64 {
    // Exact for what these tests have: numerator and denominator below 2^53.
    assert!(numerator.abs() < 1 << 53 && denominator < 1 << 53);
    let exact = Interval::point(numerator as f64).div(Interval::point(denominator as f64), &mut true);
    assert!(!side.intersect(exact).is_empty(), "{side:?} for {numerator}/{denominator}");
    side.width() / (f64::EPSILON * exact.mag())
}

#[test]
fn whole_numbers_are_solved_as_exact_fractions_say() {
    let mut source = Source::new(1);
    let (mut listed, mut singular, mut degenerate, mut widest) = (0, 0, 0, 0.0f64);
    for seed in 0..300 {
        let n = 2 + seed % 6;
        let whole = Whole::random(&mut source, n, if seed % 3 == 0 { [-2, 1] } else { [-9, 9] }, 12);
        let found = solve(&whole.affine(), 1e9);
        let mut expected = 0;
        let mut decided = true;
        for face in whole.faces() {
            let Some(solution) = whole.solution(&face) else {
                singular += 1;
                decided = false;
                continue;
            };
            if solution.0.iter().any(|&x| x < 0) {
                continue;
            }
            if solution.0.contains(&0) {
                degenerate += 1;
                decided = false;
                continue;
            }
            expected += 1;
            let equilibrium = found.list.iter().find(|e| present(e) == face).expect("found");
            assert!(equilibrium.proven);
            for (&i, &numerator) in face.iter().zip(&solution.0) {
                widest = widest.max(width_around(equilibrium.enclosure[i], numerator, solution.1));
            }
        }
        assert_eq!((found.list.len(), found.faces), (expected, 1 << n), "seed {seed}");
        // What is singular or degenerate may be decided all the same, where those present cannot be positive.
        assert!(!decided || (found.complete && found.none_above), "seed {seed}: {:?}", found.unresolved);
        assert_eq!(found.complete, found.unresolved.is_empty());
        listed += expected;
    }
    assert!(listed > 2000 && singular > 20 && degenerate > 50, "{listed} {singular} {degenerate}");
    assert!(widest <= 4.0, "an enclosure is {widest} units in the last place wide");
}

#[test]
fn the_search_for_general_rates_finds_the_same() {
    let mut source = Source::new(2);
    let mut compared = 0;
    for seed in 0..60 {
        let n = 2 + seed % 4;
        let whole = Whole::random(&mut source, n, [-7, 5], 9);
        let mut read = whole.text().read();
        let rows = read.system.plans[0].rows.clone();
        let sides = vec![[0.0, 1e6]; n];
        let problem = Problem { rows: &rows, values: &[], sides: &sides };
        let community = recognise(&mut read.system.graph, &problem).expect("a community");
        assert_eq!(community, whole.affine());
        let exact = find(&community, &problem, &BUDGET);
        // Lines of equilibria would take all boxes there are.
        let searched = search(&mut read.system.graph, &problem, &Budget { boxes: 500, ..BUDGET });
        if !searched.complete || !exact.complete {
            continue;
        }
        compared += 1;
        let who = |found: &Equilibria| found.list.iter().map(present).collect::<Vec<_>>();
        assert_eq!(who(&exact), who(&searched), "seed {seed}");
        for (one, other) in exact.list.iter().zip(&searched.list) {
            let meet = |(a, b): (&Interval, &Interval)| !a.intersect(*b).is_empty();
            assert!(one.enclosure.iter().zip(&other.enclosure).all(meet), "seed {seed}");
        }
    }
    assert!(compared > 30, "{compared}");
}

/// Reads rows in r, K, a, e, m, q, E over N, P and compares growth and matrix; `None` where they are no community.
fn check(rows: [&str; 2], expected: Option<([f64; 2], [f64; 4])>) {
    let values = [
        ("r", "0.5"),
        ("K", "4"),
        ("a", "0.25"),
        ("e", "0.5"),
        ("m", "0.125"),
        ("q", "0.25"),
        ("E", "1.5"),
        ("z", "0"),
    ];
    let text = ModelText::new("forms", "100", &[("N", rows[0]), ("P", rows[1])]).with(&values);
    let Read { model, mut system } = text.read();
    let plan = system.plans[0].clone();
    let balanced = balance(&mut system.graph, &plan.rows, &model.time);
    let written = system.graph.with_zeros(&balanced, &plan.values);
    let problem = Problem { rows: &written, values: &plan.values, sides: &[[0.0, 100.0]; 2] };
    let found = recognise(&mut system.graph, &problem);
    let points = |x: &[f64]| x.iter().map(|&x| Interval::point(x)).collect::<Vec<_>>();
    let expected = expected.map(|(growth, matrix)| Affine { growth: points(&growth), matrix: points(&matrix) });
    assert_eq!(found, expected, "{rows:?}");
}

#[test]
fn communities_are_recognised_however_they_are_written() {
    // Values are such that all products are exact: r/K = 1/8, a e = 1/8, q E = 3/8.
    let plain = Some(([0.5, -0.125], [-0.125, -0.25, 0.125, 0.0]));
    check(["r*N*(1 - N/K) - a*N*P", "e*a*N*P - m*P"], plain);
    check(["N*(r - r/K*N - a*P)", "P*(e*a*N - m)"], plain);
    check(["r*N - r*N^2/K - N*a*P", "(e*a*N - m)*P"], plain);
    check(["(r*(K - N)/K - a*P)*N", "-(m - a*N*e)*P"], plain);
    check(["r*N*(1 - N/K) - a*N*P - z", "e*a*N*P - m*P"], plain);
    check(["r*N*(1 - N/K) - a*N*P - q*E*N", "e*a*N*P - m*P"], Some(([0.125, -0.125], [-0.125, -0.25, 0.125, 0.0])));
    check(["r*N*(1 - N/K)/(1 + r*2)", "0*P - P"], Some(([0.25, -1.0], [-0.0625, 0.0, 0.0, 0.0])));
    // Saturating, with a refuge, squared, with immigration: no community.
    check(["r*N*(1 - N/K) - a*N*P/(1 + N)", "e*a*N*P - m*P"], None);
    check(["r*N*(1 - N/K) - a*max(0, N - 1)*P", "e*a*N*P - m*P"], None);
    check(["r*N*(1 - N/K) - a*N*P^2", "e*a*N*P - m*P"], None);
    check(["r*N*(1 - N/K) - a*N*P + 1", "e*a*N*P - m*P"], None);
    check(["r*N*(1 - N/K)*(N - 1)", "e*a*N*P - m*P"], None);
    check(["r*N*max(1 - N/K, -1)", "e*a*N*P - m*P"], None);
}

#[test]
fn a_map_whose_growth_per_head_is_affine_is_a_community() {
    let mut text = ModelText::new("map", "10", &[("N", "N*(1.5 - 0.25*N - 0.5*P)"), ("P", "P*(0.5 + 0.5*N)")]);
    text.discrete = true;
    let Read { model, mut system } = text.read();
    let rows = balance(&mut system.graph, &system.plans[0].rows.clone(), &model.time);
    let problem = Problem { rows: &rows, values: &[], sides: &[[0.0, 10.0]; 2] };
    let community = recognise(&mut system.graph, &problem).expect("a community");
    let found = find(&community, &problem, &BUDGET);
    // By hand: (0, 0); N = 2; and N = 1, 0.5 = 0.25 + 0.5 P.
    let states: Vec<&[f64]> = found.list.iter().map(|e| &e.state[..]).collect();
    assert_eq!(states, [&[0.0, 0.0][..], &[2.0, 0.0], &[1.0, 0.5]]);
    assert!(found.complete && found.none_above);
}

/// A community of two by its growth and matrix in a box, and what is found: states, completeness, nothing above, and what
/// was left open.
fn check_two(growth: [f64; 2], matrix: [f64; 4], sides: [[f64; 2]; 2], expected: (&[[f64; 2]], bool, &[Probably])) {
    let points = |x: &[f64]| x.iter().map(|&x| Interval::point(x)).collect::<Vec<_>>();
    let community = Affine { growth: points(&growth), matrix: points(&matrix) };
    let found = find(&community, &Problem { rows: &[], values: &[], sides: &sides }, &BUDGET);
    let states: Vec<&[f64]> = found.list.iter().map(|e| &e.state[..]).collect();
    let open: Vec<Probably> = found.unresolved.iter().map(|open| open.probably).collect();
    assert_eq!(
        (&states[..], found.none_above, &open[..]),
        (&expected.0.iter().map(|s| &s[..]).collect::<Vec<_>>()[..], expected.1, expected.2)
    );
    assert_eq!(found.complete, open.is_empty());
}

#[test]
fn singular_faces_are_told_apart() {
    let wide = [[0.0, 100.0]; 2];
    let open = [Probably::Continuum];
    // x + y = 1 twice: a line of equilibria.
    check_two([1.0, 1.0], [-1.0, -1.0, -1.0, -1.0], wide, (&[[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]], false, &open));
    // x + y = 1 and x + y = 2: parallel, so none.
    check_two([1.0, 2.0], [-1.0, -1.0, -1.0, -1.0], wide, (&[[0.0, 0.0], [1.0, 0.0], [0.0, 2.0]], true, &[]));
    // The line x − y = 200 lies above the box alone.
    check_two([200.0, 200.0], [-1.0, 1.0, -1.0, 1.0], wide, (&[[0.0, 0.0]], false, &[]));
    // The line x + y = −1 has no positive point.
    check_two([-1.0, -2.0], [-1.0, -1.0, -2.0, -2.0], wide, (&[[0.0, 0.0]], true, &[]));
    // A species without any rate of its own: every abundance of it is an equilibrium.
    check_two([0.0, 1.0], [0.0, 0.0, 0.0, -1.0], wide, (&[[0.0, 0.0], [0.0, 1.0]], false, &[open[0], open[0]]));
    // The classical predator and prey: none alone but the empty state.
    check_two([1.0, -1.0], [0.0, -0.5, 0.25, 0.0], wide, (&[[0.0, 0.0], [4.0, 2.0]], true, &[]));
}

/// Points with A x = b that are in the box, positive, and not all one.
#[test]
fn surfaces_of_equilibria_have_points() {
    let check = |whole: &Whole, upper: f64, at_least: usize| {
        let (community, n) = (whole.affine(), whole.growth.len());
        let found = solve(&community, upper);
        let mut shown = 0;
        for open in found.unresolved.iter().filter(|open| open.probably == Probably::Continuum) {
            assert!(open.witnesses.len() <= 3 && open.dimension.is_some_and(|dimension| dimension > 0));
            for (k, state) in open.witnesses.iter().enumerate() {
                shown += 1;
                assert!(open.region.iter().zip(state).all(|(side, &x)| side.contains(x)), "{open:?}");
                for i in (0..n).filter(|&i| open.region[i] != Interval::ZERO) {
                    let terms: Vec<f64> = (0..n).map(|j| community.matrix[i * n + j].mid() * state[j]).collect();
                    let growth = community.growth[i].mid();
                    let size = terms.iter().fold(growth.abs(), |size, term| size.max(term.abs()));
                    assert!(state[i] > 0.0 && (growth + terms.iter().sum::<f64>()).abs() <= 1e-9 * size, "{open:?}");
                }
                assert!(open.witnesses[..k].iter().all(|other| other != state), "{open:?}");
            }
        }
        assert!(shown >= at_least, "{shown}: {:?}", found.unresolved);
    };
    // Four that limit each other alike: a line for each of 6 pairs, a surface for each of 4 triples, and one of all.
    let alike = |n: usize| Whole { growth: vec![1; n], matrix: vec![-1; n * n] };
    check(&alike(2), 100.0, 3);
    check(&alike(4), 100.0, 33);
    // The same in a box in which it takes at least three of them to reach 1.
    check(&alike(4), 0.4, 15);
    let mut source = Source::new(4);
    for seed in 0..40 {
        check(&Whole::random(&mut source, 2 + seed % 5, [-2, 1], 3), 1e3, 0);
    }
}

#[test]
fn the_box_is_kept() {
    let (growth, matrix) = ([1.0, -1.0], [0.0, -0.5, 0.25, 0.0]);
    check_two(growth, matrix, [[0.0, 3.0], [0.0, 3.0]], (&[[0.0, 0.0]], false, &[]));
    check_two(growth, matrix, [[0.0, 4.0], [0.0, 2.0]], (&[[0.0, 0.0], [4.0, 2.0]], true, &[]));
    check_two(growth, matrix, [[1.0, 5.0], [0.0, 5.0]], (&[[4.0, 2.0]], true, &[]));
    check_two(growth, matrix, [[4.5, 5.0], [0.0, 5.0]], (&[], true, &[]));
    // A zero that is exact is the neighbour's equilibrium, not one of its own.
    check_two(
        [1.0, 1.0],
        [-1.0, -1.0, -1.0, -2.0],
        [[0.0, 9.0]; 2],
        (&[[0.0, 0.0], [1.0, 0.0], [0.0, 0.5]], true, &[]),
    );
}

#[test]
fn units_do_not_matter() {
    let mut source = Source::new(3);
    for seed in 0..40 {
        let n = 2 + seed % 6;
        let whole = Whole::random(&mut source, n, [-9, 7], 12).affine();
        let units: Vec<f64> = (0..n).map(|_| (40.0 * source.unit() - 20.0).round().exp2()).collect();
        let point = |side: &Interval, unit: f64| Interval::point(side.lo() * unit);
        let matrix = whole.matrix.iter().enumerate().map(|(k, entry)| point(entry, 1.0 / units[k % n])).collect();
        let other = Affine { growth: whole.growth.clone(), matrix };
        let (here, there) = (solve(&whole, 1e30), solve(&other, 1e30));
        assert_eq!(here.list.len(), there.list.len(), "seed {seed}");
        for (one, two) in here.list.iter().zip(&there.list) {
            let back = |(side, unit): (&Interval, &f64)| *side * Interval::point(1.0 / unit);
            let sides: Vec<Interval> = two.enclosure.iter().zip(&units).map(back).collect();
            let meet = one.enclosure.iter().zip(&sides).all(|(a, b)| !a.intersect(*b).is_empty());
            let alike =
                one.enclosure.iter().zip(&sides).all(|(a, b)| b.width() <= 4.0 * f64::EPSILON * b.mag() || a == b);
            assert!(meet && alike, "seed {seed}: {one:?} {two:?}");
        }
    }
}

/// The published 11-species gut community: all of 2^11 faces, and the 553 equilibria of the catalogue.
#[test]
fn the_eleven_groups_have_553_equilibria_of_which_two_are_stable() {
    let case = named("C12_gut_community_11");
    let Read { model, mut system } = case.text().read();
    let bounds = system.bounds(&model).expect("bounds");
    let sides: Vec<[f64; 2]> = bounds.iter().map(|bound| [bound.lower, bound.upper]).collect();
    let plan = system.plans[0].clone();
    let problem = Problem { rows: &plan.rows, values: &plan.values, sides: &sides };
    let community = recognise(&mut system.graph, &problem).expect("a community");
    let found = find(&community, &problem, &BUDGET);
    assert_eq!((found.list.len(), found.complete, found.faces), (553, true, 2048));
    for published in &case.equilibria {
        let near = |e: &&Equilibrium| e.state.iter().zip(&published.x).all(|(a, b)| (a - b).abs() <= 1e-9 * b.abs());
        assert_eq!(found.list.iter().filter(near).count(), 1, "{:?}", published.x);
    }
    let stable: Vec<&Equilibrium> = found.list.iter().filter(|e| is_stable(&community, &e.state)).collect();
    assert_eq!(stable.len(), 2);
    for equilibrium in stable {
        let published = case.equilibria.iter().find(|published| {
            published.counts == [11, 0, 0] && {
                equilibrium.state.iter().zip(&published.x).all(|(a, b)| (a > &0.0) == (b > &0.0))
            }
        });
        assert!(published.is_some(), "{:?}", equilibrium.state);
    }
    let with_two = find(&community, &problem, &Budget { workers: &Two, ..BUDGET });
    assert_eq!(with_two, found);
    let stopped = find(&community, &problem, &Budget { stop: &|| true, ..BUDGET });
    assert!(!stopped.complete && !stopped.none_above && stopped.unresolved[0].probably == Probably::Budget);
}

/// Whether all eigenvalues of the Jacobian have negative real parts: (I + J)(I − J)⁻¹ has them inside the unit circle, so
/// that its powers vanish (Cayley 1846). J is first scaled to entries
/// below 1, by a number such that none is exactly 1.
fn is_stable(community: &Affine, state: &[f64]) -> bool {
    let n = state.len();
    let entry = |k: usize| community.matrix[k].mid();
    let rate = |i: usize| community.growth[i].mid() + (0..n).map(|j| entry(i * n + j) * state[j]).sum::<f64>();
    let mut jacobian: Vec<f64> = (0..n * n).map(|k| state[k / n] * entry(k)).collect();
    (0..n).filter(|&i| state[i] == 0.0).for_each(|i| jacobian[i * n + i] = rate(i));
    let size = 1.37 * jacobian.iter().fold(0.0f64, |size, x| size.max(x.abs()));
    let shifted = |sign: f64| -> Vec<f64> {
        jacobian.iter().enumerate().map(|(k, x)| f64::from(u8::from(k / n == k % n)) + sign * x / size).collect()
    };
    let Some(inverse) = restpoint::num::dense::inverse(&shifted(-1.0), n) else { panic!("{state:?}") };
    let mut power = times(&shifted(1.0), &inverse, n);
    for _ in 0..40 {
        power = times(&power, &power, n);
        if power.iter().any(|x| x.abs() > 1e100) {
            return false;
        }
    }
    power.iter().all(|x| x.abs() < 1e-3)
}

fn times(a: &[f64], b: &[f64], n: usize) -> Vec<f64> {
    (0..n * n).map(|k| (0..n).map(|l| a[k / n * n + l] * b[l * n + k % n]).sum()).collect()
}
