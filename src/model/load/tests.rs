//! That every row of the table of messages can be provoked, and that each says what its row says.

use std::fs;
use std::path::{Path, PathBuf};

use super::*;
use crate::diag::wording::made;
use crate::expr::slip::Words;
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

/// Whether a diagnostic was made from this row, with no value left out.
fn is_from(row: [&str; 3], diagnostic: &Diagnostic) -> bool {
    let texts = [&diagnostic.message, &diagnostic.expected, &diagnostic.help];
    row.into_iter().zip(texts).all(|(template, text)| made::from(template, text))
}

/// Fails unless the file that a row is to be provoked by provokes it.
fn check(row: [&str; 3], name: &str, generated: Option<String>) {
    let bytes = generated.map_or_else(|| fs::read(folder().join(name)).unwrap_or_default(), String::into_bytes);
    let (_, _, found) = load(name, &bytes, &Folder(folder()));
    assert!(found.iter().any(|diagnostic| is_from(row, diagnostic)), "{name}: {found:?}");
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
        check(message.row(), &made::file_name("", &format!("{message:?}")), generated(message));
    }
}

#[test]
fn every_slip_of_a_formula_is_provoked_by_a_file_of_its_name() {
    for &words in Words::ALL {
        let long =
            || format!("title: T\ntime: yr\nspecies: {{N: {{upper: 9}}}}\nchange: {{N: {}1}}\n", "1+".repeat(1_000));
        let generated = (words == Words::TooLong).then(long);
        check(words.row(), &made::file_name("formula_", &format!("{words:?}")), generated);
    }
}

#[test]
fn a_value_that_is_set_must_be_finite() {
    let text = "title: T\ntime: yr\nspecies: {N: {upper: 9}}\nchange: {N: E}\nparameters: {E: 1}\n";
    let (model, ..) = load("m.yaml", text.as_bytes(), &NoFiles);
    let refused = model.expect("a sound model").values(0, &[(ParameterId(0), f64::INFINITY)]).expect_err("not finite");
    assert!(is_from(Message::SetNotFinite.row(), &refused), "{refused:?}");
}

#[test]
fn errors_beyond_the_limit_are_counted() {
    let text = generated(Message::MoreErrors).expect("a text");
    let (_, _, found) = load("m.yaml", text.as_bytes(), &NoFiles);
    assert_eq!(found.len(), 101);
    assert_eq!(found.last().map(|last| last.message.as_str()), Some("there are 2 more errors"));
}
