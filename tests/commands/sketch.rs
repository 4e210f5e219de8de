//! `restpoint sketch` as it is typed: options, files, ends.
#![allow(clippy::unwrap_used, reason = "a test fails by panicking")]

use std::fs;

use crate::cli_support::{FOLD, Ran, fast, run, run_on, word};
use unicode_width::UnicodeWidthStr;

const BANK: &str = "scenarios/skarnby-bank.yaml";
const REEF: &str = "scenarios/ombrel-reef.yaml";

/// The exit status, and what must be on standard output and standard error; where nothing must be, the stream is empty.
fn judge(ran: &Ran, code: i32, out: &str, err: &str) {
    assert_eq!(ran.code, Some(code), "{}", ran.err);
    for (stream, part) in [(&ran.out, out), (&ran.err, err)] {
        assert!(stream.contains(part), "\"{part}\" is not in \"{stream}\"");
        assert!(stream.is_empty() == part.is_empty(), "{stream}");
    }
}

fn sketch(rest: &[&str]) -> Ran {
    run(&[&["sketch"], rest].concat())
}

#[test]
fn what_is_not_understood_ends_with_2_and_says_what_was_meant() {
    let check = |rest: &[&str], err: &str| judge(&sketch(rest), 2, "", err);
    check(&[BANK, "--size", "19x24"], "the smallest drawing is 20x8");
    check(&[BANK, "--size", "80x7"], "the smallest drawing is 20x8");
    check(&[BANK, "--size", "1001x24"], "the largest drawing is 1000x1000");
    check(&[BANK, "--size", "80"], "for example 100x30");
    check(&[BANK, "--size=-80x24"], "for example 100x30");
    check(&[BANK, "--size", "99999999999999999999x24"], "for example 100x30");
    check(&[BANK, "--axes", "P"], "the symbols of two species");
    check(&[BANK, "--axes", "P,P"], "the symbols of two species");
    check(&[BANK, "--axes", "P,d"], "did you mean \"D\"?");
    check(&[BANK, "--axes", "P,rP"], "no species is called \"rP\"");
    check(&[BANK, "--scenario", "half"], "no scenario is called \"half\"");
    check(&[BANK, "--set", "X=1"], "no parameter is called \"X\"");
    check(&[BANK, "--format", "json"], "a sketch has only --format text");
    check(&[], "<MODEL>");
    judge(&run_on(FOLD, &["sketch", "-", "--axes", "x,y"]), 2, "", "the model has one species");
}

#[test]
fn a_model_at_fault_ends_with_1_and_what_is_unproved_with_3_where_that_is_asked() {
    judge(&sketch(&["no-such.yaml"]), 1, "", "there is no such file");
    judge(&run_on("title: [", &["sketch", "-"]), 1, "", "standard input:1:");
    judge(&run_on(FOLD, &["sketch", "-"]), 0, "NOT PROVED COMPLETE", "");
    judge(&run_on(FOLD, &["sketch", "-", "--strict"]), 3, "NOT PROVED COMPLETE", "");
    judge(&run_on(FOLD, &["sketch", "-", "--strict", "--scenario", "plain"]), 0, "proved: no other", "");
}

#[test]
fn each_scenario_is_drawn_in_the_same_window() {
    let ran = sketch(&[BANK, "--size", "60x16"]);
    let names: Vec<&str> = ran.out.lines().filter_map(|line| line.strip_prefix("Scenario: ")).collect();
    assert_eq!(names.len(), 5, "{}", ran.out);
    let mut axes: Vec<&str> = ran.out.lines().filter(|line| line.starts_with("       └")).collect();
    assert_eq!(axes.len(), 5);
    axes.dedup();
    assert_eq!(axes.len(), 1, "{axes:?}");
    let one = sketch(&[BANK, "--scenario", "half the effort", "--set", "E=0", "--ascii"]);
    assert!(one.out.is_ascii() && one.out.matches("Scenario: ").count() == 1, "{}", one.out);
    // Without effort the dab alone reach what the bank carries of them.
    assert!(one.out.contains("P = 0, D = 160.0, proved; "), "{}", one.out);
    let turned = sketch(&[REEF, "--axes", "L,U", "--scenario", "present pots"]);
    assert!(turned.out.contains("\nU urchin, ind/m2\n") && turned.out.contains("Held as at"), "{}", turned.out);
}

#[test]
fn every_shipped_model_can_be_drawn() {
    for name in fast() {
        for more in [&[][..], &["--ascii", "--size", "20x8"], &["--size", "200x50"]] {
            let ran = sketch(&[&[name.as_str()], more].concat());
            assert_eq!((ran.code, ran.err.as_str()), (Some(0), ""), "{name}");
            let width = if more.contains(&"200x50") { 200 } else { 80 };
            assert!(ran.out.lines().all(|line| line.width() <= width), "{name}\n{}", ran.out);
            assert!(ran.out.contains("nothing is proved of them") || more.contains(&"20x8"), "{name}");
            assert!(ran.out.is_ascii() || !more.contains(&"--ascii"), "{name}");
        }
    }
}

#[test]
fn a_file_holds_what_would_be_printed() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("sketch.txt");
    let ran = sketch(&[BANK, "--output", word(&path)]);
    assert_eq!((ran.code, ran.out.as_str(), ran.err.as_str()), (Some(0), "", ""));
    assert_eq!(fs::read_to_string(&path).unwrap(), sketch(&[BANK]).out);
    assert_eq!(sketch(&[BANK, "--output", word(&path)]).code, Some(1));
    let coloured = sketch(&[BANK, "--color", "always"]).out;
    assert!(coloured.contains("\u{1b}[34m") && !sketch(&[BANK]).out.contains('\u{1b}'));
}
