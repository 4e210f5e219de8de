//! However it ends, the terminal is as it was before, and the process is gone.

use std::time::{Duration, Instant};

use rustix::process::Signal;
use vt100::Screen;

use super::MODEL;
use super::session::{LIMIT, Session, Setup, computed};

/// A lasting search: seven species that are all limited by the same, so that whole surfaces of states stay as they are.
const LONG: &str = "\
title: Long
time: yr
species: {A: {upper: 99}, B: {upper: 99}, C: {upper: 99}, D: {upper: 99}, F: {upper: 99}, G: {upper: 99}, H: {upper: 99}}
shorthand: {left: 7 - A/(1+A/9) - B/(1+B/9) - C/(1+C/9) - D/(1+D/9) - F/(1+F/9) - G/(1+G/9) - H/(1+H/9)}
change:
  A: A*left*(1 + B)
  B: B*left*(2 + C)
  C: C*left*(3 + D)
  D: D*left*(4 + F)
  F: F*left*(5 + G)
  G: G*left*(6 + H)
  H: H*left*(7 + A)
";

fn is_given_back(screen: &Screen) -> bool {
    !screen.alternate_screen() && !screen.hide_cursor() && !screen.bracketed_paste()
}

fn check_end(arguments: &[&str], code: u32, end: impl Fn(&mut Session)) {
    let mut session = Session::start(&Setup::new(arguments));
    session.wait_for("the second screen", Screen::alternate_screen);
    session.wait_for("anything", |screen| !screen.contents().is_empty());
    assert!(session.look(Screen::hide_cursor) && session.look(Screen::bracketed_paste));
    let cooked = Session::start(&Setup { program: "sleep".into(), ..Setup::new(&["60"]) }).modes();
    assert_ne!(session.modes(), cooked, "a terminal in raw mode");
    end(&mut session);
    assert_eq!(session.code(), code, "{arguments:?}");
    session.wait_for("the first screen", is_given_back);
    assert_eq!(session.modes(), cooked, "code {code}");
}

#[test]
fn keys_end_it() {
    check_end(&[MODEL], 0, |session| session.keys("q"));
    check_end(&[MODEL], 0, |session| session.keys("\x03"));
    check_end(&[MODEL], 0, |session| session.keys("hq"));
}

#[test]
fn signals_end_it() {
    for (signal, code) in [(Signal::TERM, 143), (Signal::HUP, 129), (Signal::INT, 130), (Signal::QUIT, 131)] {
        check_end(&[MODEL], code, |session| session.signal(signal));
    }
}

#[test]
fn a_search_does_not_hold_it_up() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("long.yaml");
    std::fs::write(&path, LONG).unwrap();
    let arguments = [path.to_str().unwrap(), "--budget", "300"];
    let under_way = |session: &Session| session.wait_for_text("searching");
    check_end(&arguments, 143, |session| {
        under_way(session);
        session.signal(Signal::TERM);
    });
    check_end(&arguments, 0, |session| {
        under_way(session);
        session.keys("q");
    });
}

/// Takes the terminal away and watches what is left of the process.
fn check_gone(arguments: &[&str], controls: bool) {
    let mut session = Session::start(&Setup { controls, ..Setup::new(arguments) });
    session.wait_for("anything", |screen| screen.contents().contains("Esc") || screen.contents().contains("E1"));
    session.close("\x0c");
    let before = computed(session.id()).unwrap_or_default();
    let (start, mut after) = (Instant::now(), before);
    while session.is_running() {
        after = computed(session.id()).unwrap_or(after);
        assert!(start.elapsed() < LIMIT, "it lives on");
        std::thread::sleep(Duration::from_millis(2));
    }
    assert_eq!(session.code(), 129, "{arguments:?}");
    assert!(start.elapsed() < Duration::from_secs(3), "{:?} without a terminal", start.elapsed());
    // A search may use what there is until it is stopped.
    assert!(after - before <= 60, "{} hundredths of a second computed without a terminal", after - before);
}

#[test]
fn it_ends_with_its_terminal() {
    check_gone(&[MODEL], true);
    check_gone(&[MODEL], false);
}

#[test]
fn it_ends_with_its_terminal_in_the_middle_of_a_search() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("long.yaml");
    std::fs::write(&path, LONG).unwrap();
    check_gone(&[path.to_str().unwrap(), "--budget", "300"], false);
}

#[test]
fn it_ends_on_a_terminal_that_takes_nothing() {
    let setup = Setup { reads: false, ..Setup::new(&[MODEL]).size(200, 50) };
    let mut session = Session::start(&setup);
    // Frames until the terminal holds no more, and the program waits for it.
    let start = Instant::now();
    let mut quiet = 0;
    while quiet < 10 {
        let before = computed(session.id());
        session.keys("\x0c");
        std::thread::sleep(Duration::from_millis(20));
        quiet = if computed(session.id()) == before { quiet + 1 } else { 0 };
        assert!(start.elapsed() < LIMIT);
    }
    session.signal(Signal::TERM);
    assert_eq!(session.code(), 143);
}
