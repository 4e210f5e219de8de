//! From bytes to a tree of typed values: the only module that knows `serde_yaml`.
//!
//! Limits come first, so that a hostile file costs nothing; then the tree; then the type of each value, which is asked
//! of `serde_yaml` itself, so that what is a number there is a number here. No key of the model is known here. Start at
//! [`read`].

use serde_yaml::Number;

use super::events::Style;
use super::findings::Findings;
use super::messages::Message;
use super::tree::{Scalar, Tree, name_of};
use crate::diag::cleanse::is_hostile;
use crate::diag::{Diagnostic, Location, SourceId, Sources, Span};

/// Bytes of a model file.
pub(super) const FILE_LIMIT: usize = 1 << 20;

/// Bytes of a refused file that are kept to be shown.
const EXCERPT: usize = 4096;

/// What a value is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Typed<'s> {
    Null,
    Bool(bool),
    /// May be infinite or NaN, where the file says so.
    Number(f64),
    Text(&'s str),
}

impl Scalar {
    /// The value as `serde_yaml` reads it.
    pub(super) fn typed(&self) -> Typed<'_> {
        let text = self.value.as_str();
        if self.style != Style::Plain {
            return Typed::Text(text);
        }
        match text {
            "" | "~" | "null" | "Null" | "NULL" => Typed::Null,
            "true" | "True" | "TRUE" => Typed::Bool(true),
            "false" | "False" | "FALSE" => Typed::Bool(false),
            _ => number(text).map_or(Typed::Text(text), Typed::Number),
        }
    }
}

/// Integers beyond 64 bits are numbers to `serde_yaml` where a float is asked for, although it cannot hold them untyped.
fn number(text: &str) -> Option<f64> {
    if let Ok(number) = text.parse::<Number>() {
        return number.as_f64();
    }
    let digits = text.strip_prefix(['+', '-']).unwrap_or(text);
    let whole = digits.len() > 19 && digits.bytes().all(|b| b.is_ascii_digit()) && !digits.starts_with('0');
    text.parse().ok().filter(|value: &f64| whole && value.is_finite())
}

/// Adds the text to the sources under its name and reads it as a tree. A byte-order mark is dropped.
pub(super) fn read(name: &str, bytes: &[u8], sources: &mut Sources) -> (SourceId, Tree) {
    match decode(bytes) {
        Ok(text) => {
            let source = sources.add(name, text);
            let tree = match hidden(text, source) {
                Some(diagnostic) => refused(diagnostic),
                None => Tree::read(text, source),
            };
            (source, tree)
        }
        Err((message, from, shown)) => {
            let source = sources.add(name, shown);
            let at = Location { source, span: from };
            (source, refused(message.at(at, &[&bytes.len(), &FILE_LIMIT])))
        }
    }
}

fn refused(diagnostic: Diagnostic) -> Tree {
    let mut findings = Findings::default();
    findings.report(diagnostic);
    Tree { root: None, findings }
}

/// The text of a file; else the message, its place, and as much of the file as is worth showing.
fn decode(bytes: &[u8]) -> Result<&str, (Message, Span, String)> {
    if bytes.len() > FILE_LIMIT {
        let shown = String::from_utf8_lossy(&bytes[..EXCERPT]).into_owned();
        return Err((Message::FileTooLarge, Span::default(), shown));
    }
    let bytes = bytes.strip_prefix("\u{feff}".as_bytes()).unwrap_or(bytes);
    std::str::from_utf8(bytes).map_err(|error| {
        let at = error.valid_up_to();
        let end = bytes.len().min(at + EXCERPT);
        let shown = String::from_utf8_lossy(&bytes[..end]).into_owned();
        (Message::NotUtf8, Span::new(at, at + char::REPLACEMENT_CHARACTER.len_utf8()), shown)
    })
}

/// The first character that a model file may not hold. A carriage return counts where no line break follows it.
fn hidden(text: &str, source: SourceId) -> Option<Diagnostic> {
    let (start, c) = text.char_indices().find(|&(byte, c)| match c {
        '\n' | '\t' => false,
        '\r' => text.as_bytes().get(byte + 1) != Some(&b'\n'),
        _ => is_hostile(c),
    })?;
    let at = Location { source, span: Span::new(start, start + c.len_utf8()) };
    Some(Message::HiddenCharacter.at(at, &[&name_of(c)]))
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;
    use serde_yaml::Value;

    use super::super::tree::{Kind, Node};
    use super::*;

    const WORDS: &[&str] = &[
        "1",
        "-1",
        "+1",
        "1.5",
        ".5",
        "1.",
        "1e3",
        "1e-3",
        "1E+3",
        "-.5e-3",
        "0x1F",
        "0o17",
        "0b11",
        "017",
        "-017",
        "00",
        "0",
        "-0",
        ".inf",
        "-.inf",
        "+.inf",
        ".nan",
        "NaN",
        "inf",
        "1_000",
        "1e400",
        "1e-400",
        "12:30",
        "50%",
        "true",
        "True",
        "yes",
        "no",
        "on",
        "y",
        "n",
        "~",
        "null",
        "Null",
        "nULL",
        "\"1\"",
        "'true'",
        "\"\"",
        "S",
        "r*S*(1 - S/K)",
        "--1",
        "+-1",
        "1 000",
        "18446744073709551615",
        "-9223372036854775808",
        "1e",
        "e1",
        "0x",
        "0.1.2",
        "2001-01-01",
    ];

    /// The whole document read by `serde_yaml`, compared value by value with ours.
    fn agrees(node: &Node, value: &Value) -> bool {
        match (&node.kind, value) {
            (Kind::Scalar(scalar), value) => match (scalar.typed(), value) {
                (Typed::Null, Value::Null) => true,
                (Typed::Bool(a), Value::Bool(b)) => a == *b,
                (Typed::Number(a), Value::Number(b)) => b.as_f64().is_some_and(|b| a.total_cmp(&b).is_eq() || a == b),
                (Typed::Text(a), Value::String(b)) => a == b,
                _ => false,
            },
            (Kind::Sequence(nodes), Value::Sequence(values)) => {
                nodes.len() == values.len() && nodes.iter().zip(values).all(|(node, value)| agrees(node, value))
            }
            (Kind::Mapping(entries), Value::Mapping(values)) => {
                entries.len() == values.len()
                    && entries.iter().zip(values).all(|(entry, (_, value))| agrees(&entry.value, value))
            }
            _ => false,
        }
    }

    fn check(text: &str) {
        let (_, tree) = read("m.yaml", text.as_bytes(), &mut Sources::default());
        let value: Value = serde_yaml::from_str(text).expect("valid YAML");
        let root = tree.root.expect("a tree");
        assert!(agrees(&root, &value), "{text:?}: {:?} and {value:?}", root.kind);
    }

    #[test]
    fn values_are_what_serde_yaml_takes_them_for() {
        for word in WORDS {
            check(&format!("a: {word}\nb: [{word}, x]\n"));
        }
        check("a: 1,5\n? b\n: |\n  1\n  2\nc: >\n  1\nd:\n- 1\n- e: f\n  g:\n");
        check("a: &x [1, *y]\n".replace("*y", "2").as_str());
        check("a: &x {b: 1}\nc: *x\n");
    }

    #[test]
    fn long_integers_are_numbers() {
        let scalar = |value: &str| Scalar { value: value.to_owned(), style: Style::Plain };
        assert_eq!(scalar("18446744073709551616").typed(), Typed::Number(18_446_744_073_709_551_616.0));
        assert_eq!(scalar("-100000000000000000000").typed(), Typed::Number(-1e20));
    }

    proptest! {
        #[test]
        fn odd_words_are_what_serde_yaml_takes_them_for(word in "[-+.0-9a-fxobEnNtruls~_]{1,9}") {
            let text = format!("- [{word}]\n");
            if let Ok(value) = serde_yaml::from_str::<Value>(&text) {
                let (_, tree) = read("m.yaml", text.as_bytes(), &mut Sources::default());
                if let Some(root) = tree.root {
                    prop_assert!(agrees(&root, &value), "{}: {:?} and {:?}", word, root.kind, value);
                }
            }
        }

        /// Nothing that comes from outside may panic, and what is refused is refused with a place inside the text.
        #[test]
        fn no_text_is_too_odd(bytes in "[-a:,{}\\[\\]&*!|>'\"%@#?\n\t \u{85}\u{202e}é]{0,60}") {
            let mut sources = Sources::default();
            let (source, tree) = read("m.yaml", bytes.as_bytes(), &mut sources);
            let length = sources.get(source).map_or(0, |source| source.text.len());
            for diagnostic in tree.findings.into_sorted() {
                prop_assert!(diagnostic.at.span.end <= length, "{:?}", diagnostic);
            }
        }
    }
}
