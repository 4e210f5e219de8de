//! The models that can be chosen, and what a typed path could become.
//!
//! Every model is read as it would be to be used, so that its entry tells what is wrong with it. The number of files and
//! of names in a folder is limited, and nothing but ordinary files is opened. Start at [`entries`] and [`complete`].

use std::collections::HashSet;
use std::fs;
use std::path::{Path, PathBuf};

use super::files::sha256;
use super::models::{COMPILED, Reading, compiled, read};
use crate::app::Source;
use crate::app::catalogue::{Completion, Entry, Origin};
use crate::diag::cleanse::{cleanse, clip, is_hostile};
use crate::diag::render::position;

/// Where models are looked for, below the working directory.
pub const FOLDER: &str = "scenarios";

/// Files that are read.
const FILES: usize = 200;

/// Names of a folder that are looked at.
const NAMES: usize = 10_000;

/// Completions that are shown.
const CANDIDATES: usize = 50;

/// Characters of a message that are shown.
const MESSAGE: usize = 300;

/// Reads every model that can be chosen and hands on its entry at once: those given, those in `folder` by name, those
/// opened recently, those compiled in. None comes twice; one compiled in not where its very file is listed.
pub fn entries(given: &[PathBuf], folder: &Path, recent: &[PathBuf], each: &mut dyn FnMut(Entry)) {
    let mut seen = Seen::default();
    let groups = [(Origin::Given, given), (Origin::Folder, &models_in(folder)), (Origin::Recent, recent)];
    let files = groups.iter().flat_map(|(origin, paths)| paths.iter().map(move |path| (*origin, path)));
    for (origin, path) in files {
        if seen.paths.len() < FILES && seen.paths.insert(fs::canonicalize(path).unwrap_or_else(|_| path.clone())) {
            each(file(path, origin, &mut seen.texts));
        }
    }
    for (index, model) in COMPILED.iter().enumerate() {
        if !seen.texts.contains(&sha256(model.text().as_bytes())) {
            each(entry(Source::Compiled(index), Origin::Compiled, model.name, &compiled(model)));
        }
    }
}

/// What is listed already.
#[derive(Default)]
struct Seen {
    paths: HashSet<PathBuf>,
    /// SHA-256 of sound models.
    texts: HashSet<String>,
}

/// The model files of a folder, by name.
fn models_in(folder: &Path) -> Vec<PathBuf> {
    let Ok(found) = fs::read_dir(folder) else { return Vec::new() };
    let is_model = |path: &PathBuf| {
        let ending = path.extension().is_some_and(|ending| ending == "yaml" || ending == "yml");
        let hidden = path.file_name().is_some_and(|name| name.as_encoded_bytes().starts_with(b"."));
        ending && !hidden
    };
    let mut paths: Vec<PathBuf> =
        found.take(NAMES).map_while(Result::ok).map(|entry| entry.path()).filter(is_model).collect();
    paths.sort();
    paths
}

fn file(path: &Path, origin: Origin, texts: &mut HashSet<String>) -> Entry {
    let source = Source::File(path.to_path_buf());
    let name = path.display().to_string();
    // Opening a pipe could wait for ever, and what was read from it would be gone.
    if path.metadata().is_ok_and(|found| !found.is_file() && !found.is_dir()) {
        let problem = format!("{name} is no ordinary file");
        return entry(source, origin, &name, &Reading::Unreadable(problem));
    }
    let reading = read(Some(path));
    if let Reading::Model(original) = &reading {
        texts.insert(original.sha256.clone());
    }
    entry(source, origin, &name, &reading)
}

fn entry(source: Source, origin: Origin, name: &str, reading: &Reading) -> Entry {
    let clean = |text: &str| clip(&cleanse(text), MESSAGE).into_owned();
    let name = clean(name);
    let mut entry =
        Entry { source, origin, name, title: String::new(), species: Vec::new(), scenarios: 0, problem: None };
    match reading {
        Reading::Model(original) => {
            let model = &original.model;
            entry.title = clean(&model.title.value);
            entry.species = model.species.iter().map(|species| clean(&species.name)).collect();
            entry.scenarios = model.scenarios.len();
        }
        Reading::Wrong(sources, found) => {
            entry.problem = Some(found.first().map_or_else(String::new, |first| {
                let (file, line, column) = position(sources, first.at);
                clean(&format!("{file}:{line}:{column}: {}", first.message))
            }));
        }
        Reading::Unreadable(problem) => entry.problem = Some(clean(problem)),
    }
    entry
}

/// Completes a path as typed, from the working directory; `~/` is the home folder.
pub fn complete(text: &str) -> Completion {
    complete_from(text, Path::new("."), std::env::home_dir().as_deref())
}

fn complete_from(text: &str, from: &Path, home: Option<&Path>) -> Completion {
    if text == "~" && home.is_some() {
        return Completion { text: "~/".into(), candidates: vec!["~/".into()] };
    }
    let (folder, begun) = text.rfind('/').map_or(("", text), |slash| text.split_at(slash + 1));
    let place = match (folder.strip_prefix("~/"), home) {
        (Some(rest), Some(home)) => home.join(rest),
        _ => from.join(folder),
    };
    let mut names: Vec<String> = names_in(&place, begun);
    names.sort();
    let common = names.iter().skip(1).fold(names.first().cloned().unwrap_or_default(), |common, name| {
        let same = common.chars().zip(name.chars()).take_while(|(a, b)| a == b).map(|(c, _)| c.len_utf8()).sum();
        common[..same].to_owned()
    });
    let reached = if names.is_empty() { text.to_owned() } else { format!("{folder}{common}") };
    names.truncate(CANDIDATES);
    let candidates = names.into_iter().map(|name| format!("{folder}{name}")).collect();
    Completion { text: reached, candidates }
}

/// The names in a folder that begin so, with `/` behind that of a folder. Names that could not be typed or would harm a
/// terminal are passed over.
fn names_in(folder: &Path, begun: &str) -> Vec<String> {
    let Ok(found) = fs::read_dir(folder) else { return Vec::new() };
    let wanted = |name: &str| {
        name.starts_with(begun) && (begun.starts_with('.') || !name.starts_with('.')) && !name.contains(is_hostile)
    };
    let shown = |entry: fs::DirEntry| {
        let name = entry.file_name().into_string().ok().filter(|name| wanted(name))?;
        let slash = if entry.path().is_dir() { "/" } else { "" };
        Some(format!("{name}{slash}"))
    };
    found.take(NAMES).map_while(Result::ok).filter_map(shown).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_path_is_completed_as_far_as_all_agree() {
        let folder = tempfile::tempdir().expect("a folder");
        for name in ["plaice.yaml", "plaice-tried.yaml", "plöt.yaml", "plöd.yaml", ".hidden", "bad\u{1b}[0m"] {
            fs::write(folder.path().join(name), "").expect("a file");
        }
        fs::create_dir_all(folder.path().join("models/old")).expect("a folder");
        fs::write(folder.path().join("models/moor.yaml"), "").expect("a file");
        for (text, reached, candidates) in [
            ("pla", "plaice", &["plaice-tried.yaml", "plaice.yaml"][..]),
            ("plö", "plö", &["plöd.yaml", "plöt.yaml"]),
            ("mod", "models/", &["models/"]),
            ("models/", "models/", &["models/moor.yaml", "models/old/"]),
            ("models/m", "models/moor.yaml", &["models/moor.yaml"]),
            ("~/models/m", "~/models/moor.yaml", &["~/models/moor.yaml"]),
            ("~", "~/", &["~/"]),
            (".h", ".hidden", &[".hidden"]),
            ("b", "b", &[]),
            ("none/", "none/", &[]),
            ("", "", &["models/", "plaice-tried.yaml", "plaice.yaml", "plöd.yaml", "plöt.yaml"]),
        ] {
            let found = complete_from(text, folder.path(), Some(folder.path()));
            let candidates = candidates.iter().map(|&name| name.to_owned()).collect();
            assert_eq!(found, Completion { text: reached.to_owned(), candidates });
        }
    }

    #[test]
    fn only_so_many_candidates_are_shown_but_all_are_compared() {
        let folder = tempfile::tempdir().expect("a folder");
        for number in 0..60 {
            fs::write(folder.path().join(format!("aa{number:02}")), "").expect("a file");
        }
        fs::write(folder.path().join("ab"), "").expect("a file");
        let found = complete_from("a", folder.path(), None);
        assert_eq!((found.text.as_str(), found.candidates.len()), ("a", CANDIDATES));
    }
}
