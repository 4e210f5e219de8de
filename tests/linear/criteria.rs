//! Published criteria of stability for whole classes of communities: `tests/cases/published.json` names the sources.

#![allow(clippy::expect_used, clippy::unwrap_used, reason = "a test fails by panicking")]

use crate::common::Source;
use restpoint::num::eigen::eigenvalues;
use restpoint::num::interval::Interval;
use restpoint::num::verified::half_plane;
use serde_json::Value;

fn criterion(id: &str) -> Value {
    let whole: Value = serde_json::from_str(include_str!("../cases/published.json")).unwrap();
    whole["criteria"].as_array().unwrap().iter().find(|entry| entry["id"] == id).expect("a criterion").clone()
}

fn number(value: &Value) -> f64 {
    value.as_str().map_or_else(|| value.as_f64().unwrap(), |text| text.parse().unwrap())
}

/// Marsaglia's polar method (1964): mean 0, deviation 1.
fn normal(source: &mut Source) -> f64 {
    loop {
        let [u, v] = [source.between(-1.0, 1.0), source.between(-1.0, 1.0)];
        let square = u * u + v * v;
        if square > 0.0 && square < 1.0 {
            return u * (-2.0 * square.ln() / square).sqrt();
        }
    }
}

/// Signs of a pair of interactions; `None` where the two are independent.
type Signs = fn(&mut Source) -> Option<[f64; 2]>;

const CLASSES: [(&str, Signs); 5] = [
    ("random (May 1972)", |_| None),
    ("predator-prey", |source| Some(if source.unit() < 0.5 { [1.0, -1.0] } else { [-1.0, 1.0] })),
    ("mixture of competition and mutualism", |source| Some(if source.unit() < 0.5 { [1.0; 2] } else { [-1.0; 2] })),
    ("mutualism", |_| Some([1.0; 2])),
    ("competition", |_| Some([-1.0; 2])),
];

/// Interactions of `s` species, of which a share `c` is not 0; without self-limitation.
fn community(s: usize, c: f64, sigma: f64, signs: Signs, source: &mut Source) -> Vec<f64> {
    let mut a = vec![0.0; s * s];
    for i in 0..s {
        for j in 0..i {
            let both = signs(source);
            let together = source.unit() < c;
            for (turn, place) in [i * s + j, j * s + i].into_iter().enumerate() {
                let strength = sigma * normal(source);
                match both {
                    Some(signs) if together => a[place] = signs[turn] * strength.abs(),
                    None if source.unit() < c => a[place] = strength,
                    _ => {}
                }
            }
        }
    }
    a
}

/// A community is stable with high probability where self-limitation exceeds the published level: so the leading eigenvalue
/// without it is near that level.
#[test]
fn random_communities_turn_unstable_where_published() {
    for (id, seeds, close) in [("K01_random_community_S250", 1, 0.1), ("K02_random_community_S100", 4, 0.2)] {
        let entry = criterion(id);
        let s = entry["S"].as_u64().unwrap() as usize;
        let [c, sigma] = ["C", "sigma"].map(|key| number(&entry[key]));
        for (class, signs) in CLASSES {
            let critical = number(&entry["critical_d"][class]);
            let leading = |seed| {
                let a = community(s, c, sigma, signs, &mut Source::new(seed));
                eigenvalues(&a, s).expect("eigenvalues")[0].re
            };
            let mean = (1..=seeds).map(leading).sum::<f64>() / f64::from(seeds as u32);
            assert!((mean / critical - 1.0).abs() < close, "{id}, {class}: {mean} for {critical}");
        }
    }
}

#[test]
fn all_helping_alike_have_the_published_eigenvalues() {
    let entry = criterion("K04_mean_field_mutualism");
    let s = entry["S"].as_u64().unwrap() as usize;
    let [c, d] = ["c", "d"].map(|key| number(&entry[key]));
    let a: Vec<f64> = (0..s * s).map(|place| if place % (s + 1) == 0 { -d } else { c }).collect();
    let found = eigenvalues(&a, s).unwrap();
    let leading = (s as f64 - 1.0) * c - d;
    assert!((found[0].re - leading).abs() < 1e-15 && (leading - number(&entry["eigenvalues"][0])).abs() < 1e-15);
    assert!(found[1..].iter().all(|value| (value.re + c + d).abs() < 1e-14 && value.im.abs() < 1e-7), "{found:?}");
    // Proved unstable, and the five equal ones proved stable: a defective-looking matrix that is not.
    let exact: Vec<Interval> = a.iter().map(|&entry| Interval::point(entry)).collect();
    let counts = half_plane(&exact, s).unwrap();
    assert_eq!((counts.below, counts.above), (s - 1, 1));
}

/// All roots of λⁿ + a₁ λⁿ⁻¹ + … + aₙ in the left half plane, by May's (1973) table.
fn by_table(a: &[i64]) -> bool {
    match *a {
        [a1, a2] => a1 > 0 && a2 > 0,
        [a1, a2, a3] => a1 > 0 && a3 > 0 && a1 * a2 > a3,
        [a1, a2, a3, a4] => a1 > 0 && a3 > 0 && a4 > 0 && a1 * a2 * a3 > a3 * a3 + a1 * a1 * a4,
        _ => unreachable!("orders 2 to 4"),
    }
}

/// Every polynomial with small whole coefficients, many of them on or beside the border, as its companion matrix.
#[test]
fn proofs_agree_with_the_table_of_routh_and_hurwitz() {
    let (mut proved, mut stable) = (0, 0);
    for n in 2..=4 {
        let count = 7usize.pow(n as u32);
        for code in 0..count {
            let a: Vec<i64> = (0..n).map(|k| i64::from((code / 7usize.pow(k as u32) % 7) as u8) - 1).collect();
            let mut companion = vec![Interval::ZERO; n * n];
            for k in 0..n {
                companion[k] = Interval::point(-(a[k] as f64));
                if k > 0 {
                    companion[k * n + k - 1] = Interval::ONE;
                }
            }
            let counts = half_plane(&companion, n).unwrap();
            let attracts = by_table(&a);
            assert!(!attracts || counts.above == 0, "{a:?} is stable, {counts:?}");
            assert!(attracts || counts.below < n, "{a:?} is not stable, {counts:?}");
            stable += usize::from(attracts);
            proved += usize::from(attracts && counts.below == n);
        }
    }
    // Whoever is stable here is so by a margin that whole numbers give: all of them are to be proved.
    assert!(stable > 100 && proved == stable, "{proved} of {stable}");
}
