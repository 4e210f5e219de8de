//! Ctrl-Z, other stops, and going on.

use std::fs;

use rustix::process::Signal;
use vt100::Screen;

use super::MODEL;
use super::session::{Session, Setup, field, is_done, selected, signal_to};

fn shell() -> Session {
    let setup = Setup { program: "bash".into(), ..Setup::new(&["--norc", "--noprofile", "-i"]) };
    let session = Session::start(&setup.environment(&[("PS1", "ready> "), ("HISTFILE", "")]));
    session.wait_for_text("ready> ");
    session
}

fn is_shown(screen: &Screen) -> bool {
    screen.alternate_screen() && screen.hide_cursor() && is_done(screen)
}

fn wait_for_stop(session: &Session, times: usize) {
    session.wait_for("a stop", |screen| {
        let text = screen.contents();
        // Not before the shell is ready: a program that it is still about to stop would be told to go on.
        let is_ready = text.trim_end().ends_with("ready>") && text.matches("Stopped").count() == times;
        !screen.alternate_screen() && is_ready && !screen.hide_cursor()
    });
}

fn step(session: &mut Session) {
    let before = session.look(selected);
    session.keys("n");
    session.wait_for("the next equilibrium", |screen| selected(screen) != before);
}

fn leave(session: &mut Session) {
    session.keys("q");
    session.wait_for("the shell", |screen| {
        !screen.alternate_screen() && screen.contents().trim_end().ends_with("\nready>")
    });
    session.keys("echo ended with $?\n");
    session.wait_for_text("ended with 0");
}

#[test]
fn a_shell_brings_it_back() {
    let mut session = shell();
    // In a process between, which has to stop as well, or the shell would wait for it.
    session.keys(&format!("sh -c '{} {MODEL}; exit $?'\n", env!("CARGO_BIN_EXE_restpoint")));
    session.wait_for("the interface", is_shown);
    session.keys("\x1a");
    wait_for_stop(&session, 1);
    session.keys("fg\n");
    session.wait_for("the interface", is_shown);
    step(&mut session);
    leave(&mut session);
}

fn child(of: u32) -> u32 {
    let processes = fs::read_dir("/proc").unwrap().filter_map(|entry| entry.ok()?.file_name().to_str()?.parse().ok());
    let is_child = |process: &u32| field(*process, 4).and_then(|parent| parent.parse().ok()) == Some(of);
    processes.into_iter().find(is_child).unwrap()
}

#[test]
fn others_may_stop_it() {
    let mut session = shell();
    session.keys(&format!("{} {MODEL}\n", env!("CARGO_BIN_EXE_restpoint")));
    session.wait_for("the interface", is_shown);
    let program = child(session.id());
    signal_to(program, Signal::TSTP);
    wait_for_stop(&session, 1);
    session.keys("fg\n");
    session.wait_for("the interface", is_shown);
    // This one cannot be heard: the shell writes over the interface, which is drawn anew.
    signal_to(program, Signal::STOP);
    session.wait_for_text("Stopped");
    session.keys("fg\n");
    session.wait_for("the interface", |screen| is_shown(screen) && !screen.contents().contains("Stopped"));
    step(&mut session);
    leave(&mut session);
}

#[test]
fn it_does_not_stop_where_nobody_could_let_it_go_on() {
    let mut session = Session::start(&Setup::new(&[MODEL]));
    session.wait_until_done();
    session.keys("\x1a");
    step(&mut session);
    session.signal(Signal::TSTP);
    session.keys("q");
    assert_eq!(session.code(), 0);
}
