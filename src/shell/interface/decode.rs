//! What a terminal's bytes mean: keys, and texts that were pasted.
//!
//! It reads nothing and knows no clock. [`Decoder::take`] takes one byte after another, in whatever pieces the line delivers
//! them: a serial line brings an arrow key byte by byte, so that a key that only begins like one must wait for as long as
//! [`Decoder::patience`] says, and [`Decoder::end`] decides when nothing more has come. To add a key: a row of [`named`].
//!
//! Sequences: ECMA-48 (1991), section 5.4, with the keys of the VT220 and of what came after it.

use std::str::from_utf8;
use std::time::Duration;

use crate::app::{Key, Msg};

/// How long the rest of a sequence may take. Shorter than anyone types, longer than a line takes for a byte.
const SEQUENCE: Duration = Duration::from_millis(50);
/// How long a pasted text may pause; without an end it would swallow every key.
const PASTE: Duration = Duration::from_secs(1);
/// Bytes of a sequence that are looked at; the rest is passed over.
const LONGEST_SEQUENCE: usize = 32;
/// Bytes of a pasted text that are kept.
const LONGEST_PASTE: usize = 1 << 16;

const ESCAPE: u8 = 0x1b;
const BELL: u8 = 0x07;
const PASTE_ENDS: &[u8] = b"\x1b[201~";

/// What has begun.
#[derive(Debug, Default)]
enum State {
    #[default]
    Nothing,
    /// Escape: the key, or a sequence.
    Escape,
    /// Escape and [: parameters follow, then a letter.
    Control(Vec<u8>),
    /// Escape and O: one letter follows.
    Single,
    /// Escape, [ and [: a function key of the Linux console, one letter follows.
    Console,
    /// An answer to a question that we did not ask, up to its end; whether an escape came last.
    Foreign(bool),
    /// The first bytes of a character.
    Character(Vec<u8>),
    /// A pasted text, and how much of its end has come.
    Paste(Vec<u8>, usize),
}

/// Takes bytes, gives messages.
#[derive(Debug, Default)]
pub(super) struct Decoder {
    state: State,
}

impl Decoder {
    /// How long to wait before [`Decoder::end`]; `None` where nothing has begun.
    pub(super) fn patience(&self) -> Option<Duration> {
        match self.state {
            State::Nothing => None,
            State::Paste(..) => Some(PASTE),
            _ => Some(SEQUENCE),
        }
    }

    /// Nothing more has come.
    pub(super) fn end(&mut self, send: &mut dyn FnMut(Msg)) {
        match std::mem::take(&mut self.state) {
            State::Escape | State::Control(_) | State::Console => send(Msg::Struck(Key::Escape)),
            State::Single => {
                send(Msg::Struck(Key::Escape));
                send(Msg::Struck(Key::Char('O')));
            }
            State::Paste(text, _) => send(pasted(&text)),
            State::Nothing | State::Foreign(_) | State::Character(_) => {}
        }
    }

    /// Takes a byte.
    pub(super) fn take(&mut self, byte: u8, send: &mut dyn FnMut(Msg)) {
        self.state = match std::mem::take(&mut self.state) {
            State::Nothing => fresh(byte, send),
            State::Escape => escaped(byte, send),
            State::Control(parameters) => control(parameters, byte, send),
            State::Single => {
                send_key(named(&[], byte), send);
                State::Nothing
            }
            State::Console => State::Nothing,
            State::Foreign(escape) => foreign(escape, byte),
            State::Character(bytes) => character(bytes, byte, send),
            State::Paste(text, matched) => paste(text, matched, byte, send),
        };
    }
}

fn send_key(key: Option<Key>, send: &mut dyn FnMut(Msg)) {
    if let Some(key) = key {
        send(Msg::Struck(key));
    }
}

fn fresh(byte: u8, send: &mut dyn FnMut(Msg)) -> State {
    let key = match byte {
        ESCAPE => return State::Escape,
        0x80.. => return character(Vec::new(), byte, send),
        0x03 => Some(Key::Interrupt),
        0x08 | 0x7f => Some(Key::Backspace),
        b'\t' => Some(Key::Tab),
        b'\r' | b'\n' => Some(Key::Enter),
        0x0c => Some(Key::Redraw),
        0x1a => Some(Key::Suspend),
        b' '.. => Some(Key::Char(char::from(byte))),
        _ => None,
    };
    send_key(key, send);
    State::Nothing
}

/// After Escape. A key that is no sequence was typed after it: nothing here is bound to both together.
fn escaped(byte: u8, send: &mut dyn FnMut(Msg)) -> State {
    match byte {
        b'[' => State::Control(Vec::new()),
        b'O' => State::Single,
        b']' | b'P' => State::Foreign(false),
        _ => {
            send(Msg::Struck(Key::Escape));
            fresh(byte, send)
        }
    }
}

fn control(mut parameters: Vec<u8>, byte: u8, send: &mut dyn FnMut(Msg)) -> State {
    match byte {
        b' '..=b'?' => {
            // One more than is looked at marks a sequence as none of ours.
            if parameters.len() <= LONGEST_SEQUENCE {
                parameters.push(byte);
            }
            State::Control(parameters)
        }
        b'[' if parameters.is_empty() => State::Console,
        b'~' if parameters == b"200" => State::Paste(Vec::new(), 0),
        b'@'..=b'~' => {
            send_key(named(&parameters, byte), send);
            State::Nothing
        }
        _ => fresh(byte, send),
    }
}

/// The key of a sequence; `None` for those that we do not know, or with a modifier other than Shift.
fn named(parameters: &[u8], letter: u8) -> Option<Key> {
    if parameters.len() > LONGEST_SEQUENCE {
        return None;
    }
    let mut numbers = from_utf8(parameters).ok()?.split(';').map(str::parse::<u16>);
    let first = numbers.next().and_then(Result::ok);
    // One more than the sum of the modifiers, of which Shift is 1.
    if let Some(modifier) = numbers.next()
        && !matches!(modifier, Ok(1 | 2))
    {
        return None;
    }
    Some(match (letter, first) {
        (b'A', _) => Key::Up,
        (b'B', _) => Key::Down,
        (b'C', _) => Key::Right,
        (b'D', _) => Key::Left,
        (b'H', _) | (b'~', Some(1 | 7)) => Key::Home,
        (b'F', _) | (b'~', Some(4 | 8)) => Key::End,
        (b'~', Some(3)) => Key::Delete,
        (b'~', Some(5)) => Key::PageUp,
        (b'~', Some(6)) => Key::PageDown,
        // Enter beside the numbers, in application mode.
        (b'M', None) => Key::Enter,
        _ => return None,
    })
}

fn foreign(escape: bool, byte: u8) -> State {
    match byte {
        BELL => State::Nothing,
        b'\\' if escape => State::Nothing,
        _ => State::Foreign(byte == ESCAPE),
    }
}

/// UTF-8. What is none is dropped; the byte that shows it may be a key of its own.
fn character(mut bytes: Vec<u8>, byte: u8, send: &mut dyn FnMut(Msg)) -> State {
    bytes.push(byte);
    match from_utf8(&bytes) {
        Ok(text) => {
            let known = text.chars().next().filter(|c| !c.is_control());
            send_key(known.map(Key::Char), send);
            State::Nothing
        }
        Err(error) if error.error_len().is_none() => State::Character(bytes),
        Err(_) if bytes.len() > 1 => fresh(byte, send),
        Err(_) => State::Nothing,
    }
}

fn paste(mut text: Vec<u8>, matched: usize, byte: u8, send: &mut dyn FnMut(Msg)) -> State {
    if byte == PASTE_ENDS[matched] {
        if matched + 1 == PASTE_ENDS.len() {
            send(pasted(&text));
            return State::Nothing;
        }
        return State::Paste(text, matched + 1);
    }
    // Only its first byte is an escape, so the end cannot begin within what was matched.
    let begins = byte == ESCAPE;
    let kept = PASTE_ENDS[..matched].iter().copied().chain((!begins).then_some(byte));
    text.extend(kept.take(LONGEST_PASTE.saturating_sub(text.len())));
    State::Paste(text, usize::from(begins))
}

fn pasted(text: &[u8]) -> Msg {
    Msg::Pasted(String::from_utf8_lossy(text).into_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    /// What comes of bytes that arrive all at once, and then no more.
    fn decode(bytes: &[u8]) -> Vec<String> {
        let mut decoder = Decoder::default();
        let mut got = Vec::new();
        let mut send = |msg| {
            got.push(match msg {
                Msg::Struck(key) => key.name(),
                Msg::Pasted(text) => format!("pasted {text}"),
                _ => "something else".to_owned(),
            });
        };
        for &byte in bytes {
            decoder.take(byte, &mut send);
        }
        if decoder.patience().is_some() {
            decoder.end(&mut send);
        }
        assert!(decoder.patience().is_none());
        got
    }

    #[test]
    fn keys_are_told_apart() {
        let check = |bytes: &[u8], expected: &[&str]| assert_eq!(decode(bytes), expected, "{bytes:?}");
        check(b"qQ+ \r\n\t", &["q", "Q", "+", "Space", "Enter", "Enter", "Tab"]);
        check(b"\x03\x1a\x0c\x08\x7f\x00\x01", &["Ctrl-C", "Ctrl-Z", "Ctrl-L", "Backspace", "Backspace"]);
        check(b"\x1b[A\x1b[B\x1b[C\x1b[D\x1bOA\x1bOD", &["Up", "Down", "Right", "Left", "Up", "Left"]);
        check(
            b"\x1b[H\x1b[F\x1b[1~\x1b[4~\x1b[7~\x1b[8~\x1bOH",
            &["Home", "End", "Home", "End", "Home", "End", "Home"],
        );
        check(b"\x1b[3~\x1b[5~\x1b[6~\x1bOM", &["Delete", "PageUp", "PageDown", "Enter"]);
        check(b"\x1b[1;2A\x1b[1;5A\x1b[1;3Cn", &["Up", "n"]);
        check(b"\x1b[[An\x1b[15~n\x1b[>1;2cn\x1b[?1;2cn\x1b[M", &["n", "n", "n", "n", "Enter"]);
        check("é€漢🐟".as_bytes(), &["é", "€", "漢", "🐟"]);
    }

    #[test]
    fn escape_is_a_key_when_nothing_follows() {
        let check = |bytes: &[u8], expected: &[&str]| assert_eq!(decode(bytes), expected, "{bytes:?}");
        check(b"\x1b", &["Esc"]);
        check(b"\x1b\x1b", &["Esc", "Esc"]);
        check(b"\x1b\x1b[A", &["Esc", "Up"]);
        check(b"\x1bq", &["Esc", "q"]);
        check(b"\x1b\xc3\xa9", &["Esc", "é"]);
        check(b"\x1b[", &["Esc"]);
        check(b"\x1bO", &["Esc", "O"]);
        check(b"\x1b[1;\x03", &["Ctrl-C"]);
    }

    #[test]
    fn what_is_not_for_us_is_passed_over() {
        let check = |bytes: &[u8], expected: &[&str]| assert_eq!(decode(bytes), expected, "{bytes:?}");
        check(b"\x1b]11;rgb:0000/0000/0000\x07n", &["n"]);
        check(b"\x1bP1+r544e\x1b\\n", &["n"]);
        check(b"\xffn\xe9n\xe2\x82n\xed\xa0\x80n\xc2\x9b", &["n", "n", "n", "n"]);
        check(&[b"\x1b[".as_slice(), &[b'1'; 5000], b"Bn"].concat(), &["n"]);
    }

    #[test]
    fn pasted_texts_are_no_keys() {
        let check = |bytes: &[u8], expected: &[&str]| assert_eq!(decode(bytes), expected, "{bytes:?}");
        check(b"\x1b[200~quit\x1b[201~n", &["pasted quit", "n"]);
        check(b"\x1b[200~a\x1b[20\x1b[201~n", &["pasted a\x1b[20", "n"]);
        check(b"\x1b[200~no end", &["pasted no end"]);
        let long = decode(&[b"\x1b[200~".as_slice(), &vec![b'x'; 2 * LONGEST_PASTE], b"\x1b[201~n"].concat());
        assert_eq!(long.len(), 2);
        assert_eq!(long[0].len(), LONGEST_PASTE + "pasted ".len());
    }

    proptest::proptest! {
        /// Whatever comes, it ends, and a key that comes after it is heard.
        #[test]
        fn nothing_jams(bytes in proptest::collection::vec(
            proptest::prop_oneof![proptest::prelude::any::<u8>(), proptest::sample::select(b"\x1b[O]P;~0125".to_vec())],
            0..60,
        )) {
            let mut decoder = Decoder::default();
            for byte in bytes {
                decoder.take(byte, &mut |_| {});
            }
            decoder.end(&mut |_| {});
            let mut got = Vec::new();
            decoder.take(b'n', &mut |msg| got.push(msg));
            proptest::prop_assert!(matches!(got[..], [Msg::Struck(Key::Char('n'))]));
        }
    }
}
