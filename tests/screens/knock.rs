//! After a knock: what is hit and how hard, the path and what is said of it, answers that come late.

use restpoint::app::knock::{STEPS, blow, known, rows, text};
use restpoint::app::{Effect, JobId, Key, Msg, Screen, Task, update};
use restpoint::shell::tasks::{Means, perform};
use restpoint::shell::workers::Threads;

use crate::bench::{Bench, SIZES};
use crate::texts::{looks_as, written};

/// Two that have nothing to do with each other: S goes to 5, C to 3, along curves that are known.
const TWO: &str = "\
title: two levels
time: yr
species: {S: {unit: kt, upper: 20}, C: {unit: kt, upper: 20}}
parameters: {k: {value: 5, range: [1, 9]}}
change: {S: S*(k - S), C: C*(3 - C)}
scenarios: {first: {}, second: {values: {k: 4}}}
";

/// The state that the path starts from, and how the knock is said.
fn start(bench: &Bench) -> (Vec<f64>, String) {
    let blow = blow(bench.app.study.as_ref().unwrap()).unwrap();
    (blow.state.clone(), blow.at_length())
}

fn words(bench: &Bench) -> String {
    bench.text().split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn screens_read_as_expected() {
    let mut bench = Bench::open("skarnby-bank");
    bench.press("a<End>");
    for [columns, rows] in SIZES {
        bench = bench.at([columns, rows]);
        looks_as(&bench, &format!("knock-{columns}x{rows}"));
    }
    bench = bench.ascii();
    for [columns, rows] in SIZES {
        bench = bench.at([columns, rows]);
        assert!(bench.text().is_ascii());
        looks_as(&bench, &format!("knock-ascii-{columns}x{rows}"));
    }
}

/// From half, S = 5/(1 + exp(−5t)) and C = 3/(1 + exp(−3t)): within 10 % where exp(−3t) = 1/9, and by the linear part where
/// exp(−3t)/2 = 1/10.
#[test]
fn the_path_and_its_prediction_are_those_worked_out_by_hand() {
    let mut bench = Bench::of(TWO);
    bench.press("a<End>");
    assert_eq!(start(&bench), (vec![2.5, 1.5], "half of all taken (-50 %)".to_owned()));
    let returned = format!("Within 10 % of E4 after {:.4} yr (numerical).", 9f64.ln() / 3.0);
    let by_linear = format!("By it, within 10 % after {:.4} yr (return time 0.3333 yr).", 5f64.ln() / 3.0);
    let shown = words(&bench);
    assert!(shown.contains(&returned) && shown.contains(&by_linear), "{returned} {by_linear} {shown}");
    let course = known(&bench.app, bench.app.study.as_ref().unwrap()).unwrap();
    for (time, state) in course.times.iter().zip(&course.states) {
        for (x, level) in state.iter().zip([5.0, 3.0]) {
            let expected = level / (1.0 + (-level * time).exp());
            assert!((x - expected).abs() < 1e-5 * level, "{time}: {x}, not {expected}");
        }
    }
}

#[test]
fn every_strength_is_said_as_it_is() {
    let mut bench = Bench::of(TWO);
    bench.press("a<End>,,,,,");
    let parts = [
        (0.1, "nine tenths of all taken (-90 %)"),
        (0.25, "three quarters of all taken (-75 %)"),
        (0.5, "half of all taken (-50 %)"),
        (0.75, "a quarter of all taken (-25 %)"),
        (0.9, "a tenth of all taken (-10 %)"),
        (0.99, "a hundredth of all taken (-1 %)"),
        (1.01, "all raised by a hundredth (+1 %)"),
        (1.1, "all raised by a tenth (+10 %)"),
        (1.25, "all raised by a quarter (+25 %)"),
        (1.5, "all raised by half (+50 %)"),
        (2.0, "all doubled (+100 %)"),
        (3.0, "all tripled (+200 %)"),
    ];
    assert_eq!(parts.len(), STEPS.len());
    for (factor, said) in parts {
        let (state, words) = start(&bench);
        assert_eq!(words, said);
        bench.shows(&[said]);
        for (x, level) in state.iter().zip([5.0, 3.0]) {
            assert!((x - factor * level).abs() < 1e-12, "{said}: {x}");
        }
        bench.press(".");
    }
    bench.shows(&["tripled"]);
}

#[test]
fn tab_goes_round_all_who_can_be_hit() {
    let mut bench = Bench::of(TWO);
    // The point is put down on the sketch, and stays when the screen is another.
    bench.press("<End>m<Right><Enter>a");
    for (said, state) in [
        ("half of all taken", Some(vec![2.5, 1.5])),
        ("half of S taken", Some(vec![2.5, 3.0])),
        ("half of C taken", Some(vec![5.0, 1.5])),
        ("from the point on the sketch", bench.app.study.as_ref().unwrap().sketch.point.map(|at| at.to_vec())),
        ("half of all taken", Some(vec![2.5, 1.5])),
    ] {
        bench.shows(&[said]);
        assert_eq!(Some(start(&bench).0), state, "{said}");
        bench.press("<Tab>");
    }
    bench.press("<Tab><Tab>.");
    assert_eq!(bench.status(), "the path starts from the point; Tab chooses who is hit");
    // Without the point the first comes in its place.
    bench.press("ek");
    bench.press("a");
    bench.shows(&["half of all taken"]);
}

#[test]
fn who_is_absent_can_be_brought_in() {
    let mut bench = Bench::of(TWO);
    bench.press("a<Home>");
    // A hundredth of the most that any equilibrium has: 5.
    bench.shows(&["0.05000 kt of S brought in", "At the end within 10 % of E2"]);
    assert_eq!(start(&bench).0, [0.05, 0.0]);
    bench.press(".");
    assert_eq!(bench.status(), "as little as possible comes in of who is absent");
    // With S alone a path without C comes back, though C could come in.
    bench.press("<Down>");
    assert!(words(&bench).contains("Left out is C, though it could come in; Tab brings it in."), "{}", bench.text());
    bench.press("<Tab>");
    assert_eq!(start(&bench).0, [5.0, 0.03]);
    let shown = words(&bench);
    assert!(shown.contains("At the end within 10 % of E4") && !shown.contains("Left out"), "{shown}");
}

#[test]
fn equilibria_and_scenarios_step_as_elsewhere() {
    let mut bench = Bench::of(TWO);
    bench.press("a<End>");
    bench.shows(&["E4, stable node, proved", "first (1 of 2)"]);
    bench.press("<Right>");
    bench.shows(&["E4, stable node, proved", "second (2 of 2)"]);
    assert_eq!(start(&bench).0, [2.0, 1.5]);
    bench.press("<Up>");
    bench.shows(&["E3, saddle, proved"]);
    bench.press("<Esc>");
    assert_eq!(bench.app.screen, Screen::Equilibria);
}

#[test]
fn what_has_no_linear_part_is_followed_all_the_same() {
    let mut bench =
        Bench::of("title: kink\ntime: yr\nspecies: {x: {upper: 4}}\nchange: {x: \"x*min(1 - x, 2 - 2*x)\"}\n");
    bench.press("a<End>");
    bench.shows(&["rates have a kink here", "Within 10 % of E2"]);
    assert!(words(&bench).contains("There is no linear picture to compare it with."), "{}", bench.text());
    bench.hides(&["linear prediction"]);
}

#[test]
fn a_map_shows_its_steps_alone() {
    let mut bench =
        Bench::of("title: map\ntime: {unit: yr, step: 2}\nspecies: {x: {upper: 4}}\nnext: {x: x*exp(0.5 - 0.5*x)}\n");
    bench.press("a<End>");
    let course = known(&bench.app, bench.app.study.as_ref().unwrap()).unwrap();
    let mut x = 0.5f64;
    for (k, (time, state)) in course.times.iter().zip(&course.states).enumerate() {
        assert_eq!(*time, 2.0 * k as f64);
        assert!((state[0] - x).abs() < 1e-12, "{time}: {} and {x}", state[0]);
        x *= (0.5 - 0.5 * x).exp();
    }
    assert!(course.times.len() > 3);
}

#[test]
fn many_species_scroll() {
    let names: Vec<String> = (1..=30).map(|i| format!("x{i}")).collect();
    let list = |of: &str| names.iter().map(|name| of.replace('#', name)).collect::<Vec<_>>().join(", ");
    let model =
        format!("title: many\ntime: yr\nspecies: {{{}}}\nchange: {{{}}}\n", list("#: {upper: 9}"), list("#: 1 - #"));
    for [columns, rows] in SIZES {
        let mut bench = Bench::of(&model).at([columns, rows]);
        bench.press("a");
        bench.shows(&["x1", "of 30"]);
        bench.press(&"]".repeat(20));
        bench.shows(&["\nx30\n", "to 30 of 30"]);
        bench.press(&"[".repeat(20));
        bench.shows(&["\nx1\n", "1 to"]);
    }
}

/// What an update asks for.
fn asked(bench: &mut Bench, key: char) -> (Vec<(JobId, Task)>, Vec<JobId>) {
    let effects = update(&mut bench.app, Msg::Struck(Key::Char(key)));
    let (mut asked, mut stopped) = (Vec::new(), Vec::new());
    for effect in effects {
        match effect {
            Effect::Ask(id, task) => asked.push((id, task)),
            Effect::Stop(id) => stopped.push(id),
            _ => {}
        }
    }
    (asked, stopped)
}

#[test]
fn an_answer_that_was_overtaken_is_dropped() {
    let means = Means { threads: Threads::new(1), stop: &|| false, observer: &|_| {}, told: &|_| {} };
    let mut bench = Bench::of(TWO);
    bench.press("<End>");
    let (first, stopped) = asked(&mut bench, 'a');
    assert_eq!((first.len(), stopped.len()), (1, 0));
    bench.shows(&["half of all taken", "Following the path."]);
    let (second, stopped) = asked(&mut bench, '.');
    assert_eq!((second.len(), stopped), (1, vec![first[0].0]));
    let answer = |(id, task): &(JobId, Task)| Msg::Answered(*id, perform(task.clone(), &means));
    // The newer comes first, the older after it.
    bench.tell(answer(&second[0]));
    bench.shows(&["a quarter of all taken", "Within 10 % of E4"]);
    let shown = bench.text();
    bench.tell(answer(&first[0]));
    assert_eq!(bench.text(), shown);
    // What is known already is not asked for again.
    let (again, _) = asked(&mut bench, ',');
    assert_eq!(again.len(), 1);
    bench.tell(answer(&again[0]));
    assert_eq!(asked(&mut bench, '.').0, []);
    assert_eq!(bench.text(), shown);
}

#[test]
fn what_is_saved_has_all_of_it() {
    let mut bench = Bench::of(TWO);
    assert_eq!((text(&bench.app), rows(&bench.app)), (None, None));
    bench.press("a<End>");
    let saved = text(&bench.app).unwrap();
    for part in ["two levels\n", "scenario: first\n", "E4, stable node, proved\n", "S, kt\n", "C, kt\n", "authority"] {
        assert!(saved.contains(part), "no {part} in\n{saved}");
    }
    assert!(saved.contains("After a knock\n") && saved.contains("knock: half of all taken (-50 %)\n"), "{saved}");
    assert_eq!(written(&mut bench, "knock.txt"), saved);
    let saved = rows(&bench.app).unwrap();
    assert_eq!(saved.headings, ["time [yr]", "S [kt]", "C [kt]", "S predicted [kt]", "C predicted [kt]"]);
    assert_eq!(saved.rows[0], [0.0, 2.5, 1.5, 2.5, 1.5]);
    assert_eq!(saved.rows.len(), 401);
}
