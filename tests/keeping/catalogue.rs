//! The entries of the chooser.

use std::fs;
use std::path::{Path, PathBuf};

use restpoint::app::Source;
use restpoint::app::catalogue::{Entry, Origin};
use restpoint::shell::catalogue::entries;
use restpoint::shell::models::{COMPILED, Reading, compiled};

use super::{model, write};

fn listed(given: &[PathBuf], folder: &Path, recent: &[PathBuf]) -> Vec<Entry> {
    let mut found = Vec::new();
    entries(given, folder, recent, &mut |entry| found.push(entry));
    found
}

#[test]
fn every_model_is_listed_once_with_what_it_is_or_what_is_wrong() {
    let folder = tempfile::tempdir().expect("a folder");
    let at = |name: &str| folder.path().join(name);
    write(&at("b.yml"), &model("B \"\\e[31m\""));
    write(&at("a.yaml"), &(model("A") + "scenarios: {x: {}, y: {}}\n"));
    write(&at("c.yaml"), "title: C\ntime: yr\nspecies: 1\n");
    write(&at("notes.txt"), "");
    write(&at(".hidden.yaml"), &model("H"));
    std::os::unix::fs::symlink(at("a.yaml"), at("z.yaml")).expect("a link");
    let missing = at("gone.yaml");
    let found = listed(&[at("b.yml"), missing.clone()], folder.path(), &[at("a.yaml"), missing]);
    let shown = found.iter().take_while(|entry| entry.origin != Origin::Compiled).map(|entry| {
        let Source::File(path) = &entry.source else { panic!("no file: {entry:?}") };
        let name = path.file_name().expect("a name").to_string_lossy().into_owned();
        (name, entry.origin, entry.title.as_str(), entry.species.len(), entry.scenarios, entry.problem.is_some())
    });
    let expected = [
        ("b.yml", Origin::Given, "B \"\\e[31m\"", 1, 1, false),
        ("gone.yaml", Origin::Given, "", 0, 0, true),
        ("a.yaml", Origin::Folder, "A", 1, 2, false),
        ("c.yaml", Origin::Folder, "", 0, 0, true),
    ];
    assert_eq!(shown.collect::<Vec<_>>(), expected.map(|(name, a, b, c, d, e)| (name.to_owned(), a, b, c, d, e)));
    let problem = found[3].problem.as_deref().expect("a problem");
    assert!(problem.starts_with(&format!("{}:3:", at("c.yaml").display())), "{problem}");
}

#[test]
fn models_compiled_in_need_no_files_and_stand_last() {
    let folder = tempfile::tempdir().expect("a folder");
    let found = listed(&[], &folder.path().join("none"), &[]);
    assert_eq!(found.len(), COMPILED.len());
    for (index, entry) in found.iter().enumerate() {
        assert_eq!((&entry.source, entry.origin), (&Source::Compiled(index), Origin::Compiled));
        assert_eq!((entry.problem.as_deref(), entry.name.as_str()), (None, COMPILED[index].name));
        assert!(matches!(compiled(&COMPILED[index]), Reading::Model(_)));
    }
    let shipped = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios");
    let found = listed(&[], &shipped, &[]);
    assert!(found.iter().all(|entry| entry.origin == Origin::Folder && entry.problem.is_none()), "{found:#?}");
    assert_eq!(found.len(), 16);
}

#[test]
fn a_pipe_is_not_opened_and_a_large_folder_is_not_read_to_its_end() {
    let folder = tempfile::tempdir().expect("a folder");
    let pipe = folder.path().join("a.yaml");
    let made = std::process::Command::new("mkfifo").arg(&pipe).status().expect("mkfifo");
    assert!(made.success());
    for number in 0..250 {
        write(&folder.path().join(format!("m{number}.yaml")), "");
    }
    let found = listed(&[], folder.path(), &[]);
    assert_eq!(found.len(), 200 + COMPILED.len());
    assert!(found[0].problem.as_deref().is_some_and(|problem| problem.ends_with("is no ordinary file")));
    fs::remove_file(pipe).expect("the pipe");
}
