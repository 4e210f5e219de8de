//! What holds of every screen.

use restpoint::analysis::equilibria::Progress;
use restpoint::app::Msg;

use crate::bench::{Bench, SIZES};

const TWO: &str = "\
title: two levels
time: yr
species: {S: {unit: kt, upper: 20}, C: {unit: kt, upper: 20}}
parameters: {k: {value: 5, range: [1, 9]}}
change: {S: S*(k - S), C: C*(3 - C)}
scenarios: {first: {}, second: {values: {k: 4}}}
";

#[test]
fn a_model_is_read_and_searched_and_shown() {
    for size in SIZES {
        let bench = Bench::of(TWO).at(size).ascii();
        bench.shows(&["two levels", "first (1 of 2)", "E1", "E4", "5.000"]);
        assert!(bench.text().is_ascii());
        assert_eq!(bench.text().lines().count(), usize::from(size[1]));
    }
}

/// How far a search has come stands in the last line but one.
#[test]
fn the_share_of_faces_is_shown() {
    let mut bench = Bench::of(TWO);
    bench.hold();
    bench.app.study.as_mut().unwrap().slots[1].found = None;
    // With more time it is another search, of which nothing is known.
    bench.app.budget += 1.0;
    bench.tell(Msg::Resumed);
    let id = bench.app.desk.search().expect("a search is under way").id;
    bench.tell(Msg::Advanced(id, Progress { faces: 38, boxes: 1204, share: Progress::WHOLE / 64 * 38 }));
    assert_eq!(bench.status(), "searching: 38 faces (59 % of all), 1204 boxes; Esc stops it");
}

#[test]
fn what_is_under_way_can_be_put_off() {
    let mut bench = Bench::empty();
    bench.hold();
    let mut bench = bench.with(&crate::bench::shipped("skarnby-bank"));
    assert_eq!(bench.status(), "reading");
    bench.work();
    bench.shows(&["Skarnby bank", "present fleet (1 of 5)"]);
    bench.press("<Right>");
    bench.shows(&["half the effort (2 of 5)"]);
}
