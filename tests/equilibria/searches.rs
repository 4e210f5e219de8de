//! The searches against families whose equilibria are known exactly: every simple root is proved, none is false, a
//! degenerate one is said to be open, and units and box sizes change nothing.

#![allow(clippy::panic, reason = "a test fails by panicking")]

use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};

use crate::common::Source;
use crate::common::families::{Family, examples, folds, linear, placed, scaled, webs, widened};
use crate::common::solve::{Method, meet, solve, solve_within};
use crate::common::whole::Whole;
use crate::common::workers::Two;
use restpoint::analysis::equilibria::{Budget, Derivative, Equilibria, OneByOne, Probably, Progress, Workers};

fn check(family: &Family, found: &Equilibria) {
    let name = &family.name;
    for root in &family.simple {
        let matched = found.list.iter().filter(|e| meet(&e.enclosure, root)).count();
        assert!(matched == 1, "{name}: {root:?}, {matched} times, {:?}", found.unresolved);
    }
    for root in family.degenerate.iter().chain(&family.corners) {
        let listed = found.list.iter().any(|e| meet(&e.enclosure, root));
        let open = found.unresolved.iter().any(|open| meet(&open.region, root));
        assert!(listed || open, "{name}: {root:?} is neither listed nor open");
    }
    for continuum in &family.continua {
        let open = |open: &restpoint::analysis::equilibria::Unresolved| {
            open.probably == Probably::Continuum && continuum.points.iter().any(|point| meet(&open.region, point))
        };
        assert!(found.unresolved.iter().any(open), "{name}: a continuum is not seen");
    }
    assert!(found.list.iter().all(|e| e.proven), "{name}");
    if family.complete {
        for equilibrium in &found.list {
            let known = family.points().any(|point| meet(&equilibrium.enclosure, point));
            let on_continuum = found
                .unresolved
                .iter()
                .any(|open| open.probably == Probably::Continuum && meet(&open.region, &equilibrium.enclosure));
            assert!(known || on_continuum, "{name}: {:?} is false", equilibrium.state);
        }
        let plain = family.degenerate.is_empty() && family.corners.is_empty() && family.continua.is_empty();
        assert!(found.complete || !plain, "{name}: {:?}", found.unresolved);
    }
    assert!(family.continua.is_empty() || !found.complete, "{name}");
}

fn certified(family: &Family) -> Equilibria {
    solve(&mut family.text.read(), 0, Method::Certified)
}

#[test]
fn every_example_is_answered() {
    for family in examples() {
        check(&family, &certified(&family));
        check(&family, &solve(&mut family.text.read(), 0, Method::Chosen));
    }
}

#[test]
fn communities_have_exactly_the_equilibria_of_linear_algebra() {
    for n in 2..=6 {
        for seed in 1..=(if n < 5 { 60 } else { 12 }) {
            let family = linear::lotka_volterra(n, seed);
            check(&family, &certified(&family));
        }
    }
    for (n, seeds) in [(7, 6), (8, 3), (9, 2)] {
        for seed in 1..=seeds {
            let family = linear::lotka_volterra_block(n, seed);
            check(&family, &solve(&mut family.text.read(), 0, Method::Chosen));
        }
    }
}

#[test]
fn roots_placed_by_construction_are_found() {
    for seed in 2..=12 {
        for family in [placed::cubics(3, seed), placed::expanded_cubics(2, seed), placed::lines_and_circles(seed)] {
            check(&family, &certified(&family));
        }
    }
}

#[test]
fn exact_folds_are_open_and_near_ones_are_told_apart() {
    for n in 1..=3 {
        for seed in 1..=4 {
            let fold = folds::hidden_fold(n, seed);
            let found = certified(&fold);
            assert!(!found.complete, "{}", fold.name);
            assert!(found.unresolved.iter().any(|open| open.probably == Probably::DoubleRoot), "{}", fold.name);
            check(&fold, &found);
            for gap in [1e-2, 1e-4, 1e-6, 1e-8] {
                let pair = folds::hidden_pair(n, gap, seed);
                check(&pair, &certified(&pair));
            }
        }
    }
}

/// Numbers of 16 digits tell roots of multiplicity m apart down to some 10^(−16/m): no more than a few times that is open
/// around a triple root. A root on the common side of two boxes keeps both open: four boxes a halving, and twenty halvings
/// to a millionth, in each variable; more than that is a search that crowds around the root.
#[test]
fn what_is_open_around_a_degenerate_root_is_small_and_soon_found() {
    let cusps = (1..=3).flat_map(|n| (1..=4).map(move |seed| folds::hidden_cusp(n, seed)));
    let folds = (1..=3).flat_map(|n| (1..=4).map(move |seed| folds::hidden_fold(n, seed)));
    for family in cusps.chain(folds).chain([folds::triple_root(), folds::semistable(), folds::quota_fold(2)]) {
        let found = certified(&family);
        check(&family, &found);
        let root = &family.degenerate[0];
        let open: Vec<_> = found.unresolved.iter().filter(|open| meet(&open.region, root)).collect();
        let [open] = open[..] else { panic!("{}: {:?}", family.name, found.unresolved) };
        let widest = open.region.iter().map(|side| side.width() / side.mag()).fold(0.0, f64::max);
        assert!(open.probably == Probably::DoubleRoot && widest < 4e-6, "{}: {open:?}", family.name);
        let halvings = 20 * root.len();
        assert!(found.boxes <= 4 * halvings, "{}: {} boxes", family.name, found.boxes);
    }
}

#[test]
fn units_and_box_sizes_change_nothing() {
    let few =
        [linear::lotka_volterra(3, 5), placed::cubics(2, 5), folds::hidden_pair(2, 1e-3, 5), webs::four_species()];
    for family in &few {
        let plain = certified(family);
        for exponents in [[6; 4], [-6; 4], [6, -6, 6, -6]] {
            let other = scaled(family, &exponents[..family.text.species.len()]);
            let found = certified(&other);
            check(&other, &found);
            assert_eq!((found.list.len(), found.complete), (plain.list.len(), plain.complete), "{}", other.name);
        }
        let wide = widened(family, 1000.0);
        let found = certified(&wide);
        assert_eq!((found.list.len(), found.complete), (plain.list.len(), plain.complete), "{}", wide.name);
    }
}

#[test]
fn webs_of_the_catalogue_have_their_equilibria() {
    // Counted by two independent methods in the trial that the parameters were matched to.
    for (family, count) in [(webs::four_species(), 9), (webs::six_species(), 25)] {
        let found = certified(&family);
        assert_eq!((found.list.len(), found.complete), (count, true), "{}", family.name);
    }
}

#[test]
fn two_workers_find_the_same_as_one() {
    for family in [webs::web(5, 3), webs::webx(4, 2), linear::lotka_volterra(5, 9)] {
        let one = certified(&family);
        let budget = Budget { boxes: 50_000, stop: &|| false, workers: &Two, observer: None };
        let two = solve_within(&mut family.text.read(), 0, Method::Certified, &budget);
        assert_eq!((one.list, one.complete, one.boxes), (two.list, two.complete, two.boxes), "{}", family.name);
    }
}

/// What is told of a search comes to what it has done: every face, and the whole of them.
#[test]
fn what_is_told_of_a_search_is_what_it_does() {
    let workers: [&dyn Workers; 2] = [&OneByOne, &Two];
    for family in [webs::web(5, 3), webs::webx(4, 2), linear::lotka_volterra(5, 9), webs::six_species()] {
        for workers in workers {
            let told = Mutex::new(Progress::default());
            let observer = |work: Progress| {
                let mut told = told.lock().unwrap();
                told.faces += work.faces;
                told.share += work.share;
            };
            let budget = Budget { boxes: 50_000, stop: &|| false, workers, observer: Some(&observer) };
            let found = solve_within(&mut family.text.read(), 0, Method::Certified, &budget);
            let told = *told.lock().unwrap();
            assert_eq!((told.faces, told.share), (found.faces, Progress::WHOLE), "{}", family.name);
        }
    }
}

#[test]
fn a_spent_budget_is_said_and_nothing_false_with_it() {
    let family = webs::six_species();
    let whole = certified(&family);
    let budget = Budget { boxes: 3, stop: &|| false, workers: &OneByOne, observer: None };
    let found = solve_within(&mut family.text.read(), 0, Method::Certified, &budget);
    assert!(!found.complete && !found.none_above);
    assert!(found.unresolved.iter().any(|open| open.probably == Probably::Budget));
    for equilibrium in &found.list {
        assert!(whole.list.iter().any(|e| meet(&e.enclosure, &equilibrium.enclosure)), "{:?}", equilibrium.state);
    }
    for equilibrium in &whole.list {
        let listed = found.list.iter().any(|e| meet(&e.enclosure, &equilibrium.enclosure));
        let open = found.unresolved.iter().any(|open| meet(&open.region, &equilibrium.enclosure));
        assert!(listed || open, "{:?} was lost with the budget", equilibrium.state);
    }
    let stopped = Budget { boxes: 50_000, stop: &|| true, workers: &OneByOne, observer: None };
    let found = solve_within(&mut family.text.read(), 0, Method::Certified, &stopped);
    assert!(!found.complete && found.unresolved[0].region.iter().all(|side| side.width() > 0.0));
}

#[test]
fn a_search_may_be_stopped_anywhere() {
    let check = |family: &Family, method: Method, asked: usize| {
        let count = AtomicUsize::new(0);
        let stop = || count.fetch_add(1, Ordering::Relaxed) >= asked;
        let budget = Budget { boxes: 700, stop: &stop, workers: &OneByOne, observer: None };
        let found = solve_within(&mut family.text.read(), 0, method, &budget);
        let name = &family.name;
        let is_said = found.unresolved.iter().any(|open| open.probably == Probably::Budget);
        assert!(found.complete != is_said, "{name}, stopped at {asked}: {:?}", found.unresolved);
        assert!(!found.complete || found.list.len() == certified(family).list.len(), "{name}, stopped at {asked}");
        assert!(found.list.iter().all(|e| e.proven && e.derivative == Derivative::Exists), "{name}, {asked}");
        // After it has said so, it is asked once by each piece of work that was still to be begun: two hunts a face.
        let after = count.load(Ordering::Relaxed).saturating_sub(asked);
        assert!(after <= 100 + (4 << family.text.species.len().min(9)), "{name}: asked {after} times after {asked}");
    };
    let large = Whole::random(&mut Source::new(1), 20, [-2, 0], 40).text();
    let large = Family::unknown("twenty competitors", large);
    for asked in [0, 1, 2, 3, 7, 20, 55, 148, 403, 1096, 2980] {
        check(&webs::web(5, 3), Method::Certified, asked);
        check(&webs::web(9, 3), Method::Chosen, asked);
        check(&linear::lotka_volterra_block(6, 1), Method::Chosen, asked);
        check(&large, Method::Chosen, asked);
    }
}

#[test]
fn enclosures_are_two_last_places_wide() {
    let community = (linear::lotka_volterra(4, 3), Method::Chosen);
    let web = (webs::web(9, 3), Method::Chosen);
    let certified = [placed::cubics(3, 3), webs::dense_six_species(), folds::hidden_pair(3, 1e-7, 1)];
    let certified = certified.map(|family| (family, Method::Certified));
    for (family, method) in certified.into_iter().chain([community, web]) {
        let budget = Budget { boxes: 700, stop: &|| false, workers: &OneByOne, observer: None };
        for equilibrium in solve_within(&mut family.text.read(), 0, method, &budget).list {
            for (i, side) in equilibrium.enclosure.iter().enumerate() {
                let unit = equilibrium.state[i].abs() * f64::EPSILON;
                assert!(side.width() <= 2.0 * unit, "{}: {side:?}", family.name);
                assert!(side.contains(equilibrium.state[i]), "{}: {side:?}", family.name);
            }
        }
    }
}
