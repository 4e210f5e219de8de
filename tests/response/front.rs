//! The front of two yields against closed forms.

use restpoint::analysis::equilibria::{Budget, OneByOne};
use restpoint::analysis::response::{Front, FrontPoint, NoFront, Total, front};

use crate::by_hand::Study;
use crate::common::solve::{Method, solve};
use crate::support::read;

fn of(text: &str, controls: [(&str, [f64; 2]); 2]) -> Result<Front, NoFront> {
    let mut study = Study::of(read(text));
    let list = solve(&mut study.read, 0, Method::Certified).list;
    let budget = Budget { boxes: 50_000, stop: &|| false, workers: &OneByOne, observer: None };
    let controls = controls.map(|(name, range)| study.control(name, range));
    front(&mut study.subject(), controls, &list, &budget)
}

fn points(text: &str, controls: [(&str, [f64; 2]); 2]) -> Vec<FrontPoint> {
    of(text, controls).unwrap().points
}

/// Krill and whales of May, Beddington, Clark, Holt & Laws (1979) with r₁ = r₂ = 0.4, ν = 1, units u and v of the species:
/// Y₁ = 0.4 F₁ X₁, Y₂ = 0.4 F₂ (1 − F₂) X₁, X₁ = (1 − F₁)/(2 − F₂); on the front the slopes of both are parallel.
#[test]
fn krill_and_whales() {
    let model = |f1: f64, f2: f64| {
        let x = (1.0 - f1) / (2.0 - f2);
        [0.4 * f1 * x, 0.4 * f2 * (1.0 - f2) * x]
    };
    // ln Y₁ = ln F₁ + ln(1 − F₁) − ln(2 − F₂), ln Y₂ = ln F₂ + ln(1 − F₂) + ln(1 − F₁) − ln(2 − F₂).
    let slopes = |f1: f64, f2: f64| {
        let by_two = 1.0 / (2.0 - f2);
        [[1.0 / f1 - 1.0 / (1.0 - f1), by_two], [-1.0 / (1.0 - f1), 1.0 / f2 - 1.0 / (1.0 - f2) + by_two]]
    };
    let check = |u: f64, v: f64| {
        let text = format!(
            "title: t\ntime: yr\nspecies: {{X: {{lower: {}, upper: {}}}, W: {{upper: {}}}}}\n\
             parameters: {{F: 0.3, G: 0.3}}\nchange:\n  X: 0.4*X*(1 - X/{u} - W/{v})\n  W: 0.4*W*(1 - W*{u}/(X*{v}))\n\
             harvest:\n  krill: {{takes: {{X: 0.4*F*X}}}}\n  whales: {{takes: {{W: 0.4*G*W}}}}\n",
            0.001 * u,
            1.5 * u,
            1.5 * v
        );
        let found = points(&text, [("F", [0.0, 0.95]), ("G", [0.0, 0.95])]);
        assert!(found.len() > 15, "{} points: {found:?}", found.len());
        for point in &found {
            let [f1, f2] = point.at;
            let [a, b] = model(f1, f2);
            assert!((point.yields[0] - a * u).abs() <= 1e-10 * u && (point.yields[1] - b * v).abs() <= 1e-10 * v);
            if f1 > 0.0 && f2 < 0.95 {
                let [s, t] = slopes(f1, f2);
                let angle = (s[0] * t[1] - s[1] * t[0]) / (s[0].hypot(s[1]) * t[0].hypot(t[1]));
                assert!(angle.abs() <= 1e-8, "{point:?}: {angle}");
            }
        }
        assert!(found.windows(2).all(|pair| pair[0].yields[0] < pair[1].yields[0]));
        assert!(found.windows(2).all(|pair| pair[0].yields[1] > pair[1].yields[1]));
        // Without a take of krill the whales give 0.4 (3 − 2√2).
        let whales = 0.4 * (3.0 - 2.0 * 2f64.sqrt());
        assert!((found[0].yields[1] - whales * v).abs() <= 1e-10 * v && found[0].at[0] == 0.0, "{:?}", found[0]);
        // No pair of controls has more of both.
        for i in 0..=40 {
            for j in 0..=40 {
                let [a, b] = model(f64::from(i) * 0.95 / 40.0, f64::from(j) * 0.95 / 40.0);
                let more = |p: &FrontPoint| a * u > p.yields[0] * (1.0 + 1e-9) && b * v > p.yields[1] * (1.0 + 1e-9);
                assert!(!found.iter().any(more), "{i} {j}");
            }
        }
    };
    check(1.0, 1.0);
    check(5e8, 2e-3);
}

/// Two stocks that have nothing to do with each other: both largest yields at once, r K/4 each (Schaefer 1954).
#[test]
fn yields_that_do_not_trade_have_one_best_pair() {
    let text = "title: t\ntime: yr\nspecies: {x: {upper: 300}, y: {upper: 300}}\nparameters: {E: 0.1, F: 0.1}\n\
        change: {x: x*(1 - x/100), y: 0.5*y*(1 - y/200)}\nharvest: {a: {takes: {x: E*x}}, b: {takes: {y: F*y}}}\n";
    let found = of(text, [("E", [0.0, 0.9]), ("F", [0.0, 0.4])]).unwrap();
    assert!(!found.points.is_empty());
    assert!(matches!(&found.total, Total::At(point) if (point.at[0] - 0.5).abs() <= 1e-8), "{:?}", found.total);
    for point in found.points {
        assert!((point.yields[0] - 25.0).abs() <= 1e-8 && (point.yields[1] - 25.0).abs() <= 1e-8, "{point:?}");
    }
}

/// In the units of [`krill_and_whales`] (F₁ + F₂ (1 − F₂))(1 − F₁)/(2 − F₂) is largest where 3 F₂² − 9 F₂ + 5 = 0 and
/// F₁ = (1 − F₂ (1 − F₂))/2.
#[test]
fn the_largest_total_of_krill_and_whales() {
    let text = |unit: &str| {
        format!(
            "title: t\ntime: yr\nspecies: {{X: {{lower: 0.001, upper: 1.5, unit: t}}, W: {{upper: 1.5, unit: {unit}}}}}\n\
             parameters: {{F: 0.3, G: 0.3}}\nchange:\n  X: 0.4*X*(1 - X - W)\n  W: 0.4*W*(1 - W/X)\n\
             harvest:\n  krill: {{takes: {{X: 0.4*F*X}}}}\n  whales: {{takes: {{W: 0.4*G*W}}}}\n"
        )
    };
    let controls = [("F", [0.0, 0.95]), ("G", [0.0, 0.95])];
    let found = of(&text("t"), controls).unwrap();
    let whales = (9.0 - 21f64.sqrt()) / 6.0;
    let krill = 0.5 * (1.0 - whales * (1.0 - whales));
    let Total::At(point) = &found.total else { panic!("{:?}", found.total) };
    assert!((point.at[0] - krill).abs() <= 1e-8 && (point.at[1] - whales).abs() <= 1e-8, "{point:?}");
    let sum = 0.4 * (krill + whales * (1.0 - whales)) * (1.0 - krill) / (2.0 - whales);
    assert!((point.yields[0] + point.yields[1] - sum).abs() <= 1e-12, "{point:?}");
    assert!(found.is_whole && found.points.contains(point));
    assert_eq!(of(&text("kg"), controls).unwrap().total, Total::OfDifferentUnits);
}

/// A parameter that nothing hangs on stays where it is.
#[test]
fn what_changes_nothing_is_left_alone() {
    let text = "title: t\ntime: yr\nspecies: {x: {upper: 300}, y: {upper: 300}}\nparameters: {E: 0.1, F: 0.1, z: 0.3}\n\
        change: {x: x*(1 - x/100), y: 0.5*y*(1 - y/200)}\nharvest: {a: {takes: {x: E*x}}, b: {takes: {y: 0.1*y}}}\n";
    let found = of(text, [("E", [0.0, 0.9]), ("z", [0.0, 0.4])]).unwrap();
    let Total::At(point) = &found.total else { panic!("{:?}", found.total) };
    assert!((point.at[0] - 0.5).abs() <= 1e-8 && point.at[1] == 0.3, "{point:?}");
    assert!((point.yields[0] - 25.0).abs() <= 1e-8 && (point.yields[1] - 16.0).abs() <= 1e-8, "{point:?}");
    assert!(!found.points.is_empty() && found.points.iter().all(|point| point.at[1] == 0.3), "{found:?}");
}

/// Who takes from what decides whether there is a front.
#[test]
fn what_has_no_front_says_why() {
    let check = |harvests: &str, aim: &str, expected: NoFront| {
        let text = format!(
            "title: t\ntime: yr\nspecies: {{x: {{upper: 300}}, y: {{upper: 300{aim}}}}}\nparameters: {{E: 0.1, F: 0.1}}\n\
             change: {{x: x*(1 - x/100), y: y*(1 - y/100)}}\nharvest: {{{harvests}}}\n"
        );
        assert_eq!(of(&text, [("E", [0.0, 0.5]), ("F", [0.0, 0.4])]), Err(expected), "{harvests}");
    };
    let (one, other) = ("a: {takes: {x: E*x}}", "b: {takes: {y: F*y}}");
    check(one, "", NoFront::Harvests(1));
    check("a: {takes: {x: E*x, y: F*y}}, b: {takes: {x: F*x}}", "", NoFront::SeveralSpecies("a".to_owned()));
    check(&format!("{one}, {other}"), ", aim: remove", NoFront::Harvests(1));
    check(&format!("{one}, {other}, c: {{takes: {{y: E*y}}}}"), "", NoFront::Harvests(3));
}

#[test]
fn one_harvest_has_no_front() {
    let text = "title: t\ntime: yr\nspecies: {x: {upper: 300}}\nparameters: {E: 0.1, F: 0.1}\n\
        change: {x: x*(1 - x/100) - F*x}\nharvest: {a: {takes: {x: E*x}}}\n";
    assert_eq!(of(text, [("E", [0.0, 0.5]), ("F", [0.0, 0.4])]), Err(NoFront::Harvests(1)));
}
