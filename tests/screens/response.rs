//! The response to a control: what is shown at each size, how the rule moves, what is picked, what is taken over, and what
//! happens while branches are followed.

use std::sync::Arc;

use restpoint::app::response::{control, controls, picked, rule, states};
use restpoint::app::{Answer, Effect, JobId, Msg, Screen, Study, Task};
use restpoint::report::response::{Along, Reach};

use crate::bench::{Bench, SIZES};
use crate::texts::looks_as;

/// A logistic stock under a constant quota: N = K/2 (1 ± √(1 − 4Q/(rK))), both gone at Q = rK/4 = 100.
const QUOTA: &str = "\
title: a quota
time: yr
species: {hake: {symbol: N, unit: kt, upper: 600}}
parameters:
  r: {value: 0.8, unit: 1/yr, range: [0.4, 1.2]}
  K: 500
  Q: {value: 60, unit: kt/yr, range: [0, 120], control: true}
change: {N: r*N*(1 - N/K)}
harvest: {quota: {takes: {N: Q}}}
scenarios: {as it is: {}, less: {values: {Q: 20}}, beyond: {values: {Q: 130}}}
";

const FOLD: f64 = 100.0;

fn levels(q: f64) -> [f64; 2] {
    [1.0, -1.0].map(|sign| 250.0 * (1.0 + sign * (1.0 - q / FOLD).sqrt()))
}

fn study(bench: &Bench) -> &Study {
    bench.app.study.as_ref().unwrap()
}

fn at(bench: &Bench) -> f64 {
    rule(study(bench)).unwrap()
}

fn words(bench: &Bench) -> String {
    bench.text().split_whitespace().collect::<Vec<_>>().join(" ")
}

/// Abundance of the state that is picked.
fn abundance(bench: &Bench) -> f64 {
    picked(&bench.app, study(bench)).unwrap().state[0]
}

/// The bench with the response of the quota, the upper state selected.
fn quota() -> Bench {
    let mut bench = Bench::of(QUOTA);
    bench.press("<End>T");
    bench
}

#[test]
fn screens_read_as_expected() {
    for (name, model, keys) in [
        ("response", "skarnby-bank", "<Down><Down><Down>T<Right><Right>"),
        ("response-map", "corvale-orchards", "<End>T]"),
        ("response-three", "millgate-ponds", "<End>Ty"),
    ] {
        let mut bench = Bench::open(model);
        bench.press(keys);
        for size in SIZES {
            let [columns, rows] = size;
            bench = bench.at(size);
            looks_as(&bench, &format!("{name}-{columns}x{rows}"));
        }
        if name == "response" {
            bench = bench.ascii();
            for size in SIZES {
                let [columns, rows] = size;
                bench = bench.at(size);
                assert!(bench.text().is_ascii());
                looks_as(&bench, &format!("{name}-ascii-{columns}x{rows}"));
            }
        }
    }
}

#[test]
fn the_rule_moves_in_steps_within_the_range_and_back_to_the_present() {
    let mut bench = quota();
    // A hundredth of the range of 120, rounded up, is 2.
    for (keys, expected) in [
        ("", 60.0),
        ("<Right>", 62.0),
        ("f", 64.0),
        (".", 84.0),
        (",,", 44.0),
        ("<Left>b", 40.0),
        (",,", 0.0),
        ("<Left>", 0.0),
        (".......", 120.0),
        ("0", 60.0),
    ] {
        bench.press(keys);
        assert_eq!(at(&bench), expected, "{keys}");
    }
    bench.press(",,,,<Left>");
    assert_eq!(bench.status(), "Q = 0 is the lower end of its range");
}

#[test]
fn the_states_at_the_rule_are_those_of_the_closed_form() {
    let mut bench = quota();
    for _ in 0..19 {
        let found = states(&bench.app, study(&bench));
        let q = at(&bench);
        let mut expected = levels(q).to_vec();
        expected.reverse();
        assert_eq!(found.len(), 2, "{q}");
        for (one, n) in found.iter().zip(expected) {
            assert!((one.state[0] - n).abs() < 1e-9 * n && one.found.is_some() && one.met.is_some(), "{q}: {one:?}");
        }
        bench.press("<Right>");
    }
}

#[test]
fn thresholds_are_jumped_to_and_listed_in_words() {
    let mut bench = quota();
    for keys in ["]", "0]"] {
        bench.press(keys);
        assert!((at(&bench) - FOLD).abs() < 1e-8, "{keys}: {}", at(&bench));
    }
    // Beyond the last comes the first.
    let first = restpoint::app::response::known(&bench.app, study(&bench)).unwrap().0.thresholds[0].at;
    bench.press("]");
    assert_eq!(at(&bench), first);
    bench.press("0");
    assert!(words(&bench).contains("100.0 fold"), "{}", bench.text());
    assert!(words(&bench).contains("hake cannot persist at rest above Q = 100.0 kt/yr"), "{}", bench.text());
    bench.press(".....");
    assert!(words(&bench).contains("At Q = 120.0 kt/yr no equilibrium is known."), "{}", bench.text());
}

#[test]
fn what_is_picked_stays_on_its_branch_as_the_rule_moves() {
    let mut bench = quota();
    assert!((abundance(&bench) - levels(60.0)[0]).abs() < 1e-6);
    bench.press("<Right><Right>.");
    assert!((abundance(&bench) - levels(84.0)[0]).abs() < 1e-6);
    bench.press("<Up>");
    assert!((abundance(&bench) - levels(84.0)[1]).abs() < 1e-6);
    bench.press(",,<Left>");
    assert!((abundance(&bench) - levels(42.0)[1]).abs() < 1e-6);
    // Where it is gone nothing is picked, and it comes back with its branch.
    bench.press("......");
    assert!(picked(&bench.app, study(&bench)).is_none());
    bench.press(",,,,");
    assert!((abundance(&bench) - levels(40.0)[1]).abs() < 1e-6);
    let band = "from 0 to 100.0 kt/yr";
    assert!(words(&bench).contains(band), "{}", bench.text());
}

#[test]
fn the_value_at_the_rule_can_be_tried() {
    let mut bench = quota();
    bench.press(".t");
    let tried = &study(&bench).tried.now;
    let q = controls(study(&bench))[0];
    assert_eq!((tried.base, &tried.values[..]), (0, &[(q, 80.0)][..]));
    assert_eq!(bench.status(), "Q = 80 is tried; the screen of values can take it back");
    // It is the present value of what is looked at now.
    assert_eq!(control(study(&bench)).unwrap().present, 80.0);
    bench.press("v");
    bench.shows(&["Q, a lever: tried 80 kt/yr, 60"]);
    bench.press("u");
    assert!(study(&bench).tried.now.values.is_empty());
}

#[test]
fn scenarios_side_by_side_say_how_near_each_is_to_being_lost_and_what_is_best() {
    let mut bench = quota().at([200, 50]);
    bench.press("s");
    bench.shows(&["lost by Q, kt/yr", "how lost", "best quota N"]);
    // From 60 and from 20 to 100; what is taken cannot be more than what is lost there.
    let line = |label: &str| bench.text().lines().find(|line| line.contains(label)).unwrap_or_default().to_owned();
    assert!(line("lost by").contains("40.00 above") && line("lost by").contains("80.00 above"), "{}", bench.text());
    assert_eq!(line("how lost").matches("fold").count(), 2, "{}", bench.text());
    assert_eq!(line("best quota").matches("100.0 near 100.0").count(), 3, "{}", bench.text());
}

#[test]
fn each_scenario_and_control_keeps_its_rule() {
    let mut bench = quota();
    bench.press(".<Right>");
    assert_eq!(at(&bench), 82.0);
    bench.press("<Tab>");
    assert_eq!(at(&bench), 0.8);
    bench.shows(&["r, 1/yr"]);
    bench.press("<Right>");
    assert_eq!(at(&bench), 0.81);
    bench.press("<Tab>");
    assert_eq!(at(&bench), 82.0);
    bench.press("}");
    assert_eq!(at(&bench), 20.0);
    bench.press("}");
    // Beyond the range the rule stands at its end.
    assert_eq!(at(&bench), 120.0);
    bench.press("0");
    assert_eq!(bench.status(), "Q = 130 lies outside its range");
    bench.press("}");
    assert_eq!(at(&bench), 82.0);
    bench.press("<Tab>");
    assert_eq!(at(&bench), 0.81);
}

#[test]
fn every_quantity_can_be_drawn() {
    let mut bench = quota();
    let mut seen = Vec::new();
    for _ in 0..3 {
        seen.push(bench.line(4).split("  ").next().unwrap_or_default().trim().to_owned());
        bench.press("y");
    }
    assert_eq!(seen, ["N hake, kt", "quota N, kt/yr", "N hake, kt"]);
}

#[test]
fn a_model_without_ranges_is_said_to_have_nothing_to_vary() {
    let mut bench = Bench::of("title: t\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: N*(3 - N)}\n");
    bench.press("T]<Right>.<Tab>yt0<Down>");
    assert!(words(&bench).contains("No parameter has a range, so there is nothing to vary"), "{}", bench.text());
}

/// The task of following, with its number.
fn following(bench: &Bench) -> Option<(JobId, Task)> {
    bench.app.desk.following().map(|job| (job.id, job.task.clone()))
}

#[test]
fn branches_fill_in_as_they_are_followed_and_can_be_stopped() {
    let mut whole = quota();
    let response = restpoint::app::response::along(&whole.app, study(&whole)).unwrap().0.clone();
    whole.press("e");
    let mut bench = Bench::of(QUOTA);
    bench.hold();
    bench.press("<End>T");
    let (id, task) = following(&bench).expect("branches are followed");
    assert!(matches!(task, Task::Respond { .. }));
    assert!(words(&bench).contains("Every equilibrium is being followed as Q varies."), "{}", bench.text());
    assert_eq!(bench.status(), "following branches: nothing yet; Esc stops it");
    let reached = |reach| Answer::Responded(Some(Arc::new(Along { reach, ..(*response).clone() })));
    bench.tell(Msg::Partly(id, reached(Reach::Branches)));
    assert!(words(&bench).contains("Branches are still being followed."), "{}", bench.text());
    assert!(bench.status().starts_with("following branches: 1 branch and "), "{}", bench.status());
    // Nothing on this screen waits for the closest edge.
    bench.tell(Msg::Partly(id, reached(Reach::Advised)));
    assert!(!words(&bench).contains("still being followed"), "{}", bench.text());
    assert_eq!(bench.status(), "looking for the closest edge along other parameters; Esc stops it");
    let effects = restpoint::app::update(&mut bench.app, Msg::Struck(restpoint::app::Key::Escape));
    assert!(matches!(effects[..], [Effect::Stop(stopped)] if stopped == id), "{effects:?}");
    bench.tell(Msg::Answered(id, Answer::Responded(Some(response))));
    assert!(following(&bench).is_none() && !words(&bench).contains("still being followed"));
    // Stopped and answered, Escape leads back.
    bench.press("<Esc>");
    assert_eq!(bench.app.screen, Screen::Equilibria);
}

#[test]
fn an_answer_for_another_control_changes_nothing() {
    let mut bench = Bench::of(QUOTA);
    bench.hold();
    bench.press("<End>T");
    let (id, _) = following(&bench).unwrap();
    bench.press("<Tab>");
    let (other, task) = following(&bench).unwrap();
    assert_ne!(id, other);
    bench.tell(Msg::Partly(id, Answer::Responded(None)));
    bench.tell(Msg::Answered(id, Answer::Responded(None)));
    assert_eq!(following(&bench), Some((other, task)));
    assert_eq!(bench.status(), "following branches: nothing yet; Esc stops it");
}
