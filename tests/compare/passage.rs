//! What becomes of equilibria between two scenarios: families solved by hand, published cases, all shipped models.

use restpoint::analysis::passage::{Fate, Found, Passage, Reason, identify};

use crate::common::cases;
use crate::support::{Solved, shipped};

/// Shares of the way are found to this.
const PLACE: f64 = 1e-9;

fn arrives(at: usize) -> Fate {
    Fate::Arrives { at, turns: Vec::new(), kinks: Vec::new() }
}

/// Whether a fate is the one that was worked out, shares of the way to rounding.
fn is_like(found: &Fate, expected: &Fate) -> bool {
    let near = |a: f64, b: f64| (a - b).abs() <= PLACE;
    match (found, expected) {
        (Fate::Fold { at, with }, Fate::Fold { at: place, with: other }) => near(*at, *place) && with == other,
        (Fate::Zero { at, species, with }, Fate::Zero { at: place, species: who, with: other }) => {
            near(*at, *place) && species == who && with == other
        }
        (Fate::LeavesBox { species, .. }, Fate::LeavesBox { species: who, .. }) => species == who,
        (Fate::Arrives { at, turns, .. }, Fate::Arrives { at: place, turns: others, .. }) => {
            at == place && turns.len() == others.len() && turns.iter().zip(others).all(|(a, b)| near(*a, *b))
        }
        // The places of obstacles are those of the last step before them.
        (Fate::NotFollowed(Reason::Crossing(at)), Fate::NotFollowed(Reason::Crossing(place))) => {
            (at - place).abs() <= 1e-6
        }
        (Fate::NotFollowed(Reason::Rough(at)), Fate::NotFollowed(Reason::Rough(place))) => (at - place).abs() <= 1e-6,
        (found, expected) => found == expected,
    }
}

fn check(yaml: &str, forward: &[Fate], backward: &[Fate]) {
    let solved = Solved::read(yaml);
    let found = solved.passage(0, 1);
    let alike = |found: &[Fate], expected: &[Fate]| {
        found.len() == expected.len() && found.iter().zip(expected).all(|(found, expected)| is_like(found, expected))
    };
    assert!(
        alike(&found.forward, forward) && alike(&found.backward, backward),
        "{found:?}\nfor {:?}\n{yaml}",
        solved.lists
    );
}

fn zero(at: f64, species: usize, with: Option<usize>) -> Fate {
    Fate::Zero { at, species: restpoint::model::SpeciesId(species), with }
}

fn one_species(parameters: &str, rate: &str, upper: &str, values: [&str; 2]) -> String {
    let [first, second] = values;
    format!(
        "title: t\ntime: yr\nspecies: {{x: {{upper: {upper}}}}}\nparameters: {{{parameters}}}\nchange: {{x: \"{rate}\"}}\n\
         scenarios:\n  first: {{values: {{{first}}}}}\n  second: {{values: {{{second}}}}}\n"
    )
}

#[test]
fn a_quota_above_the_largest_surplus_meets_a_fold() {
    // x (1 − x) = Q has its fold at Q = 1/4: 0.4 of the way from 0.05 to 0.55. Where nothing is taken 0 is a state too.
    let logistic = |values| one_species("Q: 0", "x*(1 - x) - Q", "2", values);
    check(
        &logistic(["Q: 0.05", "Q: 0.55"]),
        &[Fate::Fold { at: 0.4, with: Some(1) }, Fate::Fold { at: 0.4, with: Some(0) }],
        &[],
    );
    check(
        &logistic(["Q: 0.55", "Q: 0.05"]),
        &[],
        &[Fate::Fold { at: 0.6, with: Some(1) }, Fate::Fold { at: 0.6, with: Some(0) }],
    );
    check(&logistic(["Q: 0.05", "Q: 0.2"]), &[arrives(0), arrives(1)], &[arrives(0), arrives(1)]);
    check(&logistic(["Q: 0", "Q: 0.2"]), &[arrives(0), arrives(1)], &[arrives(0), arrives(1)]);
    check(&logistic(["Q: 0.2", "Q: 0"]), &[arrives(0), arrives(1)], &[arrives(0), arrives(1)]);
}

#[test]
fn effort_above_the_growth_rate_takes_the_stock_through_zero() {
    // x (1 − x − E): the state 1 − E is 0 at E = 1, halfway from 0.5 to 1.5, where it meets the empty state.
    let effort = |values| one_species("E: 0", "x*(1 - x - E)", "2", values);
    check(&effort(["E: 0.5", "E: 1.5"]), &[arrives(0), zero(0.5, 0, Some(0))], &[arrives(0)]);
    check(&effort(["E: 1.5", "E: 0.5"]), &[arrives(0)], &[arrives(0), zero(0.5, 0, Some(0))]);
}

#[test]
fn competitors_are_lost_where_their_state_meets_the_border() {
    // x (2 − x − y/2), y (k − y − x/2): both are present for 1 < k < 4; at k = 1 y is lost to (2, 0), at k = 4 x to (0, 4).
    let competition = |from: &str, to: &str| {
        format!(
            "title: t\ntime: yr\nspecies: {{x: {{upper: 10}}, y: {{upper: 10}}}}\nparameters: {{k: 2}}\n\
             change: {{x: x*(2 - x - y/2), y: y*(k - y - x/2)}}\n\
             scenarios:\n  first: {{values: {{k: {from}}}}}\n  second: {{values: {{k: {to}}}}}\n"
        )
    };
    let three = [arrives(0), arrives(1), arrives(2)];
    let with = |last| [&three[..], &[last]].concat();
    check(&competition("2", "3"), &with(arrives(3)), &with(arrives(3)));
    check(&competition("2", "0.5"), &with(zero(2.0 / 3.0, 1, Some(1))), &three);
    check(&competition("2", "6"), &with(zero(0.5, 0, Some(2))), &three);
    check(&competition("6", "2"), &three, &with(zero(0.5, 0, Some(2))));
}

#[test]
fn the_nearest_state_is_not_always_the_same_one() {
    // States 2, 4, 6 and the same moved by 1.5: 3.5 is nearer to 4 than to 2, 5.5 to 6 than to 4. With y = x − 4.75 the mean
    // of the two balances is −y (y² − 37/16), so that no states meet halfway.
    let shifted = |values| one_species("c: 0", "-(x - 2 - c)*(x - 4 - c)*(x - 6 - c)", "20", values);
    let three = [arrives(0), arrives(1), arrives(2)];
    check(&shifted(["c: 0", "c: 1.5"]), &three, &three);
    check(&shifted(["c: 1.5", "c: 1.5"]), &three, &three);
}

#[test]
fn branches_that_all_but_touch_are_not_taken_for_each_other() {
    // (u − 1)² = (10 (k − 1/2))² + d, u = x²/9: two branches u = 1 ± √…, as near as 2 √d halfway, where they seem to cross.
    // With −d they meet in folds on either side, and come apart again. x stays far from 0.
    let near = |d: f64, from: &str, to: &str| {
        let rate = format!("(1 - x/3)^2 - (k - 0.5)^2 - ({d:e})");
        one_species("k: 0", &rate, "20", [from, to])
    };
    for d in [1e-2, 1e-4, 1e-6, 1e-8] {
        let both = [arrives(0), arrives(1)];
        check(&near(d, "k: 0", "k: 1"), &both, &both);
        // Between the balances of k = 0 and 1, (k − 1/2)² is 1/4 all the way; so the way leads through k = 1/2 in two parts.
        check(&near(d, "k: 0", "k: 0.5"), &both, &both);
    }
    // x − 3 = ±√(c² + d) turned by 45°: y = x + 5 c in place of x, c itself moving from −1 to 1 in the balance's own terms.
    let turned = |d: f64, from: &str, to: &str| {
        let rate = format!("-((x - 3)*(x - 3 - c) - ({d:e}))");
        one_species("c: 0", &rate, "20", [from, to])
    };
    for d in [1e-1, 1e-3, 1e-5, 1e-7] {
        // (x − 3)(x − 3 − c) = d > 0: the lower state stays the lower one as c goes through 0, though the asymptotes x = 3 and
        // x = 3 + c cross there, so that the state nearest to 3 before is the other one after.
        let both = [arrives(0), arrives(1)];
        check(&turned(d, "c: -2", "c: 2"), &both, &both);
        // d < 0: gone while c² < 4 |d|, so that each is lost at the fold and another gained; s = (c + 2)/4.
        let half = 2.0 * d.sqrt();
        let [down, up] = [(2.0 - half) / 4.0, (2.0 + half) / 4.0];
        let fold = |at| [Fate::Fold { at, with: Some(1) }, Fate::Fold { at, with: Some(0) }];
        check(&turned(-d, "c: -2", "c: 2"), &fold(down), &fold(up));
    }
}

#[test]
fn a_branch_that_turns_twice_arrives_all_the_same() {
    // x³ − 3x shifted: −(y³ − 3y − c), y = x − 5, c from −4 to 4: one state at either end, folds at c = 2 (y = −1) and −2.
    let cubic = one_species("c: 0", "-((x - 5)^3 - 3*(x - 5) - c)", "20", ["c: -4", "c: 4"]);
    let turning = Fate::Arrives { at: 0, turns: vec![0.75, 0.25], kinks: Vec::new() };
    let back = Fate::Arrives { at: 0, turns: vec![0.25, 0.75], kinks: Vec::new() };
    check(&cubic, &[turning], &[back]);
}

#[test]
fn scenarios_with_other_equations_are_joined_too() {
    // Restocking: x (E − x) + R; without it 0 is a state, with it the states are (E ± √(E² + 4R))/2, one of them negative.
    let stocked = "title: t\ntime: yr\nspecies: {x: {upper: 9}}\nparameters: {R: 1}\nchange: {x: x*(2 - x)}\n\
                   scenarios:\n  first: {}\n  second: {processes: {release: {rate: R, effect: {x: 1}}}}\n";
    check(stocked, &[zero(0.0, 0, None), arrives(0)], &[arrives(1)]);
    // A quota replaces effort: halfway at x, x (1 − x) − (1 − s)/4 x − s/8 = 0.
    let quota = "title: t\ntime: yr\nspecies: {x: {upper: 9}}\nparameters: {E: 0.25, Q: 0.125}\nchange: {x: x*(1 - x)}\n\
                 harvest: {trawl: {takes: {x: E*x}}}\n\
                 scenarios:\n  first: {}\n  second: {harvest: {trawl: {takes: {x: Q}}}}\n";
    check(quota, &[arrives(0), arrives(1)], &[arrives(0), arrives(1)]);
}

#[test]
fn maps_are_joined_by_what_they_add() {
    // x exp(r (1 − x)) (1 − u): the state 1 + ln(1 − u)/r; between the maps of u = 0 and u it is gone where the mean of the
    // factors is exp(−r): (1 − s u) = exp(−r), s = (1 − e^−r)/u.
    let ricker = "title: t\ntime: {unit: yr, step: 1}\nspecies: {x: {upper: 9}}\nparameters: {u: 0, r: 1}\n\
                  next: {x: x*exp(r*(1 - x))*(1 - u)}\n\
                  scenarios:\n  first: {}\n  second: {values: {u: 0.8}}\n";
    let s = (1.0 - (-1f64).exp()) / 0.8;
    check(ricker, &[arrives(0), zero(s, 0, Some(0))], &[arrives(0)]);
}

#[test]
fn stages_are_lost_together() {
    // Young y and adults a: y' = b a − y − y², a' = y − d a. a = y/d, y = b/d − 1: gone at b = d, with both stages.
    let staged = "title: t\ntime: yr\nspecies: {y: {upper: 50, population: p}, a: {upper: 50, population: p}}\n\
                  parameters: {b: 2}\nchange: {y: b*a - y - y^2, a: y - a}\n\
                  scenarios:\n  first: {}\n  second: {values: {b: 0.5}}\n";
    check(staged, &[arrives(0), zero(2.0 / 3.0, 0, Some(0))], &[arrives(0)]);
}

#[test]
fn what_leaves_the_box_is_said() {
    let growing = |values| one_species("K: 1", "x*(K - x)", "5", values);
    let out = Fate::LeavesBox { at: 0.0, species: restpoint::model::SpeciesId(0) };
    check(&growing(["K: 1", "K: 6"]), &[arrives(0), out.clone()], &[arrives(0)]);
    check(&growing(["K: 1", "K: 600"]), &[arrives(0), out], &[arrives(0)]);
}

#[test]
fn kinks_are_stepped_over_where_the_branch_goes_on() {
    // Taking above 1 only: x (2 − x) − E max(0, x − 1), with growth shifted so that the state passes 1 on the way.
    let kinked = one_species("K: 1", "x*(K - x) - 2*max(0, x - 1)", "9", ["K: 0.5", "K: 2"]);
    check(&kinked, &[arrives(0), arrives(1)], &[arrives(0), arrives(1)]);
}

/// The same from the other end: shares of the way turned round.
fn turned(passage: &Passage) -> Passage {
    let turn = |fate: &Fate| match fate {
        Fate::Arrives { at, turns, kinks } => {
            let from_there = |shares: &[f64]| shares.iter().map(|s| 1.0 - s).collect();
            Fate::Arrives { at: *at, turns: from_there(turns), kinks: from_there(kinks) }
        }
        Fate::Fold { at, with } => Fate::Fold { at: 1.0 - at, with: *with },
        Fate::Zero { at, species, with } => Fate::Zero { at: 1.0 - at, species: *species, with: *with },
        Fate::LeavesBox { at, species } => Fate::LeavesBox { at: 1.0 - at, species: *species },
        Fate::NotFollowed(Reason::Rough(at)) => Fate::NotFollowed(Reason::Rough(1.0 - at)),
        Fate::NotFollowed(Reason::Crossing(at)) => Fate::NotFollowed(Reason::Crossing(1.0 - at)),
        other @ Fate::NotFollowed(_) => other.clone(),
    };
    let all = |fates: &[Fate]| fates.iter().map(turn).collect();
    Passage { forward: all(&passage.backward), backward: all(&passage.forward) }
}

/// Both ways round, and each pair but once.
fn agrees(name: &str, solved: &Solved, from: usize, to: usize) {
    let there = solved.passage(from, to);
    let back = turned(&solved.passage(to, from));
    let alike = |a: &[Fate], b: &[Fate]| a.len() == b.len() && a.iter().zip(b).all(|(a, b)| is_like(a, b));
    assert!(
        alike(&there.forward, &back.forward) && alike(&there.backward, &back.backward),
        "{name} {from} to {to}\n{there:?}\n{back:?}\n{:?}",
        [from, to].map(|k| solved.lists[k].iter().map(|e| e.state.clone()).collect::<Vec<_>>())
    );
    let mut arrived: Vec<usize> = there.pairs().map(|(_, to)| to).collect();
    arrived.sort_unstable();
    arrived.dedup();
    assert_eq!(arrived.len(), there.pairs().count(), "{name}");
    let arrives = |fate: &&Fate| matches!(fate, Fate::Arrives { .. });
    assert_eq!(there.backward.iter().filter(arrives).count(), arrived.len(), "{name}");
}

#[test]
fn shipped_models_agree_both_ways_and_leave_nothing_unfollowed() {
    for (name, model) in shipped() {
        // Thirty plants: lists that are not complete, and too long for a test.
        if model.species.len() > 12 {
            continue;
        }
        let solved = Solved::of(model);
        for (from, to) in (0..solved.lists.len()).flat_map(|to| (0..to).map(move |from| (from, to))) {
            agrees(&name, &solved, from, to);
            let passage = solved.passage(from, to);
            let open = |fate: &&Fate| matches!(fate, Fate::NotFollowed(_));
            let open: Vec<&Fate> = passage.forward.iter().chain(&passage.backward).filter(open).collect();
            assert!(open.is_empty(), "{name} {from} to {to}: {open:?}\n{passage:?} {:?}", solved.lists[from]);
        }
    }
}

#[test]
fn published_scenarios_agree_both_ways() {
    for case in cases::all().iter().filter(|case| !case.scenarios.is_empty()) {
        let solved = Solved::of(case.text().read().model);
        for to in 1..solved.lists.len() {
            agrees(&case.id, &solved, 0, to);
        }
    }
}

#[test]
fn names_stay_through_what_is_lost_and_comes_back() {
    // The quota takes both states away in the second scenario; the third has them again, by the same name.
    let yaml = "title: t\ntime: yr\nspecies: {x: {upper: 2}}\nparameters: {Q: 0}\nchange: {x: x*(1 - x) - Q}\n\
                scenarios:\n  a: {values: {Q: 0.1}}\n  b: {values: {Q: 0.5}}\n  c: {values: {Q: 0.2}}\n  d: {values: {Q: 0}}\n";
    let solved = Solved::read(yaml);
    let numbers = |order: &[usize]| {
        let all: Vec<Option<Found<'_>>> = order.iter().map(|&scenario| Some(solved.found(scenario))).collect();
        identify(&mut solved.ways(), &all, &|| false)
    };
    let found = numbers(&[0, 1, 2, 3]);
    assert_eq!(found.numbers, [vec![1, 2], vec![], vec![1, 2], vec![1, 2]]);
    assert!(found.unfollowed.iter().all(Vec::is_empty));
    assert_eq!(numbers(&[1, 3, 0]).numbers, [vec![], vec![1, 2], vec![1, 2]]);
    assert_eq!(identify(&mut solved.ways(), &[None, Some(solved.found(0))], &|| false).numbers, [vec![], vec![1, 2]]);
    // Told to stop at once, nothing is called the same.
    let all = [Some(solved.found(0)), Some(solved.found(2))];
    let stopped = identify(&mut solved.ways(), &all, &|| true);
    assert_eq!(stopped.numbers, [[1, 2], [3, 4]]);
    assert_eq!(stopped.unfollowed[1], [(0, Reason::Stopped), (1, Reason::Stopped)]);
}
