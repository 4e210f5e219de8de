//! A mistake of our own: what it says can be read, on a terminal that is as it was before.

use std::env;
use std::path::{Path, PathBuf};
use std::thread;
use std::time::Duration;

use restpoint::app::Source;
use restpoint::shell::interface::{Abilities, Start, Wish, run};
use restpoint::shell::workers::Threads;

use super::MODEL;
use super::session::{Session, Setup, is_done};

/// Names the file whose coming is the sign to panic, in the process that is to.
const SIGN: &str = "RESTPOINT_TEST_PANICS_AT";

/// The interface in this process, and a thread beside it that panics.
fn panic_at(sign: PathBuf) {
    thread::spawn(move || {
        while !sign.exists() {
            thread::sleep(Duration::from_millis(5));
        }
        panic!("on purpose");
    });
    let model = Path::new(env!("CARGO_MANIFEST_DIR")).join(MODEL);
    let start = Start {
        model: Some(Source::File(model)),
        abilities: Abilities::find(Wish { ascii: false, color: None }).unwrap(),
        budget: 10.0,
        threads: Threads::new(1),
        set: Vec::new(),
        only: Vec::new(),
    };
    run(start).unwrap();
}

#[test]
fn a_panic_gives_the_terminal_back() {
    // The test starts itself once more, on a terminal.
    if let Some(sign) = env::var_os(SIGN) {
        return panic_at(PathBuf::from(sign));
    }
    let folder = tempfile::tempdir().unwrap();
    let sign = folder.path().join("now");
    let name = "panics::a_panic_gives_the_terminal_back";
    let program = env::current_exe().unwrap().to_str().unwrap().to_owned();
    let setup = Setup { program, ..Setup::new(&["--exact", name, "--nocapture"]) };
    let mut session = Session::start(&setup.environment(&[(SIGN, sign.to_str().unwrap())]));
    let raw =
        |session: &Session| session.wait_for("the interface", |screen| screen.alternate_screen() && is_done(screen));
    raw(&session);
    let during = session.modes();
    std::fs::write(&sign, "").unwrap();
    assert_eq!(session.code(), 101);
    session.wait_for_text("on purpose");
    assert!(session.look(|screen| !screen.alternate_screen() && !screen.hide_cursor() && !screen.bracketed_paste()));
    assert_ne!(session.modes(), during);
}
