//! What was tried and not written is there again when the program is started again, however it ended.

use std::path::Path;

use rustix::process::Signal;

use super::session::{Session, Setup};

const POND: &str = "\
title: a pond
time: yr
species: {S: {unit: kt, upper: 20}}
parameters: {k: {value: 5, range: [1, 9], control: true}}
change: {S: S*(k - S)}
";

fn start(folder: &Path) -> Session {
    let model = folder.join("m.yaml");
    let state = folder.join("state");
    let setup = Setup::new(&[model.to_str().unwrap()]).environment(&[("XDG_STATE_HOME", state.to_str().unwrap())]);
    Session::start(&setup)
}

fn check(end: impl Fn(&mut Session)) {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("m.yaml"), POND).unwrap();
    let mut session = start(folder.path());
    session.wait_for_text("5.000");
    session.keys("vt7\r");
    // Not a second passes between the change and the end.
    session.wait_for_text("7.000");
    end(&mut session);
    session.code();
    let mut again = start(folder.path());
    again.wait_for_text("l takes up what was tried last time over \"base\": k = 7");
    again.keys("l");
    again.wait_for_text("7.000");
    again.keys("q");
    assert_eq!(again.code(), 0);
}

#[test]
fn after_leaving() {
    check(|session| session.keys("q"));
}

#[test]
fn after_the_line_was_dropped() {
    check(|session| session.signal(Signal::HUP));
    check(|session| session.close("h"));
}

#[test]
fn after_being_told_to_end() {
    check(|session| session.signal(Signal::TERM));
}

#[test]
fn a_file_that_changes_is_read_again_at_once() {
    let folder = tempfile::tempdir().unwrap();
    let model = folder.path().join("m.yaml");
    std::fs::write(&model, POND).unwrap();
    let mut session = start(folder.path());
    session.wait_for_text("5.000");
    std::fs::write(&model, POND.replace("time: yr", "time yr")).unwrap();
    session.wait_for_text("The file has changed and cannot be used");
    std::fs::write(&model, POND.replace("value: 5", "value: 6")).unwrap();
    session.wait_for_text("6.000");
    session.keys("q");
    assert_eq!(session.code(), 0);
}

#[test]
fn names_that_the_model_lacks_are_refused_before_the_screen_is_taken() {
    let folder = tempfile::tempdir().unwrap();
    let model = folder.path().join("m.yaml");
    std::fs::write(&model, POND).unwrap();
    let model = model.to_str().unwrap();
    for (arguments, text) in [
        ([model, "--set", "kk=2"], "no parameter is called \"kk\""),
        ([model, "--scenario", "bas"], "no scenario is called \"bas\"; did you mean"),
        ([model, "--set", "k=x"], "k=x"),
    ] {
        let mut session = Session::start(&Setup::new(&arguments).size(120, 24));
        session.wait_for_text(text);
        assert_eq!(session.code(), 2);
        assert!(!session.bytes().windows(8).any(|bytes| bytes == b"\x1b[?1049h"), "the screen was taken");
    }
}
