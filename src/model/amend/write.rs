//! Names, numbers and parts of a model as YAML that the loader reads back as what was meant.
//!
//! Only what is read from a checked tree is written, so anchors are gone and aliases written out. Comments and layout of
//! what is copied are not kept. Start at [`Part`].

use crate::model::events::Style;
use crate::model::tree::{Kind, Node, Scalar};
use crate::model::yaml::Typed;

/// Columns that a line keeps within where it can be divided.
const WIDTH: usize = 110;

/// A part of a scenario on its way into the file.
#[derive(Clone)]
pub(super) enum Part {
    /// A number.
    Number(f64),
    /// A value that is copied, as it will stand in the file.
    Copied(String),
    List(Vec<Part>),
    Map(Vec<(String, Part)>),
}

impl Part {
    /// A part of the file, its aliases written out.
    pub(super) fn copy(node: &Node) -> Self {
        match &node.kind {
            Kind::Scalar(scalar) => Self::Copied(copied(scalar)),
            Kind::Sequence(items) => Self::List(items.iter().map(|item| Self::copy(item)).collect()),
            Kind::Mapping(entries) => {
                Self::Map(entries.iter().map(|entry| (entry.key.clone(), Self::copy(&entry.value))).collect())
            }
            // A checked model holds none.
            Kind::Broken => Self::Copied("null".to_owned()),
        }
    }

    /// In flow style, on one line.
    pub(super) fn flow(&self) -> String {
        let joined = |parts: Vec<String>, open, close| format!("{open}{}{close}", parts.join(", "));
        match self {
            Self::Number(value) => number(*value),
            Self::Copied(text) => text.clone(),
            Self::List(items) => joined(items.iter().map(Self::flow).collect(), '[', ']'),
            Self::Map(entries) => joined(entries.iter().map(|(name, part)| pair(name, part)).collect(), '{', '}'),
        }
    }
}

/// A key and its value in flow style, on one line.
pub(super) fn pair(name: &str, part: &Part) -> String {
    format!("{}: {}", key(name), part.flow())
}

/// A key and its value as lines without breaks: one where it fits, else a line for each key below it, `step` further in.
pub(super) fn lines(name: &str, part: &Part, indent: usize, step: usize) -> Vec<String> {
    let margin = " ".repeat(indent);
    let whole = format!("{margin}{}", pair(name, part));
    match part {
        Part::Map(entries) if !entries.is_empty() && whole.chars().count() > WIDTH => {
            let below = entries.iter().flat_map(|(name, part)| lines(name, part, indent + step, step));
            std::iter::once(format!("{margin}{}:", key(name))).chain(below).collect()
        }
        _ => vec![whole],
    }
}

/// A number in the fewest digits that read back the same; with a power of ten where it would be long.
fn number(value: f64) -> String {
    // Without its point, the sign of a zero would be lost.
    if value == 0.0 && value.is_sign_negative() {
        return "-0.0".to_owned();
    }
    let usual = value == 0.0 || (1e-5..1e12).contains(&value.abs());
    if usual { value.to_string() } else { format!("{value:e}") }
}

/// A name as a key: as it is where every reader of YAML takes it for a text, else in double quotes.
pub(super) fn key(name: &str) -> String {
    let mut chars = name.chars();
    let begins = chars.next().is_some_and(|c| c.is_alphabetic() || c == '_');
    let goes_on = chars.all(|c| c.is_alphanumeric() || matches!(c, ' ' | '_' | '-' | '.' | '/' | '(' | ')' | '+'));
    let plain = begins && goes_on && !name.ends_with(' ') && !is_word_of_yaml(name);
    if plain { name.to_owned() } else { quoted(name) }
}

/// Words that some version of YAML takes for something else than a text.
fn is_word_of_yaml(name: &str) -> bool {
    const WORDS: &[&str] = &["yes", "no", "on", "off", "true", "false", "null"];
    let scalar = Scalar { value: name.to_owned(), style: Style::Plain };
    !matches!(scalar.typed(), Typed::Text(_)) || WORDS.contains(&name.to_lowercase().as_str())
}

/// A copied value: plain where it was plain and may stand so inside brackets, else in double quotes.
fn copied(scalar: &Scalar) -> String {
    let value = scalar.value.as_str();
    if !scalar.is_plain() {
        return quoted(value);
    }
    match scalar.typed() {
        Typed::Null => "null".to_owned(),
        Typed::Bool(_) | Typed::Number(_) => value.to_owned(),
        Typed::Text(_) if stands_in_flow(value) => value.to_owned(),
        Typed::Text(_) => quoted(value),
    }
}

/// Whether a plain text means the same inside brackets; stricter than YAML, for what is refused is only quoted.
fn stands_in_flow(value: &str) -> bool {
    let begins = value.starts_with(|c: char| c.is_alphanumeric() || matches!(c, '(' | '_'));
    begins && !value.contains([',', '[', ']', '{', '}', ':', '#', '"', '\'', '\n']) && !value.ends_with(' ')
}

/// A text in double quotes, on one line.
fn quoted(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 2);
    out.push('"');
    for c in text.chars() {
        match c {
            '"' | '\\' => out.extend(['\\', c]),
            '\n' => out.push_str("\\n"),
            '\t' => out.push_str("\\t"),
            _ => out.push(c),
        }
    }
    out.push('"');
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keys_are_quoted_where_some_reader_would_take_them_for_something_else() {
        for (name, expected) in [
            ("half the effort", "half the effort"),
            ("fönster (norra)", "fönster (norra)"),
            ("E", "E"),
            ("yes", "\"yes\""),
            ("No", "\"No\""),
            ("null", "\"null\""),
            ("12", "\"12\""),
            ("1e3", "\"1e3\""),
            (".inf", "\".inf\""),
            ("name: with # signs", "\"name: with # signs\""),
            ("say \"when\" \\ now", "\"say \\\"when\\\" \\\\ now\""),
            ("🐟", "\"🐟\""),
            ("- a", "\"- a\""),
            ("a, b", "\"a, b\""),
            ("<<", "\"<<\""),
        ] {
            assert_eq!(key(name), expected);
        }
    }

    #[test]
    fn numbers_are_short_and_read_back_the_same() {
        for (value, expected) in [
            (0.5, "0.5"),
            (60.0, "60"),
            (-0.0, "-0.0"),
            (1e300, "1e300"),
            (5e-324, "5e-324"),
            (0.1 + 0.2, "0.30000000000000004"),
            (-1234.5, "-1234.5"),
            (0.00002, "0.00002"),
            (1.5e-9, "1.5e-9"),
        ] {
            assert_eq!(number(value), expected);
            assert!(number(value).parse::<f64>().is_ok_and(|back| back.to_bits() == value.to_bits()));
        }
    }

    #[test]
    fn what_does_not_fit_on_a_line_is_divided_by_keys() {
        let long = Part::Copied("x".repeat(100));
        let part =
            Part::Map(vec![("values".into(), Part::Map(vec![("E".into(), Part::Number(2.0))])), ("note".into(), long)]);
        let expected = ["  tried:".to_owned(), "    values: {E: 2}".into(), format!("    note: {}", "x".repeat(100))];
        assert_eq!(lines("tried", &part, 2, 2), expected);
    }
}
