//! What a threshold means, for every kind and whatever its arms support: each sentence by hand from the arms.

use restpoint::analysis::linearise::Kind;
use restpoint::analysis::response::{Arm, Criticality, Gap, GapReason, Response, Threshold, ThresholdKind as Of};
use restpoint::model::SpeciesId;
use restpoint::report::response::{Setting, meaning};

use crate::support::{arm, branch, point, response, threshold};
use crate::table_support::model;

const BOTH: [bool; 2] = [true, true];
const SPRAT: [bool; 2] = [true, false];
const NODE: Kind = Kind::StableNode;
const SADDLE: Kind = Kind::Saddle;

fn check_in(response: &Response, threshold: &Threshold, expected: &str) {
    let model = model();
    let at = Setting { model: &model, response, ids: &[] };
    assert_eq!(meaning(&at, threshold), expected, "{threshold:?}");
}

/// With the control now at that value, and cod in no state beyond the threshold.
fn check(present: f64, threshold: &Threshold, expected: &str) {
    let mut all = response();
    all.control.present = present;
    check_in(&all, threshold, expected);
}

/// With states of sprat alone, and of both, all over the range.
fn check_crowded(present: f64, threshold: &Threshold, expected: &str) {
    let mut all = response();
    all.control.present = present;
    let both = vec![point(0.0, [5.0, 2.0], NODE), point(3.0, [5.0, 2.0], NODE)];
    all.branches = vec![branch(both, BOTH, Vec::new())];
    check_in(&all, threshold, expected);
}

fn with(kind: Of, criticality: Option<Criticality>, arms: Vec<Arm>) -> Threshold {
    Threshold { criticality, ..threshold(kind, arms) }
}

#[test]
fn folds_say_who_is_lost_or_what_appears() {
    let fold = |above, kinds: [Kind; 2]| threshold(Of::Fold, kinds.map(|kind| arm(above, kind, BOTH)).to_vec());
    check(
        1.0,
        &fold(false, [NODE, SADDLE]),
        "sprat and κοδ cannot persist at rest above E = 1.500: the state with sprat and κοδ meets a saddle and is gone",
    );
    check(
        2.0,
        &fold(true, [SADDLE, NODE]),
        "sprat and κοδ cannot persist at rest below E = 1.500: the state with sprat and κοδ meets a saddle and is gone",
    );
    check_crowded(
        1.0,
        &fold(false, [NODE, SADDLE]),
        "the state with sprat and κοδ meets a saddle and is gone above E = 1.500: the community jumps elsewhere (hard)",
    );
    check(1.0, &fold(true, [NODE, SADDLE]), "two states, one stable, appear above E = 1.500");
    check(2.0, &fold(false, [NODE, SADDLE]), "two states, one stable, appear below E = 1.500");
    check(2.0, &fold(false, [SADDLE, SADDLE]), "two states, none of them stable, appear below E = 1.500");
    check_crowded(
        1.0,
        &fold(false, [SADDLE, Kind::UnstableNode]),
        "the state with sprat and κοδ, not stable, meets an unstable node and is gone above E = 1.500",
    );
    check(1.0, &threshold(Of::Fold, Vec::new()), "a branch turns back at E = 1.500");
}

#[test]
fn where_the_picture_may_lack_states_nothing_is_ruled_out() {
    let fold = threshold(Of::Fold, vec![arm(false, NODE, SPRAT), arm(false, SADDLE, SPRAT)]);
    let lost = "the state with sprat meets a saddle and is gone";
    for (from, to, reason, expected) in [
        (2.0, 2.5, GapReason::Budget, "no state with sprat was found above E = 1.500"),
        (0.0, 1.0, GapReason::Budget, "sprat cannot persist at rest above E = 1.500"),
        (1.4, 1.6, GapReason::Meeting, "sprat cannot persist at rest above E = 1.500"),
    ] {
        let mut all = response();
        all.gaps = vec![Gap { from, to, reason }];
        check_in(&all, &fold, &format!("{expected}: {lost}"));
    }
    let mut all = response();
    all.undefined = vec![(2.0, 3.0, "no value".to_owned())];
    check_in(&all, &fold, &format!("no state with sprat was found above E = 1.500: {lost}"));
}

#[test]
fn infeasible_thresholds_are_of_no_account() {
    let outside = |above| Arm { feasible: false, ..arm(above, SADDLE, BOTH) };
    let expected = "of no account at E = 1.500: an abundance is negative there, or outside the search box";
    check(1.0, &threshold(Of::Fold, vec![outside(true), outside(true)]), expected);
}

#[test]
fn transcritical_thresholds_say_who_invades_and_who_is_lost() {
    let cross = |above: bool, kinds: [Kind; 3]| {
        let [own, beside, beyond] = kinds;
        let arms = vec![
            arm(above, own, BOTH),
            Arm { feasible: false, ..arm(!above, SADDLE, BOTH) },
            arm(above, beside, SPRAT),
            arm(!above, beyond, SPRAT),
        ];
        Threshold { species: Some(SpeciesId(1)), ..threshold(Of::Transcritical, arms) }
    };
    check(1.0, &cross(true, [NODE, SADDLE, NODE]), "κοδ can invade above E = 1.500");
    check(2.0, &cross(false, [NODE, SADDLE, NODE]), "κοδ can invade below E = 1.500");
    check(
        1.0,
        &cross(false, [NODE, SADDLE, NODE]),
        "κοδ cannot persist at rest above E = 1.500: it dwindles to 0 there",
    );
    check_crowded(1.0, &cross(false, [NODE, SADDLE, NODE]), "κοδ dwindles to 0 at E = 1.500");
    check(
        1.0,
        &cross(false, [SADDLE, NODE, SADDLE]),
        "κοδ can invade above E = 1.500, and there is no state near to settle in: the community jumps elsewhere (hard)",
    );
    check(1.0, &cross(true, [SADDLE, SADDLE, SADDLE]), "a state with κοδ, not stable, is there above E = 1.500");
    check(1.0, &threshold(Of::Transcritical, Vec::new()), "two branches cross at E = 1.500 and exchange stability");
}

#[test]
fn cycles_set_in_softly_or_the_community_jumps() {
    let turn = |above: bool| vec![arm(above, Kind::UnstableSpiral, BOTH), arm(!above, Kind::StableSpiral, BOTH)];
    let (soft, hard) = (Some(Criticality::Soft), Some(Criticality::Hard));
    check(1.0, &with(Of::Hopf, soft, turn(true)), "cycles set in softly above E = 1.500");
    check(1.0, &with(Of::Hopf, soft, turn(false)), "cycles set in softly below E = 1.500");
    check(
        1.0,
        &with(Of::Hopf, hard, turn(true)),
        "above E = 1.500 the state is not stable and the community jumps elsewhere (hard); below it, cycles that are not \
         stable surround it",
    );
    check(
        1.0,
        &with(Of::Hopf, None, turn(true)),
        "above E = 1.500 the state is not stable: cycles are born, softly or not is undecided",
    );
    let never = [false, true].map(|above| arm(above, Kind::Saddle, BOTH)).to_vec();
    check(
        1.0,
        &with(Of::Hopf, soft, never),
        "cycles are born at E = 1.500 around a state that is stable on neither side",
    );
    check(1.0, &with(Of::PeriodDoubling, soft, turn(true)), "swings between two levels set in softly above E = 1.500");
    check(1.0, &with(Of::NeimarkSacker, soft, turn(true)), "swings around the state set in softly above E = 1.500");
}

#[test]
fn pitchforks_kinks_exits_and_lines() {
    let change = |above: bool| vec![arm(above, SADDLE, BOTH), arm(!above, NODE, BOTH)];
    check(
        1.0,
        &with(Of::Pitchfork, Some(Criticality::Soft), change(true)),
        "above E = 1.500 the state gives way softly to two stable ones beside it",
    );
    check(
        1.0,
        &with(Of::Pitchfork, Some(Criticality::Hard), change(false)),
        "below E = 1.500 the state is not stable and the community jumps elsewhere (hard)",
    );
    check(1.0, &threshold(Of::Pitchfork, Vec::new()), "two states part from one at E = 1.500");
    let kink =
        |arms| Threshold { kink: Some(["S".to_owned(), "Slim".to_owned()]), ..threshold(Of::BorderCollision, arms) };
    check(1.0, &kink(change(true)), "the state is not stable above E = 1.500, beyond the kink where S = Slim");
    let kinds = |below, above| vec![arm(false, below, BOTH), arm(true, above, BOTH)];
    check(
        1.0,
        &kink(kinds(NODE, Kind::StableSpiral)),
        "the type changes from stable node to stable spiral at E = 1.500, at the kink where S = Slim",
    );
    check(1.0, &kink(kinds(NODE, NODE)), "the state passes the kink where S = Slim at E = 1.500; its type stays");
    let born = |above| vec![arm(above, NODE, BOTH), arm(above, SADDLE, BOTH)];
    check(1.0, &kink(born(true)), "two states, one stable, appear above E = 1.500 at the kink where S = Slim");
    check(
        1.0,
        &kink(born(false)),
        "sprat and κοδ cannot persist at rest above E = 1.500: two states, one stable, meet at the kink where S = Slim and \
         are gone",
    );
    check(1.0, &threshold(Of::Continuum, Vec::new()), "at E = 1.500 there is a whole line of states of rest");
}

#[test]
fn exits_are_to_below_zero_or_out_of_the_box() {
    let exit = |state: [f64; 2]| Threshold {
        species: Some(SpeciesId(1)),
        state: state.to_vec(),
        ..threshold(Of::Exit, vec![arm(false, NODE, BOTH)])
    };
    check(
        1.0,
        &exit([5.0, 0.0]),
        "sprat and κοδ cannot persist at rest above E = 1.500: κοδ reaches 0 and would be negative",
    );
    check_crowded(2.0, &exit([5.0, 0.0]), "κοδ reaches 0 at E = 1.500; above it the state would be negative");
    check_crowded(
        1.0,
        &exit([5.0, 400.0]),
        "κοδ leaves the search box above E = 1.500: nothing is said of the state there",
    );
}
