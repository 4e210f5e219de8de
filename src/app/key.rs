//! Keys as every terminal sends them: no modifier that a line on the way could swallow.

/// A key stroke.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Key {
    /// A character, upper case where it was.
    Char(char),
    /// Arrow up.
    Up,
    /// Arrow down.
    Down,
    /// Arrow left.
    Left,
    /// Arrow right.
    Right,
    /// Enter.
    Enter,
    /// Escape.
    Escape,
    /// Tabulator.
    Tab,
    /// Deletes to the left.
    Backspace,
    /// Deletes to the right.
    Delete,
    /// To the beginning.
    Home,
    /// To the end.
    End,
    /// A page back.
    PageUp,
    /// A page on.
    PageDown,
    /// Control and C together: to leave, whatever is on the screen.
    Interrupt,
    /// Control and Z together: to pause the program.
    Suspend,
    /// Control and L together: to draw all anew.
    Redraw,
}

impl Key {
    /// As help names it.
    pub fn name(self) -> String {
        match self {
            Key::Char(' ') => "Space".to_owned(),
            Key::Char(c) => c.to_string(),
            Key::Up => "Up".to_owned(),
            Key::Down => "Down".to_owned(),
            Key::Left => "Left".to_owned(),
            Key::Right => "Right".to_owned(),
            Key::Enter => "Enter".to_owned(),
            Key::Escape => "Esc".to_owned(),
            Key::Tab => "Tab".to_owned(),
            Key::Backspace => "Backspace".to_owned(),
            Key::Delete => "Delete".to_owned(),
            Key::Home => "Home".to_owned(),
            Key::End => "End".to_owned(),
            Key::PageUp => "PageUp".to_owned(),
            Key::PageDown => "PageDown".to_owned(),
            Key::Interrupt => "Ctrl-C".to_owned(),
            Key::Suspend => "Ctrl-Z".to_owned(),
            Key::Redraw => "Ctrl-L".to_owned(),
        }
    }
}
