//! What a terminal can show, from what its user and its name say.

use std::env;

use crate::app::Depth;
use crate::report::sketch::Style;

/// What a terminal can show.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Abilities {
    /// Which characters.
    pub style: Style,
    /// How many colours.
    pub depth: Depth,
    /// Whether it has a second screen that leaves the first as it was.
    pub has_second_screen: bool,
}

/// What the user has said on the command line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Wish {
    /// Only ASCII.
    pub ascii: bool,
    /// Colour always, or never; as the terminal allows where nothing was said.
    pub color: Option<bool>,
}

/// What the environment says.
struct Environment {
    term: String,
    colorterm: String,
    no_color: bool,
    locale: String,
}

impl Abilities {
    /// Of the terminal that the environment names; `None` for one on which nothing can be placed.
    pub fn find(wish: Wish) -> Option<Self> {
        let get = |name: &str| env::var(name).unwrap_or_default();
        // The first of these that is set and not empty counts, says POSIX.
        let locale = ["LC_ALL", "LC_CTYPE", "LANG"].into_iter().map(get).find(|value| !value.is_empty());
        abilities(
            wish,
            &Environment {
                term: get("TERM"),
                colorterm: get("COLORTERM"),
                no_color: !get("NO_COLOR").is_empty(),
                locale: locale.unwrap_or_default(),
            },
        )
    }
}

fn abilities(wish: Wish, environment: &Environment) -> Option<Abilities> {
    let Environment { term, colorterm, no_color, locale } = environment;
    // What came before the VT100 places its cursor in other ways.
    if ["", "dumb", "unknown", "vt05", "vt50", "vt52"].contains(&term.as_str()) {
        return None;
    }
    let is_old = term.starts_with("vt");
    let is_console = term == "linux" || is_old;
    let locale = locale.to_lowercase();
    let is_utf8 = locale.contains("utf-8") || locale.contains("utf8");
    // The console of Linux has few characters in its font, a serial terminal none but ASCII.
    let style = if wish.ascii || is_console || !is_utf8 { Style::Ascii } else { Style::Unicode };
    let shown = if is_old {
        Depth::None
    } else if ["truecolor", "24bit"].contains(&colorterm.as_str()) {
        Depth::Any
    } else if term.contains("256color") {
        Depth::Many
    } else {
        Depth::Eight
    };
    let depth = match wish.color {
        Some(false) => Depth::None,
        Some(true) if shown == Depth::None => Depth::Eight,
        None if *no_color => Depth::None,
        Some(true) | None => shown,
    };
    Some(Abilities { style, depth, has_second_screen: !is_console })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn terminals_show_what_they_can() {
        let check = |[term, colorterm, no_color, locale]: [&str; 4], expected: Option<(Style, Depth, bool)>| {
            let environment = Environment {
                term: term.to_owned(),
                colorterm: colorterm.to_owned(),
                no_color: !no_color.is_empty(),
                locale: locale.to_owned(),
            };
            let found = abilities(Wish { ascii: false, color: None }, &environment);
            assert_eq!(found.map(|f| (f.style, f.depth, f.has_second_screen)), expected, "{term} {locale}");
        };
        let (unicode, ascii) = (Style::Unicode, Style::Ascii);
        check(["dumb", "", "", "en_GB.UTF-8"], None);
        check(["", "", "", "C"], None);
        check(["vt52", "", "", "C"], None);
        check(["xterm", "", "", "en_GB.UTF-8"], Some((unicode, Depth::Eight, true)));
        check(["xterm-256color", "", "", "C.utf8"], Some((unicode, Depth::Many, true)));
        check(["xterm-256color", "truecolor", "", "de_DE.UTF-8"], Some((unicode, Depth::Any, true)));
        check(["xterm-256color", "truecolor", "1", "de_DE.UTF-8"], Some((unicode, Depth::None, true)));
        check(["screen", "", "", "C"], Some((ascii, Depth::Eight, true)));
        check(["tmux-256color", "", "", "POSIX"], Some((ascii, Depth::Many, true)));
        check(["linux", "", "", "en_GB.UTF-8"], Some((ascii, Depth::Eight, false)));
        check(["vt100", "", "", "en_GB.UTF-8"], Some((ascii, Depth::None, false)));
        check(["vt420", "", "", "C.UTF-8"], Some((ascii, Depth::None, false)));
        check(["vt220", "truecolor", "", ""], Some((ascii, Depth::None, false)));
    }

    #[test]
    fn what_the_user_says_counts() {
        let environment = |no_color| Environment {
            term: "vt100".to_owned(),
            colorterm: String::new(),
            no_color,
            locale: "C.UTF-8".to_owned(),
        };
        let depth = |color, no_color| abilities(Wish { ascii: false, color }, &environment(no_color)).map(|a| a.depth);
        assert_eq!(depth(Some(true), true), Some(Depth::Eight));
        assert_eq!(depth(Some(false), false), Some(Depth::None));
    }
}
