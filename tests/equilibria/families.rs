//! The families of models keep their word: rows vanish at the roots they name, and simple roots are simple.

use std::collections::BTreeSet;

use crate::common::Source;
use crate::common::families::{Family, examples, linear, patches, scaled, webs, widened};
use crate::common::newton::{Newton, inverse};
use crate::common::text::{Evaluation, Point, Read};
use restpoint::num::interval::Interval;

/// Whether the interval matrix is proved invertible: an approximate inverse times it stays near 1.
fn invertible(jacobian: &[Vec<Interval>]) -> bool {
    let middle = jacobian.iter().map(|row| row.iter().map(|slope| slope.mid()).collect()).collect();
    let Some(inverse) = inverse(middle) else { return false };
    let n = jacobian.len();
    let entry = |i: usize, j: usize| {
        (0..n).fold(Interval::ZERO, |sum, k| sum + Interval::point(inverse[i][k]) * jacobian[k][j])
    };
    let off = |i: usize, j: usize| (entry(i, j) - Interval::point(f64::from(i == j))).mag();
    (0..n).all(|i| (0..n).map(|j| off(i, j)).sum::<f64>() < 0.5)
}

/// Calls `check` on every listed point of every example, with what the equations are there.
fn at_points(of: impl Fn(&Family) -> Vec<Point>, mut check: impl FnMut(&str, &Point, &Evaluation)) {
    for family in examples() {
        let read = family.text.read();
        for point in of(&family) {
            check(&family.name, &point, &read.at(0, &point));
        }
    }
}

#[test]
fn names_are_distinct() {
    let examples = examples();
    let names: BTreeSet<_> = examples.iter().map(|family| &family.name).collect();
    assert_eq!(names.len(), examples.len());
}

#[test]
fn rows_vanish_at_every_known_root() {
    let known = |family: &Family| {
        let continua = family.continua.iter().flat_map(|continuum| continuum.points.clone());
        [&family.simple[..], &family.degenerate[..]].concat().into_iter().chain(continua).collect()
    };
    at_points(known, |name, point, found| {
        assert!(found.domain.defined, "{name} at {point:?}");
        assert!(found.rows.iter().all(|row| row.contains_zero()), "{name} at {point:?}: {:?}", found.rows);
    });
}

#[test]
fn simple_roots_are_simple_and_degenerate_ones_are_not() {
    let singular = |family: &Family| {
        let continua = family.continua.iter().flat_map(|continuum| continuum.points.clone());
        family.degenerate.iter().cloned().chain(continua).collect()
    };
    at_points(
        |family| family.simple.clone(),
        |name, point, found| assert!(invertible(&found.jacobian), "{name} at {point:?}: {:?}", found.jacobian),
    );
    at_points(singular, |name, point, found| {
        // At a peak the slopes on both sides have opposite signs, and a point shows only one of them.
        let regular = found.domain.smooth && invertible(&found.jacobian);
        assert!(!regular, "{name} at {point:?}: {:?}", found.jacobian);
    });
}

#[test]
fn corners_are_where_something_is_not_defined() {
    at_points(|family| family.corners.clone(), |name, _, found| assert!(!found.domain.defined, "{name}"));
}

#[test]
fn enclosures_are_narrow_apart_and_inside_the_box() {
    for family in examples() {
        let Read { model, mut system } = family.text.read();
        let bounds = system.bounds(&model).expect("bounds");
        let points: Vec<_> = family.points().collect();
        for (k, point) in points.iter().enumerate() {
            for (x, bound) in point.iter().zip(&bounds) {
                assert!(x.width() <= 1e-12 * x.mag(), "{} at {point:?}", family.name);
                assert!(x.lo() >= bound.lower && x.hi() < bound.upper, "{} at {point:?}", family.name);
            }
            for other in &points[..k] {
                let apart = point.iter().zip(*other).any(|(x, y)| x.intersect(*y).is_empty());
                assert!(apart, "{}: {point:?} and {other:?}", family.name);
            }
        }
    }
}

/// Counts that follow from how the families are made, or that a trial of the search found for models of the same form.
#[test]
fn there_are_as_many_roots_as_there_should_be() {
    let examples = examples();
    for (name, count) in [
        ("logistic", 2),
        ("budworm", 4),
        ("Rosenzweig-MacArthur", 3),
        ("Bazykin", 3),
        ("type III with Allee prey", 4),
        ("May-Leonard", 5),
        ("Hastings-Powell", 4),
        ("quota", 2),
        ("quota on prey", 3),
        ("ramp harvest", 2),
        ("ramp, Allee, predator", 4),
        ("Gompertz-Ivlev", 3),
        ("theta-logistic", 3),
        ("ratio-dependent", 3),
        ("stages", 2),
        ("stages with Allee effect", 3),
        ("predator-prey in 3 patches", 3),
        ("transcritical", 3),
        ("cubics 4, seed 1", 81),
        ("expanded cubics 3, seed 1", 27),
        ("Allee patches 4", 81),
        ("budworm ring 4", 81),
    ] {
        let family = examples.iter().find(|family| family.name == name).expect(name);
        assert_eq!(family.points().count(), count, "{name}");
    }
}

#[test]
fn lotka_volterra_systems_of_hundreds_of_seeds_have_the_roots_that_they_name() {
    let mut most = 0;
    for (n, seeds) in [(2, 60), (3, 60), (4, 40), (5, 30), (6, 20), (7, 10), (8, 4), (9, 2)] {
        for seed in 1..=seeds {
            let family = linear::lotka_volterra(n, seed);
            let read = family.text.read();
            most = most.max(family.simple.len());
            for point in &family.simple {
                let found = read.at(0, point);
                assert!(found.rows.iter().all(|row| row.contains_zero()), "{} at {point:?}", family.name);
                assert!(invertible(&found.jacobian), "{} at {point:?}", family.name);
            }
        }
    }
    assert!(most > 50, "the richest has {most}");
}

#[test]
fn other_units_and_larger_boxes_compose() {
    let family = linear::lotka_volterra(2, 1);
    let upper = |family: &Family| family.text.read().model.species.iter().map(|s| s.upper).collect::<Vec<_>>();
    let [plain, changed] = [upper(&family), upper(&widened(&scaled(&family, &[6, -6]), 1000.0))];
    let times = |side: Option<f64>, factor: f64| side.map(|side| side * factor);
    assert_eq!(changed, [times(plain[0], 1e9), times(plain[1], 1e-3)]);
}

#[test]
fn a_block_has_the_equations_of_its_formulas() {
    let (rows, block) = (linear::lotka_volterra(4, 2), linear::lotka_volterra_block(4, 2));
    let point: Point = [0.3, 0.0, 1.7, 2.0].map(Interval::point).into();
    let [rows, block] = [rows, block].map(|family| family.text.read().at(0, &point));
    let meet = |a: &[Interval], b: &[Interval]| a.iter().zip(b).all(|(a, b)| !a.intersect(*b).is_empty());
    assert!(meet(&rows.rows, &block.rows) && meet(&rows.jacobian.concat(), &block.jacobian.concat()));
}

/// |φ'| < 1/8 for every state and inflow, which makes the states of all patches together a contraction.
#[test]
fn each_patch_has_one_state_of_each_kind_whatever_comes_in() {
    for (patch, most) in [(patches::ALLEE, 1.0), (patches::BUDWORM, 8.0)] {
        for step in 0..=1000 {
            let inflow = most * f64::from(step) / 1000.0;
            let [low, middle, high] = [0, 1, 2].map(|which| patch.state(which, inflow));
            assert!(low <= middle && middle < high && high <= most, "{low}, {middle}, {high} at {inflow}");
            for state in [low, middle, high] {
                let (d, e) = (1e-6, patch.dispersal);
                let slope = (patch.rate(state + d, inflow) - patch.rate(state - d, inflow)) / (2.0 * d);
                assert!((e / slope).abs() < 0.125, "{state} at {inflow}");
            }
        }
    }
}

#[test]
fn a_seed_makes_the_same_web_again_and_another_makes_another() {
    assert_eq!(Source::new(0).bits(), 0xe220_a839_7b1d_cdaf, "the first number of SplitMix64 from 0");
    for make in [webs::web, webs::webx, linear::lotka_volterra] {
        let yaml = |seed| make(5, seed).text.yaml();
        assert_eq!(yaml(7), yaml(7));
        assert_ne!(yaml(7), yaml(8));
    }
    for n in 2..=11 {
        for seed in 1..=5 {
            for family in [webs::web(n, seed), webs::webx(n, seed)] {
                assert_eq!(family.text.read().model.species.len(), n, "{}", family.name);
            }
        }
    }
}

/// A list that lacked an equilibrium would be found out here, if it is one that Newton's method reaches.
#[test]
fn no_search_from_many_starts_finds_an_equilibrium_that_is_not_listed() {
    let mut source = Source::new(1);
    let mut reached = 0;
    for family in examples().iter().filter(|family| family.complete) {
        let mut read = family.text.read();
        let bounds = read.system.bounds(&read.model).expect("bounds");
        let tape = read.system.plans[0].tape(&read.system.graph);
        let mut newton = Newton::new(&read, 0, &tape);
        for k in 0..150 {
            // Every third start is far above the box, where there should be nothing.
            let above = if k % 3 == 0 { 1000.0 } else { 1.0 };
            let start = bounds.iter().map(|bound| above * bound.upper * source.unit().powi(3)).collect();
            let Some(x) = newton.settles(start) else { continue };
            let scale = |i: usize| 1e-6 * bounds[i].upper;
            if (0..x.len()).any(|i| x[i] < -1e-3 * scale(i)) {
                continue;
            }
            let near = |point: &Point, within: f64| {
                point.iter().enumerate().all(|(i, c)| (c.mid() - x[i]).abs() <= within * scale(i))
            };
            let simple = family.simple.iter().any(|point| near(point, 1e-3));
            // Newton's method comes no nearer to a double root than the root of the rounding errors.
            let other = family.degenerate.iter().chain(&family.corners).any(|point| near(point, 100.0));
            let in_continuum = !family.continua.is_empty();
            assert!(simple || other || in_continuum, "{}: {x:?}", family.name);
            reached += usize::from(simple);
        }
    }
    assert!(reached > 3000, "{reached}");
}
