//! Tables of what can be said: one row a message, with gaps for the values at hand.
//!
//! [`wording!`] makes an enum of a table, a variant a row, each with what is wrong, what was expected and what to do;
//! `{0}`, `{1}` … stand for values, which [`fill`] puts in. That every row can be provoked is for the tests beside each
//! table. Nothing here knows what the tables are about; for a new message open the table that it belongs to.

use std::fmt::Display;

use super::cleanse::clip;

/// Characters of a value that a message repeats.
const VALUE_LIMIT: usize = 200;

/// Makes an enum of messages, `Name: "what is wrong", "what was expected", "what to do";` a row.
macro_rules! wording {
    ($(#[$about:meta])* $visible:vis enum $table:ident {
        $($name:ident: $what:literal, $expected:literal, $help:literal;)*
    }) => {
        $(#[$about])*
        #[derive(Clone, Copy, Debug, PartialEq, Eq)]
        $visible enum $table { $($name),* }

        impl $table {
            /// Every row of the table.
            #[cfg(test)]
            $visible const ALL: &'static [Self] = &[$(Self::$name),*];

            /// What is wrong, what was expected, what to do.
            $visible const fn row(self) -> [&'static str; 3] {
                match self { $(Self::$name => [$what, $expected, $help]),* }
            }
        }
    };
}
pub(crate) use wording;

/// A row's text with the values in their gaps, long ones clipped. A gap without a value stays, for a test to find.
pub(crate) fn fill(template: &str, values: &[&dyn Display]) -> String {
    let mut text = String::with_capacity(template.len());
    let mut rest = template;
    while let Some(open) = rest.find('{') {
        let index = rest[open + 1..].chars().next().and_then(|c| c.to_digit(10));
        let value = index.filter(|_| rest[open + 2..].starts_with('}')).and_then(|index| values.get(index as usize));
        text.push_str(&rest[..open]);
        if let Some(value) = value {
            text.push_str(&clip(&value.to_string(), VALUE_LIMIT));
            rest = &rest[open + 3..];
        } else {
            text.push('{');
            rest = &rest[open + 1..];
        }
    }
    text + rest
}

/// For the tests of tables: whether a text was made from a template.
#[cfg(test)]
pub(crate) mod made {
    /// Whether the fixed parts of a template stand in the text, in order and from its beginning, and no gap was left.
    pub(crate) fn from(template: &str, text: &str) -> bool {
        let mut parts = template.split_inclusive('}').flat_map(|piece| {
            let is_value = piece.len() >= 3 && piece.ends_with('}') && piece.as_bytes()[piece.len() - 3] == b'{';
            if is_value { vec![&piece[..piece.len() - 3], ""] } else { vec![piece] }
        });
        let first = parts.next().unwrap_or_default();
        let Some(mut rest) = text.strip_prefix(first) else { return false };
        let stands_there = parts.all(|part| {
            let found = rest.find(part);
            rest = found.map_or(rest, |start| &rest[start + part.len()..]);
            found.is_some()
        });
        stands_there && (0..10).all(|index| !text.contains(&format!("{{{index}}}")))
    }

    /// The name of a file that a row of a table is to be provoked by: `prefix`, and the row's name in small letters.
    pub(crate) fn file_name(prefix: &str, row: &str) -> String {
        let mut name = prefix.to_owned();
        for (at, c) in row.char_indices() {
            if c.is_uppercase() && at > 0 {
                name.push('_');
            }
            name.extend(c.to_lowercase());
        }
        name + ".yaml"
    }

    #[test]
    fn a_template_matches_what_was_made_from_it_only() {
        for (template, text, expected) in [
            ("\"{0}\" is {1}", "\"a\" is b", true),
            ("\"{0}\" is {1}", "\"a\" was b", false),
            ("\"{0}\" is {1}", "\"a\" is {1}", false),
            ("write {a: 1}", "write {a: 1}", true),
            ("", "", true),
            ("x", "y", false),
        ] {
            assert_eq!(from(template, text), expected, "{template} {text}");
        }
    }
}
