//! Each kind of terminal gets only what it understands.

use std::collections::BTreeSet;

use super::MODEL;
use super::session::{Session, Setup};

/// What was written, summed up.
#[derive(Debug, Default)]
struct Used {
    is_ascii: bool,
    /// Colours of the eight of old, of the 256, of all there are.
    colours: [bool; 3],
    /// Final letters of the sequences.
    letters: BTreeSet<char>,
    /// Modes that were set and taken back.
    modes: BTreeSet<String>,
    /// Control characters outside of sequences.
    controls: BTreeSet<char>,
}

impl Used {
    fn of(bytes: &[u8]) -> Self {
        let text = String::from_utf8(bytes.to_vec()).unwrap();
        let mut used = Used { is_ascii: text.is_ascii(), ..Used::default() };
        let mut parts = text.split("\x1b[");
        let first = parts.next().unwrap();
        used.controls.extend(first.chars().filter(|c| c.is_control()));
        for part in parts {
            let end = part.find(|c: char| c.is_ascii_alphabetic()).unwrap();
            let letter = part[end..].chars().next().unwrap();
            used.sequence(&part[..end], letter);
            used.controls.extend(part[end..].chars().filter(|c| c.is_control()));
        }
        used
    }

    fn sequence(&mut self, parameters: &str, letter: char) {
        if let Some(mode) = parameters.strip_prefix('?') {
            self.modes.insert(mode.to_owned());
            return;
        }
        self.letters.insert(letter);
        let mut numbers = parameters.split(';').filter(|_| letter == 'm');
        while let Some(number) = numbers.next() {
            match number {
                "31" | "32" | "33" | "34" | "35" | "36" => self.colours[0] = true,
                // One of 256, or red, green and blue follow.
                "38" => match numbers.next() {
                    Some("5") => self.colours[1] = numbers.next().is_some(),
                    _ => self.colours[2] = numbers.by_ref().take(3).count() == 3,
                },
                _ => {}
            }
        }
    }
}

/// Runs it through a few screens.
fn used(environment: &[(&str, &str)], options: &[&str]) -> Used {
    let arguments = [&[MODEL], options].concat();
    let mut session = Session::start(&Setup::new(&arguments).environment(environment));
    session.wait_until_done();
    session.keys("nfm");
    session.keys("h");
    session.wait_for_text("Keys and signs");
    session.keys("q");
    assert_eq!(session.code(), 0);
    session.wait_for("the cursor", |screen| !screen.hide_cursor());
    Used::of(&session.bytes())
}

fn check(environment: &[(&str, &str)], options: &[&str], is_ascii: bool, colours: [bool; 3], has_second: bool) {
    let used = used(environment, options);
    let case = format!("{environment:?} {options:?}: {used:?}");
    assert_eq!(used.is_ascii, is_ascii, "{case}");
    assert_eq!(used.colours, colours, "{case}");
    let modes: &[&str] = if has_second { &["1049", "2004", "25"] } else { &["25"] };
    assert_eq!(used.modes.iter().collect::<Vec<_>>(), modes, "{case}");
    assert!(used.letters.iter().all(|letter| "HCDJKm".contains(*letter)), "{case}");
    assert!(used.controls.iter().all(|control| "\r\n\x08".contains(*control)), "{case}");
}

const NO: [bool; 3] = [false; 3];
const EIGHT: [bool; 3] = [true, false, false];
const MANY: [bool; 3] = [false, true, false];
const ANY: [bool; 3] = [false, false, true];

#[test]
fn terminals_get_what_they_understand() {
    check(&[], &[], false, MANY, true);
    check(&[("COLORTERM", "truecolor")], &[], false, ANY, true);
    check(&[("TERM", "xterm")], &[], false, EIGHT, true);
    check(&[("TERM", "screen")], &[], false, EIGHT, true);
    check(&[("TERM", "tmux-256color")], &[], false, MANY, true);
    check(&[("TERM", "linux")], &[], true, EIGHT, false);
    check(&[("TERM", "vt100")], &[], true, NO, false);
    check(&[("TERM", "vt220")], &[], true, NO, false);
}

#[test]
fn users_get_what_they_ask_for() {
    check(&[("LANG", "C")], &[], true, MANY, true);
    check(&[("LC_ALL", "POSIX")], &[], true, MANY, true);
    check(&[], &["--ascii"], true, MANY, true);
    check(&[("NO_COLOR", "1")], &[], false, NO, true);
    check(&[("NO_COLOR", "")], &[], false, MANY, true);
    check(&[("NO_COLOR", "1")], &["--color", "always"], false, MANY, true);
    check(&[], &["--color", "never"], false, NO, true);
    check(&[("TERM", "vt100")], &["--color", "always"], true, EIGHT, false);
}

#[test]
fn without_a_place_for_screens_there_is_the_table() {
    let check = |command: &str, environment: &[(&str, &str)]| {
        let line = command.replace("PROGRAM", env!("CARGO_BIN_EXE_restpoint")).replace("MODEL", MODEL);
        let setup = Setup { program: "sh".into(), ..Setup::new(&["-c", &line]) };
        let mut session = Session::start(&setup.environment(environment));
        assert_eq!(session.code(), 0, "{command}");
        session.wait_for_text("licensed practice");
        let used = Used::of(&session.bytes());
        assert!(used.modes.is_empty() && !used.letters.contains(&'H'), "{command}: {used:?}");
    };
    check("PROGRAM MODEL", &[("TERM", "dumb")]);
    check("PROGRAM MODEL", &[("TERM", "")]);
    check("PROGRAM MODEL | cat", &[]);
    check("PROGRAM table MODEL", &[]);
}

#[test]
fn the_keyboard_is_found_where_standard_input_is_none() {
    let line = format!("exec {} {MODEL} </dev/null", env!("CARGO_BIN_EXE_restpoint"));
    let mut session = Session::start(&Setup { program: "sh".into(), ..Setup::new(&["-c", &line]) });
    session.wait_until_done();
    session.keys("q");
    assert_eq!(session.code(), 0);
}
