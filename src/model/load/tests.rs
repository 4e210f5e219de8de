//! That every row of the table of messages can be provoked, and that each says what its row says.

use std::fs;
use std::path::{Path, PathBuf};

use super::*;
use crate::model::ParameterId;

struct Folder(PathBuf);

impl Files for Folder {
    fn read(&self, path: &str, _limit: usize) -> Result<Vec<u8>, String> {
        fs::read(self.0.join(path)).map_err(|_| "there is no such file".to_owned())
    }
}

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/errors")
}

/// The file name of a message: its words in small letters.
fn file_name(message: Message) -> String {
    let mut name = String::new();
    for c in format!("{message:?}").chars() {
        if c.is_uppercase() && !name.is_empty() {
            name.push('_');
        }
        name.extend(c.to_lowercase());
    }
    name + ".yaml"
}

/// Whether a diagnostic was made from this row, with no value left out.
fn is_from(message: Message, diagnostic: &Diagnostic) -> bool {
    let texts = [&diagnostic.message, &diagnostic.expected, &diagnostic.help];
    message.row().into_iter().zip(texts).all(|(template, text)| matches(template, text))
        && texts.iter().all(|text| (0..10).all(|index| !text.contains(&format!("{{{index}}}"))))
}

/// Whether the fixed parts of a template stand in the text, in order.
fn matches(template: &str, text: &str) -> bool {
    let mut parts = template.split_inclusive('}').flat_map(|piece| {
        let is_value = piece.len() >= 3 && piece.ends_with('}') && piece.as_bytes()[piece.len() - 3] == b'{';
        if is_value { vec![&piece[..piece.len() - 3], ""] } else { vec![piece] }
    });
    let first = parts.next().unwrap_or_default();
    let Some(mut rest) = text.strip_prefix(first) else { return false };
    parts.all(|part| {
        let found = rest.find(part);
        rest = found.map_or(rest, |start| &rest[start + part.len()..]);
        found.is_some()
    })
}

/// Files too large or too dull to be kept.
fn generated(message: Message) -> Option<String> {
    let base = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: 1}\n";
    Some(match message {
        Message::FileTooLarge => format!("{base}note: {}\n", "x".repeat(yaml::FILE_LIMIT)),
        Message::TooManyNodes => format!("{base}note: [{}]\n", "1,".repeat(100_000)),
        Message::TooManySpecies => {
            let species: Vec<String> = (0..1001).map(|index| format!("  s{index}: {{upper: 9}}\n")).collect();
            format!("title: T\ntime: yr\nspecies:\n{}change: {{s0: 1}}\n", species.concat())
        }
        Message::MoreErrors => {
            let unknown: Vec<String> = (0..102).map(|index| format!("x{index}: 1\n")).collect();
            format!("{base}{}", unknown.concat())
        }
        _ => return None,
    })
}

#[test]
fn every_message_is_provoked_by_a_file_of_its_name() {
    for &message in Message::ALL.iter().filter(|&&message| message != Message::SetNotFinite) {
        let name = file_name(message);
        let bytes =
            generated(message).map_or_else(|| fs::read(folder().join(&name)).unwrap_or_default(), String::into_bytes);
        let (_, _, found) = load(&name, &bytes, &Folder(folder()));
        assert!(found.iter().any(|diagnostic| is_from(message, diagnostic)), "{name}: {found:?}");
    }
}

#[test]
fn a_value_that_is_set_must_be_finite() {
    let text = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: E}\nparameters: {E: 1}\n";
    let (model, ..) = load("m.yaml", text.as_bytes(), &NoFiles);
    let refused = model.expect("a sound model").values(0, &[(ParameterId(0), f64::INFINITY)]).expect_err("not finite");
    assert!(is_from(Message::SetNotFinite, &refused), "{refused:?}");
}

#[test]
fn errors_beyond_the_limit_are_counted() {
    let text = generated(Message::MoreErrors).expect("a text");
    let (_, _, found) = load("m.yaml", text.as_bytes(), &NoFiles);
    assert_eq!(found.len(), 101);
    assert_eq!(found.last().map(|last| last.message.as_str()), Some("there are 2 more errors"));
}

#[test]
fn a_template_matches_what_was_made_from_it_only() {
    for (template, text, expected) in [
        ("\"{0}\" is {1}", "\"a\" is b", true),
        ("\"{0}\" is {1}", "\"a\" was b", false),
        ("write {a: 1}", "write {a: 1}", true),
        ("", "", true),
        ("x", "y", false),
    ] {
        assert_eq!(matches(template, text), expected, "{template} {text}");
    }
}
