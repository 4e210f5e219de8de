//! What outlives a change of the file, and the program.

use std::fs;

use restpoint::app::{Effect, Msg};

use crate::bench::Bench;

const POND: &str = "\
title: a pond
time: yr
species: {S: {unit: kt, upper: 20}}
parameters: {k: {value: 5, range: [1, 9], control: true}, l: 1}
change: {S: S*(k - S) + 0*l}
scenarios: {as it is: {}, half: {values: {k: 0.5*k}}}
";

/// The file is another, and the watch says so.
fn change(bench: &mut Bench, text: &str) {
    fs::write(bench.folder().join("m.yaml"), text).unwrap();
    bench.tell(Msg::Changed);
}

#[test]
fn a_changed_file_is_read_again_and_the_place_is_kept() {
    let mut bench = Bench::of(POND);
    bench.press("fn");
    change(&mut bench, &POND.replace("as it is: {}", "as it is: {}, new: {values: {k: 7}}"));
    bench.shows(&["half (3 of 3)", "the file has changed and was read again"]);
    assert_eq!(bench.app.study.as_ref().unwrap().chosen, 1);
}

#[test]
fn tried_values_stay_by_name() {
    let mut bench = Bench::of(POND);
    bench.press("vt3<Enter>nt2<Enter>");
    bench.shows(&["tried: as it is (3 of 3)"]);
    // Other parameters in another order, and a scenario before: indices are others, names are not.
    let other = POND
        .replace("{k: {value: 5, range: [1, 9], control: true}, l: 1}", "{j: 1, l: 1, k: 6}")
        .replace("as it is: {}", "new: {}, as it is: {}");
    change(&mut bench, &other);
    bench.shows(&["tried: as it is (4 of 4)", "3.000", "l: tried 2, 1 in the scenario"]);
    change(&mut bench, &other.replace("l: 1", "n: 1").replace("0*l", "0*n"));
    bench.shows(&["tried: as it is (4 of 4)", "1 of the tried values have no parameter there"]);
    bench.press("u");
    bench.hides(&["! "]);
}

#[test]
fn a_broken_file_is_shown_over_the_last_good_result_until_it_is_mended() {
    let mut bench = Bench::of(POND);
    change(&mut bench, &POND.replace("k: {value", "k {value"));
    bench.shows(&["The file has changed and cannot be used", "m.yaml"]);
    bench.press("<Esc>");
    bench.shows(&["as it is (1 of 2)", "5.000"]);
    change(&mut bench, "title: a pond\n");
    bench.shows(&["The file has changed and cannot be used"]);
    change(&mut bench, &POND.replace("value: 5", "value: 6"));
    bench.shows(&["as it is (1 of 2)", "6.000", "was read again"]);
    bench.hides(&["cannot be used"]);
    fs::remove_file(bench.folder().join("m.yaml")).unwrap();
    bench.tell(Msg::Changed);
    bench.shows(&["6.000", "cannot be read: there is no such file"]);
}

#[test]
fn what_was_tried_is_offered_again_and_taken_up_with_its_way_back() {
    let mut bench = Bench::of(POND);
    bench.press("fvt3<Enter>nt2<Enter>q");
    assert!(matches!(bench.taken().last(), Some(Effect::Leave)));
    let model = bench.folder().join("m.yaml");
    let mut again = bench.restarted().with(&model);
    again.shows(&["l takes up what was tried last time over \"half\": k = 3, l = 2"]);
    again.press("l");
    again.shows(&["tried: half (3 of 3)", "3.000", "taken up from last time"]);
    again.press("vu");
    again.shows(&["k, a lever: tried 3"]);
    let values = |bench: &Bench| bench.app.study.as_ref().unwrap().tried.now.values.len();
    assert_eq!(values(&again), 1);
    again.press("UU");
    assert_eq!(values(&again), 2);
    // The same file only: to the byte.
    fs::write(&model, format!("{POND}# another\n")).unwrap();
    bench.restarted().with(&model).hides(&["takes up what was tried"]);
}

#[test]
fn what_was_given_up_or_written_is_not_offered() {
    for keys in ["vt3<Enter>g", "vt3<Enter>u", "vt3<Enter>N<Enter><Enter>", "v"] {
        let mut bench = Bench::of(POND);
        bench.press(keys);
        let again = bench.restarted().with(&bench.folder().join("m.yaml"));
        again.hides(&["takes up what was tried"]);
    }
}

#[test]
fn an_offer_that_was_not_taken_is_a_step_back() {
    let mut bench = Bench::of(POND);
    bench.press("vt3<Enter>");
    let mut again = bench.restarted().with(&bench.folder().join("m.yaml"));
    again.press("vt7<Enter>uu");
    again.shows(&["k, a lever: tried 3, 5 in the"]);
}

#[test]
fn values_are_kept_after_every_change_and_only_then() {
    let mut bench = Bench::of(POND);
    let kept = |bench: &mut Bench| bench.taken().iter().filter(|effect| matches!(effect, Effect::Keep(..))).count();
    assert_eq!(kept(&mut bench), 0);
    bench.press("vnpesf");
    assert_eq!(kept(&mut bench), 0);
    bench.press("v<Right>");
    assert_eq!(kept(&mut bench), 1);
    bench.press("npew<Esc>");
    assert_eq!(kept(&mut bench), 0);
}
