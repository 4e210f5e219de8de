//! Every file in `tests/files/units` says exactly what the text beside it says, and every row of the words about units
//! has a file of its name that provokes it.

use std::fs;
use std::path::{Path, PathBuf};

use super::check_units;
use super::message::Words;
use crate::diag::render::render;
use crate::diag::wording::made;
use crate::diag::{Diagnostic, Sources};
use crate::model::load::{NoFiles, load};

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/files/units")
}

/// What is said of a file: the errors, or else the warnings about units.
fn found(name: &str) -> (Vec<Diagnostic>, Sources) {
    let text = fs::read(folder().join(name)).unwrap_or_default();
    let (model, sources, errors) = load(name, &text, &NoFiles);
    (model.map_or(errors, |model| check_units(&model).warnings), sources)
}

#[test]
fn every_file_says_what_it_should() {
    let entries = fs::read_dir(folder()).expect("the folder").map(|entry| entry.expect("a file").path());
    let mut names: Vec<PathBuf> = entries.filter(|path| path.extension() == Some("yaml".as_ref())).collect();
    names.sort();
    let mut wrong = Vec::new();
    for path in names {
        let name = path.file_name().unwrap_or_default().to_string_lossy();
        let (found, sources) = found(&name);
        let said: String = found.iter().map(|diagnostic| render(diagnostic, &sources, false)).collect();
        let text = fs::read_to_string(path.with_extension("txt")).unwrap_or_default();
        if said != text || said.is_empty() {
            wrong.push(format!("{name}: expected\n{text}\nbut it says\n{said}"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn all_that_can_be_said_is_provoked_by_a_file_of_its_name() {
    // No file can have an empty unit: the loader calls it blank first.
    for &words in Words::ALL.iter().filter(|&&words| words != Words::Empty) {
        let name = made::file_name("", &format!("{words:?}"));
        let (found, _) = found(&name);
        let is_said = |template: &str| found.iter().any(|diagnostic| says(diagnostic, template));
        assert!(words.row().into_iter().all(is_said), "{name}: {found:?}");
    }
}

/// Whether a text of the diagnostic was made from a template, or ends in what was.
fn says(diagnostic: &Diagnostic, template: &str) -> bool {
    let related = diagnostic.related.iter().map(|(_, text)| text);
    let mut texts = [&diagnostic.message, &diagnostic.expected, &diagnostic.help].into_iter().chain(related);
    texts.any(|text| text.char_indices().any(|(start, _)| made::from(template, &text[start..])))
}
