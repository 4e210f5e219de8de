//! The searches against the published models of `tests/cases`: they miss no equilibrium, report none that is false, and
//! call their list complete exactly where nothing is degenerate.

use crate::common::cases::{Case, Equilibrium, all};
use crate::common::solve::{Method, solve};
use restpoint::analysis::equilibria::{Equilibria, Probably};
use restpoint::num::interval::Interval;

/// How near a found state must be to a published one, relative to its coordinates: the parameters are rounded to f64,
/// which moves a root by its condition; a double root by the square root of that, a triple one by the cube root.
fn tolerance(equilibrium: &Equilibrium) -> f64 {
    match equilibrium.multiplicity {
        0 | 1 => 1e-9,
        2 => 1e-7,
        _ => 2e-5,
    }
}

/// Whether an eigenvalue is so near the border that rounding the parameters may decide how many equilibria there are.
fn is_degenerate(case: &Case, equilibrium: &Equilibrium) -> bool {
    let largest = equilibrium.eigenvalues.iter().fold(1e-300f64, |m, (re, im)| m.max(re.hypot(*im)));
    let centre = if case.discrete { 1.0 } else { 0.0 };
    equilibrium.multiplicity > 1
        || equilibrium.eigenvalues.iter().any(|(re, im)| (re - centre).hypot(*im) <= 1e-9 * largest.max(centre))
}

fn near(found: &[f64], published: &Equilibrium) -> bool {
    let off = tolerance(published);
    let scale = published.x.iter().fold(0.0f64, |m, x| m.max(x.abs()));
    found.iter().zip(&published.x).all(|(a, b)| (a - b).abs() <= off * b.abs().max(1e-3 * scale).max(1e-12))
}

/// Whether a published point lies in a region that the search left open, or so near as rounding may move it.
fn is_left_open(found: &Equilibria, published: &Equilibrium) -> bool {
    let room = |x: f64| 1e-6 * x.abs().max(1e-6);
    let inside = |(side, &x): (&Interval, &f64)| !side.intersect(Interval::new(x - room(x), x + room(x))).is_empty();
    found.unresolved.iter().any(|open| open.region.iter().zip(&published.x).all(inside))
}

fn check(case: &Case, method: Method) {
    let mut read = case.text().read();
    let continua = case.facts.get("continua").and_then(|c| c.as_array()).is_some_and(|list| !list.is_empty());
    for (scenario, published) in case.lists().enumerate() {
        let found = solve(&mut read, scenario, method);
        let name = format!("{} [{scenario}] {method:?}", case.id);
        for equilibrium in published {
            let matched: Vec<_> = found.list.iter().filter(|e| near(&e.state, equilibrium)).collect();
            let degenerate = is_degenerate(case, equilibrium);
            assert!(matched.len() <= 1, "{name}: {:?} is listed {} times", equilibrium.x, matched.len());
            assert!(
                matched.iter().any(|e| e.proven) || (degenerate && is_left_open(&found, equilibrium)),
                "{name}: {:?} is missed",
                equilibrium.x
            );
        }
        for equilibrium in &found.list {
            let on_continuum = continua
                && found.unresolved.iter().any(|open| {
                    open.probably == Probably::Continuum
                        && open.region.iter().zip(&equilibrium.state).all(|(side, x)| side.contains(*x))
                });
            let known = published.iter().any(|p| near(&equilibrium.state, p));
            assert!(known || on_continuum, "{name}: {:?} is false", equilibrium.state);
        }
        let decided = !continua && !published.iter().any(|p| is_degenerate(case, p));
        assert!(found.complete || !decided, "{name}: not complete: {:?}", found.unresolved);
        assert!(!found.complete || !continua, "{name}: a continuum cannot be complete");
        assert!(found.complete == found.unresolved.is_empty(), "{name}");
    }
}

#[test]
fn the_certified_search_finds_what_is_published_and_nothing_else() {
    let small = all().into_iter().filter(|case| case.species.len() <= 6);
    let mut cases = 0;
    for case in small {
        check(&case, Method::Certified);
        cases += 1;
    }
    assert_eq!(cases, 72);
}

#[test]
fn the_chosen_method_finds_what_is_published_and_nothing_else() {
    for case in all() {
        check(&case, Method::Chosen);
    }
}

/// Every published double root, fold point and continuum must be said to be open: a complete list would be a false claim.
#[test]
fn what_is_degenerate_is_never_called_complete() {
    for id in ["A06_quota_at_fold", "B24_xiao_ruan_bt", "F03_line_of_equilibria", "F05_semistable", "F08_neutral_plane"]
    {
        let case = crate::common::cases::named(id);
        for method in [Method::Certified, Method::Chosen] {
            assert!(!solve(&mut case.text().read(), 0, method).complete, "{id} {method:?}");
        }
    }
}
