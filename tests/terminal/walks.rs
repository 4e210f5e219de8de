//! Stepping, scenarios, help, other sizes, and doing nothing.

use std::thread;
use std::time::Duration;

use super::MODEL;
use super::session::{Session, Setup, computed, selected};

fn heading(session: &Session) -> String {
    session.look(|screen| screen.rows(0, screen.size().1.get()).next().unwrap_or_default())
}

fn check_walk(columns: u16, rows: u16) {
    let mut session = Session::start(&Setup::new(&[MODEL]).size(columns, rows));
    session.wait_until_done();
    let (first, title) = (session.look(selected), heading(&session));
    session.keys("n");
    session.wait_for("the next equilibrium", |screen| selected(screen) != first);
    session.keys("p");
    session.wait_for("the first equilibrium", |screen| selected(screen) == first);
    session.keys("f");
    session.wait_for("another scenario", |screen| screen.rows(0, columns).next().as_deref() != Some(title.as_str()));
    session.keys("b");
    session.wait_for("the first scenario", |screen| screen.rows(0, columns).next().as_deref() == Some(title.as_str()));
    session.keys("h");
    session.wait_for_text("Keys and signs");
    session.keys("\x1b");
    session.wait_until_done();
    // Byte by byte, as a serial line delivers it.
    for byte in ["\x1b", "[", "B"] {
        session.keys(byte);
        thread::sleep(Duration::from_millis(5));
    }
    session.wait_for("the next equilibrium", |screen| selected(screen) != first);
    session.keys("q");
    assert_eq!(session.code(), 0);
}

#[test]
fn equilibria_and_scenarios_are_stepped_through() {
    check_walk(60, 20);
    check_walk(80, 24);
    check_walk(200, 50);
}

#[test]
fn it_follows_the_terminal_to_any_size() {
    let mut session = Session::start(&Setup::new(&[MODEL]));
    session.wait_until_done();
    let text = |session: &Session| session.look(vt100::Screen::contents);
    let before = text(&session);
    for (columns, rows) in [(1, 1), (60, 20), (2, 80), (300, 3), (u16::MAX, u16::MAX), (80, 24)] {
        let (_, count) = session.last();
        session.resize(columns, rows);
        session.wait_for_more_than(count);
    }
    session.wait_for("the same as before", |screen| screen.contents() == before);
    session.keys("q");
    assert_eq!(session.code(), 0);
}

#[test]
fn a_table_is_saved() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("saved.csv");
    let mut session = Session::start(&Setup::new(&[MODEL]));
    session.wait_until_done();
    session.keys("w");
    session.wait_for_text("write the table to");
    // The name that is offered is taken away first.
    session.keys(&format!("{}{}\r", "\x7f".repeat(200), path.display()));
    session.wait_for_text("written");
    let text = std::fs::read_to_string(&path).unwrap();
    assert!(text.contains("E4") && text.ends_with('\n'), "{text}");
    session.keys("q");
    assert_eq!(session.code(), 0);
}

#[test]
fn doing_nothing_costs_nothing() {
    let mut session = Session::start(&Setup::new(&[MODEL]));
    session.wait_until_done();
    let written = session.last().1;
    let before = computed(session.id()).unwrap();
    thread::sleep(Duration::from_secs(2));
    let hundredths = computed(session.id()).unwrap() - before;
    assert_eq!(session.last().1 - written, 0, "bytes written while nothing happened");
    assert!(hundredths <= 1, "{hundredths} hundredths of a second computed while nothing happened");
    session.keys("q");
    assert_eq!(session.code(), 0);
}
