//! Values are tried: what steps do, what they may not, what is said of it, and the way back.

use crate::bench::{Bench, SIZES};
use crate::texts::looks_as;

/// S grows to k; C is there where k is above 2. So E2 = (k, 0) is a sink below k = 2 and a saddle above, where E3 is at
/// (k, k − 2).
const FOOD: &str = "\
title: food for two
time: yr
species: {S: {unit: kt, upper: 20}, C: {unit: kt, upper: 20}}
parameters:
  z: {value: 0, note: nothing}
  k: {value: 5, range: [1, 9], control: true, unit: kt}
  m: {value: 0.5, min: 0.25, max: 0.75}
  b: 0.02
change: {S: S*(k - S) + z + 0*b, C: m*C*(S - 2 - C)}
scenarios: {first: {}, second: {values: {k: 0.5*k}}}
";

/// The tried value of a parameter, as the list shows it.
fn tried(bench: &Bench, name: &str) -> Option<String> {
    let text = bench.text();
    let line = text
        .lines()
        .skip(4)
        .find(|line| line.get(1..).unwrap_or_default().trim_start_matches(' ').starts_with(&format!("{name} ")))?;
    line.get(..32)?.split_whitespace().filter(|word| *word != ">").nth(2).map(str::to_owned)
}

#[test]
fn steps_are_neat_and_stay_in_reach() {
    for (keys, name, expected) in [
        // A hundredth of 8, rounded up: 0.1.
        ("<Right>", "k", Some("5.1")),
        ("<Left><Left><Left>", "k", Some("4.7")),
        (".", "k", Some("6")),
        (",<Left>", "k", Some("3.9")),
        (".....<Right>", "k", Some("9")),
        (",,,,,,,", "k", Some("1")),
        ("<Right><Left>", "k", None),
        // 0 has no size of its own: 0.01.
        ("n<Right><Right>", "z", Some("0.02")),
        ("n<Left>", "z", Some("-0.01")),
        // A hundredth of 0.5, held by its limits.
        ("nn<Right>", "m", Some("0.505")),
        ("nn..........", "m", Some("0.75")),
        ("nn,,,,,,,", "m", Some("0.25")),
        // A rate does not become negative by steps.
        ("nnn,,,,,,,,,,,,,,", "b", Some("0")),
    ] {
        let mut bench = Bench::of(FOOD).ascii();
        bench.press("v");
        bench.press(keys);
        assert_eq!(tried(&bench, name).as_deref(), expected, "{keys}\n{}", bench.text());
    }
}

#[test]
fn the_end_of_the_steps_is_said_and_typing_goes_beyond() {
    let mut bench = Bench::of(FOOD);
    bench.press("v.....");
    assert_eq!(tried(&bench, "k").as_deref(), Some("9"));
    bench.press(".");
    bench.shows(&["! k = 9 is the upper end that steps go to"]);
    bench.press("t12<Enter>");
    bench.shows(&["tried 12 kt, 5 in", "outside."]);
    bench.press("<Right>");
    bench.shows(&["! k = 12 is the upper end"]);
    bench.press(",");
    assert_eq!(tried(&bench, "k").as_deref(), Some("11"));
    bench.press("nnt0.8<Enter>");
    bench.shows(&["! m = 0.8: the model says that m is at most 0.75"]);
    assert_eq!(tried(&bench, "m"), None);
}

#[test]
fn what_is_no_number_is_typed_again() {
    let mut bench = Bench::of(FOOD);
    bench.press("vt");
    bench.shows(&["new value of k:"]);
    for text in ["abc", "0.5*k", "inf", "NaN", "1e999", "1,5"] {
        bench.press(text);
        bench.press("<Enter>");
        bench.shows(&["new value of k:", "a number is needed"]);
        bench.press(&"<Backspace>".repeat(text.len()));
    }
    bench.press("<Enter>");
    bench.shows(&["nothing is typed yet"]);
    bench.press("2.5<Enter>");
    assert_eq!(tried(&bench, "k").as_deref(), Some("2.5"));
}

#[test]
fn the_tried_scenario_is_one_of_its_own_and_says_what_changed() {
    for size in SIZES {
        let mut bench = Bench::of(FOOD).at(size).ascii();
        bench.press("v");
        bench.shows(&["Nothing is tried over \"first\" yet", "> k", "3 equilibria of S, C"]);
        bench.press("t1<Enter>");
        bench.shows(&["tried: first (3 of 3)", "is lost", "2 equilibria of S, C", "1.000, 0 stable node"]);
        // The coexistence is what matters most, so it comes first.
        bench.shows(&["Against \"first\": E3 is lost where C reaches 0 and it meets"]);
        bench.press("ef");
        bench.shows(&["first (1 of 3)"]);
        bench.hides(&["tried:"]);
        assert!(bench.text().is_ascii());
    }
}

#[test]
fn what_only_moves_is_said_to_have_moved() {
    let mut bench = Bench::of(FOOD).at([200, 50]);
    bench.press("vt6<Enter>");
    bench.shows(&["Against \"first\": E3 moved to 6.000, 4.000;", "moved to 6.000, 0"]);
    bench.hides(&["is lost", "is gained", "is now"]);
    bench.press("g");
    bench.shows(&["Nothing is tried over \"first\" yet", "the tried values are given up"]);
    // A value that changes nothing of what is shown.
    bench.press("nnt0.6<Enter>");
    bench.shows(&["every equilibrium is where it was, to the digits shown, and of the same type."]);
}

#[test]
fn changes_can_be_taken_back_and_done_again() {
    let mut bench = Bench::of(FOOD);
    bench.press("v.n<Right>");
    let now = |bench: &Bench| (tried(bench, "k"), tried(bench, "z"));
    let (k, z) = (Some("6".to_owned()), Some("0.01".to_owned()));
    assert_eq!(now(&bench), (k.clone(), z.clone()));
    bench.press("u");
    assert_eq!(now(&bench), (k.clone(), None));
    bench.press("u");
    assert_eq!(now(&bench), (None, None));
    bench.hides(&["tried:"]);
    bench.press("u");
    bench.shows(&["there is nothing to take back"]);
    bench.press("UU");
    assert_eq!(now(&bench), (k.clone(), z.clone()));
    bench.press("U");
    bench.shows(&["there is nothing to do again"]);
    bench.press("gu");
    assert_eq!(now(&bench), (k, z));
}

#[test]
fn values_lie_over_the_scenario_that_was_looked_at() {
    let mut bench = Bench::of(FOOD);
    bench.press("<Right>v");
    bench.shows(&["Nothing is tried over \"second\" yet", "k, a lever: 2.5 kt, not tried."]);
    bench.press("<Right>");
    bench.shows(&["tried: second (3 of 3)", "tried 2.6 kt, 2.5 in"]);
    // Over another scenario, another set; the first is a step back.
    bench.press("eff");
    bench.shows(&["second (2 of 3)"]);
    bench.press("bv<Left>");
    bench.shows(&["tried: first (3 of 3)", "tried 4.9 kt, 5 in"]);
    bench.press("u");
    bench.shows(&["tried: second (3 of 3)", "tried 2.6 kt, 2.5 in"]);
}

#[test]
fn what_is_set_for_the_session_holds_in_every_scenario_and_gives_way_to_what_is_tried() {
    let mut bench = Bench::empty();
    bench.app.set = vec![("k".to_owned(), 3.0), ("m".to_owned(), 0.5)];
    let mut bench = bench.reading(FOOD);
    bench.shows(&["3.000"]);
    bench.press("f");
    bench.shows(&["second (2 of 2)", "3.000"]);
    bench.press("v");
    bench.shows(&["k, a lever: 3 kt, not tried."]);
    bench.press("t7<Enter>");
    bench.shows(&["7.000, 5.000", "tried 7 kt, 3 in the"]);
}

#[test]
fn an_older_search_does_not_take_the_place_of_a_newer_value() {
    let mut bench = Bench::of(FOOD).at([200, 50]);
    bench.press("v");
    bench.hold();
    bench.press("t6<Enter>");
    bench.shows(&["With the tried values \"first\" is being searched; below is what was found before."]);
    bench.press("t7<Enter>");
    bench.work();
    bench.shows(&["7.000, 5.000"]);
    bench.hides(&["6.000, 4.000"]);
    bench.hold();
    bench.press("t8<Enter>");
    bench.press("g");
    bench.work();
    bench.shows(&["Nothing is tried over", "5.000, 3.000"]);
    bench.hides(&["tried:", "8.000"]);
}

#[test]
fn a_model_without_parameters_has_none_to_try() {
    let mut bench = Bench::of("title: bare\ntime: yr\nspecies: {S: {unit: kt, upper: 9}}\nchange: {S: S*(1 - S)}\n");
    bench.press("v.<Left>n>");
    bench.shows(&["The model has no parameters."]);
    bench.press("N");
    bench.shows(&["! no values are tried"]);
}

#[test]
fn the_screen_looks_as_it_should() {
    let mut bench = Bench::open("skarnby-bank").at([80, 24]);
    bench.press("v");
    looks_as(&bench, "values-untried-80x24");
    bench.press("t2.5<Enter>");
    looks_as(&bench, "values-tried-80x24");
    looks_as(&bench.at([60, 20]).ascii(), "values-tried-60x20-ascii");
}

#[test]
fn what_is_tried_names_nothing_of_the_file_anew_and_has_its_names_from_its_base() {
    let mut bench = Bench::open("skarnby-bank");
    let names = |bench: &Bench| bench.app.study.as_ref().unwrap().names.clone();
    let before = names(&bench);
    // In the third scenario, before the tried one in the list, E2 and E4 are lost.
    bench.press("vt2.5<Enter>");
    let after = names(&bench);
    assert_eq!(after[..5], before);
    assert_eq!(after[5], ["E1", "E2", "E3", "E4"]);
    // A state that becomes negative on the way is lost, and no other takes its name.
    let mut bench = Bench::of(
        "title: folds\ntime: yr\nspecies: {S: {unit: kt, upper: 20}}\nparameters: {q: 0}\n\
         change: {S: S*(S - 2 + q)*(6 - S)}\n",
    );
    let names_of = |bench: &Bench, slot: usize| names(bench)[slot].join(" ");
    assert_eq!(names_of(&bench, 0), "E1 E2 E3");
    bench.press("vt2.5<Enter>");
    assert_eq!(names_of(&bench, 1), "E1 E3");
    bench.shows(&["E2 is lost where S reaches 0"]);
}
