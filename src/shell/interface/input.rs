//! What the terminal sends, as messages.

use std::thread;

use crossterm::event::{Event as Sent, KeyCode, KeyEvent, KeyEventKind, KeyModifiers, read};

use super::{Event, Events};
use crate::app::{Key, Msg, Size};

/// Listens from now on, on a thread of its own.
pub(super) fn listen(events: Events) {
    let listening = move || {
        while let Ok(sent) = read() {
            if let Some(msg) = message(sent)
                && events.send(Event::Msg(msg)).is_err()
            {
                return;
            }
        }
        let _ = events.send(Event::Lost);
    };
    // Without a thread there are no keys; the loop then ends, for it hears of it: the sender is dropped.
    let _ = thread::Builder::new().name("input".to_owned()).spawn(listening);
}

fn message(sent: Sent) -> Option<Msg> {
    match sent {
        Sent::Key(event) if event.kind != KeyEventKind::Release => key(event).map(Msg::Struck),
        Sent::Resize(columns, rows) => Some(Msg::Resized(Size { columns, rows })),
        Sent::Paste(text) => Some(Msg::Pasted(text)),
        _ => None,
    }
}

fn key(KeyEvent { code, modifiers, .. }: KeyEvent) -> Option<Key> {
    if modifiers.contains(KeyModifiers::CONTROL) {
        return match code {
            KeyCode::Char('c') => Some(Key::Interrupt),
            KeyCode::Char('z') => Some(Key::Suspend),
            KeyCode::Char('l') => Some(Key::Redraw),
            // What some lines send for Backspace.
            KeyCode::Char('h') => Some(Key::Backspace),
            _ => None,
        };
    }
    if modifiers.contains(KeyModifiers::ALT) {
        return None;
    }
    Some(match code {
        KeyCode::Char(c) => Key::Char(c),
        KeyCode::Up => Key::Up,
        KeyCode::Down => Key::Down,
        KeyCode::Left => Key::Left,
        KeyCode::Right => Key::Right,
        KeyCode::Enter => Key::Enter,
        KeyCode::Esc => Key::Escape,
        KeyCode::Tab => Key::Tab,
        KeyCode::Backspace => Key::Backspace,
        KeyCode::Delete => Key::Delete,
        KeyCode::Home => Key::Home,
        KeyCode::End => Key::End,
        KeyCode::PageUp => Key::PageUp,
        KeyCode::PageDown => Key::PageDown,
        _ => return None,
    })
}
