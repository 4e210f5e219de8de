//! Text from files made harmless before it reaches a terminal.
//!
//! Control characters can move a cursor, bidirectional marks can make a line read other than it is. [`cleanse`] writes
//! both as escapes. It does not judge width or language; add to [`is_hostile`] what else must never be shown raw.

use std::borrow::Cow;
use std::fmt::Write as _;

/// Whether a character can change how the text around it is shown: control characters (C0, DEL, C1), line and paragraph
/// separators, bidirectional marks, overrides and isolates, the byte-order mark, and the code points set aside for a
/// program's own use.
#[must_use]
pub fn is_hostile(c: char) -> bool {
    c.is_control()
        || matches!(c, '\u{61c}' | '\u{200e}' | '\u{200f}' | '\u{2028}' | '\u{2029}' | '\u{feff}')
        || ('\u{202a}'..='\u{202e}').contains(&c)
        || ('\u{2066}'..='\u{2069}').contains(&c)
        || ('\u{fdd0}'..='\u{fdef}').contains(&c)
}

/// The text with every hostile character written as `\n`, `\t`, `\r` or `\u{…}`.
#[must_use]
pub fn cleanse(text: &str) -> Cow<'_, str> {
    if !text.contains(is_hostile) {
        return Cow::Borrowed(text);
    }
    let mut clean = String::with_capacity(text.len() + 8);
    for c in text.chars() {
        if is_hostile(c) {
            let _ = write!(clean, "{}", c.escape_default());
        } else {
            clean.push(c);
        }
    }
    Cow::Owned(clean)
}

/// At most `limit` characters of the text, with `…` where something was left out.
#[must_use]
pub fn clip(text: &str, limit: usize) -> Cow<'_, str> {
    match text.char_indices().nth(limit) {
        None => Cow::Borrowed(text),
        Some((end, _)) => Cow::Owned(format!("{}…", &text[..end])),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hostile_characters_become_escapes_and_others_stay() {
        for (text, clean) in [
            ("plain näme α", "plain näme α"),
            ("a\u{1b}[31mb", "a\\u{1b}[31mb"),
            ("a\nb\tc\r", "a\\nb\\tc\\r"),
            ("\u{202e}live\u{2066}", "\\u{202e}live\\u{2066}"),
            ("\u{9b}\u{7f}\u{2028}", "\\u{9b}\\u{7f}\\u{2028}"),
        ] {
            assert_eq!(cleanse(text), clean);
        }
    }

    #[test]
    fn clipping_counts_characters() {
        assert_eq!(clip("αβγ", 3), "αβγ");
        assert_eq!(clip("αβγδ", 3), "αβγ…");
    }
}
